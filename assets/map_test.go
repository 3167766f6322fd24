package assets

import (
	"fmt"
	"image/color"
	"math"
	"slices"
	"testing"

	"annulet/assets/oklab"
)

const scale16 = 65535.0 // full scale of a 16-bit component

// linear returns a table entry in linear light.
func linear(e [3]uint16) oklab.RGB {
	return oklab.RGB{
		R: oklab.Decode(float64(e[0]) / scale16),
		G: oklab.Decode(float64(e[1]) / scale16),
		B: oklab.Decode(float64(e[2]) / scale16),
	}
}

// deficiency is how a colour in linear sRGB looks to eyes without one kind of
// cone. Source: Machado, Oliveira & Fernandes, IEEE Trans. Vis. Comput.
// Graph. 15, 1291 (2009), severity 1.0; digits from memory, so the test also
// checks that white stays white.
type deficiency struct {
	name string
	m    [3][3]float64
}

var deficiencies = []deficiency{
	{"none", [3][3]float64{{1, 0, 0}, {0, 1, 0}, {0, 0, 1}}},
	{"protanopia", [3][3]float64{
		{0.152286, 1.052583, -0.204868},
		{0.114503, 0.786281, 0.099216},
		{-0.003882, -0.048116, 1.051998},
	}},
	{"deuteranopia", [3][3]float64{
		{0.367322, 0.860646, -0.227968},
		{0.280085, 0.672501, 0.047413},
		{-0.011820, 0.042940, 0.968881},
	}},
	{"tritanopia", [3][3]float64{
		{1.255528, -0.076749, -0.178779},
		{-0.078411, 0.930809, 0.147602},
		{0.004733, 0.691367, 0.303900},
	}},
}

// see returns the colour as such eyes see it, clipped to what a display shows.
func (d deficiency) see(c oklab.RGB) oklab.RGB {
	row := func(k int) float64 {
		return min(max(d.m[k][0]*c.R+d.m[k][1]*c.G+d.m[k][2]*c.B, 0), 1)
	}
	return oklab.RGB{R: row(0), G: row(1), B: row(2)}
}

func TestDeficienciesKeepWhite(t *testing.T) {
	const printed = 2e-6 // six decimals, three terms
	for _, d := range deficiencies {
		for k, row := range d.m {
			if sum := row[0] + row[1] + row[2]; !(math.Abs(sum-1) <= printed) {
				t.Errorf("%s, row %d sums to %g, want 1", d.name, k, sum)
			}
		}
	}
}

// runs are the stretches over which lightness must rise: a whole sequential
// map, either arm of a diverging one (read from its dark end inwards).
func runs() map[string][][3]uint16 {
	high := slices.Clone(shiftTable[entries/2:])
	slices.Reverse(high)
	return map[string][][3]uint16{
		"ember":           emberTable[:],
		"tarn":            tarnTable[:],
		"shift, low arm":  shiftTable[:entries/2],
		"shift, high arm": high,
	}
}

func TestLightnessRises(t *testing.T) {
	// leastRise is the smallest step of lightness allowed, as a part of the
	// mean one: above 0 the map reads in grey, and at this value no stretch
	// of it turns flat. Taste.
	const leastRise = 0.6
	var checked int
	for name, run := range runs() {
		for _, d := range deficiencies {
			light := make([]float64, len(run))
			for k, e := range run {
				light[k] = d.see(linear(e)).Lab().L
			}
			mean := (light[len(run)-1] - light[0]) / float64(len(run)-1)
			least := math.Inf(1)
			for k := 1; k < len(run); k++ {
				step := light[k] - light[k-1]
				least = min(least, step/mean)
				if !(step >= leastRise*mean) {
					t.Errorf("%s, %s: lightness step %d is %.2g, want at least %.2g", name, d.name, k, step, leastRise*mean)
				}
				checked++
			}
			t.Logf("%s, %s: lightness %.3f to %.3f, least step %.2f of the mean", name, d.name, light[0], light[len(run)-1], least)
		}
	}
	if want := len(deficiencies) * (3*entries - 4); checked != want {
		t.Fatalf("checked %d steps, want %d", checked, want)
	}
}

