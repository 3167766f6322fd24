package state

import (
	"math"
	"testing"
)

func TestAxisPositionAndStepAgree(t *testing.T) {
	axes := map[string]Axis{
		"linear":   linear(0, 180, 1, 0, "deg"),
		"log":      logarithmic(3.15, 1e5, "M"),
		"infinity": logarithmic(3.15, 1e5, "M").with(math.Inf(1), "infinity"),
		"auto":     logarithmic(4, 1000, "M").with(math.Inf(-1), "auto"),
		"named":    logarithmic(2, 100, "M").with(2, "horizon").with(6, "isco"),
	}
	for name, a := range axes {
		for k, stop := range a {
			if got := a.Position(stop.Value); got != float64(k) {
				t.Errorf("%s: stop %d (%s) lies at %g", name, k, stop.Text, got)
			}
			if k+1 < len(a) {
				if !(stop.Value < a[k+1].Value) {
					t.Errorf("%s: stops %d and %d do not rise: %s, %s", name, k, k+1, stop.Text, a[k+1].Text)
				}
				if got := a.Step(stop.Value, 1); got != a[k+1] {
					t.Errorf("%s: one above %s is %s, want %s", name, stop.Text, got.Text, a[k+1].Text)
				}
				if got := a.Step(a[k+1].Value, -1); got != stop {
					t.Errorf("%s: one below %s is %s, want %s", name, a[k+1].Text, got.Text, stop.Text)
				}
			}
		}
		if got := a.Step(a[0].Value, -1); got != a[0] {
			t.Errorf("%s: below the first stop lies %s", name, got.Text)
		}
		if got := a.Step(a[len(a)-1].Value, 1); got != a[len(a)-1] {
			t.Errorf("%s: above the last stop lies %s", name, got.Text)
		}
	}
}

func TestAxisBetweenStops(t *testing.T) {
	a := linear(0, 180, 1, 0, "deg")
	if got := a.Position(20.25); math.Abs(got-20.25) > 1e-12 {
		t.Errorf("20.25 deg lies at %g", got)
	}
	if up, down := a.Step(20.25, 1).Value, a.Step(20.25, -1).Value; up != 21 || down != 20 {
		t.Errorf("steps from 20.25 deg reach %g and %g, want 21 and 20", up, down)
	}
	far := logarithmic(3.15, 1e5, "M").with(math.Inf(1), "infinity")
	if got := far.At(far.Position(1e6)).Text; got != "100000 M" {
		t.Errorf("1e6 M rests at %q, want the last finite stop", got)
	}
}

func TestNamedStopsReplacePlainOnes(t *testing.T) {
	a := logarithmic(2, 100, "M").with(2, "horizon").with(6, "isco")
	if a[0].Text != "horizon" || a[1].Text != "2.12 M" {
		t.Errorf("first stops are %q and %q", a[0].Text, a[1].Text)
	}
	if got := a.At(a.Position(6)).Text; got != "isco" {
		t.Errorf("6 M rests at %q, want isco", got)
	}
}
