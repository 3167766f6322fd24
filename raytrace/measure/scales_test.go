package measure_test

import (
	"context"
	"fmt"
	"math"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// Published masses and distances give the published angular scales, and these
// the published gap between ring and critical curve. M87*: EHT, ApJL 875, L1
// and L6 (2019): 6.5e9 Msun, 16.8 Mpc, θ_g 3.8 ± 0.4 uas, ring 42 ± 3 uas.
// Sgr A*: GRAVITY, A&A 657, L12 (2022): 4.297e6 Msun, 8277 pc; Do et al.,
// Science 365, 664 (2019): 3.975e6 Msun, 7959 pc; ring 51.8 ± 2.3 uas, EHT,
// ApJL 930, L12 (2022). Digits beyond the published ones are those of the
// physics reference, by two roads.
func TestPublishedScales(t *testing.T) {
	for _, c := range []struct {
		name, mass, distance     string
		theta, shadow            float64 // uas
		published, publishedPlus float64
	}{
		{"M87*", "6.5e9 Msun", "16.8 Mpc", 3.8189933, 39.688142, 3.8, 0.4},
		{"Sgr A*, GRAVITY", "4.297e6 Msun", "8277 pc", 5.1243315, 53.253615, 4.8, 1.4},
		{"Sgr A*, Do et al.", "3.975e6 Msun", "7959 pc", 4.9297335, 51.231294, 4.8, 1.4},
	} {
		d, err := scenes.Parse("test.toml", fmt.Appendf(nil, "schema = 1\n[object]\nmass = %q\ndistance = %q\n", c.mass, c.distance))
		if err != nil {
			t.Fatal(err)
		}
		theta, ok := d.Scene().ThetaG()
		if !ok || !(math.Abs(theta/c.theta-1) < 3e-8) {
			t.Errorf("%s: θ_g = %v uas, want %v", c.name, theta, c.theta)
		}
		if !(math.Abs(theta-c.published) < c.publishedPlus) {
			t.Errorf("%s: θ_g = %v uas, published %v", c.name, theta, c.published)
		}
		if shadow := 2 * geodesic.CriticalImpact * theta; !(math.Abs(shadow/c.shadow-1) < 3e-8) {
			t.Errorf("%s: critical curve %v uas, want %v", c.name, shadow, c.shadow)
		}
	}
	m87 := measure.Compare(11.05, 2*geodesic.CriticalImpact, measure.Angle{Value: 3.8, Sigma: 0.4}, measure.Angle{Value: 42, Sigma: 3})
	if !(math.Abs(m87.Model.Value-42) < 0.05) || !(m87.Critical.Value < m87.Measured.Value) {
		t.Errorf("%+v", m87)
	}
}

// The table of rings of a built-in scene.
func ExampleNewRings() {
	document, err := scenes.Load("@first-light")
	if err != nil {
		panic(err)
	}
	view, err := raytrace.NewView(document.Scene())
	if err != nil {
		panic(err)
	}
	rings, err := measure.NewRings(context.Background(), view, nil, measure.Options{})
	if err != nil {
		panic(err)
	}
	for _, r := range rings.Rings {
		fmt.Printf("order %d: %.2f M wide, %.2f %% of the flux\n", r.Order, r.Width, 100*r.Fraction)
	}
	// Output:
	// order 0: 28.14 M wide, 94.84 % of the flux
	// order 1: 0.94 M wide, 4.97 % of the flux
	// order 2: 0.03 M wide, 0.19 % of the flux
}
