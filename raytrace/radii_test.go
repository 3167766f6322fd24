package raytrace

import (
	"math"
	"testing"
)

// Radii agree with the closed form, whatever the workers, and a second field
// traced into the same storage leaves nothing of the first.
func TestRadii(t *testing.T) {
	s := scene(50, 2, 120)
	s.Field.AutoWidth, s.Field.Width = false, 30
	s.Observer.Radius = 1000
	v := view(t, s)
	var r Radii
	for _, inclination := range []float64{50, 89} {
		v.Observer.InclinationDeg = inclination
		for _, workers := range []int{1, 3} {
			if err := v.Radii(t.Context(), Options{Workers: workers}, &r); err != nil {
				t.Fatal(err)
			}
			worst, compared, err := r.WorstError(t.Context(), v, 50, 2)
			if err != nil || !(worst <= 1e-7) || compared < 10000 {
				t.Errorf("%g deg, %d workers: worst %g of %d, %v", inclination, workers, worst, compared, err)
			}
		}
	}
	r.at[3].R[5] *= 1 + 1e-6
	if worst, _, _ := r.WorstError(t.Context(), v, math.Inf(1), 1); worst < 9e-7 {
		t.Errorf("a radius off by 1e-6 shows as %g", worst)
	}
}
