package geodesic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// aimOne aims one line of sight.
func aimOne(t *testing.T, s *Round, o Observer, d Direction) Rays {
	t.Helper()
	var rays Rays
	if err := s.Aim(o, false, []Direction{d}, &rays); err != nil {
		t.Fatal(err)
	}
	return rays
}

func randomSight(rng *rand.Rand) Direction {
	z := 2*rng.Float64() - 1
	sin, cos := math.Sincos(2 * math.Pi * rng.Float64())
	rho := math.Sqrt(1 - z*z)
	return Direction{Alpha: rho * cos, Beta: rho * sin, Ahead: z}
}

// The observers' frames are orthonormal: the photon that arrives along any
// line of sight, rebuilt as a covector from b, k^r and ν_obs/E, is null and
// has energy -k·u = ν_obs in the observer's own four-velocity.
func TestTetrads(t *testing.T) {
	rng := rand.New(rand.NewPCG(31, 32))
	charged := must(t)(NewHole(0.6))
	for _, c := range []struct {
		s *Round
		o Observer
	}{
		{schwarzschild, Observer{Radius: 2.1}},
		{schwarzschild, Observer{Radius: 9, Motion: Orbit}},
		{schwarzschild, Observer{Radius: 3.2, Motion: Orbit}},
		{schwarzschild, Observer{Radius: 20, Motion: Infall}},
		{schwarzschild, Observer{Radius: 1.2, Motion: Infall}},
		{charged, Observer{Radius: 7}},
		{charged, Observer{Radius: 7, Motion: Orbit}},
		{charged, Observer{Radius: 7, Motion: Infall}},
		{must(t)(NewStar(6, false)), Observer{Radius: 8, Motion: Infall}},
	} {
		r := c.o.Radius
		a := c.s.lapse2(1 / r)
		seen := 0
		for range 200 {
			d := randomSight(rng)
			rays := aimOne(t, c.s, c.o, d)
			if !rays.Seen[0] {
				continue
			}
			seen++
			what := fmt.Sprintf("%s, %+v, %+v", c.s.name, c.o, d)
			b, kr := rays.Impact(0), rays.KR[0]
			// null: (k^r)² = E² - A L²/r²
			near(t, what+": null", kr*kr, 1-a*b*b/(r*r), 1e-12*max(1, b*b))
			var u Velocity
			var along float64 // L about the axis that the observer's motion turns about
			switch c.o.Motion {
			case Static:
				u.UT = 1 / math.Sqrt(a)
			case Orbit:
				u.UT = c.s.circularUT(1 / r)
				u.UPhi = u.UT * c.s.AngularVelocity(r)
				along = -b * rays.CosS[0] // α > 0 comes from ahead of the motion
			case Infall:
				// from rest at infinity E = 1; inside the horizon A u^t = 1 too
				u.UT, u.UR = 1/a, -c.s.FallSpeed(r)
			}
			// ν_obs/E = u^t - u^φ L/E - u^r k_r/E, k_r = k^r/A
			near(t, what+": energy", rays.GObs[0], u.UT-u.UPhi*along-u.UR*kr/a, 1e-11*max(1, rays.GObs[0]))
		}
		if seen < 40 {
			t.Errorf("%+v sees %d of 200", c.o, seen)
		}
	}
}

// The published forms of ν_obs/E: (1 + r^(-3/2) α)/√(1-3/r) in orbit and
// (1 + √(2/r) k^r)/(1-2/r) in the fall, with E = 1: Bardeen, Press &
// Teukolsky, ApJ 178, 347 (1972), four-velocities, from memory.
func TestObserverShift(t *testing.T) {
	rng := rand.New(rand.NewPCG(33, 34))
	for range 200 {
		d := randomSight(rng)
		rays := aimOne(t, schwarzschild, Observer{Radius: 8, Motion: Orbit}, d)
		alpha := rays.Impact(0) * rays.CosS[0]
		near(t, "orbit", rays.GObs[0], (1+math.Pow(8, -1.5)*alpha)/math.Sqrt(1-3./8), 1e-13)
		rays = aimOne(t, schwarzschild, Observer{Radius: 8, Motion: Infall}, d)
		near(t, "fall", rays.GObs[0], (1+0.5*rays.KR[0])/(1-2./8), 1e-13)
	}
}

// edgeOfShadow finds by bisection the angle from the middle of the shadow at
// which light comes from the sky, along a great circle given by a unit
// vector pair.
func edgeOfShadow(t *testing.T, o Observer, look func(angle float64) Direction) float64 {
	t.Helper()
	tracer, err := schwarzschild.Tracer(o, Plan{Tolerance: 1e-12, MaxOrder: 9, Sky: true})
	if err != nil {
		t.Fatal(err)
	}
	lo, hi := 0.0, math.Pi
	for range 52 {
		mid := (lo + hi) / 2
		rays := aimOne(t, schwarzschild, o, look(mid))
		var at Crossings
		tracer.Cross(&rays, Want{}, &at)
		sky := len(at.R) > 0
		if rays.Seen[0] && !sky && math.Abs(CriticalDistance(rays.Impact(0))) < 1e-9 {
			sky = rays.Impact(0) > CriticalImpact // more than nine orders
		}
		if sky {
			hi = mid
		} else {
			lo = mid
		}
	}
	return lo
}

