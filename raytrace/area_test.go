package raytrace

import (
	"context"
	"fmt"
	"math"
	"math/rand/v2"
	"os"
	"slices"
	"strings"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"

	"gonum.org/v1/gonum/integrate/quad"
)

// viewOf makes a view of a scene in TOML.
func viewOf(t *testing.T, text string) *View {
	t.Helper()
	d, err := scenes.Parse("test.toml", []byte("schema = 1\n"+text))
	if err != nil {
		t.Fatal(err)
	}
	v, err := NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func rendered(t *testing.T, v *View, o Options) *Plate {
	t.Helper()
	p, err := v.Render(context.Background(), o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// annulus is a disk from 6 to 10 M of emitted intensity 1, face-on, whose
// received intensity is g to a power.
func annulus(pixels int, power float64) string {
	return fmt.Sprintf(`
[observer]
inclination = "0 deg"
[field]
pixels = [%d, %d]
frequency = ["230 GHz"]
[[emitter]]
kind = "disk"
inner = "6 M"
outer = "10 M"
index = 0
light = "monochromatic"
spectral_index = %g
`, pixels, pixels, 3-power)
}

// TestAnnulus: area and ∫ g³, ∫ g⁴ of the direct image of an annulus. Those of
// g⁰ and g⁴ are numbers of two independent quadratures (shared physics notes,
// computed there from the elliptic integrals); g³ is integrated here over b,
// with the closed form of r(b) and gonum's quadrature.
func TestAnnulus(t *testing.T) {
	if testing.Short() {
		t.Skip("millions of pixels")
	}
	between := func(power float64) float64 {
		from, to := geodesic.RimImpact(0, math.Pi/2, 6), geodesic.RimImpact(0, math.Pi/2, 10)
		return quad.Fixed(func(b float64) float64 {
			orbit := geodesic.NewClosedOrbit(b)
			g := math.Sqrt(1 - 3/orbit.RadiusAt(0, math.Pi/2))
			return 2 * math.Pi * b * math.Pow(g, power)
		}, from, to, 40, quad.Legendre{}, 0)
	}
	for power, want := range map[float64]float64{0: 226.1374137943, 3: between(3), 4: 88.7759266673} {
		if own := between(power); math.Abs(own/want-1) > 1e-11 {
			t.Errorf("quadrature of g^%g: %.12g, published %.12g", power, own, want)
		}
		for pixels, most := range map[int]float64{400: 1e-4, 1600: 1e-5} {
			p := rendered(t, viewOf(t, annulus(pixels, power)), Options{})
			off := math.Abs(p.Flux[0] - want)
			if off > most*want || off > p.FluxBound[0] {
				t.Errorf("g^%g at %d pixels: %.12g ± %.1e, want %.12g", power, pixels, p.Flux[0], p.FluxBound[0], want)
			}
			sum := 0.0
			for _, x := range p.Layer(Intensity, 0) {
				sum += float64(x)
			}
			v := viewOf(t, annulus(pixels, power))
			if sum *= v.Field.SolidAngle(0, 0); math.Abs(sum/p.Flux[0]-1) > 1e-7 {
				t.Errorf("pixels sum to %.12g, the flux is %.12g", sum, p.Flux[0])
			}
		}
	}
}

// TestLensedOrdersStable: orders 1 and 2 of a thin disk do not depend on the
// pixels, however much wider these are than the images.
func TestLensedOrdersStable(t *testing.T) {
	if testing.Short() {
		t.Skip("millions of pixels")
	}
	text := func(pixels int) string {
		return fmt.Sprintf("[observer]\ninclination = \"60 deg\"\n[field]\npixels = [%d, %d]\n[[emitter]]\nkind = \"disk\"\ninner = \"horizon\"\nouter = \"20 M\"\n", pixels, pixels)
	}
	coarse, fine := rendered(t, viewOf(t, text(200)), Options{}), rendered(t, viewOf(t, text(1600)), Options{})
	for n, most := range []float64{1e-4, 1e-3, 1e-2} {
		off := math.Abs(coarse.Flux[n] - fine.Flux[n])
		if off > most*fine.Flux[n] || off > coarse.FluxBound[n]+fine.FluxBound[n] {
			t.Errorf("order %d: %.8g ± %.1e at 200 pixels, %.8g ± %.1e at 1600", n, coarse.Flux[n], coarse.FluxBound[n], fine.Flux[n], fine.FluxBound[n])
		}
	}
}

// randomDisk is a random scene with a disk.
func randomDisk(rng *rand.Rand) string {
	pick := func(words ...string) string { return words[rng.IntN(len(words))] }
	inner := pick(`"isco"`, `"horizon"`, fmt.Sprintf(`"%.3f M"`, 2.1+rng.Float64()*8))
	width := pick("", "", fmt.Sprintf("width = \"%.2f M\"\n", 8+20*rng.Float64()))
	pixels := 60 + rng.IntN(140)
	return fmt.Sprintf("[observer]\ninclination = \"%.3f deg\"\n[field]\npixels = [%d, %d]\n%sfrequency = [\"230 GHz\"]\n"+
		"[[emitter]]\nkind = \"disk\"\ninner = %s\nouter = \"%.3f M\"\noptical_depth = %q\nindex = %.3f\nlight = %s\n",
		rng.Float64()*89, pixels, pixels, width, inner, 11+rng.Float64()*30, pick("thin", "thick"), rng.Float64()*4,
		pick(`"bolometric"`, "\"monochromatic\"\nspectral_index = -0.7", `"line"`))
}

// TestFluxBounds: bounds cover the truth in at least 95 of 100 random scenes,
// in each order, and are not much too wide. The truth is a flux a hundred
// times better, or that integrated on the disk where the field shows it all.
// ANNULET_SOAK runs all hundred.
func TestFluxBounds(t *testing.T) {
	count := 10
	if os.Getenv("ANNULET_SOAK") != "" {
		count = 100
	}
	if testing.Short() {
		t.Skip("many images")
	}
	rng := rand.New(rand.NewPCG(1, 2))
	var wide [3][]float64
	var missed [3]int
	for range count {
		text := randomDisk(rng)
		v := viewOf(t, text)
		p := rendered(t, v, Options{})
		truth := *v
		truth.FluxTolerance = v.FluxTolerance / 100
		q := rendered(t, &truth, Options{})
		// nodes on a thick disk jump where a nearer image ends
		if !strings.Contains(text, "width") && !strings.Contains(text, "thick") {
			whole, change, err := v.DiskFlux(v.Emitters[0].(*emit.Disk))
			if err != nil {
				t.Fatal(err)
			}
			for n, flux := range whole {
				if off := math.Abs(q.Flux[n] - flux); off > q.FluxBound[n]+(1e-4+change)*flux {
					t.Errorf("order %d: %.8g from pixels, %.8g from the disk\n%s", n, q.Flux[n], flux, text)
				}
			}
		}
		for n := range p.Flux {
			if p.Flux[n] == 0 {
				continue
			}
			off := math.Abs(p.Flux[n] - q.Flux[n])
			if off > p.FluxBound[n]+q.FluxBound[n] {
				missed[n]++
				t.Logf("order %d: off by %.2g, bound %.2g\n%s", n, off/p.Flux[n], p.FluxBound[n]/p.Flux[n], text)
			}
			wide[n] = append(wide[n], p.FluxBound[n]/max(off, 1e-12*p.Flux[n]))
		}
	}
	for n := range wide {
		slices.Sort(wide[n])
		median := wide[n][len(wide[n])/2]
		t.Logf("order %d: %d of %d missed, bounds %.3g times the error in the median", n, missed[n], len(wide[n]), median)
		if missed[n] > 1+len(wide[n])/20 || median > 100 {
			t.Errorf("order %d: %d of %d bounds missed, %.3g times too wide", n, missed[n], len(wide[n]), median)
		}
	}
}

// TestFluxIsOne: neither workers nor strips change a flux, and shading what
// was traced gives the very plate that rendering gives.
func TestFluxIsOne(t *testing.T) {
	v := viewOf(t, "[observer]\ninclination = \"70 deg\"\n[field]\npixels = [150, 131]\n[[emitter]]\nkind = \"disk\"\n")
	want := rendered(t, v, Options{Workers: 1})
	equal := func(what string, p *Plate) {
		t.Helper()
		if !slices.Equal(p.Flux, want.Flux) || !slices.Equal(p.FluxBound, want.FluxBound) {
			t.Errorf("%s: %v ± %v, want %v ± %v", what, p.Flux, p.FluxBound, want.Flux, want.FluxBound)
		}
	}
	p := rendered(t, v, Options{Workers: 3})
	equal("3 workers", p)
	if !slices.Equal(p.Total, want.Total) {
		t.Error("3 workers: other pixels")
	}
	for _, down := range []bool{false, true} {
		p, err := v.Strips(context.Background(), Options{}, down, func(s Strip) error {
			from := s.FirstRow * s.Columns
			if !slices.Equal(s.Total, want.Total[from:from+len(s.Total)]) {
				t.Errorf("strip %d: other pixels", s.FirstRow)
			}
			return nil
		})
		if err != nil {
			t.Fatal(err)
		}
		equal("strips", p)
	}
	traced, err := v.Trace(context.Background(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	if p, err = traced.Shade(context.Background(), v, Options{}); err != nil {
		t.Fatal(err)
	}
	equal("shaded", p)
	if !slices.Equal(p.Total, want.Total) {
		t.Error("shaded: other pixels")
	}
	if p = rendered(t, v, Options{Centres: true}); p.Flux != nil {
		t.Error("middles of pixels have a flux")
	}
}

// TestStarFlux: a star of even brightness has the flux π b² g⁴ of its limb
// (gravitational shift √(1-2/R), b = R/√(1-2/R); handbook formulas).
func TestStarFlux(t *testing.T) {
	const radius = 5.0
	v := viewOf(t, fmt.Sprintf("[object]\nkind = \"star\"\nradius = \"%g M\"\n[field]\npixels = [90, 90]\n[[emitter]]\nkind = \"surface\"\n", radius))
	p := rendered(t, v, Options{})
	flux, bound := p.WholeFlux()
	shift := 1 - 2/radius
	want := math.Pi * radius * radius / shift * shift * shift
	if off := math.Abs(flux - want); off > bound || off > 1e-4*want {
		t.Errorf("flux %.8g ± %.1e, want %.8g", flux, bound, want)
	}
}

// TestPixelsAreAreas: pixels are the means of many small ones, whatever
// shines and from wherever it is seen. The small ones are sampled at their
// middles.
func TestPixelsAreAreas(t *testing.T) {
	const side, finer = 16, 24
	for name, text := range map[string]string{
		"charged":     "[object]\ncharge = \"0.8 M\"\n[observer]\ninclination = \"65 deg\"\n[[emitter]]\nkind = \"disk\"\n",
		"perspective": "[observer]\nradius = \"40 M\"\ninclination = \"75 deg\"\n[field]\nprojection = \"perspective\"\nwidth = \"50 deg\"\n[[emitter]]\nkind = \"disk\"\nouter = \"15 M\"\n",
		"orbiting":    "[observer]\nradius = \"30 M\"\ninclination = \"80 deg\"\nmotion = \"orbit\"\n[field]\nprojection = \"perspective\"\nwidth = \"50 deg\"\n[[emitter]]\nkind = \"disk\"\nouter = \"12 M\"\n",
		"all-sky":     "[observer]\nradius = \"12 M\"\ninclination = \"60 deg\"\n[field]\nprojection = \"all-sky\"\n[[emitter]]\nkind = \"disk\"\nouter = \"20 M\"\n",
		"near":        "[observer]\nradius = \"2.8 M\"\ninclination = \"70 deg\"\n[field]\nprojection = \"all-sky\"\n[[emitter]]\nkind = \"disk\"\ninner = \"4 M\"\nouter = \"9 M\"\n",
		"caps":        "[object]\nkind = \"star\"\nradius = \"4.5 M\"\n[observer]\ninclination = \"60 deg\"\n[[emitter]]\nkind = \"surface\"\ncaps = [{colatitude = \"50 deg\", azimuth = \"20 deg\", size = \"30 deg\", temperature = \"1e6 K\"}]\n",
		"straight":    "[observer]\ninclination = \"70 deg\"\n[[emitter]]\nkind = \"disk\"\n[trace]\neffects = [\"motion\"]\n",
		"two disks":   "[observer]\ninclination = \"70 deg\"\n[[emitter]]\nkind = \"disk\"\nouter = \"9 M\"\noptical_depth = 0.5\n[[emitter]]\nkind = \"disk\"\ninner = \"11 M\"\nouter = \"16 M\"\nindex = 1\n",
		"spot":        "[observer]\ninclination = \"60 deg\"\n[[emitter]]\nkind = \"spot\"\nradius = \"8 M\"\nsize = \"0.7 M\"\n",
		"shell":       "[object]\nkind = \"shell\"\nradius = \"4 M\"\n[observer]\ninclination = \"60 deg\"\n[[emitter]]\nkind = \"disk\"\ninner = \"6 M\"\nouter = \"12 M\"\n",
	} {
		v := viewOf(t, text)
		v.Field.Columns, v.Field.Rows = side, side
		if v.Field.Projection == AllSky {
			v.Field.Rows = side / 2
		}
		many := *v
		many.Field.Columns, many.Field.Rows = finer*v.Field.Columns, finer*v.Field.Rows
		p, q := rendered(t, v, Options{}), rendered(t, &many, Options{Centres: true})
		want := make([]float64, len(p.Total))
		solid := make([]float64, len(p.Total))
		for k, x := range q.Total {
			column, row := k%q.Columns, k/q.Columns
			pixel, area := row/finer*p.Columns+column/finer, many.Field.SolidAngle(column, row)
			want[pixel] += float64(x) * area
			solid[pixel] += area
		}
		worst, top, flux := 0.0, 0.0, 0.0
		for k, x := range p.Total {
			flux += want[k]
			want[k] /= solid[k]
			worst, top = max(worst, math.Abs(float64(x)-want[k])), max(top, want[k])
		}
		own, bound := p.WholeFlux()
		t.Logf("%s: flux %.6g ± %.1e, small pixels %.6g, worst pixel %.1e of the brightest", name, own, bound/own, flux, worst/top)
		most := 0.03
		if name == "near" { // light from all around, in pixels of 22 deg
			most = 0.1
		}
		if !(worst < most*top) {
			t.Errorf("%s: a pixel is off by %.2g of the brightest", name, worst/top)
		}
		if !(math.Abs(own-flux) < bound+5e-3*flux) {
			t.Errorf("%s: flux %.6g ± %.1e, small pixels have %.6g", name, own, bound, flux)
		}
	}
}

// TestFaintOrders: orders that are much narrower than pixels have the flux
// integrated on the disk, at a cost that stays in bounds.
func TestFaintOrders(t *testing.T) {
	v := viewOf(t, "[observer]\ninclination = \"35 deg\"\n[field]\npixels = [60, 60]\n[[emitter]]\nkind = \"disk\"\nouter = \"15 M\"\n[trace]\nmax_order = 4\n")
	p := rendered(t, v, Options{Layers: []Layer{}})
	whole, _, err := v.DiskFlux(v.Emitters[0].(*emit.Disk))
	if err != nil {
		t.Fatal(err)
	}
	for n, flux := range whole {
		if off := math.Abs(p.Flux[n] - flux); off > p.FluxBound[n]+1e-4*flux || off > 0.05*flux {
			t.Errorf("order %d: %.6g ± %.1e from pixels, %.6g from the disk", n, p.Flux[n], p.FluxBound[n], flux)
		}
	}
	if each := float64(p.Paths) / 3600; each > 60 {
		t.Errorf("%.1f paths a pixel", each)
	}
}
