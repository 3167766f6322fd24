package geodesic

import "math"

// Radii of circular timelike orbits, M. Source: Bardeen, Press & Teukolsky,
// ApJ 178, 347 (1972), from memory.
const (
	ISCO          = 6.0 // innermost stable circular orbit
	MarginalBound = 4.0 // innermost bound one
)

// CircularEnergy returns the specific energy of circular motion at r > 3 M.
func CircularEnergy(r float64) float64 { return (1 - 2/r) / math.Sqrt(1-3/r) }

// CircularMomentum returns the specific angular momentum, in M, of circular
// motion at r > 3 M.
func CircularMomentum(r float64) float64 { return math.Sqrt(r) / math.Sqrt(1-3/r) }

// AngularVelocity returns Ω = dφ/dt of circular motion at r, in 1/M.
func AngularVelocity(r float64) float64 { return 1 / (r * math.Sqrt(r)) }

// Gas is the four-velocity of disk gas: circular outside the ISCO, and
// inside it the plunge that keeps the ISCO's energy and momentum
// (Cunningham, ApJ 202, 788 (1975), from memory).
type Gas struct {
	UT, UR, UPhi float64 // dt/dτ, dr/dτ, dφ/dτ for counter-clockwise gas
}

// GasAt returns the velocity of the gas at radius r > 2, M.
func GasAt(r float64) Gas {
	if r >= ISCO {
		ut := 1 / math.Sqrt(1-3/r)
		return Gas{UT: ut, UPhi: ut * AngularVelocity(r)}
	}
	const (
		energy   = 0.942809041582063380 // √(8/9)
		momentum = 3.464101615137754587 // 2√3, M
	)
	fall := 6/r - 1
	return Gas{
		UT:   energy / (1 - 2/r),
		UR:   -fall * math.Sqrt(fall) / 3,
		UPhi: momentum / (r * r),
	}
}

// RedshiftFactor returns g = ν_obs/ν_em of light that leaves the gas at r
// towards the observer. gObs is ν_obs/E, lambda = Lz/E in M, kr = k^r/E of
// the light as it leaves (> 0 outward); sense is +1 for counter-clockwise
// gas, -1 for clockwise.
//
// ν_em/E = u^t - λ u^φ - u_r k^r with u_r = u^r/(1-2/r).
func (v Gas) RedshiftFactor(r, gObs, lambda, kr, sense float64) float64 {
	emitted := v.UT - sense*lambda*v.UPhi
	if v.UR != 0 {
		emitted -= kr * v.UR / (1 - 2/r)
	}
	return gObs / emitted
}

// EmissionCosine returns |cos| of the angle between the light and the disk
// normal in the gas frame: (g/g_obs) √η/r, at most 1.
func EmissionCosine(g, gObs, eta, r float64) float64 {
	return min(1, g/gObs*math.Sqrt(max(eta, 0))/r)
}
