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
// fixed psi, so a bisection finds it; where even the widest path of this
// observer stays within r, that path's b is returned.
func RimImpact(uObs, psi, r float64) float64 {
	lo, hi := 0.0, CriticalImpact*(1+1e-14)
	if r > PhotonSphere {
		hi = max(hi, ImpactAtPeriapsis(r)*(1+1e-14))
	}
	if uObs > 0 {
		hi = min(hi, 1/(uObs*math.Sqrt(1-2*uObs)))
	}
	for range 200 {
		mid := lo + (hi-lo)/2
		if mid <= lo || mid >= hi {
			break
		}
		o := NewClosedOrbit(mid)
		if o.RadiusAt(uObs, psi) < r {
			lo = mid
		} else {
			hi = mid
		}
	}
	return hi
}