func TestStepsAreEqual(t *testing.T) {
	// stepTol: the largest departure of one step's ΔE from the mean. The
	// curve is cut exactly; 16-bit codes are coarse for near-black in
	// OKLab, where lightness goes with the cube root of light.
	const stepTol = 0.01
	means := map[string]float64{}
	for name, run := range runs() {
		var sum float64
		steps := make([]float64, len(run)-1)
		for k := range steps {
			steps[k] = linear(run[k]).Lab().Distance(linear(run[k+1]).Lab())
			sum += steps[k]
		}
		mean := sum / float64(len(steps))
		means[name] = mean
		var worst float64
		for k, s := range steps {
			worst = max(worst, math.Abs(s/mean-1))
			if !(math.Abs(s/mean-1) <= stepTol) {
				t.Errorf("%s: step %d has ΔE %.4g, mean %.4g", name, k, s, mean)
			}
		}
		t.Logf("%s: ΔE %.5f a step, worst departure %.2g", name, mean, worst)
	}
	if low, high := means["shift, low arm"], means["shift, high arm"]; !(math.Abs(low/high-1) <= stepTol) {
		t.Errorf("the arms of shift have steps of %g and %g", low, high)
	}
}

func TestShiftIsBalanced(t *testing.T) {
	const lightTol = 1e-3
	for k := range entries / 2 {
		low, high := linear(shiftTable[k]).Lab(), linear(shiftTable[entries-1-k]).Lab()
		if !(math.Abs(low.L-high.L) <= lightTol) {
			t.Errorf("entry %d has lightness %g, its mirror %g", k, low.L, high.L)
		}
		if !(low.A > 0 && low.B > 0) {
			t.Errorf("entry %d, below the centre, is not warm: %+v", k, low)
		}
		if !(high.A < low.A && high.B < 0) {
			t.Errorf("entry %d, above the centre, is not blue: %+v", entries-1-k, high)
		}
	}
	centre := shift(t).At(0.5)
	const greyTol = 0x0300 // a little over 1 % of full scale
	if spread := max(centre.R, centre.G, centre.B) - min(centre.R, centre.G, centre.B); spread > greyTol {
		t.Errorf("centre %v is not neutral", centre)
	}
}

func TestWheelTurns(t *testing.T) {
	if wheelTable[0] != wheelTable[entries-1] {
		t.Errorf("the ends of wheel are %v and %v", wheelTable[0], wheelTable[entries-1])
	}
	var sum, worst float64
	steps := make([]float64, entries-1)
	for k := range steps {
		steps[k] = linear(wheelTable[k]).Lab().Distance(linear(wheelTable[k+1]).Lab())
		sum += steps[k]
	}
	for _, s := range steps {
		worst = max(worst, math.Abs(s*float64(len(steps))/sum-1))
	}
	if !(worst <= 0.02) { // its hue turns faster than that of the other maps
		t.Errorf("steps of wheel depart from their mean by %.2g", worst)
	}
	for _, d := range deficiencies {
		turns, rising := 0, true
		for k := 1; k < entries; k++ {
			up := d.see(linear(wheelTable[k])).Lab().L > d.see(linear(wheelTable[k-1])).Lab().L
			if up != rising {
				turns, rising = turns+1, up
			}
		}
		if turns != 1 {
			t.Errorf("%s: lightness of wheel turns %d times, want 1", d.name, turns)
		}
	}
}

