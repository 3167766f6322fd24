package scenes

// MetresPerM returns the length M = GM/c² in metres, false when the scene
// gives no mass.
func (s Scene) MetresPerM() (float64, bool) {
	m := s.Object.Mass
	return m.Value * GMSun / (SpeedOfLight * SpeedOfLight), m.Given
}

// SecondsPerM returns the time M = GM/c³ in seconds, false when the scene
// gives no mass.
func (s Scene) SecondsPerM() (float64, bool) {
	metres, ok := s.MetresPerM()
	return metres / SpeedOfLight, ok
}

// ObservedSecondsPerM returns how long a time M of the object lasts for an
// observer far away, (1+z) GM/c³ in seconds; false when the scene gives no
// mass.
func (s Scene) ObservedSecondsPerM() (float64, bool) {
	seconds, ok := s.SecondsPerM()
	return seconds * (1 + s.Object.Redshift), ok
}

// ThetaG returns the angle GM/(c² D) in microarcseconds: the scene's theta_g,
// or that of its mass and distance; false when it gives neither.
func (s Scene) ThetaG() (uas float64, ok bool) {
	o := s.Object
	if o.ThetaG.Given {
		return o.ThetaG.Value, true
	}
	metres, _ := s.MetresPerM()
	if !o.Mass.Given || !o.Distance.Given {
		return 0, false
	}
	return metres / (o.Distance.Value * Parsec) * MicroarcsecondsPerRadian, true
}

// lengthInM converts the number x of the unit to M. When the scene lacks what
// that needs, missing says so.
func (s Scene) lengthInM(x float64, u unit) (m float64, missing string) {
	x *= u.factor
	switch u.base {
	case "m":
		metres, ok := s.MetresPerM()
		if !ok {
			return 0, u.name + " needs object.mass"
		}
		return x / metres, ""
	case "s":
		seconds, ok := s.SecondsPerM()
		if !ok {
			return 0, u.name + " needs object.mass"
		}
		return x / seconds, ""
	case "uas":
		theta, ok := s.ThetaG()
		if !ok {
			return 0, s.noAngularScale(u.name)
		}
		return x / theta, ""
	}
	return x, ""
}

// noAngularScale says what the scene lacks for a unit of angle on the sky.
func (s Scene) noAngularScale(unitName string) string {
	needs := unitName + " needs object.mass and object.distance, or object.theta_g"
	switch o := s.Object; {
	case o.Mass.Given:
		return needs + "; object.distance is missing"
	case o.Distance.Given:
		return needs + "; object.mass is missing"
	}
	return needs
}
