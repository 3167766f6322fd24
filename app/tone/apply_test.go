package tone

import (
	"errors"
	"image"
	"math"
	"testing"

	"annulet/assets"
)

var everyCurve = []Curve{Linear, SquareRoot, Logarithmic}

func ember(t testing.TB) *assets.Map {
	t.Helper()
	m, ok := assets.Lookup("ember")
	if !ok {
		t.Fatal("no map called ember")
	}
	return m
}

// exact returns the colour of a value the slow way.
func exact(tone Tone, v float32, lo, hi float64, m *assets.Map) [3]uint8 {
	r, g, b := m.At8(float32(tone.Normalise(float64(v), lo, hi)))
	return [3]uint8{r, g, b}
}

// offBy returns the largest difference of a component.
func offBy(pix []uint8, want [3]uint8) int {
	var worst int
	for k, w := range want {
		d := int(pix[k]) - int(w)
		worst = max(worst, d, -d)
	}
	return worst
}

func TestApplyAgreesWithExact(t *testing.T) {
	const w, h = 71, 53
	values := disk(w * h)
	copy(values, []float32{inf, -inf, -1, float32(math.Copysign(0, -1)), math.SmallestNonzeroFloat32, math.MaxFloat32})
	m := ember(t)
	var checked int
	for _, curve := range everyCurve {
		for _, tone := range []Tone{{Curve: curve}, {Curve: curve, LowPercent: 20, HighPercent: 80}, {Curve: curve, Low: 0.5, High: 0.7}} {
			lo, hi := tone.Limits(values)
			dst := image.NewRGBA(image.Rect(3, 4, 3+w, 4+h))
			if err := tone.Apply(dst, values, w, h, m); err != nil {
				t.Fatal(err)
			}
			for row := range h {
				for col := range w {
					v := values[(h-1-row)*w+col]
					pix := dst.Pix[dst.PixOffset(3+col, 4+row):][:pixelBytes]
					if d := offBy(pix, exact(tone, v, lo, hi, m)); d > 1 || pix[3] != 0xff {
						t.Errorf("%+v: pixel %d,%d of value %g is %v, off by %d", tone, col, row, v, pix, d)
					}
					checked++
				}
			}
		}
	}
	if want := len(everyCurve) * 3 * w * h; checked != want {
		t.Fatalf("checked %d pixels, want %d", checked, want)
	}
}

func TestTabledLogarithm(t *testing.T) {
	stated := math.Pow(2, -13) / math.Ln2
	table := log2Table()
	for v := 1e-44; v < 1e38; v *= 1.0137 {
		near(t, "log2", table.log2(v), math.Log2(v), stated)
	}
	if got := table.log2(0); !math.IsInf(got, -1) {
		t.Errorf("log2(0) = %g", got)
	}
}

func TestRowZeroIsTheBottom(t *testing.T) {
	const w, h = 2, 3
	values := []float32{0, 0, 0, 0, 1, 1} // bright in the top row
	tone, m := Tone{High: 1}, ember(t)
	dst := image.NewRGBA(image.Rect(0, 0, w, h))
	deep := image.NewRGBA64(image.Rect(0, 0, w, h))
	if err := tone.Apply(dst, values, w, h, m); err != nil {
		t.Fatal(err)
	}
	if err := tone.Apply16(deep, values, w, h, m); err != nil {
		t.Fatal(err)
	}
	if d := offBy(dst.Pix, exact(tone, 1, 0, 1, m)); d > 1 {
		t.Errorf("the first image row is %v, want the brightest colour", dst.Pix[:3])
	}
	if got := deep.RGBA64At(0, 0); got != m.At(1) {
		t.Errorf("16 bits: the first row is %v, want %v", got, m.At(1))
	}
	if got := deep.RGBA64At(1, h-1); got != m.At(0) {
		t.Errorf("16 bits: the last row is %v, want %v", got, m.At(0))
	}
}

