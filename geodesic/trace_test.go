package geodesic

import (
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// observers of the issue's promise, M.
var promised = []float64{12, 30, 1000, math.Inf(1)}

// randomNearCritical draws b with |b/b_c - 1| from 1e-9 to 3, log-uniform
// below 1.
func randomNearCritical(rng *rand.Rand) float64 {
	if rng.IntN(3) == 0 {
		return CriticalImpact * (1 + 3*rng.Float64())
	}
	side := float64(1 - 2*rng.IntN(2))
	return CriticalImpact * (1 + side*math.Pow(10, -9*rng.Float64()))
}

// At tolerance 1e-10 the swept angle is within 1e-9 + 1e-10/|x| of the
// closed form and the fate right, down to the critical curve's last 1e-9.
func TestTraceTolerance(t *testing.T) {
	rng := rand.New(rand.NewPCG(1, 2))
	checked := 0
	for _, radius := range promised {
		for range 2500 {
			p := Path{ObserverRadius: radius, Impact: randomNearCritical(rng), Tolerance: 1e-10}
			if schwarzschild.checkPath(p) != nil {
				continue // wider than this observer sees
			}
			s, err := Trace(p)
			if err != nil {
				t.Fatal(err)
			}
			x := math.Abs(CriticalDistance(p.Impact))
			if s.FateByClosedForm {
				t.Errorf("%+v: not decided by integration at x = %g", p, x)
			}
			near(t, fmt.Sprintf("swept by %+v", p), s.Swept, s.ClosedFormSwept, 1e-9+1e-10/x)
			if want := p.Impact < CriticalImpact; (s.Fate == Captured) != want {
				t.Errorf("%+v: %v", p, s.Fate)
			}
			if s.Fate == Escaped {
				near(t, fmt.Sprintf("closest of %+v", p), s.Closest, Periapsis(p.Impact), 1e-8+1e-9/math.Sqrt(x))
			}
			checked++
		}
	}
	if checked < 8000 {
		t.Fatalf("checked %d paths", checked)
	}
}

// The stated bounds cover every error, at every tolerance, and are not
// wildly too wide.
func TestBoundsCover(t *testing.T) {
	rng := rand.New(rand.NewPCG(5, 6))
	for _, tolerance := range []float64{1e-4, 1e-6, 1e-8, 1e-9, 1e-10, 1e-12, 1e-13} {
		paths, wide := 0, 0
		for range 4000 {
			p := Path{ObserverRadius: promised[rng.IntN(4)], Impact: randomNearCritical(rng), Tolerance: tolerance}
			if schwarzschild.checkPath(p) != nil {
				continue
			}
			s, err := Trace(p)
			if err != nil {
				t.Fatal(err)
			}
			if s.FateByClosedForm {
				continue
			}
			off := math.Abs(s.Swept - s.ClosedFormSwept)
			if !(off <= s.Bound) {
				t.Errorf("%+v: off by %g, bound %g", p, off, s.Bound)
			}
			paths++
			if s.Bound > 300*(off+1e-15) {
				wide++
			}
		}
		if paths < 1000 || wide > paths/2 {
			t.Errorf("tolerance %g: %d of %d bounds more than 300 times too wide", tolerance, wide, paths)
		}
	}
}

// Travel time against quadrature of dt/dr = ±1/(f √(1 - b² f/r²)), with the
// turning point mapped away; Schwarzschild's metric in any textbook.
func TestTravelTime(t *testing.T) {
	for _, radius := range []float64{12, 30, 1000} {
		for _, b := range []float64{5.3, 6, 8, 11} {
			s, err := Trace(Path{ObserverRadius: radius, Impact: b, Tolerance: 1e-11})
			if err != nil {
				t.Fatal(err)
			}
			o := NewClosedOrbit(b)
			half := quad.Fixed(func(v float64) float64 { // u = u2 - v²
				u := o.u2 - v*v
				return 2 / (b * u * u * (1 - 2*u) * math.Sqrt(2*(u-o.u1)*(o.d32+v*v)))
			}, 0, math.Sqrt(o.u2-1/radius), 6000, nil, 0)
			near(t, fmt.Sprintf("time of b = %g at %g", b, radius), s.TravelTime, 2*half, 1e-7)
		}
	}
	// light around the photon sphere: 3√3 π a half orbit (b_c times π); two
	// paths that differ by one orbit in swept angle differ by twice that
	a, _ := Trace(Path{ObserverRadius: math.Inf(1), Impact: CriticalImpact * (1 + 1e-7), Tolerance: 1e-12})
	b, _ := Trace(Path{ObserverRadius: math.Inf(1), Impact: CriticalImpact * (1 + 1e-7*math.Exp(-2*math.Pi)), Tolerance: 1e-12})
	near(t, "time per radian", (b.TravelTime-a.TravelTime)/(b.Swept-a.Swept), CriticalImpact, 1e-6)
	near(t, "half orbit", math.Pi*(b.TravelTime-a.TravelTime)/(b.Swept-a.Swept), 16.324194278108, 3e-6)
}

// Energy-like integral w² + u² - 2u³ = 1/b² along the path, and the same
// path backwards from its end.
func TestConservationAndReversal(t *testing.T) {
	const tolerance = 1e-11
	rng := rand.New(rand.NewPCG(7, 8))
	for range 300 {
		b := 15 * rng.Float64()
		if math.Abs(CriticalDistance(b)) < 1e-3 || b < 0.1 {
			continue
		}
		o := launched(1e-3, b)
		c := newPace(tolerance)
		c.start(b)
		for o.psi < 2.5 && o.u0 < 0.45 && (o.w0 > 0 || o.u0 > 2e-3) {
			if !c.judge(c.h, first(o.try(c.h)), second(o.try(c.h))) {
				continue
			}
			o.accept()
			invariant := o.u0*o.u0*(1-2*o.u0) + o.w0*o.w0
			near(t, fmt.Sprintf("b² times the invariant, b = %g", b), invariant*b*b, 1, 100*tolerance*max(1, b*b/9))
		}
		end := o.psi
		o.w0 = -o.w0
		o.psi = 0
		c.start(b)
		for range maxSteps {
			left := end - o.psi
			if left <= 0 {
				break
			}
			h := min(c.h, left)
			if !c.judge(h, first(o.try(h)), second(o.try(h))) {
				continue
			}
			o.accept()
		}
		near(t, fmt.Sprintf("u back at the observer, b = %g", b), o.u0, 1e-3, 1e4*tolerance)
	}
}

func first(a, _ float64) float64  { return a }
func second(_, b float64) float64 { return b }

func TestTraceRefusals(t *testing.T) {
	for _, c := range []struct {
		p    Path
		want error
	}{
		{Path{1.9, 1, 1e-9}, ErrInside},
		{Path{2, 1, 1e-9}, ErrInside},
		{Path{math.NaN(), 1, 1e-9}, ErrInside},
		{Path{1e15, 1, 1e-9}, ErrTooFar},
		{Path{10, -1, 1e-9}, ErrImpact},
		{Path{10, 12, 1e-9}, ErrImpact},
		{Path{10, math.NaN(), 1e-9}, ErrImpact},
		{Path{math.Inf(1), math.Inf(1), 1e-9}, ErrImpact},
		{Path{10, 3, 0}, ErrTolerance},
		{Path{10, 3, math.NaN()}, ErrTolerance},
		{Path{10, 3, 0.1}, ErrTolerance},
	} {
		if _, err := Trace(c.p); !errors.Is(err, c.want) {
			t.Errorf("%+v: %v, want %v", c.p, err, c.want)
		}
	}
}

// Odd corners: radial light, the photon sphere's inside, grazing light.
func TestTraceCorners(t *testing.T) {
	for _, c := range []struct {
		p    Path
		fate Fate
	}{
		{Path{10, 0, 1e-9}, Captured},
		{Path{10, 1e-200, 1e-9}, Captured},
		{Path{10, 1e-9, 1e-9}, Captured},
		{Path{2.5, 5.5, 1e-9}, Captured}, // b > b_c, but inside the photon sphere
		{Path{2.5, 2.5 / math.Sqrt(0.2), 1e-9}, Captured},
		{Path{10, 10 / math.Sqrt(0.8), 1e-9}, Escaped}, // tangential
		{Path{math.Inf(1), 1e6, 1e-9}, Escaped},
		{Path{1e12, 1e9, 1e-9}, Escaped},
	} {
		s, err := Trace(c.p)
		if err != nil {
			t.Errorf("%+v: %v", c.p, err)
			continue
		}
		if s.Fate != c.fate {
			t.Errorf("%+v: %v, want %v", c.p, s.Fate, c.fate)
		}
		near(t, fmt.Sprintf("swept by %+v", c.p), s.Swept, s.ClosedFormSwept, max(s.Bound, 1e-7)) // tangential: the root of a rounding error
	}
}

func ExampleTrace() {
	s, err := Trace(Path{ObserverRadius: math.Inf(1), Impact: 10, Tolerance: 1e-10})
	if err != nil {
		panic(err)
	}
	fmt.Printf("%v, deflected by %.8f rad, closest approach %.6f M\n", s.Fate, s.Deflection, s.Closest)
	// Output: escaped, deflected by 0.59039579 rad, closest approach 8.788851 M
}
