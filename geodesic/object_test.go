package geodesic

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

func must(t *testing.T) func(s *Round, err error) *Round {
	return func(s *Round, err error) *Round {
		t.Helper()
		if err != nil {
			t.Fatal(err)
		}
		return s
	}
}

func TestObjectRefusals(t *testing.T) {
	for _, r := range []float64{9. / 4, 2, 0, -1, math.NaN(), math.Inf(1)} {
		if _, err := NewStar(r, true); err == nil {
			t.Errorf("a star of %g M is accepted", r)
		}
	}
	for _, r := range []float64{2, 1, math.NaN(), math.Inf(1)} {
		if _, err := NewShell(r); err == nil {
			t.Errorf("a shell of %g M is accepted", r)
		}
	}
	for _, q := range []float64{1, 1.1, -0.1, math.NaN()} {
		if _, err := NewHole(q); err == nil {
			t.Errorf("a hole of charge %g M is accepted", q)
		}
	}
	hole := schwarzschild
	star := must(t)(NewStar(6, false))
	shell := must(t)(NewShell(2.5))
	for _, c := range []struct {
		s    *Round
		o    Observer
		want error
	}{
		{hole, Observer{Radius: 1.9}, ErrInside},
		{hole, Observer{Radius: 3, Motion: Orbit}, ErrMotion},
		{hole, Observer{Radius: math.Inf(1), Motion: Orbit}, ErrMotion},
		{hole, Observer{Radius: math.Inf(1), Motion: Infall}, ErrMotion},
		{star, Observer{Radius: 5}, ErrInside},
		{star, Observer{Radius: 5, Motion: Infall}, ErrMotion},
		{shell, Observer{Radius: 1, Motion: Orbit}, ErrMotion},
		{hole, Observer{Radius: 1.5, Motion: Infall}, nil},
		{hole, Observer{Radius: 3.1, Motion: Orbit}, nil},
		{shell, Observer{Radius: 0}, nil},
	} {
		if err := c.s.Check(c.o); !errors.Is(err, c.want) {
			t.Errorf("%s, %+v: %v, want %v", c.s.name, c.o, err, c.want)
		}
	}
}

// Paths by integration against the closed forms, for opaque and transparent
// stars and for shells: within 1e-9 + 1e-10/|x|, where x is also the distance
// from the edge's grazing path.
func TestTraceObjects(t *testing.T) {
	rng := rand.New(rand.NewPCG(21, 22))
	checked := map[Fate]int{}
	for _, s := range []*Round{
		must(t)(NewStar(3.6, false)), must(t)(NewStar(6, false)),
		must(t)(NewStar(3.6, true)), must(t)(NewStar(6, true)), must(t)(NewStar(2.5, true)),
		must(t)(NewShell(2.25)), must(t)(NewShell(4)), must(t)(NewShell(9)),
	} {
		for _, radius := range []float64{30, 1000, math.Inf(1), 1} {
			if radius == 1 && s.end != Trapped {
				continue
			}
			for range 400 {
				p := Path{ObserverRadius: radius, Impact: randomNearCritical(rng), Tolerance: 1e-10}
				grazing := s.Edge() / s.Lapse(s.Edge()*(1+1e-15))
				if rng.IntN(2) == 0 {
					p.Impact = grazing * (1 + (2*rng.Float64()-1)*math.Pow(10, -6*rng.Float64()))
				}
				if radius == 1 {
					p.Impact = rng.Float64() / s.Lapse(1)
				}
				if s.checkPath(p) != nil {
					continue
				}
				story, err := s.Trace(p)
				if err != nil {
					t.Fatal(err)
				}
				checked[story.Fate]++
				if story.Fate == Trapped {
					continue
				}
				x := math.Abs(CriticalDistance(p.Impact))
				near(t, fmt.Sprintf("%s at %g: swept by %+v", s.name, s.Edge(), p), story.Swept, story.ClosedFormSwept, 1e-9+1e-10/x)
				if !(math.Abs(story.Swept-story.ClosedFormSwept) <= story.Bound) {
					t.Errorf("%s at %g: %+v: off by %g, bound %g", s.name, s.Edge(), p, story.Swept-story.ClosedFormSwept, story.Bound)
				}
			}
		}
	}
	if checked[OnSurface] < 300 || checked[Escaped] < 3000 || checked[Trapped] > 0 {
		t.Errorf("fates %v", checked)
	}
}

