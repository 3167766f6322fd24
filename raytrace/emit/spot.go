package emit

import (
	"math"

	"annulet/geodesic"
)

// Spot is a hot spot in the disk plane, a Gaussian pattern that a circular
// geodesic carries round rigidly. Light with delay d left it at Time - d, so
// that every path and image order sees it where it was when the light left.
// Its light is stretched and squeezed in time by the delays alone; g accounts
// for nothing but the shift.
//
// Distances from its middle are proper lengths in the frame of the middle:
// radially dr/√A, along the orbit γ r dφ with γ = √A u^t, at small distances;
// the gas that shines moves as the disk does at each radius.
type Spot struct {
	disk     Disk // its gas, light and angle law; the rims are the spot's reach
	radius   float64
	azimuth  float64 // at t = 0, radians
	turning  float64 // dφ/dt, 1/M
	radial   float64 // 1/(2σ²A), M⁻²
	along    float64 // 2γ² r/σ², M⁻¹: times r sin²(Δφ/2)
	contrast float64 // times the profile there, if it is not a blackbody's
	warmth   float64 // of a blackbody: effective temperature, K
	Time     float64 // t_obs - r*(r_obs), M
}

// NewSpot returns a spot on a disk: radius in M, azimuth at t = 0 in radians,
// size the proper Gaussian sigma in M, contrast in units of the disk's
// emission at that radius; it reaches as far as reach sigmas, within the rims.
// Gas at rest carries no pattern round.
func NewSpot(disk Disk, radius, azimuth, size, contrast, reach float64) *Spot {
	s := &Spot{disk: disk, radius: radius, azimuth: azimuth, contrast: contrast}
	lapse := disk.Gas.Lapse(radius)
	v := disk.Gas.At(radius)
	s.turning = v.UPhi / v.UT
	if disk.Clockwise {
		s.turning = -s.turning
	}
	gamma := lapse * v.UT
	s.radial = 1 / (2 * size * size * lapse * lapse)
	s.along = 2 * gamma * gamma * radius / (size * size)
	wide := reach * size * lapse
	s.disk.Inner, s.disk.Outer = max(disk.Inner, radius-wide), min(disk.Outer, radius+wide)
	if value := At(disk.profile(), radius); disk.Thermal == nil {
		s.contrast *= value
	} else {
		s.warmth = disk.Thermal.Temperature(value)
	}
	s.disk.Profile = nil
	return s
}

// faintest is the exponent beyond which a spot is dark: exp(-12.5) = 4e-6, at
// 5 sigmas.
const faintest = 12.5

// Outer is the largest radius that the spot reaches, M, and Inner the least.
func (s *Spot) Outer() float64 { return s.disk.Outer }

// Inner: see Outer.
func (s *Spot) Inner() float64 { return s.disk.Inner }

// Reads implements what raytrace asks of an emitter.
func (s *Spot) Reads() Reads { return Reads{Place: true, KR: s.disk.Reads().KR, Delay: true} }

// Shade fills light for a block of crossings; see Light.
func (s *Spot) Shade(rays *geodesic.Rays, at *geodesic.Crossings, _ *Pixels, light *Light) {
	light.Resize(len(at.R))
	d := &s.disk
	d.place(rays, at, light)
	for j, lit := range light.Lit {
		if !lit {
			continue
		}
		dr := at.R[j] - s.radius
		middle := s.azimuth + s.turning*(s.Time-at.Delay[j])
		sin := math.Sin((at.Phi[j] - middle) / 2)
		exponent := s.radial*dr*dr + s.along*at.R[j]*sin*sin
		if !(exponent < faintest) {
			light.Lit[j] = false
			continue
		}
		g, mu := light.G[j], light.Mu[j]
		if d.Thermal == nil {
			light.Intensity[j] = math.Exp(-exponent) * s.contrast * d.gain(g, mu)
		} else {
			light.Intensity[j] = math.Exp(-exponent) * s.contrast * d.Thermal.received(s.warmth, g) * d.Angle.Intensity(mu)
		}
	}
	d.absorb(light)
	for j, lit := range light.Lit {
		if lit { // it is the disk that absorbs
			light.Passes[j] = 1
		}
	}
}
