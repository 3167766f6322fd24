package measure

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"testing"

	"annulet/raytrace"
)

// TestRingBounds: bounds on the fluxes of rings cover the truth in at least 95
// of 100 random scenes and are not much too wide. The truth is that of the
// image, whose pixels are integrated along other lines, by another rule, to
// 1e-6. Mean delays of a coarse grid are held against those of the usual one.
// ANNULET_SOAK runs all hundred.
func TestRingBounds(t *testing.T) {
	count := 6
	if os.Getenv("ANNULET_SOAK") != "" {
		count = 100
	}
	if testing.Short() {
		t.Skip("many images")
	}
	rng := rand.New(rand.NewPCG(3, 4))
	var wide []float64
	missed, late := 0, 0
	for range count {
		pick := func(words ...string) string { return words[rng.IntN(len(words))] }
		text := fmt.Sprintf("[observer]\ninclination = \"%.3f deg\"\n[field]\npixels = [120, 120]\nfrequency = [\"230 GHz\"]\n[[emitter]]\nkind = \"disk\"\ninner = %s\nouter = \"%.3f M\"\nindex = %.3f\noptical_depth = %q\n",
			rng.Float64()*88, pick(`"isco"`, `"horizon"`, fmt.Sprintf(`"%.3f M"`, 2.1+rng.Float64()*8)), 11+rng.Float64()*30, rng.Float64()*4, pick("thin", "thin", "thick"))
		v, _ := viewOf(t, text)
		v.FluxTolerance = 1e-6
		plate, err := v.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{}})
		if err != nil {
			t.Fatal(err)
		}
		table, err := NewRings(context.Background(), v, nil, Options{})
		if err != nil {
			t.Fatal(err)
		}
		coarse, err := NewRings(context.Background(), v, nil, Options{Lines: defaultLines / 3, Cells: defaultCells / 3})
		if err != nil {
			t.Fatal(err)
		}
		for n, r := range table.Rings {
			if r.Flux == 0 {
				continue
			}
			off := math.Abs(r.Flux - plate.Flux[n])
			if off > r.FluxBound+plate.FluxBound[n] {
				missed++
				t.Logf("order %d off by %.2g, bound %.2g\n%s", n, off/r.Flux, r.FluxBound/r.Flux, text)
			}
			if c := coarse.Rings[n]; !(math.Abs(c.MeanDelay-r.MeanDelay) <= c.DelayBound) {
				late++
				t.Logf("order %d: delay off by %.2g M, bound %.2g M\n%s", n, c.MeanDelay-r.MeanDelay, c.DelayBound, text)
			}
			wide = append(wide, r.FluxBound/max(off, 1e-12*r.Flux))
		}
	}
	slices.Sort(wide)
	median := wide[len(wide)/2]
	t.Logf("%d of %d missed, bounds %.3g times the error in the median", missed, len(wide), median)
	if late > 1+len(wide)/20 {
		t.Errorf("%d of %d bounds on delays missed", late, len(wide))
	}
	if missed > 1+len(wide)/20 || median > 100 {
		t.Errorf("%d of %d bounds missed, %.3g times too wide", missed, len(wide), median)
	}
}

// The bound on a line's bins on a coarse grid covers those of a finer one.
func TestLineBound(t *testing.T) {
	for _, inclination := range []float64{5, 35, 70, 85} {
		v, _ := viewOf(t, fmt.Sprintf("[observer]\ninclination = %g\n[[emitter]]\nkind = \"disk\"\nouter = 30\nlight = \"line\"\n", inclination))
		fine, err := NewLine(context.Background(), v, 0.02, Options{})
		if err != nil {
			t.Fatal(err)
		}
		coarse, err := NewLine(context.Background(), v, 0.02, Options{Lines: defaultLines / 3, Cells: defaultCells / 3})
		if err != nil {
			t.Fatal(err)
		}
		peak := slices.Max(fine.Energy)
		for k, x := range fine.Energy {
			near(t, fmt.Sprintf("bin %d at %g deg", k, inclination), coarse.Energy[k], x, coarse.Bound)
		}
		near(t, "bound of the usual grid", fine.Bound, 0, 0.005*peak) // what a line is wanted to
	}
}