// The inside of a uniform star, in closed form as Maxwell's fish-eye, against
// quadrature of Schwarzschild's interior metric of 1916:
// dφ/dr = 1/(r² √h √(1/(bN)² - 1/r²)), dt/dφ = r²/(b N²).
func TestUniformInterior(t *testing.T) {
	for _, radius := range []float64{2.3, 2.7, 3.6, 6, 50} {
		in := newUniform(radius)
		s := must(t)(NewStar(radius, true))
		for _, share := range []float64{0.05, 0.4, 0.8, 0.99} {
			b := share * min(CriticalImpact, radius/Lapse(radius))
			half := s.halfSweep(b)
			closest := in.Radius(b, 0)
			near(t, fmt.Sprintf("R = %g: radius at the edge", radius), in.Radius(b, half), radius, 1e-11*radius)
			near(t, "turning point", closest/in.Lapse(closest), b, 1e-12*b)
			// r = closest + v², regular at the turning point; the factor
			// that vanishes there taken exactly
			angle := func(v float64) float64 {
				r := closest + v*v
				n := in.Lapse(r)
				square := 1/(b*b*n*n) - 1/(r*r)
				return 2 * v * in.Ruler(r) / (r * r * math.Sqrt(square))
			}
			end := math.Sqrt(radius - closest)
			near(t, fmt.Sprintf("R = %g, b = %g: half sweep", radius, b), half, quad.Fixed(angle, 0, end, 300, nil, 0), 1e-8)
			time := func(v float64) float64 {
				r := closest + v*v
				n := in.Lapse(r)
				return angle(v) * r * r / (b * n * n)
			}
			near(t, fmt.Sprintf("R = %g, b = %g: time", radius, b), in.Time(b, half), quad.Fixed(time, 0, end, 300, nil, 0), 1e-7)
			r := in.Radius(b, 0.3*half)
			near(t, "phase", in.Phase(b, r, s.speedWithin(b, r)), 0.3*half, 1e-12)
			near(t, "time to a radius", in.TimeTo(b, r, s.speedWithin(b, r)), in.Time(b, 0.3*half), 1e-11*radius)
		}
		below := quad.Fixed(func(r float64) float64 { return in.Ruler(r) / in.Lapse(r) }, radius/3, radius, 200, nil, 0)
		near(t, fmt.Sprintf("R = %g: tortoise", radius), in.TortoiseBelow(radius/3), below, 1e-11*below)
		near(t, "clock at the surface", in.Lapse(radius), Lapse(radius), 1e-15)
		near(t, "clock at the centre", in.Lapse(0), (3*Lapse(radius)-1)/2, 1e-15)
	}
}

// A shell of 4 M and b = 4: the angle in the local frames is 45 deg on both
// sides, and light is deflected by 0.715201453549592, from two independent
// routes; transparent shell and star to 1e-8.
func TestShellDeflection(t *testing.T) {
	shell := must(t)(NewShell(4))
	story, err := shell.Trace(Path{ObserverRadius: math.Inf(1), Impact: 4, Tolerance: 1e-11})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "deflection", story.Deflection, 0.715201453549592, 1e-10)
	near(t, "angle inside, deg", math.Asin(4*shell.Lapse(1)/4)*180/math.Pi, 45, 1e-12)
	near(t, "closest", story.Closest, 4*shell.Lapse(1), 1e-12)
	// travel time: outside by quadrature from 30 M, inside the straight chord
	story, err = shell.Trace(Path{ObserverRadius: 30, Impact: 4, Tolerance: 1e-11})
	if err != nil {
		t.Fatal(err)
	}
	outside := quad.Fixed(func(u float64) float64 {
		return 1 / (4 * u * u * (1 - 2*u) * math.Sqrt(1./16-u*u*(1-2*u)))
	}, 1./30, 1./4, 400, nil, 0)
	near(t, "travel time", story.TravelTime, 2*outside+2*4*math.Cos(math.Pi/4)/shell.Lapse(1), 1e-8)
}

