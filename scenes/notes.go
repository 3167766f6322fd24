package scenes

// Notes returns what is legal but worth telling, in full sentences.
func (s Scene) Notes() []string {
	var notes []string
	o := s.Object
	if o.Kind == star && o.Interior == "uniform" && o.Radius < uniformDominant {
		notes = append(notes, "A uniform star smaller than 8/3 M breaks the dominant energy condition: its pressure at the centre passes its density.")
	}
	if o.Kind == shell && o.Radius < shellDominant {
		notes = append(notes, "A shell smaller than 25/12 M breaks the dominant energy condition: its stress passes its surface density.")
	}
	if isco := stableOrbit(o.Charge); s.Observer.Motion == "orbit" && s.Observer.Radius < isco {
		notes = append(notes, "The observer's circular orbit at "+formatShort(s.Observer.Radius)+" M is unstable, as all below "+formatShort(isco)+" M.")
	}
	if len(s.Emitters) == 0 {
		notes = append(notes, "The scene has no emitter: its image is empty.")
	}
	return notes
}
