package measure

import (
	"context"
	"fmt"
	"math"
	"testing"
)

// Edge-on the extremes of a circle are exact: √(1-3/r)/(1 ∓ 1/√(r-2)), light
// along the orbit at its ends (physics: Doppler and gravitational shift). The
// values at 60 deg are those of the physics reference, by two roads.
func TestExtremes(t *testing.T) {
	thin := func(r, i float64) Range {
		v, _ := viewOf(t, fmt.Sprintf(`
[observer]
inclination = %g
[[emitter]]
kind = "disk"
inner = %g
outer = %.15g
`, i, r, r*(1+1e-12)))
		g, err := NewGeometry(v)
		if err != nil {
			t.Fatal(err)
		}
		d, _ := disks(v)
		e, err := g.Extremes(context.Background(), d[0], 0)
		if err != nil {
			t.Fatal(err)
		}
		return e
	}
	for _, r := range []float64{6, 10, 20, 100} {
		e := thin(r, 90)
		what := fmt.Sprintf("r %g edge-on", r)
		near(t, what+" max", e.Max, math.Sqrt(1-3/r)/(1-1/math.Sqrt(r-2)), 1e-9)
		near(t, what+" min", e.Min, math.Sqrt(1-3/r)/(1+1/math.Sqrt(r-2)), 1e-9)
	}
	e := thin(6, 60)
	near(t, "r 6, i 60 max", e.Max, 1.224490566, 1e-9)
	near(t, "r 6, i 60 min", e.Min, 0.497076946, 1e-9)
	e = thin(6, 0)
	near(t, "face-on", e.Max, math.Sqrt(0.5), 1e-12)
	near(t, "face-on", e.Min, math.Sqrt(0.5), 1e-12)
}

func TestTrapezium(t *testing.T) {
	// two equal widths make a triangle, one makes a ramp
	near(t, "triangle", trapezium(-0.5, 1, 1), 0.125, 1e-15)
	near(t, "triangle", trapezium(0.5, 1, 1), 0.875, 1e-15)
	near(t, "ramp", trapezium(0.25, 1, 0), 0.75, 1e-15)
	near(t, "middle", trapezium(0, 3, 1), 0.5, 1e-15)
	near(t, "flank", trapezium(-1.5, 3, 1), 1./24, 1e-15)
}

func TestLine(t *testing.T) {
	for _, c := range []struct {
		inner, outer, index, i float64
	}{{6, 20, 3, 30}, {6, 50, 2.5, 70}, {6, 20, 3, 0}} {
		v, _ := viewOf(t, fmt.Sprintf(`
[observer]
inclination = %g
[[emitter]]
kind = "disk"
inner = %g
outer = %g
index = %g
`, c.i, c.inner, c.outer, c.index))
		l, err := NewLine(context.Background(), v, 0.02, Options{})
		if err != nil {
			t.Fatal(err)
		}
		fine, err := NewLine(context.Background(), v, 0.02, Options{Lines: 2000, Cells: 1000})
		if err != nil {
			t.Fatal(err)
		}
		peak, worst := 0.0, 0.0
		for k, x := range fine.Energy {
			peak = max(peak, x)
			worst = max(worst, math.Abs(x-l.Energy[k]))
		}
		t.Logf("%+v: peak %.6g, off %.1e, bound %.1e, edges %v", c, peak, worst/peak, l.Bound/peak, l.Edges)
		for k := range l.Energy {
			fmt.Printf("%.2f %.6g %.6g\n", float64(l.First+k)*l.Bin, l.Energy[k], l.Photon[k])
		}
	}
}
