package geodesic

import (
	"fmt"
	"math"
	"testing"
)

// Circular motion: Bardeen, Press & Teukolsky, ApJ 178, 347 (1972), from
// memory; numbers from their closed forms.
var gas = schwarzschild.CircularGas()

func TestCircularMotion(t *testing.T) {
	near(t, "ISCO energy", schwarzschild.CircularEnergy(ISCO), 0.942809041582063, 1e-15)
	near(t, "ISCO momentum", schwarzschild.CircularMomentum(ISCO), 3.46410161513775, 5e-15)
	near(t, "ISCO angular velocity", schwarzschild.AngularVelocity(ISCO), 0.0680413817439772, 1e-16)
	near(t, "efficiency", 1-schwarzschild.CircularEnergy(ISCO), 0.0571909584179366, 1e-15)
	near(t, "marginally bound energy", schwarzschild.CircularEnergy(MarginalBound), 1, 1e-15)
	near(t, "marginally bound momentum", schwarzschild.CircularMomentum(MarginalBound), 4, 1e-15)
	near(t, "u^t at the ISCO", gas.At(ISCO).UT, math.Sqrt2, 1e-15)
}

// The gas moves on geodesics: u·u = -1 everywhere, and nothing jumps at the
// ISCO. Plunge: Cunningham, ApJ 202, 788 (1975), from memory.
func TestGasVelocity(t *testing.T) {
	for r := 2.01; r < 30; r += 0.07 {
		v := gas.At(r)
		f := 1 - 2/r
		norm := -f*v.UT*v.UT + v.UR*v.UR/f + r*r*v.UPhi*v.UPhi
		near(t, fmt.Sprintf("u·u at %g", r), norm, -1, 1e-12/f)
	}
	in, out := gas.At(ISCO*(1-1e-12)), gas.At(ISCO)
	near(t, "u^t across the ISCO", in.UT, out.UT, 1e-10)
	near(t, "u^φ across the ISCO", in.UPhi, out.UPhi, 1e-10)
	near(t, "u^r across the ISCO", in.UR, out.UR, 1e-10)
}

// Redshift factors. Edge-on the extremes of a ring are
// √(1-3/r)/(1 ∓ 1/√(r-2)): √2 and √2/3 at the ISCO; face-on √(1-3/r).
// At λ = ∓b the gas runs straight towards or away from a static observer's
// light at the ring's ansa. Luminet, A&A 75, 228 (1979), from memory.
func TestRedshiftFactor(t *testing.T) {
	for _, c := range []struct{ r, blue, red, faceOn float64 }{
		{6, math.Sqrt2, math.Sqrt2 / 3, 0.707106781186548},
		{10, 1.29424458935892, 0.618121185576108, 0.836660026534076},
		{20, 1.20627655683816, 0.746097563529742, 0.921954445729289},
		{100, 1.09555338403743, 0.894525099624463, 0.98488578017961},
	} {
		tangent := ImpactAtPeriapsis(c.r) // light that leaves the ansa along the orbit
		// λ > 0 is the left half of the screen, which approaches
		near(t, fmt.Sprintf("blue edge at %g", c.r), gas.RedshiftFactor(c.r, 1, tangent, 0, 1), c.blue, 2e-14)
		near(t, fmt.Sprintf("red edge at %g", c.r), gas.RedshiftFactor(c.r, 1, -tangent, 0, 1), c.red, 2e-14)
		near(t, fmt.Sprintf("face-on at %g", c.r), gas.RedshiftFactor(c.r, 1, 0, 0.3, 1), c.faceOn, 2e-15)
		near(t, "clockwise gas", gas.RedshiftFactor(c.r, 1, tangent, 0, -1), c.red, 2e-14)
	}
	// Inside the ISCO face-on: g = 1/(u^t - k_r u^r) at r = 4, order 0
	b := RimImpact(0, math.Pi/2, 4)
	kr := math.Sqrt(1 - 0.5*b*b/16)
	near(t, "plunge at 4 M", gas.RedshiftFactor(4, 1, 0, kr, 1), 0.499268356950347, 1e-11)
}

// Emission cosine of the face-on ring at 6 M.
func TestEmissionCosine(t *testing.T) {
	b := RimImpact(0, math.Pi/2, 6)
	near(t, "cosine", EmissionCosine(math.Sqrt(0.5), 1, b*b, 6), 0.816961532971148, 1e-11)
}
