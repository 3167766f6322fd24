package scenes

// Period returns that of the first spot or of a turning star, M, as seen from
// infinity; 0 if nothing moves.
func (s Scene) Period() float64 {
	for _, e := range s.Emitters {
		switch e.Kind {
		case "spot":
			return s.Object.OrbitalPeriod(e.Radius)
		case "surface":
			if e.Period > 0 {
				return e.Period
			}
		}
	}
	return 0
}

// Times returns those of the scene's frames; where it has one only and
// something moves, so many parts of a period from there on, both ends counted.
func (s Scene) Times(parts int) []float64 {
	times := s.Time.Frames()
	period := s.Period()
	if len(times) > 1 || period == 0 {
		return times
	}
	times = times[:0]
	for k := range parts + 1 {
		times = append(times, s.Time.Start+period*float64(k)/float64(parts))
	}
	return times
}
