package emit

import (
	"math"

	"annulet/geodesic"
)

// Pattern is what a sky at infinity looks like to a static observer there.
type Pattern interface {
	// over returns the mean brightness over a footprint.
	over(f *footprint) float64
}

// Sky is the sky at infinity, at rest. Lensing keeps its surface brightness
// but for the shift: I = g^GPower I_sky with g = ν_obs/E.
//
// What a pixel shows is the mean over its footprint on the sky, a
// parallelogram from the Jacobian of its path: points are as bright as their
// magnification says, whatever the size of the pixels.
type Sky struct {
	GPower  float64 // as Disk's
	Scale   float64 // of what is received; 0 means 1
	Without Without // Bending is up to the paths
	picture *Picture
	stars   *Stars
	grid    *Grid
}

// NewSky returns a sky with that pattern; nil is a sky of brightness 1
// everywhere.
func NewSky(pattern Pattern, gPower float64) *Sky {
	s := &Sky{GPower: gPower}
	switch p := pattern.(type) {
	case *Picture:
		s.picture = p
	case *Stars:
		s.stars = p
	case *Grid:
		s.grid = p
	}
	return s
}

// footprint is the parallelogram on the sky that a pixel sees.
type footprint struct {
	at     Vector     // its middle
	e1, e2 Vector     // tangent there, orthonormal: along the path's plane and across
	u, v   [2]float64 // its sides in that frame, radians: from column to column, row to row
}

// widestFootprint, radians, stands for the sides of the footprints of pixels
// that see the sky several times over, next to the critical curve. Method: a
// mean over that much of the sky hardly depends on it.
const widestFootprint = 2

// axisImpact is the impact parameter, M, below which sin ψ/b is taken at its
// limit.
const axisImpact = 1e-8

// Reads implements what raytrace asks of an emitter.
func (s *Sky) Reads() Reads { return Reads{Place: true} }

// Shade fills light for a block of crossings; see Light. Mu is NaN. It needs
// the crossings' Slope.
func (s *Sky) Shade(rays *geodesic.Rays, at *geodesic.Crossings, pixels *Pixels, light *Light) {
	light.Resize(len(at.R))
	var f footprint
	scale := orOne(s.Scale)
	for k := range rays.Lambda {
		for j := at.Start[k]; j < at.Start[k+1]; j++ {
			if at.Surface[j] != geodesic.Sky {
				continue
			}
			g := s.Without.shifted(rays.GObs[k], 1)
			f.cover(rays, k, at, int(j), pixels)
			var seen float64
			switch {
			case s.picture != nil:
				seen = s.picture.over(&f)
			case s.stars != nil:
				seen = s.stars.over(&f)
			case s.grid != nil:
				seen = s.grid.over(&f)
			default:
				seen = 1
			}
			light.Lit[j], light.Passes[j] = true, 0
			light.G[j], light.Mu[j] = g, math.NaN()
			light.Intensity[j] = seen * power(g, s.GPower) * scale
		}
	}
}

// cover sets the footprint of ray k, which meets the sky at crossing j.
//
// A path with screen angle s goes to p = cos ψ o + sin ψ ŝ, so a change of
// (b cos s, b sin s) with components db along ŝ and b ds across moves p by
// (dψ/db) db and by (sin ψ/b) b ds.
func (f *footprint) cover(rays *geodesic.Rays, k int, at *geodesic.Crossings, j int, pixels *Pixels) {
	cosS, sinS := rays.CosS[k], rays.SinS[k]
	along := pixels.Right.mix(cosS, pixels.Up, sinS)
	f.at = direction(at.CosTheta[j], at.Phi[j])
	sinPsi, cosPsi := f.at.dot(along), f.at.dot(pixels.Toward)
	f.e1 = pixels.Toward.mix(-sinPsi, along, cosPsi)
	f.e2 = pixels.Right.mix(-sinS, pixels.Up, cosS)
	slope, b := at.Slope[j], rays.Impact(k)
	c, r := pixels.Column[k], pixels.Row[k]
	f.u[0] = slope * (cosS*c[0] + sinS*c[1])
	f.v[0] = slope * (cosS*r[0] + sinS*r[1])
	across := cosPsi * slope
	if b > axisImpact {
		// next to an Einstein ring, where sin ψ vanishes, the mean of its
		// size over the pixel
		half := (math.Abs(f.u[0]) + math.Abs(f.v[0])) / 2
		if half < 1 && math.Abs(sinPsi) < half {
			sinPsi = math.Copysign((sinPsi*sinPsi+half*half)/(2*half), sinPsi)
		}
		across = sinPsi / b
	}
	f.u[1] = across * (cosS*c[1] - sinS*c[0])
	f.v[1] = across * (cosS*r[1] - sinS*r[0])
	f.u, f.v = atMost(f.u), atMost(f.v)
}

// atMost limits a side to widestFootprint; one that is not a number is taken
// for the widest.
func atMost(w [2]float64) [2]float64 {
	size := math.Hypot(w[0], w[1])
	if size <= widestFootprint {
		return w
	}
	w[0] *= widestFootprint / size
	w[1] *= widestFootprint / size
	if math.IsNaN(w[0]) || math.IsNaN(w[1]) {
		return [2]float64{widestFootprint, 0}
	}
	return w
}

// solidAngle is that of the parallelogram, sr.
func (f *footprint) solidAngle() float64 { return math.Abs(f.u[0]*f.v[1] - f.u[1]*f.v[0]) }

// angles returns polar angle and azimuth of the middle and how both change
// along the sides. Near the poles azimuths change by no more than a turn.
func (f *footprint) angles() (theta, phi float64, du, dv [2]float64) {
	p := f.at
	sinTheta := math.Hypot(p[0], p[1])
	theta, phi = math.Atan2(sinTheta, p[2]), math.Atan2(p[1], p[0])
	sinPhi, cosPhi := math.Sincos(phi)
	south := Vector{p[2] * cosPhi, p[2] * sinPhi, -sinTheta}
	east := Vector{-sinPhi, cosPhi, 0}
	change := func(w [2]float64) [2]float64 {
		d := f.e1.mix(w[0], f.e2, w[1])
		turn := d.dot(east) / max(sinTheta, 1e-9)
		return [2]float64{d.dot(south), max(-2*math.Pi, min(2*math.Pi, turn))}
	}
	return theta, phi, change(f.u), change(f.v)
}
