package emit

import (
	"math"

	"annulet/scenes"
)

// StefanBoltzmann is σ = 2π⁵k⁴/(15h³c²), W m⁻² K⁻⁴, exact in the SI of 2019.
var StefanBoltzmann = 2 * math.Pow(math.Pi, 5) / 15 * math.Pow(scenes.Boltzmann, 4) /
	(math.Pow(scenes.Planck, 3) * scenes.SpeedOfLight * scenes.SpeedOfLight)

// BlackBody returns the intensity B_ν, W m⁻² Hz⁻¹ sr⁻¹, of a blackbody of
// temperature t, K, at frequency nu, Hz; 0 for t <= 0.
func BlackBody(nu, t float64) float64 {
	if t <= 0 {
		return 0
	}
	const perHz3 = 2 * scenes.Planck / (scenes.SpeedOfLight * scenes.SpeedOfLight)
	return perHz3 * nu * nu * nu / math.Expm1(scenes.Planck*nu/(scenes.Boltzmann*t))
}

// BrightnessTemperature returns the temperature, K, of the blackbody whose
// intensity at nu, Hz, is this one, W m⁻² Hz⁻¹ sr⁻¹ (Planck); 0 for 0.
func BrightnessTemperature(intensity, nu float64) float64 {
	if intensity <= 0 {
		return 0
	}
	const perHz3 = 2 * scenes.Planck / (scenes.SpeedOfLight * scenes.SpeedOfLight)
	return scenes.Planck * nu / scenes.Boltzmann / math.Log1p(perHz3*nu*nu*nu/intensity)
}

// RayleighJeansTemperature returns c² I/(2kν²), K: that of radio astronomy,
// proportional to intensity, and below BrightnessTemperature's by about
// hν/2k where hν << kT.
func RayleighJeansTemperature(intensity, nu float64) float64 {
	return intensity * scenes.SpeedOfLight * scenes.SpeedOfLight / (2 * scenes.Boltzmann * nu * nu)
}

// Thermal is the light of gas that shines as a diluted blackbody at one
// frequency: B_ν(f T)/f⁴, which keeps the flux σT⁴ of the effective
// temperature T whatever the colour correction f. Shimura & Takahara, ApJ
// 445, 780 (1995), from memory.
type Thermal struct {
	Scale      float64 // K; T is Scale times the quarter power of the profile
	Kelvin     bool    // or else the profile is T itself, K
	Colour     float64 // f
	Frequency  float64 // ν_obs where the observer is, before any cosmological redshift, Hz
	Brightness float64 // of what is received; (1+z)⁻³ at a cosmological redshift
}

// Temperature turns the value of a profile into the effective temperature, K.
func (h *Thermal) Temperature(value float64) float64 {
	if h.Kelvin {
		return value
	}
	return h.Scale * math.Sqrt(math.Sqrt(value))
}

// received is the intensity that an observer sees, W m⁻² Hz⁻¹ sr⁻¹, of gas
// at effective temperature t with redshift factor g.
func (h *Thermal) received(t, g float64) float64 {
	if g <= 0 { // at the horizon
		return 0
	}
	f2 := h.Colour * h.Colour
	return h.Brightness * g * g * g * BlackBody(h.Frequency/g, h.Colour*t) / (f2 * f2)
}

// tuned returns the blackbody at another frequency; nil of nil.
func (h *Thermal) tuned(hertz float64) *Thermal {
	if h == nil {
		return nil
	}
	other := *h
	other.Frequency = hertz
	return &other
}

// orOne is a scale of which 0 means 1.
func orOne(scale float64) float64 {
	if scale == 0 {
		return 1
	}
	return scale
}

// Tuned returns the disk at another frequency, Hz before any cosmological
// redshift; spectrum is by how much a spectrum that is not a blackbody's is
// brighter there.
func (d *Disk) Tuned(hertz, spectrum float64) *Disk {
	other := *d
	other.Thermal = d.Thermal.tuned(hertz)
	other.Scale = orOne(other.Scale) * spectrum
	return &other
}

// Tuned: see Disk's.
func (s *Spot) Tuned(hertz, spectrum float64) *Spot {
	other := *s
	other.disk = *s.disk.Tuned(hertz, spectrum)
	return &other
}

// Tuned: see Disk's.
func (s *Surface) Tuned(hertz, spectrum float64) *Surface {
	other := *s
	other.Thermal = s.Thermal.tuned(hertz)
	other.Scale = orOne(other.Scale) * spectrum
	return &other
}

// Bolometric returns the disk with the light of all frequencies, σT⁴/π of a
// blackbody, received with g⁴.
func (d *Disk) Bolometric() *Disk {
	other := *d
	other.GPower = 4
	if h := d.Thermal; h != nil {
		other.Thermal = nil
		other.Scale = StefanBoltzmann / math.Pi
		if h.Kelvin {
			other.Profile = fourth{d.profile()}
		} else {
			other.Scale *= h.Scale * h.Scale * h.Scale * h.Scale
		}
	}
	return &other
}

// fourth is the fourth power of a profile.
type fourth struct{ Profile }

// Fill implements Profile.
func (p fourth) Fill(r []float64, lit []bool, values []float64) {
	p.Profile.Fill(r, lit, values)
	for j, is := range lit {
		if is {
			values[j] = power(values[j], 4)
		}
	}
}
