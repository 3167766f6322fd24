package geodesic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// block traces random lines of sight of one observer on a parallel field,
// most of them near the critical curve.
func block(t *testing.T, rng *rand.Rand, o Observer, plan Plan, want Want, n int) (Rays, Crossings) {
	t.Helper()
	tracer, err := schwarzschild.Tracer(o, plan)
	if err != nil {
		t.Fatal(err)
	}
	dirs := make([]Direction, n)
	for k := range dirs {
		b := 15 * math.Sqrt(rng.Float64())
		if rng.IntN(2) == 0 {
			b = CriticalImpact * (1 + 0.2*(rng.Float64()-0.3)*math.Pow(10, -4*rng.Float64()))
		}
		sin, cos := math.Sincos(2 * math.Pi * rng.Float64())
		dirs[k] = Direction{Alpha: b * cos, Beta: b * sin}
	}
	var rays Rays
	var at Crossings
	if err := schwarzschild.Aim(o, true, dirs, &rays); err != nil {
		t.Fatal(err)
	}
	tracer.Cross(&rays, want, &at)
	return rays, at
}

// Crossing radii of orders 0 to 2 against the closed orbit: within the
// stated bound at every tolerance, and at 1e-10 within 1e-7 (order 2: 1e-6).
// No crossing is missed or invented.
func TestCrossingsAgainstClosedForm(t *testing.T) {
	rng := rand.New(rand.NewPCG(9, 10))
	checked := 0
	for _, tolerance := range []float64{1e-4, 1e-6, 1e-8, 1e-10, 1e-13} {
		for _, inclination := range []float64{0, 20, 60, 85, 89, 90, 163, 180} {
			for _, radius := range []float64{6, 12, 1000, math.Inf(1)} {
				o := Observer{Radius: radius, InclinationDeg: inclination}
				rays, at := block(t, rng, o, Plan{Tolerance: tolerance, MaxOrder: 2, Plane: true}, Want{}, 200)
				sinI, cosI := SinCosDeg(inclination)
				for k := range rays.Lambda {
					if !rays.Seen[k] {
						continue
					}
					closed := NewClosedOrbit(rays.Impact(k))
					j := at.Start[k]
					for n := range 3 {
						psi := FirstPlaneAngle(sinI, cosI, rays.SinS[k]) + float64(n)*math.Pi
						want := closed.RadiusAt(1/radius, psi)
						have := j < at.Start[k+1] && int(at.Order[j]) == n
						if want == 0 || want > 50 {
							if have && (at.R[j] > 2.001 && at.R[j] < 49) {
								t.Errorf("i = %g, b = %.17g: order %d at %g M is invented", inclination, closed.b, n, at.R[j])
							}
							if have {
								j++
							}
							continue
						}
						if !have {
							if want > 2.001 {
								t.Errorf("i = %g, b = %.17g: order %d at %g M is missing", inclination, closed.b, n, want)
							}
							continue
						}
						off := math.Abs(at.R[j]/want - 1)
						if !(off <= at.Bound[j]) {
							t.Errorf("tolerance %g, r_obs = %g, i = %g, b = %.17g, order %d: off by %g, bound %g",
								tolerance, radius, inclination, closed.b, n, off, at.Bound[j])
						}
						if tolerance == 1e-10 {
							near(t, fmt.Sprintf("r of order %d", n), off, 0, [3]float64{1e-7, 1e-7, 1e-6}[n])
						}
						checked++
						j++
					}
				}
			}
		}
	}
	if checked < 20000 {
		t.Fatalf("compared %d crossings", checked)
	}
}

