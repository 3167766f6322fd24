package raytrace

import (
	"encoding/csv"
	"flag"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"strconv"
	"testing"

	"annulet/geodesic"
)

var update = flag.Bool("update", false, "write the golden plates anew")

// rimOn is the impact parameter of the order-0 image of the circle at r.
func rimOn(inclination, sinS, r float64) float64 {
	sinI, cosI := math.Sincos(inclination * math.Pi / 180)
	return geodesic.RimImpact(0, geodesic.FirstPlaneAngle(sinI, cosI, sinS), r)
}

// Golden plates: linear values of total intensity and order-0 g and delay on
// a coarse field. Another processor may fuse multiplications and so move a
// value by rounding times the growth near the critical curve, 1e-4 at most
// for pixels of this size; a pixel astride a rim may flip.
func TestGoldenPlates(t *testing.T) {
	const (
		perPixel = 1e-4
		outliers = 4
	)
	for _, c := range []struct {
		name        string
		inclination float64
		inner       float64
		thick       bool
	}{
		{"thin_horizon_20deg", 20, 2, false},
		{"thick_isco_75deg", 75, 6, true},
		{"thin_horizon_163deg", 163, 2, false},
	} {
		s := scene(c.inclination, c.inner, 33)
		if c.thick {
			s.Emitters[0].OpticalDepth = math.Inf(1)
		}
		p := render(t, view(t, s), Options{})
		file := filepath.Join("..", "testdata", "golden", c.name+".csv")
		if *update {
			writeGolden(t, file, p)
		}
		want := readGolden(t, file)
		if len(want) != len(p.Total) {
			t.Fatalf("%s: %d pixels, want %d", c.name, len(p.Total), len(want))
		}
		off := 0
		var failed []string
		for k := range want {
			for q, got := range []float32{p.Total[k], p.Layer(Redshift, 0)[k], p.Layer(Delay, 0)[k]} {
				x, w := float64(got), want[k][q]
				if math.IsNaN(x) && math.IsNaN(w) {
					continue
				}
				if !(math.Abs(x-w) <= perPixel*max(math.Abs(w), 1e-6)) {
					off++
					failed = append(failed, fmt.Sprintf("pixel %d,%d column %d: %g, want %g", k%33, k/33, q, x, w))
				}
			}
		}
		if off > outliers {
			t.Errorf("%s: %d values differ, first %s", c.name, off, failed[0])
			dir := filepath.Join("..", "testdata", "failed")
			if err := os.MkdirAll(dir, 0o755); err == nil {
				writeGolden(t, filepath.Join(dir, c.name+".csv"), p)
			}
		}
	}
}

func writeGolden(t *testing.T, file string, p *Plate) {
	t.Helper()
	f, err := os.Create(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	w := csv.NewWriter(f)
	_ = w.Write([]string{"total", "g_0", "delay_0"})
	text := func(x float32) string { return strconv.FormatFloat(float64(x), 'g', -1, 32) }
	for k := range p.Total {
		_ = w.Write([]string{text(p.Total[k]), text(p.Layer(Redshift, 0)[k]), text(p.Layer(Delay, 0)[k])})
	}
	w.Flush()
	if err := w.Error(); err != nil {
		t.Fatal(err)
	}
}

func readGolden(t *testing.T, file string) (values [][3]float64) {
	t.Helper()
	f, err := os.Open(file)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	rows, err := csv.NewReader(f).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	for _, row := range rows[1:] {
		var v [3]float64
		for q := range v {
			if v[q], err = strconv.ParseFloat(row[q], 64); err != nil {
				t.Fatal(err)
			}
		}
		values = append(values, v)
	}
	return values
}
