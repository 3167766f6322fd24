package emit

import (
	"math"

	"annulet/geodesic"
)

// Surface is the opaque surface of a star, of uniform brightness but for hot
// caps, that turns slowly about N.
//
// Rotation enters by special relativity in the static frame at the surface,
// where the surface moves at v = Ω R sin θ/√(1-2/R): Doppler factor,
// aberration of the emission angle, and the caps' places at the time of
// emission. The star stays round and space around it that of a star at rest:
// valid for slow rotation only, errors growing as v².
type Surface struct {
	Radius     float64 // M
	Brightness float64 // emitted intensity around the caps; 0 for none
	Caps       []Cap   // where they overlap the brightest one shows
	Spin       float64 // dφ/dt seen from infinity, 1/M; 0 for none
	Clockwise  bool    // about N
	Time       float64 // t_obs - r*(r_obs), M: light with delay d left at Time - d
	Angle      AngleLaw
	GPower     float64 // as Disk's
	Scale      float64 // of what is received; 0 means 1
	// Thermal, if there is one, makes brightnesses effective temperatures, K.
	Thermal *Thermal
	Without Without
}

// Cap is a circular spot fixed to the surface.
type Cap struct {
	sinTheta, cosTheta float64 // of its middle
	azimuth            float64 // at t = 0, radians
	cosSize            float64
	brightness         float64
}

// NewCap returns a cap around a point of the surface, colatitude from N and
// azimuth at t = 0, of an angular radius seen from the star's centre, all in
// degrees.
func NewCap(colatitude, azimuth, size, brightness float64) Cap {
	const deg = math.Pi / 180
	sin, cos := math.Sincos(colatitude * deg)
	return Cap{sin, cos, azimuth * deg, math.Cos(size * deg), brightness}
}

// Reads implements what raytrace asks of an emitter.
func (s *Surface) Reads() Reads { return Reads{Place: true, KR: true, Delay: s.Spin != 0} }

// Shade fills light for a block of crossings; see Light.
func (s *Surface) Shade(rays *geodesic.Rays, at *geodesic.Crossings, _ *Pixels, light *Light) {
	light.Resize(len(at.R))
	lapse := math.Sqrt(1 - 2/s.Radius)
	spin := s.Spin
	if s.Clockwise {
		spin = -spin
	}
	scale := orOne(s.Scale)
	across := 1.0 // of λ, see Without.redshift
	if s.Without.Bending {
		across = s.Without.ObserverLapse / lapse
	}
	for k := range rays.Lambda {
		for j := at.Start[k]; j < at.Start[k+1]; j++ {
			if at.Surface[j] != geodesic.Star {
				continue
			}
			turned := 0.0
			shift := 1.0 // ν of the turning surface over that of a static one
			if spin != 0 {
				turned = spin * (s.Time - at.Delay[j])
				sinTheta2 := max(0, 1-at.CosTheta[j]*at.CosTheta[j])
				v := spin * s.Radius / lapse
				// v cos ξ = Ω λ, ξ the angle between the light and the motion
				shift = (1 - spin*across*rays.Lambda[k]) / math.Sqrt(1-v*v*sinTheta2)
			}
			g := s.Without.shifted(rays.GObs[k]*lapse/shift, lapse)
			mu := min(1, math.Abs(at.KR[j])/shift)
			light.Lit[j], light.Passes[j] = true, 0
			light.G[j], light.Mu[j] = g, mu
			emitted := s.brightness(at.CosTheta[j], at.Phi[j]-turned)
			if s.Thermal != nil {
				light.Intensity[j] = s.Thermal.received(emitted, g) * s.Angle.Intensity(mu)
			} else {
				light.Intensity[j] = scale * emitted * s.Angle.Intensity(mu) * power(g, s.GPower)
			}
		}
	}
}

// brightness is the emitted intensity at a point fixed to the surface.
func (s *Surface) brightness(cosTheta, azimuth float64) float64 {
	sinTheta := math.Sqrt(max(0, 1-cosTheta*cosTheta))
	hot, inside := 0.0, false
	for i := range s.Caps {
		c := &s.Caps[i]
		if cosTheta*c.cosTheta+sinTheta*c.sinTheta*math.Cos(azimuth-c.azimuth) >= c.cosSize {
			hot, inside = max(hot, c.brightness), true
		}
	}
	if inside {
		return hot
	}
	return s.Brightness
}