// Delay and slope by two roads: central differences of closed-form radii,
// and delays of face-on rings, whose closed numbers were computed by two
// independent routes.
func TestDelayAndSlope(t *testing.T) {
	rng := rand.New(rand.NewPCG(11, 12))
	o := Observer{Radius: 50, InclinationDeg: 70}
	rays, at := block(t, rng, o, Plan{Tolerance: 1e-11, MaxOrder: 2, Plane: true}, Want{Delay: true, Slope: true}, 2000)
	sinI, cosI := SinCosDeg(70)
	compared := 0
	for k := range rays.Lambda {
		for j := at.Start[k]; j < at.Start[k+1]; j++ {
			b := rays.Impact(k)
			psi := FirstPlaneAngle(sinI, cosI, rays.SinS[k]) + float64(at.Order[j])*math.Pi
			d := 1e-4 * math.Abs(CriticalDistance(b)) * b
			lo, hi := NewClosedOrbit(b-d), NewClosedOrbit(b+d)
			slope := (hi.RadiusAt(1./50, psi) - lo.RadiusAt(1./50, psi)) / (2 * d)
			if !(math.Abs(slope) < 1e5) || at.R[j] > 50 || d < 1e-8 {
				continue
			}
			near(t, fmt.Sprintf("dr/db at b = %.17g, order %d", b, at.Order[j]), at.Slope[j]/slope, 1, 1e-5)
			compared++
		}
	}
	if compared < 1500 {
		t.Fatalf("compared %d slopes", compared)
	}
	// the face-on ring at 6 M: delays and echoes
	tracer, err := schwarzschild.Tracer(Observer{Radius: math.Inf(1)}, Plan{Tolerance: 1e-12, MaxOrder: 3, Plane: true})
	if err != nil {
		t.Fatal(err)
	}
	var delay [4]float64
	for n := range delay {
		b := RimImpact(0, math.Pi/2+float64(n)*math.Pi, 6)
		var r Rays
		var c Crossings
		if err := schwarzschild.Aim(Observer{Radius: math.Inf(1)}, true, []Direction{{Alpha: b}}, &r); err != nil {
			t.Fatal(err)
		}
		tracer.Cross(&r, Want{Delay: true}, &c)
		near(t, fmt.Sprintf("ring of order %d", n), c.R[n], 6, 1e-6)
		delay[n] = c.Delay[n]
	}
	near(t, "delay of order 0", delay[0], -1.015759, 5e-7)
	for n, want := range []float64{20.3360924044, 16.5913938971, 16.3355019267} {
		near(t, fmt.Sprintf("echo %d", n+1), delay[n+1]-delay[n], want, [3]float64{1e-9, 1e-8, 1e-6}[n])
	}
	// Johnson et al., Sci. Adv. 6, eaaz1310 (2020): echoes tend to the half
	// orbit π b_c
	near(t, "third echo", delay[3]-delay[2], math.Pi*CriticalImpact, 0.02)
}

// The side of a ring's image does not depend on inclination; top and bottom
// against values on which closed form and quadrature agree.
func TestInclinedRings(t *testing.T) {
	for _, inclination := range []float64{0, 1, 30, 60, 89, 120, 180} {
		sinI, cosI := SinCosDeg(inclination)
		for n, want := range []float64{6.932148479189, 5.478913722084, 5.207989587555} {
			psi := FirstPlaneAngle(sinI, cosI, 0) + float64(n)*math.Pi
			near(t, fmt.Sprintf("side at i = %g, order %d", inclination, n), RimImpact(0, psi, 6), want, 2e-11)
		}
	}
	sinI, cosI := SinCosDeg(60)
	for _, c := range []struct {
		order       int
		sinS, wantB float64
	}{
		{0, 1, 7.03908299181}, {0, -1, 3.03571436967},
		{1, 1, 5.29373480638}, {1, -1, 6.00012753732},
	} {
		psi := FirstPlaneAngle(sinI, cosI, c.sinS) + float64(c.order)*math.Pi
		near(t, fmt.Sprintf("order %d at sin s = %g", c.order, c.sinS), RimImpact(0, psi, 6), c.wantB, 2e-11)
	}
}

// A near observer sees the hole at Synge's angle: 45 deg at 6 M. Source:
// Synge, MNRAS 131, 463 (1966), from memory: sin² a = 27 (1-2/r)/r².
func TestSyngeAngle(t *testing.T) {
	for _, c := range []struct{ r, deg float64 }{{6, 45}, {10, 27.6945614507768}} {
		o := Observer{Radius: c.r, InclinationDeg: 20}
		for _, side := range []float64{-1, 1} {
			sin, cos := math.Sincos((c.deg + side*1e-9) * math.Pi / 180)
			var r Rays
			if err := schwarzschild.Aim(o, false, []Direction{{Alpha: sin, Ahead: cos}}, &r); err != nil {
				t.Fatal(err)
			}
			s, err := Trace(Path{ObserverRadius: c.r, Impact: r.Impact(0), Tolerance: 1e-12})
			if err != nil {
				t.Fatal(err)
			}
			if (s.Fate == Escaped) != (side > 0) {
				t.Errorf("%+g deg off the edge at %g M: %v", side*1e-9, c.r, s.Fate)
			}
		}
	}
}