// A charged hole: horizon, photon sphere and b_c in closed form
// (Reissner–Nordström; Chandrasekhar 1983, section 40, from memory), paths
// by quadrature.
func TestChargedHole(t *testing.T) {
	s := must(t)(NewHole(0.6))
	near(t, "horizon", s.Edge(), 1.8, 1e-15)
	near(t, "photon sphere", s.PhotonSphere(), 2.736932, 5e-7)
	near(t, "critical impact parameter", s.CriticalImpact(), 4.858694, 5e-7)
	near(t, "ISCO without charge", must(t)(NewHole(1e-9)).ISCO(), 6, 1e-12)
	near(t, "ISCO at the extreme", must(t)(NewHole(1-1e-12)).ISCO(), 4, 1e-5)
	r := s.ISCO()
	near(t, "ISCO equation", r*r*r-6*r*r+9*0.36*r-4*0.36*0.36, 0, 1e-12)
	for _, b := range []float64{0.5, 3, 4.8} {
		story, err := s.Trace(Path{ObserverRadius: 50, Impact: b, Tolerance: 1e-11})
		if err != nil {
			t.Fatal(err)
		}
		want := quad.Fixed(func(u float64) float64 { return 1 / math.Sqrt(s.speed2(b, u)) }, 0.02, 1/1.8, 4000, nil, 0)
		near(t, fmt.Sprintf("swept at b = %g", b), story.Swept, want, 1e-8)
		if story.Fate != Captured {
			t.Errorf("b = %g: %v", b, story.Fate)
		}
	}
	for _, x := range []float64{-1e-6, -1e-3, 1e-3, 1e-6} {
		story, err := s.Trace(Path{ObserverRadius: math.Inf(1), Impact: s.CriticalImpact() * (1 + x), Tolerance: 1e-11})
		if err != nil {
			t.Fatal(err)
		}
		if (story.Fate == Captured) != (x < 0) || !math.IsNaN(story.ClosedFormSwept) {
			t.Errorf("x = %g: %+v", x, story)
		}
	}
	// gas on geodesics: u·u = -1, plunge included
	gas := s.CircularGas()
	for r := 1.85; r < 20; r += 0.1 {
		v, a := gas.At(r), s.lapse2(1/r)
		near(t, fmt.Sprintf("u·u at %g", r), -a*v.UT*v.UT+v.UR*v.UR/a+r*r*v.UPhi*v.UPhi, -1, 1e-11/a)
	}
	// delay against quadrature: dt = dψ/(b u² A)
	b := 7.0
	tracer, err := s.Tracer(Observer{Radius: 50}, Plan{Tolerance: 1e-12, Plane: true})
	if err != nil {
		t.Fatal(err)
	}
	var rays Rays
	var at Crossings
	if err := s.Aim(Observer{Radius: 50}, true, []Direction{{Alpha: b}}, &rays); err != nil {
		t.Fatal(err)
	}
	tracer.Cross(&rays, Want{Delay: true}, &at)
	time := quad.Fixed(func(u float64) float64 { return 1 / (b * u * u * s.lapse2(u) * math.Sqrt(s.speed2(b, u))) }, 0.02, 1/at.R[0], 4000, nil, 0)
	near(t, "delay", at.Delay[0], time-s.Tortoise(50), 1e-7)
}

