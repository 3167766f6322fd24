package tone

import (
	"fmt"
	"image"
	"math"
	"sync"

	"annulet/assets"
)

const (
	// cells is how finely Apply cuts the range of the map: 16 cells an
	// entry, so colours come out within one 8-bit step of the exact ones.
	cells = 1 << 12

	lastCell    = cells - 1
	noValueCell = cells // the palette's colour for NaN

	pixelBytes = 4 // of image.RGBA: red, green, blue, alpha
)

// palette is a colour map with the fast path's number of cells, sampled at
// their centres, and the colour of NaN at the end.
type palette [cells + 1][pixelBytes]uint8

func newPalette(m *assets.Map) *palette {
	const opaque = 0xff
	var p palette
	for k := range cells {
		r, g, b := m.At8((float32(k) + 0.5) / cells)
		p[k] = [pixelBytes]uint8{r, g, b, opaque}
	}
	r, g, b := m.At8(float32(math.NaN()))
	p[noValueCell] = [pixelBytes]uint8{r, g, b, opaque}
	return &p
}

// Apply colours a layer, 8 bits a component. values has length w·h, row-major
// from the bottom row up; dst must measure w × h and is filled from the top
// row down, opaque. NaN becomes assets.NoValue. The error wraps ErrShape,
// ErrLimits or ErrWord, and then dst is unchanged.
//
// The position in the map is off by at most 1/8192 from Normalise on linear
// and square-root curves; a logarithmic curve adds the error of a tabled
// logarithm, 6e-5 divided by the decades. No component is off by more than 1.
func (t Tone) Apply(dst *image.RGBA, values []float32, w, h int, m *assets.Map) error {
	if err := t.checkShape(dst.Rect, values, w, h); err != nil {
		return err
	}
	lo, hi := t.Limits(values)
	p := newPalette(m)
	for row := range h {
		from := values[(h-1-row)*w : (h-row)*w]
		to := dst.Pix[row*dst.Stride : row*dst.Stride+w*pixelBytes]
		switch t.Curve {
		case SquareRoot:
			colourSquareRoot(to, from, lo, hi, p)
		case Logarithmic:
			colourLogarithmic(to, from, lo, hi, p)
		default:
			colourLinear(to, from, lo, hi, p)
		}
	}
	return nil
}

// Apply16 colours a layer as Apply does, 16 bits a component and without
// Apply's approximations, some twenty to forty times slower.
func (t Tone) Apply16(dst *image.RGBA64, values []float32, w, h int, m *assets.Map) error {
	if err := t.checkShape(dst.Rect, values, w, h); err != nil {
		return err
	}
	lo, hi := t.Limits(values)
	for row := range h {
		for col, v := range values[(h-1-row)*w : (h-row)*w] {
			c := m.At(t.Normalise(float64(v), lo, hi))
			dst.SetRGBA64(dst.Rect.Min.X+col, dst.Rect.Min.Y+row, c)
		}
	}
	return nil
}

func (t Tone) checkShape(dst image.Rectangle, values []float32, w, h int) error {
	if err := t.Check(); err != nil {
		return err
	}
	if w < 0 || h < 0 || len(values) != w*h || dst.Dx() != w || dst.Dy() != h {
		return fmt.Errorf("tone: %d values, %d × %d pixels, picture %d × %d: %w", len(values), w, h, dst.Dx(), dst.Dy(), ErrShape)
	}
	return nil
}

// The three loops below are one idea: the value's position in cells, then its
// colour. They differ in one line each, and stay apart so that none of them
// branches on the curve.

func colourLinear(to []uint8, from []float32, lo, hi float64, p *palette) {
	scale := cells / (hi - lo)
	for i, v := range from {
		x := (float64(v) - lo) * scale
		*(*[pixelBytes]uint8)(to[i*pixelBytes:]) = p[cell(x)]
	}
}

func colourSquareRoot(to []uint8, from []float32, lo, hi float64, p *palette) {
	scale := cells * cells / (hi - lo)
	for i, v := range from {
		x := (float64(v) - lo) * scale
		if x > 0 { // not NaN either: both stay for cell to judge
			x = math.Sqrt(x)
		}
		*(*[pixelBytes]uint8)(to[i*pixelBytes:]) = p[cell(x)]
	}
}

func colourLogarithmic(to []uint8, from []float32, lo, hi float64, p *palette) {
	table := log2Table()
	zero := math.Log2(lo)
	scale := cells / (math.Log2(hi) - zero)
	for i, v := range from {
		x := (table.log2(float64(v)) - zero) * scale
		*(*[pixelBytes]uint8)(to[i*pixelBytes:]) = p[cell(x)]
	}
}

// cell returns the palette's cell at position x, in cells from the low limit.
func cell(x float64) int {
	switch {
	case x >= lastCell:
		return lastCell
	case x > 0:
		return int(x)
	case x != x:
		return noValueCell
	}
	return 0
}

// logTable holds log2 of the mantissas 1 to 2 at the centres of as many
// intervals, so that a look-up is off by at most 2^-13/ln 2 = 1.8e-4 octaves
// or 5.3e-5 decades.
type logTable [1 << logBits]float64

const logBits = 12

var log2Table = sync.OnceValue(func() *logTable {
	var t logTable
	for k := range t {
		t[k] = math.Log2(1 + (float64(k)+0.5)/float64(len(t)))
	}
	return &t
})

// log2 returns the logarithm from the bits of v: the exponent, plus the
// table's entry for the leading bits of the mantissa. It is -Inf for what is
// not positive and v itself for NaN; +Inf counts as the largest exponent.
func (t *logTable) log2(v float64) float64 {
	const (
		mantissaBits = 52   // of float64
		bias         = 1023 // of its exponent
	)
	if !(v > 0) {
		if v != v {
			return v
		}
		return math.Inf(-1)
	}
	bits := math.Float64bits(v)
	k := bits >> (mantissaBits - logBits) & (1<<logBits - 1)
	return float64(int(bits>>mantissaBits)-bias) + t[k]
}