// Angular fields hold paths that start outward; inside the photon sphere
// some of them turn round and fall in.
func TestOutwardStarts(t *testing.T) {
	o := Observer{Radius: 2.5, InclinationDeg: 40}
	tracer, err := schwarzschild.Tracer(o, Plan{Tolerance: 1e-11, MaxOrder: 2, Plane: true})
	if err != nil {
		t.Fatal(err)
	}
	sinI, cosI := SinCosDeg(40)
	checked := 0
	for deg := 91.0; deg < 179; deg += 0.5 {
		sin, cos := math.Sincos(deg * math.Pi / 180)
		var r Rays
		var c Crossings
		if err := schwarzschild.Aim(o, false, []Direction{{Alpha: 0.6 * sin, Beta: -0.8 * sin, Ahead: cos}}, &r); err != nil {
			t.Fatal(err)
		}
		tracer.Cross(&r, Want{Delay: true}, &c)
		closed := NewClosedOrbit(r.Impact(0))
		for j := range c.R {
			psi := FirstPlaneAngle(sinI, cosI, r.SinS[0]) + float64(c.Order[j])*math.Pi
			near(t, fmt.Sprintf("u at %g deg, order %d", deg, c.Order[j]), 1/c.R[j], closed.U(0.4, true, psi), 1e-8)
			checked++
		}
	}
	if checked < 100 {
		t.Fatalf("checked %d crossings", checked)
	}
}

func TestAimRefusals(t *testing.T) {
	var r Rays
	dirs := []Direction{{Alpha: 1}}
	for _, o := range []Observer{
		{Radius: 1.9}, {Radius: math.NaN()}, {Radius: 10, InclinationDeg: -1}, {Radius: 10, InclinationDeg: 181},
		{Radius: 10, InclinationDeg: math.NaN()}, {Radius: 3},
	} {
		if err := schwarzschild.Aim(o, true, dirs, &r); err == nil {
			t.Errorf("%+v is accepted", o)
		}
	}
	if err := schwarzschild.Aim(Observer{Radius: math.Inf(1)}, false, dirs, &r); err == nil {
		t.Error("an angular field at infinity is accepted")
	}
}

func TestCrossAllocatesNothing(t *testing.T) {
	o := Observer{Radius: 1000, InclinationDeg: 75}
	tracer, err := schwarzschild.Tracer(o, Plan{Tolerance: 1e-9, MaxOrder: 2, Plane: true})
	if err != nil {
		t.Fatal(err)
	}
	dirs := make([]Direction, 500)
	for k := range dirs {
		dirs[k] = Direction{Alpha: float64(k) / 40, Beta: 3}
	}
	var r Rays
	var c Crossings
	if n := testing.AllocsPerRun(5, func() {
		if err := schwarzschild.Aim(o, true, dirs, &r); err != nil {
			t.Fatal(err)
		}
		tracer.Cross(&r, Want{Delay: true, Slope: true}, &c)
	}); n != 0 {
		t.Errorf("a block allocates %v times, want 0", n)
	}
}

func BenchmarkCross(b *testing.B) {
	o := Observer{Radius: 1000, InclinationDeg: 75}
	tracer, err := schwarzschild.Tracer(o, Plan{Tolerance: 1e-9, MaxOrder: 2, Plane: true})
	if err != nil {
		b.Fatal(err)
	}
	const side = 200
	var dirs []Direction
	for k := range side * side {
		dirs = append(dirs, Direction{Alpha: -15 + 30*(float64(k%side)+0.5)/side, Beta: -15 + 30*(float64(k/side)+0.5)/side})
	}
	var r Rays
	var c Crossings
	if err := schwarzschild.Aim(o, true, dirs, &r); err != nil {
		b.Fatal(err)
	}
	for b.Loop() {
		tracer.Cross(&r, Want{Delay: true}, &c)
	}
	sinI, cosI := SinCosDeg(75)
	for k := range dirs {
		closed := NewClosedOrbit(r.Impact(k))
		for j := c.Start[k]; j < c.Start[k+1]; j++ {
			psi := FirstPlaneAngle(sinI, cosI, r.SinS[k]) + float64(c.Order[j])*math.Pi
			if off := math.Abs(c.R[j]*closed.U(1e-3, false, psi) - 1); c.R[j] < 50 && !(off <= c.Bound[j]) {
				b.Fatalf("ray %d is off by %g, bound %g", k, off, c.Bound[j])
			}
		}
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(dirs)), "ns/path")
}