// Stars: the whole surface is visible below R = 3.520617963151926 M; at
// R = 6 M the back is seen to 119.074039498791 deg and 0.742969713811437 of
// the surface is visible; angles at 30 and 60 deg of emission. Numbers from
// two independent routes; formulae Pechenick, Ftaclas & Cohen, ApJ 274, 846
// (1983). Beloborodov, ApJ 566, L85 (2002): 1 - cos a = (1 - cos ψ)(1 - u),
// good to 5e-4 in cos a at 60 deg. From memory.
func TestStarVisibility(t *testing.T) {
	limb := func(r float64) float64 {
		s := must(t)(NewStar(r, false))
		story, err := s.Trace(Path{ObserverRadius: math.Inf(1), Impact: r / Lapse(r) * (1 - 1e-15), Tolerance: 1e-12})
		if err != nil || story.Fate != OnSurface {
			t.Fatal(story, err)
		}
		return story.Swept
	}
	near(t, "limb at R = 3.5206 M", limb(3.520617963151926), math.Pi, 5e-7) // grazing: the root of a rounding error
	near(t, "limb at R = 6 M, deg", limb(6)*180/math.Pi, 119.074039498791, 1e-5)
	near(t, "visible fraction at R = 6 M", (1-math.Cos(limb(6)))/2, 0.742969713811437, 1e-6)
	s := must(t)(NewStar(6, false))
	for _, c := range []struct{ a, want float64 }{{30, 36.9607722195436}, {60, 75.4781751110091}} {
		b := 6 * math.Sin(c.a*math.Pi/180) / Lapse(6)
		story, err := s.Trace(Path{ObserverRadius: math.Inf(1), Impact: b, Tolerance: 1e-12})
		if err != nil {
			t.Fatal(err)
		}
		near(t, fmt.Sprintf("ψ at a = %g deg", c.a), story.Swept*180/math.Pi, c.want, 1e-9)
	}
	psi := 75.4781751110091 * math.Pi / 180
	near(t, "Beloborodov's cos a at 60 deg", 1-(1-math.Cos(psi))*(1-1./3), 0.5, 6e-4)
	// below 3 M the star always looks 3√3 M wide: a path just within hits
	small := must(t)(NewStar(2.5, false))
	for _, x := range []float64{-1e-6, 1e-6} {
		story, err := small.Trace(Path{ObserverRadius: math.Inf(1), Impact: CriticalImpact * (1 + x), Tolerance: 1e-10})
		if err != nil {
			t.Fatal(err)
		}
		if (story.Fate == OnSurface) != (x < 0) {
			t.Errorf("R = 2.5 M, x = %g: %v", x, story.Fate)
		}
	}
}

// Surface and sky crossings: the same angles as Trace, and the slope dψ/db
// against central differences of the closed forms.
func TestEndsOfPaths(t *testing.T) {
	compared := 0
	for _, s := range []*Round{schwarzschild, must(t)(NewStar(6, false)), must(t)(NewStar(6, true)), must(t)(NewShell(4)), must(t)(NewShell(2.3))} {
		o := Observer{Radius: 40, InclinationDeg: 65}
		tracer, err := s.Tracer(o, Plan{Tolerance: 1e-11, MaxOrder: 3, Sky: true})
		if err != nil {
			t.Fatal(err)
		}
		for b := 0.2; b < 20; b += 0.213 {
			sin, cos := math.Sincos(0.3 * b)
			var rays Rays
			var at Crossings
			if err := s.Aim(o, true, []Direction{{Alpha: b * cos, Beta: b * sin}}, &rays); err != nil {
				t.Fatal(err)
			}
			tracer.Cross(&rays, Want{Delay: true, Slope: true}, &at)
			closed := func(b float64) (Fate, float64) { // to infinity, not back to r_obs
				p := Path{ObserverRadius: 40, Impact: b, Tolerance: 1e-9}
				fate, swept := s.SweptToEnd(p)
				if fate == Escaped {
					orbit := NewClosedOrbit(b)
					swept += orbit.Sweep(0, 1./40)
				}
				return fate, swept
			}
			fate, psi := closed(b)
			if fate == Captured || psi > 4*math.Pi {
				if len(at.R) != 0 {
					t.Errorf("%s, b = %g: %d ends", s.name, b, len(at.R))
				}
				continue
			}
			if len(at.R) != 1 {
				t.Fatalf("%s, b = %g: %d ends", s.name, b, len(at.R))
			}
			cosTheta := math.Cos(psi)*math.Cos(65*math.Pi/180) + math.Sin(psi)*sin*math.Sin(65*math.Pi/180)
			near(t, fmt.Sprintf("%s, b = %g: cos θ", s.name, b), at.CosTheta[0], cosTheta, 1e-7)
			if want := math.Ceil(psi/math.Pi) - 1; float64(at.Order[0]) != want {
				t.Errorf("%s, b = %g: order %d, want %g", s.name, b, at.Order[0], want)
			}
			d := 1e-5 * b * math.Abs(CriticalDistance(b))
			_, lo := closed(b - d)
			_, hi := closed(b + d)
			if slope := (hi - lo) / (2 * d); math.Abs(slope) < 100 {
				near(t, fmt.Sprintf("%s, b = %g: dψ/db", s.name, b), at.Slope[0], slope, 1e-5*max(1, math.Abs(slope)))
				compared++
			}
		}
	}
	if compared < 300 {
		t.Fatalf("compared %d slopes", compared)
	}
}

