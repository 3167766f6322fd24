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
