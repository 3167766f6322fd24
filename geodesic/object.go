package geodesic

import (
	"fmt"
	"math"
)

// Round is a static round spacetime of mass M = 1: an exterior with
//
//	ds² = -A dt² + dr²/A + r² dΩ²,  A = 1 - 2/r + Q²/r²,
//
// down to an edge, and what a path does there. A further object is one more
// constructor, with one more Interior if light passes its edge.
type Round struct {
	charge2 float64  // Q², M²
	edge    float64  // 1/r of the edge, 1/M
	end     Fate     // of a path that meets the edge from outside, if inside is nil
	inside  Interior // what lets light through; nil for a horizon or an opaque surface
	name    string
}

// Interior is a region within an edge through which light passes from edge
// to edge, symmetric about its closest approach. It is asked once or twice a
// passage, never in a step. Angles phi are swept angles from the closest
// approach; w is |du/dψ| as measured inside.
type Interior interface {
	// Radius is the radius at phi, M.
	Radius(b, phi float64) float64
	// Phase is |phi| at radius r, M, where |du/dψ| = w, and PhaseSlope its
	// derivative with b at fixed r, 1/M.
	Phase(b, r, w float64) float64
	PhaseSlope(b, r, w float64) float64
	// Time is the coordinate time from the closest approach to phi, M; odd
	// in phi. Nearly radial paths, all of whose phi lie close to ±π/2, are
	// timed by TimeTo, the time to radius r, M, where |du/dψ| = w.
	Time(b, phi float64) float64
	TimeTo(b, r, w float64) float64
	// Lapse is √-g_tt at r, M, and Ruler √g_rr.
	Lapse(r float64) float64
	Ruler(r float64) float64
	// TortoiseBelow is r*(edge) - r*(r), M.
	TortoiseBelow(r float64) float64
}

// The limits of objects, M. Buchdahl, Phys. Rev. 116, 1027 (1959): no star
// in equilibrium is smaller than 9/4 M. From memory.
const BuchdahlRadius = 9. / 4

// NewHole returns a black hole of charge |Q| < 1, in M: Schwarzschild for
// 0, else Reissner–Nordström.
func NewHole(charge float64) (*Round, error) {
	if !(charge >= 0 && charge < 1) {
		return nil, fmt.Errorf("geodesic: charge %v M: want |Q| in [0, 1) M", charge)
	}
	q2 := charge * charge
	return &Round{
		charge2: q2, edge: 1 / (1 + math.Sqrt(1-q2)), end: Captured, name: "black hole",
	}, nil
}

// NewStar returns a star of areal radius r > 9/4, in M: opaque, or
// transparent with a uniform density.
func NewStar(r float64, uniform bool) (*Round, error) {
	if !(r > BuchdahlRadius && r <= MaxRadius) {
		return nil, fmt.Errorf("geodesic: star of radius %v M: want more than the Buchdahl limit, 9/4 M, and at most %g M", r, MaxRadius)
	}
	s := &Round{edge: 1 / r, end: OnSurface, name: "star"}
	if uniform {
		s.inside = newUniform(r)
	}
	return s, nil
}

// NewShell returns a thin massive shell of areal radius r > 2, in M, with
// flat space inside.
func NewShell(r float64) (*Round, error) {
	if !(r > 2 && r <= MaxRadius) {
		return nil, fmt.Errorf("geodesic: shell of radius %v M: want more than 2 M, and at most %g M", r, MaxRadius)
	}
	return &Round{edge: 1 / r, end: Trapped, inside: newFlat(r), name: "shell"}, nil
}

var schwarzschild = &Round{edge: 0.5, end: Captured, name: "black hole"}

// Same says whether two values describe the same spacetime.
func (s *Round) Same(other *Round) bool {
	return s.name == other.name && s.charge2 == other.charge2 && s.edge == other.edge &&
		s.end == other.end && (s.inside == nil) == (other.inside == nil)
}

// Edge returns the radius of the horizon, surface or shell, M.
func (s *Round) Edge() float64 { return 1 / s.edge }

// Opaque says whether paths end where they meet the edge.
func (s *Round) Opaque() bool { return s.inside == nil }

// DarkImpact returns the impact parameter, M, below which paths from infinity
// end on an opaque object: b_c, or that of the path that grazes it.
func (s *Round) DarkImpact() float64 {
	if r := s.Edge(); r > s.PhotonSphere() {
		return r / math.Sqrt(s.lapse2(s.edge))
	}
	return s.CriticalImpact()
}

// lapse2 is A at inverse radius u in the exterior.
func (s *Round) lapse2(u float64) float64 { return 1 - u*(2-s.charge2*u) }

// Lapse returns √-g_tt at r, the rate of a static clock there; 1 at
// infinity, NaN within a horizon or an opaque surface.
func (s *Round) Lapse(r float64) float64 {
	switch {
	case r*s.edge >= 1:
	case s.inside != nil:
		return s.inside.Lapse(r)
	default:
		return math.NaN()
	}
	return math.Sqrt(s.lapse2(1 / r))
}

// PhotonSphere returns the radius of the unstable circular light orbit of
// the exterior, (3 + √(9 - 8Q²))/2 M: Chandrasekhar, The Mathematical Theory
// of Black Holes (1983), section 40, from memory.
func (s *Round) PhotonSphere() float64 { return (3 + math.Sqrt(9-8*s.charge2)) / 2 }

// CriticalImpact returns b_c = r_ph/√A(r_ph), M.
func (s *Round) CriticalImpact() float64 {
	if s.charge2 == 0 {
		return CriticalImpact
	}
	r := s.PhotonSphere()
	return r / math.Sqrt(s.lapse2(1/r))
}

// Lyapunov returns the exponent by which light near the photon sphere leaves
// it, per half orbit: π √(6u - 6Q²u² - 1) there, from w² = 1/b² - u² A; π
// without charge, as published: Johnson et al., Sci. Adv. 6, eaaz1310 (2020).
func (s *Round) Lyapunov() float64 {
	u := 1 / s.PhotonSphere()
	return math.Pi * math.Sqrt(6*u-6*s.charge2*u*u-1)
}

// criticalDistance is b/b_c - 1.
func (s *Round) criticalDistance(b float64) float64 {
	if s.charge2 == 0 {
		return CriticalDistance(b)
	}
	return b/s.CriticalImpact() - 1
}

// Tortoise returns r* at r, M, with dr*/dr = √(-g_rr/g_tt), continuous
// through the edge; outside r + 2 ln(r/2 - 1) or, charged,
// r + [r₊² ln(r/r₊ - 1) - r₋² ln(r/r₋ - 1)]/(r₊ - r₋).
func (s *Round) Tortoise(r float64) float64 {
	if s.inside != nil && r*s.edge < 1 {
		return s.tortoise(s.edge) - s.inside.TortoiseBelow(r)
	}
	return s.tortoise(1 / r)
}

// tortoise is r* of the exterior at inverse radius u.
func (s *Round) tortoise(u float64) float64 {
	if s.charge2 == 0 {
		return 1/u + 2*math.Log(math.Abs(0.5-u)/u)
	}
	root := math.Sqrt(1 - s.charge2)
	outer, inner := 1+root, 1-root
	r := 1 / u
	return r + (outer*outer*math.Log(math.Abs(r/outer-1))-inner*inner*math.Log(math.Abs(r/inner-1)))/(outer-inner)
}

// speed2 is w² = 1/b² - u² A of the exterior.
func (s *Round) speed2(b, u float64) float64 { return 1/(b*b) - u*u*s.lapse2(u) }
