package state

import (
	"fmt"
	"math"
	"time"

	"annulet/scenes"
)

// Numerics is what is known of how the last picture was made.
type Numerics struct {
	Scene         scenes.Scene
	Columns, Rows int
	Paths         int
	Integrated    int // of these, one by one and not from shared orbits
	WorstBound    float64
	WorstAngle    float64
	Traced, Shown time.Duration
	Workers       int
	Coarsening    int
	Flux, Bound   float64 // of the field; NaN while pixels are their middles
	FluxUnit      string
}

// NumericsTable lists how the picture was made and what its numbers assume.
func NumericsTable(n Numerics) Table {
	var t Table
	t.section("Last picture")
	t.say("pixels", fmt.Sprintf("%d × %d", n.Columns, n.Rows))
	t.say("paths", fmt.Sprint(n.Paths))
	t.say("integrated", fmt.Sprint(n.Integrated))
	t.add("traced in", fixed(n.Traced.Seconds()*1000, 0), "ms", n.Traced.Seconds()*1000)
	t.add("shown after", fixed(n.Shown.Seconds()*1000, 0), "ms", n.Shown.Seconds()*1000)
	t.say("workers", fmt.Sprint(n.Workers))
	t.section("Bounds")
	t.say("tolerance", fmt.Sprintf("%g", n.Scene.Trace.Tolerance))
	bound := func(name string, x float64, unit string) {
		switch {
		case math.IsNaN(x) || math.IsInf(x, 0):
			t.say(name, "unknown")
		case x > 0:
			t.add(name, power(x), unit, x)
		default:
			t.say(name, "exact")
		}
	}
	if n.Flux > 0 {
		t.add("flux of the field", fmt.Sprintf("%.6g", n.Flux), n.FluxUnit, n.Flux)
		bound("on the flux", n.Bound/n.Flux, "relative")
	}
	bound("worst on r", n.WorstBound, "relative")
	bound("worst on angle", n.WorstAngle, "rad")
	t.Remark = LeftOut + " A bound is one on the numerical error; it says nothing of the model. Bounds grow as tolerance/|b/b_c − 1| near the critical curve."
	for _, note := range n.Scene.Notes() {
		t.Remark += " " + note
	}
	return t
}
