package geodesic

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"testing"
)

// sharedCase is one observer of one object whose shared orbits are compared
// with path-by-path integration.
type sharedCase struct {
	name     string
	object   *Round
	observer Observer
	parallel bool
}

func sharedCases(t *testing.T) []sharedCase {
	charged := must(t)(NewHole(0.6))
	star := must(t)(NewStar(6, false))
	clear := must(t)(NewStar(4, true))
	shell := must(t)(NewShell(5))
	inf := math.Inf(1)
	return []sharedCase{
		{"hole from infinity", schwarzschild, Observer{Radius: inf}, true},
		{"hole from 50 M", schwarzschild, Observer{Radius: 50}, true},
		{"hole from 6 M", schwarzschild, Observer{Radius: 6}, true},
		{"hole from 6 M, all round", schwarzschild, Observer{Radius: 6}, false},
		{"hole from 2.4 M, all round", schwarzschild, Observer{Radius: 2.4}, false},
		{"hole from 3 M, all round", schwarzschild, Observer{Radius: 3}, false},
		{"hole, orbiting at 8 M", schwarzschild, Observer{Radius: 8, Motion: Orbit}, false},
		{"hole, falling at 1.6 M", schwarzschild, Observer{Radius: 1.6, Motion: Infall}, false},
		{"hole, falling at 9 M", schwarzschild, Observer{Radius: 9, Motion: Infall}, false},
		{"charged from infinity", charged, Observer{Radius: inf}, true},
		{"charged from 50 M", charged, Observer{Radius: 50}, true},
		{"charged from 6 M", charged, Observer{Radius: 6}, true},
		{"star from infinity", star, Observer{Radius: inf}, true},
		{"star from 50 M", star, Observer{Radius: 50}, true},
		{"clear star from 50 M", clear, Observer{Radius: 50}, true},
		{"shell from infinity", shell, Observer{Radius: inf}, true},
		{"within a shell", shell, Observer{Radius: 2}, false},
	}
}

// sights draws lines of sight, half of them near the critical curve.
func sights(rng *rand.Rand, c sharedCase, n int) []Direction {
	dirs := make([]Direction, n)
	for k := range dirs {
		if !c.parallel {
			dirs[k] = randomSight(rng)
			continue
		}
		reach := min(25, c.observer.Radius/c.object.Lapse(c.observer.Radius))
		b := reach * math.Sqrt(rng.Float64())
		if rng.IntN(2) == 0 {
			b = c.object.CriticalImpact() * (1 + 0.2*(rng.Float64()-0.3)*math.Pow(10, -4*rng.Float64()))
		}
		sin, cos := math.Sincos(2 * math.Pi * rng.Float64())
		dirs[k] = Direction{Alpha: b * cos, Beta: b * sin}
	}
	return dirs
}

// Every column of the shared road against integration a thousand times
// tighter, for all objects, observers and inclinations: radii and end angles
// within the stated bounds, none missed and none invented.
func TestSharedBounds(t *testing.T) {
	rng := rand.New(rand.NewPCG(51, 52))
	for _, tolerance := range []float64{1e-7, 1e-9} {
		for _, c := range sharedCases(t) {
			table, err := c.object.SharedOrbits(context.Background(), Share{
				Observer: c.observer, Tolerance: tolerance, MaxOrder: 2, Outward: !c.parallel, Delay: true,
			})
			if err != nil {
				t.Fatal(err)
			}
			rays, direct := 0, 0
			for _, inclination := range []float64{0, 20, 75, 89, 90, 163} {
				o := c.observer
				o.InclinationDeg = inclination
				for _, sky := range []bool{false, true} {
					plan := Plan{Tolerance: tolerance, MaxOrder: 2, Plane: !sky, Sky: sky}
					shared, err := c.object.SharedTracer(o, plan, table)
					if err != nil {
						t.Fatal(err)
					}
					plan.Tolerance = 1e-12
					exact, err := c.object.Tracer(o, plan)
					if err != nil {
						t.Fatal(err)
					}
					dirs := sights(rng, c, 400)
					var r Rays
					var got, want Crossings
					if err := c.object.Aim(o, c.parallel, dirs, &r); err != nil {
						t.Fatal(err)
					}
					shared.Cross(&r, Want{Delay: true, Slope: true}, &got)
					exact.Cross(&r, Want{Delay: true, Slope: true}, &want)
					compareCrossings(t, fmt.Sprintf("%s, %g, i = %g", c.name, tolerance, inclination), c, tolerance, &r, &got, &want)
					rays += len(dirs)
					direct += shared.Direct()
				}
			}
			t.Logf("%s at %g: %d of %d rays integrated", c.name, tolerance, direct, rays)
			if table != nil && c.object.inside == nil && direct > rays/5 {
				t.Errorf("%s at %g: %d of %d rays integrated", c.name, tolerance, direct, rays)
			}
		}
	}
}