// Angular radius of the shadow, Synge (1966) for the static observer, the
// aberration of a circle (Penrose 1959) for the moving ones, from memory;
// numbers from both edges.
func TestShadowOfMovingObservers(t *testing.T) {
	inPlane := func(angle float64) Direction {
		sin, cos := math.Sincos(angle)
		return Direction{Alpha: sin, Ahead: cos}
	}
	const deg = math.Pi / 180
	for _, c := range []struct {
		o    Observer
		want float64 // deg
	}{
		{Observer{Radius: 6}, 45},
		{Observer{Radius: 3}, 90},
		{Observer{Radius: 6, Motion: Infall}, 24.2034283393298},
		{Observer{Radius: 3, Motion: Infall}, 35.2643896827547},
		{Observer{Radius: 2, Motion: Infall}, 42.1034488707458},
	} {
		near(t, fmt.Sprintf("%+v", c.o), edgeOfShadow(t, c.o, inPlane)/deg, c.want, 1e-7)
	}
	near(t, "acos(23/31)", math.Acos(23./31)/deg, 42.1034488707458, 1e-12)
	// in orbit at 6 M: a circle of radius atan(√3/2), its centre 22.2077 deg
	// towards the motion; measured from both edges along the motion and
	// then across it
	o := Observer{Radius: 6, Motion: Orbit}
	right := edgeOfShadow(t, o, inPlane) / deg
	left := edgeOfShadow(t, o, func(a float64) Direction { return inPlane(-a) }) / deg
	near(t, "radius in orbit", (right+left)/2, 40.8933946491309, 1e-7)
	near(t, "centre in orbit", (right-left)/2, 22.2076542985965, 1e-7)
	sin0, cos0 := math.Sincos(22.2076542985965 * deg)
	across := edgeOfShadow(t, o, func(a float64) Direction {
		sin, cos := math.Sincos(a)
		return Direction{Alpha: sin0 * cos, Beta: sin, Ahead: cos0 * cos}
	}) / deg
	near(t, "radius across the motion", across, math.Atan(math.Sqrt(3)/2)/deg, 1e-7)
}

// A star at infinity seen from inside a shell is blueshifted by
// 1/√(1 - 2/R); at the centre the sky is undistorted, off-centre it is not:
// looking at χ from outward, light comes from χ - θ + ψ_out with
// sin θ = (d/R) sin χ (flat geometry inside, elliptic integral outside).
func TestShellSky(t *testing.T) {
	shell := must(t)(NewShell(2.5))
	for _, d := range []float64{0, 1, 2.2} {
		o := Observer{Radius: d, InclinationDeg: 90}
		tracer, err := shell.Tracer(o, Plan{Tolerance: 1e-12, MaxOrder: 3, Sky: true})
		if err != nil {
			t.Fatal(err)
		}
		for chi := 0.1; chi < 3.1; chi += 0.1 {
			sin, cos := math.Sincos(chi)
			rays := aimOne(t, shell, o, Direction{Beta: sin, Ahead: -cos})
			var at Crossings
			tracer.Cross(&rays, Want{}, &at)
			if rays.Impact(0) > CriticalImpact {
				if len(at.R) != 0 {
					t.Errorf("d = %g, χ = %g: light from the sky at b = %g", d, chi, rays.Impact(0))
				}
				continue
			}
			if len(at.R) != 1 {
				t.Fatalf("d = %g, χ = %g: %d ends", d, chi, len(at.R))
			}
			near(t, "blueshift", rays.GObs[0], 1/math.Sqrt(1-2/2.5), 1e-14)
			psi := chi
			if d > 0 {
				orbit := NewClosedOrbit(d * sin / shell.Lapse(1))
				psi = chi - math.Asin(d/2.5*sin) + orbit.Sweep(0, 1/2.5)
			}
			// at i = 90 deg the polar angle is that from β upwards
			near(t, fmt.Sprintf("d = %g, χ = %g: sky", d, chi), at.CosTheta[0], math.Sin(psi), 1e-8)
		}
	}
}

// Flux of a static isotropic source averaged over the observers' sky and all
// images: f (1 + cos a_esc)/2 = 0.569035593728849 at 6 M, from memory with
// two routes; here from the escape cone alone.
func TestEscapeAverage(t *testing.T) {
	esc := edgeOfShadow(t, Observer{Radius: 6}, func(a float64) Direction {
		sin, cos := math.Sincos(a)
		return Direction{Alpha: sin, Ahead: cos}
	})
	near(t, "average amplification", (1-2./6)*(1+math.Cos(esc))/2, 0.569035593728849, 1e-9)
}
