package raytrace

import (
	"testing"

	"annulet/scenes"
)

// Delays hold as far out as a disk reaches, at every tolerance's rows of
// shared orbits: the judge is quadrature along the elliptic closed form.
func TestAuditOfWideDisks(t *testing.T) {
	for _, c := range []struct {
		scene  string
		set    [2]string
		within float64 // M; README: 1e-5 M and the error of r
	}{
		{"@broad-line", [2]string{"trace.tolerance", "1e-9"}, 1e-5},
		{"@broad-line", [2]string{"trace.tolerance", "1e-6"}, 1e-3},
		{"@broad-line", [2]string{"observer.inclination", "85 deg"}, 1e-5},
		{"@first-light", [2]string{"observer.radius", "1000 M"}, 1e-5},
	} {
		d, err := scenes.Load(c.scene)
		if err == nil {
			err = d.Set(c.set[0], c.set[1])
		}
		if err != nil {
			t.Fatal(err)
		}
		v, err := NewView(d.Scene())
		if err != nil {
			t.Fatal(err)
		}
		a, err := v.Audit(t.Context(), 1000, 2)
		if err != nil {
			t.Fatal(err)
		}
		if a.Delay.Compared < 50 || !(a.Delay.Worst < c.within) {
			t.Errorf("%s, %s: %d delays, worst off by %g M, allowed %g M", c.scene, c.set, a.Delay.Compared, a.Delay.Worst, c.within)
		}
		if !(a.R.Worst < 1e-4) || a.Shared == 0 {
			t.Errorf("%s, %s: r off by %g, %d paths shared", c.scene, c.set, a.R.Worst, a.Shared)
		}
	}
}
