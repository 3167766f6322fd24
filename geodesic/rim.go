package geodesic

import "math"

// RadiusAt returns the radius, M, at which a path from an observer at
// inverse radius uObs, first leg inward, has swept psi; 0 if it reached the
// horizon before, +Inf if it had already escaped.
func (o *ClosedOrbit) RadiusAt(uObs, psi float64) float64 {
	if o.scattering && uObs <= o.u2 {
		if psi >= o.Sweep(uObs, o.u2)+o.Sweep(0, o.u2) {
			return math.Inf(1)
		}
	} else if psi >= o.Sweep(uObs, 0.5) {
		return 0
	}
	return 1 / o.U(uObs, false, psi)
}

// RimImpact returns the impact parameter, M, of the path from an observer at
// inverse radius uObs that is at radius r > 2 M after sweeping psi > 0: a
// point of the image of a rim, by closed form. The radius grows with b at
// fixed psi, so the root is bracketed; where even the widest path of this
// observer stays within r, that path's b is returned.
func RimImpact(uObs, psi, r float64) float64 {
	lo, hi := 0.0, CriticalImpact*(1+1e-14)
	if r > PhotonSphere {
		hi = max(hi, ImpactAtPeriapsis(r)*(1+1e-14))
	}
	if uObs > 0 {
		hi = min(hi, 1/(uObs*math.Sqrt(1-2*uObs)))
	}
	// off is 1/r(b) - 1/r where the path gets there, else ±1
	off := func(b float64) float64 {
		o := NewClosedOrbit(b)
		switch found := o.RadiusAt(uObs, psi); found {
		case 0:
			return 1
		case math.Inf(1):
			return -1
		default:
			return 1/found - 1/r
		}
	}
	offLo, offHi := 1.0, off(hi)
	if offHi >= 0 {
		return hi
	}
	// halve until both ends have a radius, then the Illinois method (Dowell &
	// Jarratt, BIT 11, 168 (1971), from memory)
	kept := 0 // the end kept by the last step: -1 lo, +1 hi
	for range 200 {
		mid := lo + (hi-lo)/2
		if mid <= lo || mid >= hi {
			break
		}
		if math.Abs(offLo) < 0.5 && math.Abs(offHi) < 0.5 {
			if secant := hi - offHi*(hi-lo)/(offHi-offLo); secant > lo && secant < hi {
				mid = secant
			}
		}
		o := off(mid)
		if o > 0 {
			lo, offLo = mid, o
			if kept > 0 {
				offHi /= 2
			}
			kept = 1
		} else {
			hi, offHi = mid, o
			if kept < 0 {
				offLo /= 2
			}
			kept = -1
		}
		if math.Abs(o) < rimTolerance/r {
			return mid
		}
	}
	return hi
}

// rimTolerance is the relative error of the radius at which RimImpact is
// content: a few rounding errors of U.
const rimTolerance = 4e-15
