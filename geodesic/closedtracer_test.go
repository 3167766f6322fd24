package geodesic

import (
	"fmt"
	"math"
	"testing"
)

// The closed forms and the integrator, which share no step, agree in every
// column, for static, orbiting and infalling observers.
func TestClosedTracer(t *testing.T) {
	compared := 0
	for _, s := range []*Round{schwarzschild, must(t)(NewStar(6, false)), must(t)(NewStar(2.6, false))} {
		for _, o := range []Observer{
			{Radius: math.Inf(1), InclinationDeg: 70}, {Radius: 30, InclinationDeg: 120}, {Radius: 8, InclinationDeg: 85, Motion: Orbit},
			{Radius: 12, InclinationDeg: 20, Motion: Infall}, {Radius: 2.8, InclinationDeg: 40},
		} {
			if o.Radius <= s.Edge() {
				continue
			}
			plan := Plan{Tolerance: 1e-12, MaxOrder: 2, Plane: true, Sky: true}
			direct, err := s.Tracer(o, plan)
			if err != nil {
				t.Fatal(err)
			}
			closed, err := s.ClosedTracer(o, plan)
			if err != nil {
				t.Fatal(err)
			}
			var dirs []Direction
			parallel := math.IsInf(o.Radius, 1)
			for k := range 300 {
				sin, cos := math.Sincos(float64(k) * 2.4)
				if parallel {
					b := 20 * math.Sqrt((float64(k)+0.47)/300)
					dirs = append(dirs, Direction{Alpha: b * cos, Beta: b * sin})
					continue
				}
				a := math.Pi * (float64(k) + 0.5) / 300
				dirs = append(dirs, Direction{Alpha: math.Sin(a) * cos, Beta: math.Sin(a) * sin, Ahead: math.Cos(a)})
			}
			var rays Rays
			if err := s.Aim(o, parallel, dirs, &rays); err != nil {
				t.Fatal(err)
			}
			var got, want Crossings
			direct.Cross(&rays, Want{Delay: true}, &got)
			closed.Cross(&rays, Want{Delay: true}, &want)
			for k := range dirs {
				n := got.Start[k+1] - got.Start[k]
				if n != want.Start[k+1]-want.Start[k] {
					t.Errorf("%s, %+v, ray %d, b = %g: %d crossings, closed form %d", s.name, o, k, rays.Impact(k), n, want.Start[k+1]-want.Start[k])
					continue
				}
				x := math.Abs(s.criticalDistance(rays.Impact(k)))
				for j := range n {
					i, j := got.Start[k]+j, want.Start[k]+j
					at := fmt.Sprintf("%s, %+v, b = %g, surface %d, order %d", s.name, o, rays.Impact(k), want.Surface[j], want.Order[j])
					within := 1e-9 + 1e-10/x
					if got.Surface[i] != want.Surface[j] || got.Order[i] != want.Order[j] {
						t.Errorf("%s: got surface %d, order %d", at, got.Surface[i], got.Order[i])
						continue
					}
					if want.Surface[j] != Sky {
						near(t, at+": r", got.R[i]/want.R[j], 1, within*(1+want.R[j]))
						near(t, at+": delay", got.Delay[i], want.Delay[j], within*(10+want.R[j]*want.R[j]))
					}
					near(t, at+": k^r", got.KR[i], want.KR[j], 10*within*(1+rOr0(want.R[j])))
					near(t, at+": cos θ", got.CosTheta[i], want.CosTheta[j], 100*within)
					compared++
				}
			}
		}
	}
	if compared < 3000 {
		t.Errorf("compared %d crossings", compared)
	}
	if _, err := must(t)(NewShell(4)).ClosedTracer(Observer{Radius: 30}, Plan{Tolerance: 1e-9, Sky: true}); err == nil {
		t.Error("a shell has no closed tracer")
	}
}

// rOr0 is r, but 0 on the sky.
func rOr0(r float64) float64 {
	if math.IsInf(r, 1) {
		return 0
	}
	return r
}
