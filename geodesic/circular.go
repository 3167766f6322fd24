package geodesic

import (
	"math"
	"math/cmplx"
)

// Radii of circular timelike orbits in the Schwarzschild exterior, M.
// Source: Bardeen, Press & Teukolsky, ApJ 178, 347 (1972), from memory.
const (
	ISCO          = 6.0 // innermost stable circular orbit
	MarginalBound = 4.0 // innermost bound one
)

// ISCO returns the radius of the innermost stable circular orbit of the
// exterior, M: the largest root of r³ - 6r² + 9Q²r - 4Q⁴ = 0 (standard
// result for Reissner–Nordström, from memory); 6 without charge.
func (s *Round) ISCO() float64 {
	q2 := s.charge2
	if q2 == 0 {
		return ISCO
	}
	// depressed by r = 2 + v: v³ - 3p v - q = 0, whose largest root is the
	// real part of 2 Re (z^(1/3)), Cardano's
	p := 4 - 3*q2
	q := 16 - 18*q2 + 4*q2*q2
	z := complex(q/2, 0) + cmplx.Sqrt(complex(q*q/4-p*p*p, 0))
	root := cmplx.Pow(z, 1./3)
	return 2 + real(root) + p*real(1/root)
}

// CircularEnergy returns the specific energy of circular motion at r beyond
// the photon sphere, M; (1-2/r)/√(1-3/r) without charge.
func (s *Round) CircularEnergy(r float64) float64 {
	u := 1 / r
	return s.lapse2(u) * s.circularUT(u)
}

// CircularMomentum returns the specific angular momentum, M, of circular
// motion at r; √r/√(1-3/r) without charge.
func (s *Round) CircularMomentum(r float64) float64 {
	return r * r * s.AngularVelocity(r) * s.circularUT(1/r)
}

// AngularVelocity returns Ω = dφ/dt of circular motion at r, 1/M: r^(-3/2)
// without charge.
func (s *Round) AngularVelocity(r float64) float64 {
	return math.Sqrt(1-s.charge2/r) / (r * math.Sqrt(r))
}

// circularUT is dt/dτ = 1/√(1 - 3u + 2Q²u²) of circular motion.
func (s *Round) circularUT(u float64) float64 {
	return 1 / math.Sqrt(1-u*(3-2*s.charge2*u))
}

// Gas says how the gas of a disk moves about an object.
type Gas struct {
	object           *Round
	still            bool
	isco             float64
	energy, momentum float64 // of the ISCO
}

// CircularGas is gas on circular geodesics, and inside the ISCO on the plunge
// that keeps the ISCO's energy and momentum (Cunningham, ApJ 202, 788
// (1975), from memory).
func (s *Round) CircularGas() Gas {
	r := s.ISCO()
	return Gas{object: s, isco: r, energy: s.CircularEnergy(r), momentum: s.CircularMomentum(r)}
}

// StaticGas is gas at rest.
func (s *Round) StaticGas() Gas { return Gas{object: s, still: true} }

// Plunges says whether the gas moves radially anywhere at or outside r, M.
func (g Gas) Plunges(r float64) bool { return !g.still && r < g.isco }

// ISCO returns the radius, M, within which gas plunges.
func (g Gas) ISCO() float64 { return g.isco }

// Velocity is a four-velocity in the disk plane.
type Velocity struct {
	UT, UR, UPhi float64 // dt/dτ, dr/dτ, dφ/dτ of counter-clockwise gas
}

// At returns the gas's velocity at radius r, M, outside any horizon.
func (g Gas) At(r float64) Velocity {
	s := g.object
	switch {
	case g.still:
		return Velocity{UT: 1 / s.Lapse(r)}
	case r >= g.isco:
		ut := s.circularUT(1 / r)
		return Velocity{UT: ut, UPhi: ut * s.AngularVelocity(r)}
	}
	a := s.lapse2(1 / r)
	v := Velocity{UT: g.energy / a, UPhi: g.momentum / (r * r)}
	if s.charge2 == 0 { // the closed form keeps its digits next to the ISCO
		fall := ISCO/r - 1
		v.UR = -fall * math.Sqrt(fall) / 3
		return v
	}
	v.UR = -math.Sqrt(max(g.energy*g.energy-a*(1+v.UPhi*g.momentum), 0))
	return v
}

// Lapse returns √-g_tt at r, M.
func (g Gas) Lapse(r float64) float64 { return g.object.Lapse(r) }

// AreaElement returns the proper area of gas, in its own frame, per dr dφ
// of the disk plane at r, M: u^t r √(-g_tt g_rr), which outside the object is
// u^t r for gas that circles, plunges or rests. It is the density of gas
// elements: each is counted once at one t. Cunningham, ApJ 202, 788 (1975),
// from memory.
//
// A volume between gas elements is u^μ dΣ_μ, at fixed t u^t √-g d³x, the
// proper height along the normal and √-g = √(-g_tt g_rr) r.
func (g Gas) AreaElement(r float64) float64 {
	s := g.object
	stretch := 1.0
	if s.inside != nil && r*s.edge < 1 {
		stretch = s.inside.Lapse(r) * s.inside.Ruler(r)
	}
	return g.At(r).UT * r * stretch
}

// RedshiftFactor returns g = ν_obs/ν_em of light that leaves the gas at r
// towards the observer. gObs is ν_obs/E, lambda = Lz/E in M, kr = k^r/E of
// the light as it leaves (> 0 outward); sense is +1 for counter-clockwise
// gas, -1 for clockwise.
//
// ν_em/E = u^t - λ u^φ - u_r k^r with u_r = u^r/A.
func (g Gas) RedshiftFactor(r, gObs, lambda, kr, sense float64) float64 {
	v := g.At(r)
	emitted := v.UT - sense*lambda*v.UPhi
	if v.UR != 0 {
		emitted -= kr * v.UR / g.object.lapse2(1/r)
	}
	return gObs / emitted
}

// EmissionCosine returns |cos| of the angle between the light and the disk
// normal in the gas frame: (g/g_obs) √η/r, at most 1.
func EmissionCosine(g, gObs, eta, r float64) float64 {
	return min(1, g/gObs*math.Sqrt(max(eta, 0))/r)
}
