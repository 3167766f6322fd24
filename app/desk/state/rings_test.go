package state

import (
	"testing"

	"annulet/app/curves"
)

// Edge-on the image of a rim is a circle: every path sweeps half a turn more.
func TestRimsEdgeOn(t *testing.T) {
	s := open(t, "schema = 1\n[observer]\ninclination = 90\n[[emitter]]\n")
	rims := curves.Rims(s.Scene())
	if len(rims) != 6 {
		t.Fatalf("%d rims", len(rims))
	}
	for _, r := range rims {
		for _, p := range r.Curve {
			if p.Impact != r.Curve[0].Impact {
				t.Errorf("order %d at %g M: b = %g and %g", r.Order, r.Radius, p.Impact, r.Curve[0].Impact)
				break
			}
		}
	}
}
