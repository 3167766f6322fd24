package raytrace

import (
	"errors"
	"fmt"
	"testing"

	"annulet/geodesic"
	"annulet/scenes"
)

// The audit finds an image as good as its bound says, for disk, star and
// sky, and finds an error that is put in.
func TestAudit(t *testing.T) {
	const head = "schema = 1\n[observer]\ninclination = \"75 deg\"\n"
	for _, c := range []struct{ name, text string }{
		{"disk", head + "[field]\nwidth = \"40 M\"\npixels = [300, 300]\n[[emitter]]\nkind = \"disk\"\ninner = \"horizon\"\n"},
		{"star", head + "[object]\nkind = \"star\"\nradius = \"5 M\"\n[field]\npixels = [300, 300]\n[[emitter]]\nkind = \"surface\"\ntemperature = \"1e6 K\"\n"},
		{"sky", "schema = 1\n[observer]\nradius = \"20 M\"\n[field]\nprojection = \"perspective\"\nwidth = \"60 deg\"\npixels = [300, 300]\n[[emitter]]\nkind = \"sky\"\npattern = \"grid\"\n"},
		{"orbiting", "schema = 1\n[observer]\nradius = \"12 M\"\ninclination = \"80 deg\"\nmotion = \"orbit\"\n[field]\nprojection = \"perspective\"\nwidth = \"100 deg\"\npixels = [300, 300]\n[[emitter]]\nkind = \"disk\"\n"},
	} {
		d, err := scenes.Parse(c.name, []byte(c.text))
		if err != nil {
			t.Fatal(err)
		}
		v := view(t, d.Scene())
		a, err := v.Audit(t.Context(), 2000, 1)
		if err != nil {
			t.Fatalf("%s: %v", c.name, err)
		}
		b, err := v.Audit(t.Context(), 2000, 1)
		if err != nil || fmt.Sprint(*a) != fmt.Sprint(*b) { // NaN where nothing is compared
			t.Errorf("%s: the same seed gives another audit", c.name)
		}
		if a.Crossings < 300 || a.Missed > 2 || !(a.G.Worst < 1e-5) {
			t.Errorf("%s: %+v", c.name, *a)
		}
		if a.R.Compared > 0 && !(a.R.Worst < 1e-6 && a.R.Median < 1e-8 && a.Delay.Worst < 1e-3 && a.Delay.Median < 1e-7) {
			t.Errorf("%s: %+v", c.name, *a)
		}
		if a.Angle.Compared > 0 && !(a.Angle.Worst < 1e-4 && a.Angle.Median < 1e-7) {
			t.Errorf("%s: %+v", c.name, *a)
		}
	}

	s := scene(60, 6, 100)
	v := view(t, s)
	v.Plan.Tolerance = 1e-6
	a, err := v.Audit(t.Context(), 1000, 1)
	if err != nil {
		t.Fatal(err)
	}
	v.Plan.Tolerance = 1e-11
	b, err := v.Audit(t.Context(), 1000, 1)
	if err != nil || !(b.R.Median < a.R.Median/10) {
		t.Errorf("a coarse image is off by %g, a fine one by %g (%v)", a.R.Median, b.R.Median, err)
	}
	shell, err := geodesic.NewShell(4)
	if err != nil {
		t.Fatal(err)
	}
	v.Spacetime = shell
	if _, err := v.Audit(t.Context(), 10, 1); !errors.Is(err, ErrNoAudit) {
		t.Errorf("a shell: %v", err)
	}
}
