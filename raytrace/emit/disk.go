package emit

import (
	"math"

	"annulet/geodesic"
)

// Disk is a geometrically thin disk in the equatorial plane, seen from both
// faces. Its gas-frame intensity is a power law (r/M)^-Index or a Profile,
// times Scale; or it shines as a blackbody.
type Disk struct {
	Gas          geodesic.Gas
	Inner, Outer float64 // rims, M
	Index        float64
	Profile      Profile // nil for the power law
	Scale        float64 // 0 means 1
	Thermal      *Thermal
	Clockwise    bool // the gas turns clockwise about N
	// Depth is the optical depth at normal incidence, with which the disk
	// emits S (1 - exp(-Depth/μ)) and lets exp(-Depth/μ) through. Infinite,
	// paths end on the disk; 0 stands for optically thin, where S adds up
	// with no slant factor and nothing is absorbed.
	Depth float64
	Angle AngleLaw
	// GPower is the power of g that the received intensity carries: 4 for
	// bolometric light and for the energy of a line, 3 - s for a power-law
	// spectrum I_ν ∝ ν^s. A blackbody knows itself.
	GPower  float64
	Without Without
}

// Reads implements what raytrace asks of an emitter: k^r counts only where
// the gas moves radially.
func (d *Disk) Reads() Reads { return Reads{KR: d.Gas.Plunges(d.Inner)} }

// Shade fills light for a block of crossings; see Light.
func (d *Disk) Shade(rays *geodesic.Rays, at *geodesic.Crossings, _ *Pixels, light *Light) {
	light.Resize(len(at.R))
	d.place(rays, at, light)
	switch {
	case d.Profile == nil && d.Thermal == nil:
		d.shine(at.R, light)
	case d.Thermal == nil:
		d.Profile.Fill(at.R, light.Lit, light.Intensity)
		for j, lit := range light.Lit {
			if lit {
				light.Intensity[j] *= d.gain(light.G[j], light.Mu[j])
			}
		}
	default:
		d.profile().Fill(at.R, light.Lit, light.Intensity)
		for j, lit := range light.Lit {
			if lit {
				t := d.Thermal.Temperature(light.Intensity[j])
				light.Intensity[j] = d.Thermal.received(t, light.G[j]) * d.Angle.Intensity(light.Mu[j])
			}
		}
	}
	d.absorb(light)
}

// place finds the crossings that lie on the disk, and g and μ there.
func (d *Disk) place(rays *geodesic.Rays, at *geodesic.Crossings, light *Light) {
	sense := 1.0
	if d.Clockwise {
		sense = -1
	}
	falls := d.Reads().KR
	altered := d.Without != (Without{})
	kr := 0.0
	for k := range rays.Lambda {
		for j := at.Start[k]; j < at.Start[k+1]; j++ {
			r := at.R[j]
			if at.Surface[j] != geodesic.Plane || r < d.Inner || r > d.Outer {
				continue
			}
			if falls {
				kr = at.KR[j]
			}
			light.Lit[j] = true
			light.Passes[j] = 1
			if altered {
				light.G[j], light.Mu[j] = d.Without.redshift(d.Gas, r, rays.GObs[k], rays.Lambda[k], rays.Eta[k], kr, sense)
				continue
			}
			g := d.Gas.RedshiftFactor(r, rays.GObs[k], rays.Lambda[k], kr, sense)
			light.G[j] = g
			light.Mu[j] = geodesic.EmissionCosine(g, rays.GObs[k], rays.Eta[k], r)
		}
	}
}

// shine is the plain power law, the one that follows the hand.
func (d *Disk) shine(r []float64, light *Light) {
	for j, lit := range light.Lit {
		if lit {
			light.Intensity[j] = power(r[j], -d.Index) * d.gain(light.G[j], light.Mu[j])
		}
	}
}

// gain is received over emitted intensity, other than a blackbody's.
func (d *Disk) gain(g, mu float64) float64 {
	return power(g, d.GPower) * d.Angle.Intensity(mu) * orOne(d.Scale)
}

// profile is the profile also of a power law.
func (d *Disk) profile() Profile {
	if d.Profile == nil {
		return Power(d.Index)
	}
	return d.Profile
}

// Temperature returns the effective temperature at r, M, in K: on the disk,
// if it shines as a blackbody; else NaN.
func (d *Disk) Temperature(r float64) float64 {
	if d.Thermal == nil || !(r >= d.Inner && r <= d.Outer) {
		return math.NaN()
	}
	return d.Thermal.Temperature(At(d.profile(), r))
}

// absorb applies the optical depth to lit crossings.
func (d *Disk) absorb(light *Light) {
	if d.Depth == 0 {
		return
	}
	for j, lit := range light.Lit {
		if lit {
			dimmed := -d.Depth / light.Mu[j]
			light.Intensity[j] *= -math.Expm1(dimmed)
			light.Passes[j] = math.Exp(dimmed)
		}
	}
}

// power is math.Pow with the small whole exponents of everyday multiplied
// out.
func power(x, p float64) float64 {
	switch p {
	case 0:
		return 1
	case 3:
		return x * x * x
	case 4:
		return x * x * (x * x)
	case -2:
		return 1 / (x * x)
	case -3:
		return 1 / (x * x * x)
	}
	return math.Pow(x, p)
}