func TestCentreIsNeutralAndNaNIsNoValue(t *testing.T) {
	m, _ := assets.Lookup("shift")
	values := []float32{0.4, 1, nan, 1.2}
	dst := image.NewRGBA64(image.Rect(0, 0, 4, 1))
	if err := (Tone{Centre: 1}).Apply16(dst, values, 4, 1, m); err != nil {
		t.Fatal(err)
	}
	if got, want := dst.RGBA64At(1, 0), m.At(0.5); got != want {
		t.Errorf("g = 1 is %v, want the centre %v", got, want)
	}
	if got := dst.RGBA64At(2, 0); got != assets.NoValue {
		t.Errorf("NaN is %v, want NoValue", got)
	}
	if low, high := dst.RGBA64At(0, 0), dst.RGBA64At(3, 0); !(low.R > low.B && high.B > high.R) {
		t.Errorf("g < 1 is %v and g > 1 is %v, want warm and blue", low, high)
	}
}

func TestApplyRefuses(t *testing.T) {
	m := ember(t)
	dst := image.NewRGBA(image.Rect(0, 0, 2, 2))
	for _, c := range []struct {
		tone   Tone
		values int
		w, h   int
		want   error
	}{
		{Tone{}, 3, 2, 2, ErrShape},
		{Tone{}, 6, 2, 3, ErrShape},
		{Tone{}, 4, -2, -2, ErrShape},
		{Tone{Low: 2, High: 1}, 4, 2, 2, ErrLimits},
	} {
		if err := c.tone.Apply(dst, make([]float32, c.values), c.w, c.h, m); !errors.Is(err, c.want) {
			t.Errorf("%+v: %v, want %v", c, err, c.want)
		}
	}
	empty := image.NewRGBA(image.Rectangle{})
	if err := (Tone{}).Apply(empty, nil, 0, 0, m); err != nil {
		t.Errorf("an empty layer: %v", err)
	}
}

func TestApplyAllocatesOnlyThePalette(t *testing.T) {
	const w, h = 64, 64
	values, dst, m := disk(w*h), image.NewRGBA(image.Rect(0, 0, w, h)), ember(t)
	for _, curve := range everyCurve {
		tone := Tone{Curve: curve}
		if n := testing.AllocsPerRun(20, func() { _ = tone.Apply(dst, values, w, h, m) }); n > 1 {
			t.Errorf("%v: Apply allocates %v times, want at most 1", curve, n)
		}
	}
}

// annulus is a layer with the coherence of a picture: neighbours are alike,
// the sky around is 0, and the shadow within has no value.
func annulus(w, h int) []float32 {
	const inner, outer = 0.25, 0.9 // radii in half widths
	values := make([]float32, w*h)
	for i := range values {
		x, y := float64(i%w)/float64(w)*2-1, float64(i/w)/float64(h)*2-1
		switch r := math.Hypot(x, y); {
		case r < inner:
			values[i] = nan
		case r < outer:
			values[i] = float32(math.Pow(r/inner, -3) * (1 - 0.5*x))
		}
	}
	return values
}

func BenchmarkApply(b *testing.B) {
	const w, h = 1000, 1000
	values, m := annulus(w, h), ember(b)
	for _, curve := range everyCurve {
		tone := Tone{Curve: curve}.Fixed(values)
		b.Run(curve.String(), func(b *testing.B) {
			dst := image.NewRGBA(image.Rect(0, 0, w, h))
			for b.Loop() {
				if err := tone.Apply(dst, values, w, h, m); err != nil {
					b.Fatal(err)
				}
			}
			for i, v := range values {
				pix := dst.Pix[dst.PixOffset(i%w, h-1-i/w):]
				if d := offBy(pix, exact(tone, v, tone.Low, tone.High, m)); d > 1 {
					b.Fatalf("value %g is %v, off by %d", v, pix[:3], d)
				}
			}
			b.ReportMetric(b.Elapsed().Seconds()*1e9/float64(b.N*w*h), "ns/pixel")
		})
	}
}