// compareCrossings holds the shared crossings against the exact ones.
func compareCrossings(t *testing.T, what string, c sharedCase, tolerance float64, r *Rays, got, want *Crossings) {
	t.Helper()
	const far = 1e4 // beyond, a crossing may turn into an escape
	bc := c.object.CriticalImpact()
	for k := range r.Lambda {
		b := r.Impact(k)
		ray := fmt.Sprintf("%s, b = %.17g, s = %.4f", what, b, math.Atan2(r.SinS[k], r.CosS[k]))
		i, iEnd := got.Start[k], got.Start[k+1]
		for j := want.Start[k]; j < want.Start[k+1]; j++ {
			edge := want.Surface[j] == Plane && (want.R[j] > far || want.R[j]*c.object.edge < 1.001 && c.object.inside == nil)
			if i == iEnd || got.Order[i] != want.Order[j] || got.Surface[i] != want.Surface[j] {
				if !edge && math.Abs(b/bc-1) > 1e-9 {
					t.Errorf("%s: order %d at %g M is missing", ray, want.Order[j], want.R[j])
				}
				continue
			}
			grown := 1.0
			if want.Surface[j] == Plane {
				off := math.Abs(got.R[i]/want.R[j] - 1)
				if !(off <= got.Bound[i]+want.Bound[j]) {
					t.Errorf("%s: order %d at %g M is off by %g, bound %g", ray, want.Order[j], want.R[j], off, got.Bound[i])
				}
				grown = max(1, want.R[j])
			} else {
				off := math.Abs(got.CosTheta[i] - want.CosTheta[j])
				if !(off <= got.Bound[i]+want.Bound[j]+1e-15) {
					t.Errorf("%s: end is off by %g, bound %g", ray, off, got.Bound[i])
				}
			}
			steep := max(1, math.Abs(want.Slope[j])) // what a small change of b does
			if !edge {
				near(t, ray+": k^r", got.KR[i], want.KR[j], 2e-5)
				grazing := 1.0
				if want.Surface[j] == Star {
					grazing = 20
				}
				near(t, ray+": slope", got.Slope[i]/want.Slope[j], 1, 2e-3*grazing*max(1, 1/math.Abs(want.Slope[j])))
				if want.Surface[j] != Sky {
					near(t, ray+": delay", got.Delay[i], want.Delay[j], grazing*(1e-5+2e3*tolerance+1e-6*steep+10*grown*got.Bound[i]))
				}
			}
			i++
		}
		for ; i < iEnd; i++ {
			if got.Surface[i] == Plane && (got.R[i] > far || got.R[i]*c.object.edge < 1.001) {
				continue
			}
			if math.Abs(b/bc-1) > 1e-9 {
				t.Errorf("%s: order %d at %g M is invented", ray, got.Order[i], got.R[i])
			}
		}
	}
}

// Every pair of neighbouring orbits about a hole is shared. An orbit continued past infinity
// may turn back there, which is no reason to integrate.
func TestNoGapInTheTable(t *testing.T) {
	for _, charge := range []float64{0, 0.6, 0.99} {
		hole := must(t)(NewHole(charge))
		for _, radius := range []float64{2.5, 6, 20, 50, 1000, math.Inf(1)} {
			tb, err := hole.SharedOrbits(context.Background(), Share{Observer: Observer{Radius: radius}, Tolerance: 1e-8, MaxOrder: 2})
			if err != nil {
				t.Fatal(err)
			}
			for _, g := range tb.gaps {
				if !g.sound {
					t.Errorf("charge %g, %g M: nothing is shared between v = %g and %g", charge, radius, g.v, g.v+g.dv)
				}
			}
		}
	}
}
