package state

import (
	"math"

	"annulet/scenes"
)

// ThetaG returns the angle that 1 M spans on the sky, in microarcseconds, if
// the scene gives it or gives mass and distance.
func ThetaG(s scenes.Scene) (uas float64, ok bool) {
	if s.Object.ThetaG.Given {
		return s.Object.ThetaG.Value, true
	}
	if !s.Object.Mass.Given || !s.Object.Distance.Given {
		return 0, false
	}
	const (
		metresPerSunM   = 1.3271244e20 / (299792458.0 * 299792458.0) // GM_sun/c²; IAU 2015 B3
		metresPerParsec = 648000 / math.Pi * 149597870700            // IAU 2015 B2, 2012 B2
		uasPerRadian    = 1e6 * 648000 / math.Pi
	)
	return s.Object.Mass.Value * metresPerSunM / (s.Object.Distance.Value * metresPerParsec) * uasPerRadian, true
}