// Gas inside a shell: straight lines from an observer anywhere in it, and
// through it from outside; slopes and delays by differences and quadrature.
func TestWithinShell(t *testing.T) {
	shell := must(t)(NewShell(8))
	lapse := shell.Lapse(1)
	for _, o := range []Observer{{Radius: 3, InclinationDeg: 50}, {Radius: 0, InclinationDeg: 50}, {Radius: 25, InclinationDeg: 50}} {
		tracer, err := shell.Tracer(o, Plan{Tolerance: 1e-12, MaxOrder: 1, Plane: true})
		if err != nil {
			t.Fatal(err)
		}
		compared := 0
		for k := range 200 {
			a := 0.01 + 3.1*float64(k)/200
			if o.Radius > 8 {
				a *= 0.1
			}
			sin, cos := math.Sincos(a)
			look := func(da float64) (Rays, Crossings) {
				sin, cos := math.Sincos(a + da)
				var rays Rays
				var at Crossings
				d := Direction{Alpha: 0.28 * sin, Beta: -0.96 * sin, Ahead: cos}
				if err := shell.Aim(o, false, []Direction{d}, &rays); err != nil {
					t.Fatal(err)
				}
				tracer.Cross(&rays, Want{Delay: true, Slope: true}, &at)
				return rays, at
			}
			rays, at := look(0)
			if len(at.R) == 0 || at.R[0] >= 8 {
				continue
			}
			if o.Radius < 8 && o.Radius > 0 { // a straight line meets the plane
				ci, si := math.Cos(50*math.Pi/180), math.Sin(50*math.Pi/180)
				// along n·N per unit length: ahead is -o, N·o = ci, N·β = si
				climb := -cos*ci - 0.96*sin*si
				length := -o.Radius * ci / climb
				if length < 0 {
					t.Fatalf("crossing behind the observer at a = %g", a)
				}
				x := o.Radius - length*cos
				want := math.Hypot(x, length*sin)
				near(t, fmt.Sprintf("r at a = %g", a), at.R[0], want, 1e-9*max(1, want))
				near(t, fmt.Sprintf("delay at a = %g", a), at.Delay[0], length/lapse-shell.Tortoise(o.Radius), 1e-9*max(1, want))
			}
			const step = 1e-6
			_, lo := look(-step)
			raysHi, hi := look(step)
			if len(lo.R) == 0 || len(hi.R) == 0 || lo.R[0] >= 8 || hi.R[0] >= 8 || o.Radius == 0 {
				continue
			}
			raysLo, _ := look(-step)
			slope := (hi.R[0] - lo.R[0]) / (raysHi.Impact(0) - raysLo.Impact(0))
			if math.Abs(rays.KR[0]) < 0.05 {
				continue // b stands still there
			}
			near(t, fmt.Sprintf("from %g M: dr/db at a = %g", o.Radius, a), at.Slope[0], slope, 1e-4*max(1, math.Abs(slope)))
			compared++
		}
		if o.Radius != 0 && compared < 50 {
			t.Errorf("observer at %g M: compared %d slopes", o.Radius, compared)
		}
	}
	// within a shell of 2.25 M grazing light is trapped from
	// d > 3√3 √(1 - 2/R) on
	tight := must(t)(NewShell(2.25))
	edge := CriticalImpact * Lapse(2.25)
	for _, side := range []float64{-1e-6, 1e-6} {
		d := edge * (1 + side)
		story, err := tight.Trace(Path{ObserverRadius: d, Impact: d / Lapse(2.25) * (1 - 1e-15), Tolerance: 1e-10})
		if err != nil {
			t.Fatal(err)
		}
		if (story.Fate == Trapped) != (side > 0) {
			t.Errorf("grazing at %g of the edge: %v", side, story.Fate)
		}
	}
}
