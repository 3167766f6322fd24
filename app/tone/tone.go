package tone

import (
	"errors"
	"fmt"
	"math"
)

var (
	// ErrWord marks a word of the user's that is not understood.
	ErrWord = errors.New("not understood")
	// ErrLimits marks limits that are not finite or not in order.
	ErrLimits = errors.New("limits out of range")
	// ErrShape marks values, width and height or picture that do not fit
	// one another.
	ErrShape = errors.New("sizes do not fit")
)

// Defaults of Tone.
const (
	// DefaultHighPercent leaves out the brightest thousandth of the pixels,
	// so that a few on a photon ring do not darken everything else. Taste.
	DefaultHighPercent = 99.9
	// DefaultDecades is the range of a logarithmic curve. Taste.
	DefaultDecades = 3.0
)

// Tone says how a layer becomes a picture. The zero Tone is linear from the
// lowest value to the DefaultHighPercent percentile.
type Tone struct {
	Curve Curve

	// Low and High are fixed limits in the layer's unit; both zero means
	// that the percentiles set them.
	Low, High float64

	// LowPercent and HighPercent, in [0, 100], set the limits where Low and
	// High do not; both zero means 0 and DefaultHighPercent.
	LowPercent, HighPercent float64

	// CountZeros lets exact zeros count for the percentiles. By default they
	// do not: a zero intensity is empty sky, and how much of that lies in
	// the field must not change the picture of the rest.
	CountZeros bool

	// FromZero starts the map at zero where the percentiles would start it
	// above: for an intensity, which means nothing but by its ratio to the
	// dark. Not on a logarithmic curve.
	FromZero bool

	// Centre, in the layer's unit, is put at the middle of the map by
	// widening the limits to equal distances on both sides: 1 for a layer of
	// g under a diverging map. Zero means none. Linear only.
	Centre float64

	// Decades is how far below the high limit a logarithmic curve starts.
	// Zero means at Low if that is fixed and positive, else DefaultDecades.
	Decades float64
}

// Check tells whether the settings make sense; its errors wrap ErrLimits or
// ErrWord.
func (t Tone) Check() error {
	if !t.Curve.known() {
		return fmt.Errorf("tone: %v: %w", t.Curve, ErrWord)
	}
	if !modest(t.Low) || !modest(t.High) || t.fixed() && !(t.High-t.Low >= 1/extreme) {
		return fmt.Errorf("tone: limits %g to %g: %w: both must be finite, the low one below the high one", t.Low, t.High, ErrLimits)
	}
	if low, high := t.percents(); !(low >= 0 && low < high && high <= 100) {
		return fmt.Errorf("tone: percentiles %g %% to %g %%: %w: want 0 <= low < high <= 100", low, high, ErrLimits)
	}
	if !modest(t.Centre) {
		return fmt.Errorf("tone: centre %g: %w: must be finite", t.Centre, ErrLimits)
	}
	if t.Centre != 0 && t.Curve != Linear {
		return fmt.Errorf("tone: a centre of %g on a %v curve: %w: only a linear curve has a centre", t.Centre, t.Curve, ErrLimits)
	}
	if !(t.Decades >= 0 && t.Decades <= maxDecades) {
		return fmt.Errorf("tone: %g decades: %w: want 0 to %g", t.Decades, ErrLimits, float64(maxDecades))
	}
	if t.Curve == Logarithmic && t.fixed() && !(t.High >= 1/extreme) {
		return fmt.Errorf("tone: a high limit of %g on a logarithmic curve: %w: must be positive", t.High, ErrLimits)
	}
	return nil
}

const (
	// maxDecades is beyond the whole range of float32, 1e-45 to 3e38.
	maxDecades = 90

	// extreme bounds limits, and its inverse their distance: far beyond
	// float32, and far enough inside float64 for every product of them.
	extreme = 1e100
)

// modest is false for NaN.
func modest(v float64) bool { return math.Abs(v) <= extreme }

func (t Tone) fixed() bool { return t.Low != 0 || t.High != 0 }

func (t Tone) percents() (low, high float64) {
	if t.LowPercent == 0 && t.HighPercent == 0 {
		return 0, DefaultHighPercent
	}
	return t.LowPercent, t.HighPercent
}