func TestOrdersRise(t *testing.T) {
	const orders, least = 10, 0.02 // of lightness, taste
	for _, d := range deficiencies {
		last := 0.
		for n := range orders {
			l := d.see(linear(ordersTable[(2*n+1)*entries/(2*orders)])).Lab().L
			if !(l-last >= least) {
				t.Errorf("%s: order %d has lightness %.3f after %.3f", d.name, n, l, last)
			}
			last = l
		}
	}
}

func TestEmberStartsNearBlack(t *testing.T) {
	first := linear(emberTable[0]).Lab()
	if !(first.L <= 0.12 && math.Hypot(first.A, first.B) <= 1e-3) {
		t.Errorf("ember starts at %+v, want a neutral near-black", first)
	}
}

func shift(t *testing.T) *Map {
	t.Helper()
	m, ok := Lookup("shift")
	if !ok {
		t.Fatal("no map called shift")
	}
	return m
}

func TestAt(t *testing.T) {
	for _, name := range Names() {
		m, ok := Lookup(name)
		if !ok || m.Name() != name {
			t.Fatalf("Lookup(%q) = %v, %v", name, m, ok)
		}
		for k, e := range m.table {
			want := color.RGBA64{R: e[0], G: e[1], B: e[2], A: opaque}
			if got := m.At(float64(k) / (entries - 1)); got != want {
				t.Errorf("%s at entry %d: %v, want %v", name, k, got, want)
			}
		}
		for _, c := range []struct{ x, same float64 }{{-3, 0}, {math.Inf(-1), 0}, {7, 1}, {math.Inf(1), 1}} {
			if got, want := m.At(c.x), m.At(c.same); got != want {
				t.Errorf("%s.At(%g) = %v, want %v", name, c.x, got, want)
			}
		}
		if got := m.At(math.NaN()); got != NoValue {
			t.Errorf("%s.At(NaN) = %v, want NoValue", name, got)
		}
		// Half-way between two entries lies their mean, to rounding.
		mid, a, b := m.At(100.5/(entries-1)), m.table[100], m.table[101]
		if mean := (int(a[1]) + int(b[1]) + 1) / 2; mean-int(mid.G) > 1 || int(mid.G)-mean > 1 {
			t.Errorf("%s half-way: %d, want %d", name, mid.G, mean)
		}
	}
	if _, ok := Lookup("Ember"); ok {
		t.Error("Lookup finds a name that is not listed")
	}
}

func TestAt8RoundsAt(t *testing.T) {
	m := shift(t)
	for k := range 1000 {
		x := float32(k) / 999
		c := m.At(float64(x))
		r, g, b := m.At8(x)
		for _, p := range [][2]float64{{float64(r), float64(c.R)}, {float64(g), float64(c.G)}, {float64(b), float64(c.B)}} {
			if !(math.Abs(p[0]-p[1]/to8) <= 0.5) {
				t.Fatalf("At8(%g): %g, want %g rounded", x, p[0], p[1]/to8)
			}
		}
	}
	if n := testing.AllocsPerRun(100, func() { m.At8(0.3) }); n != 0 {
		t.Errorf("At8 allocates %v times, want 0", n)
	}
}

func TestNoValueStandsApart(t *testing.T) {
	const apart = 0.08 // ΔE, taste: some 15 steps of a map
	missing := linear([3]uint16{NoValue.R, NoValue.G, NoValue.B}).Lab()
	for _, m := range maps {
		nearest := math.Inf(1)
		for _, e := range m.table {
			nearest = min(nearest, missing.Distance(linear(e).Lab()))
		}
		t.Logf("%s: NoValue is %.3f away", m.name, nearest)
		if !(nearest >= apart) {
			t.Errorf("%s comes within ΔE %g of NoValue", m.name, nearest)
		}
	}
}

func ExampleLookup() {
	m, _ := Lookup("ember")
	r, g, b := m.At8(1)
	fmt.Printf("%v, brightest #%02x%02x%02x\n", Names(), r, g, b)
	// Output: [ember orders shift tarn wheel], brightest #faf6df
}
