package scenes

import "math"

// Horizon returns the radius of a black hole's horizon, 1 + √(1-Q²), in M;
// 0 for a star or shell, which have none.
func (o Object) Horizon() float64 {
	if o.Kind != blackHole {
		return 0
	}
	return 1 + math.Sqrt(1-o.Charge*o.Charge)
}

// PhotonSphere returns the radius of the circular light orbit around the
// object, (3 + √(9-8Q²))/2, in M. Around a star or shell larger than it, it
// is only that of the mass.
//
// Source: Chandrasekhar, The Mathematical Theory of Black Holes (1983),
// section 40, from memory.
func (o Object) PhotonSphere() float64 {
	return (3 + math.Sqrt(9-8*o.Charge*o.Charge)) / 2
}

// ISCO returns the radius of the innermost stable circular orbit in M, or
// the object's own radius when that is larger.
func (o Object) ISCO() float64 { return max(stableOrbit(o.Charge), o.Radius) }

// stableOrbit returns the radius in M of the innermost stable circular orbit
// around a hole of charge q in [0, 1], in M: the largest root of
//
//	r³ - 6r² + 9q²r - 4q⁴ = 0,
//
// 6 for q = 0 and 4 for q = 1. Standard, from memory;
// TestStableOrbitIsLeastBound comes to it by another road.
func stableOrbit(q float64) float64 {
	// From r = 6 Newton's steps fall on the root: there the cubic is not
	// negative, and from 6 down to the root it is convex and rises.
	q2 := q * q
	for r := 6.0; ; {
		next := r - (((r-6)*r+9*q2)*r-4*q2*q2)/((3*r-12)*r+9*q2)
		if !(next < r) { // rounding has the last word
			return r
		}
		r = next
	}
}
