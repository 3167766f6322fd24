package emit

import (
	"math"

	"annulet/geodesic"
)

// Disk is a geometrically thin disk in the equatorial plane, seen from both
// faces, whose gas-frame intensity is (r/M)^-Index.
type Disk struct {
	Gas          geodesic.Gas
	Inner, Outer float64 // rims, M
	Index        float64
	Clockwise    bool // the gas turns clockwise about N
	// Depth is the optical depth at normal incidence, with which the disk
	// emits S (1 - exp(-Depth/μ)) and lets exp(-Depth/μ) through. Infinite,
	// paths end on the disk; 0 stands for optically thin, where S adds up
	// with no slant factor and nothing is absorbed.
	Depth float64
	Angle AngleLaw
	// GPower is the power of g that the received intensity carries: 4 for
	// bolometric light, 3 - s for a power-law spectrum I_ν ∝ ν^s.
	GPower float64
}

// Reads implements what raytrace asks of an emitter: k^r counts only where
// the gas moves radially.
func (d *Disk) Reads() Reads { return Reads{KR: d.Gas.Plunges(d.Inner)} }

// Shade fills light for a block of crossings; see Light.
func (d *Disk) Shade(rays *geodesic.Rays, at *geodesic.Crossings, _ *Pixels, light *Light) {
	light.Resize(len(at.R))
	sense := 1.0
	if d.Clockwise {
		sense = -1
	}
	falls := d.Reads().KR
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
			g := d.Gas.RedshiftFactor(r, rays.GObs[k], rays.Lambda[k], kr, sense)
			light.Lit[j] = true
			light.G[j] = g
			light.Mu[j] = geodesic.EmissionCosine(g, rays.GObs[k], rays.Eta[k], r)
			light.Intensity[j] = power(g, d.GPower) * power(r, -d.Index) * d.Angle.Intensity(light.Mu[j])
			light.Passes[j] = 1
		}
	}
	d.absorb(light)
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
