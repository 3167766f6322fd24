package scenes

import "math"

// Constants of accretion.
const (
	// ProtonMass is m_p, kg. Source: CODATA 2018, relative error 3e-10.
	ProtonMass = 1.67262192369e-27
	// ThomsonCrossSection is σ_T, m². Source: CODATA 2018, relative error 9e-10.
	ThomsonCrossSection = 6.6524587321e-29
	// Gravitation is G, m³ kg⁻¹ s⁻². Source: CODATA 2018, relative error
	// 2.2e-5. It enters with accretion rates in Msun/yr only.
	Gravitation = 6.67430e-11
	// ThinDiskEfficiency is 1 - √(8/9), the share of the rest energy that a
	// disk down to the ISCO radiates. Bardeen, Press & Teukolsky, ApJ 178,
	// 347 (1972), from memory.
	ThinDiskEfficiency = 0.0571909584179366

	wattsPerErgSecond = 1e-7
	secondsPerYear    = 365.25 * secondsPerDay
)

// EddingtonLuminosity returns 4π GM m_p c/σ_T, W: that of ionised hydrogen;
// false when the scene gives no mass.
func (s Scene) EddingtonLuminosity() (watts float64, ok bool) {
	m := s.Object.Mass
	return 4 * math.Pi * m.Value * GMSun * ProtonMass * SpeedOfLight / ThomsonCrossSection, m.Given
}

// AccretionPower returns Ṁc² of an emitter with a luminosity or an accretion
// rate, W. A luminosity is the efficiency 1 - √(8/9) times that; an accretion
// rate in Edd is that of the Eddington luminosity.
func (s Scene) AccretionPower(e Emitter) (watts float64, ok bool) {
	eddington, ok := s.EddingtonLuminosity()
	r := e.Luminosity
	if !r.Given() {
		r = e.AccretionRate
	}
	switch r.Unit {
	case "Edd":
		return r.Value * eddington / ThinDiskEfficiency, ok
	case "erg/s":
		return r.Value * wattsPerErgSecond / ThinDiskEfficiency, true
	case "Msun/yr":
		return r.Value * GMSun / Gravitation / secondsPerYear * SpeedOfLight * SpeedOfLight, true
	}
	return 0, false
}
