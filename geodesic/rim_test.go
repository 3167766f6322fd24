package geodesic

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The image of a rim leads back to the rim, for any observer and order.
func TestRimImpact(t *testing.T) {
	rng := rand.New(rand.NewPCG(41, 42))
	for range 2000 {
		uObs := 0.3 * rng.Float64()
		psi := 0.05 + 9*rng.Float64()
		r := 2.01 + 60*rng.Float64()*rng.Float64()
		b := RimImpact(uObs, psi, r)
		if reach := 1 / (uObs * math.Sqrt(1-2*uObs)); b == reach {
			continue // not even the widest path gets there
		}
		// the neighbours in float64 of b lie on both sides of the rim, to
		// within the rounding of psi
		o, p := NewClosedOrbit(b*(1-1e-13)), NewClosedOrbit(b*(1+1e-13))
		if lo, hi := o.RadiusAt(uObs, psi*(1+1e-14)), p.RadiusAt(uObs, psi*(1-1e-14)); !(lo <= r*(1+1e-12) && r*(1-1e-12) <= hi) {
			t.Errorf("u_obs = %g, psi = %g, r = %g: b = %.17g is at %.15g to %.15g", uObs, psi, r, b, lo, hi)
		}
	}
}

func BenchmarkRimImpact(b *testing.B) {
	for b.Loop() {
		if got := RimImpact(0, math.Pi/2, 6); math.Abs(got-6.932148479189) > 1e-11 {
			b.Fatal(got)
		}
	}
}
