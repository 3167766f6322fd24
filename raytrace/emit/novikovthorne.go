package emit

import (
	"math"

	"annulet/geodesic"
)

// Efficiency is the share of the accreted rest energy that a disk down to
// the ISCO of a Schwarzschild hole radiates, 1 - √(8/9), of which some falls
// into the hole. Bardeen, Press & Teukolsky, ApJ 178, 347 (1972), from memory.
const Efficiency = 0.0571909584179366

// NovikovThorne is the profile of a thin accretion disk without torque at the
// ISCO of a Schwarzschild hole: the flux from one face in the gas frame, in
// units of Ṁ c²/(GM/c²)²; nothing inside 6 M.
type NovikovThorne struct{}

// Flux returns the profile at r, M.
//
// Page & Thorne, ApJ 191, 499 (1974), integrated in closed form. Luminet, A&A
// 75, 228 (1979) is widely quoted with √3/3 before the logarithm; only √3/2
// agrees with the integral.
func (NovikovThorne) Flux(r float64) float64 {
	if r <= geodesic.ISCO {
		return 0
	}
	const sqrt3, sqrt6 = 1.7320508075688772, 2.449489742783178
	x := math.Sqrt(r)
	rest := x - sqrt6 + sqrt3/2*math.Log((x+sqrt3)*(sqrt6-sqrt3)/((x-sqrt3)*(sqrt6+sqrt3)))
	return max(0, 3/(8*math.Pi)/((r-3)*r*r*x)*rest)
}

// Fill implements Profile.
func (p NovikovThorne) Fill(r []float64, lit []bool, values []float64) {
	for j, is := range lit {
		if is {
			values[j] = p.Flux(r[j])
		}
	}
}
