package imaging

import (
	"math"
	"time"
)

const (
	// previewTime is how long the first picture may take to be made ready
	// and traced. Taste: ten and more in a second, and a million pixels
	// traced by one of two cores.
	previewTime = 80 * time.Millisecond

	// guessPerPixel is the speed assumed before anything was measured.
	guessPerPixel = 1e-7 // seconds a pixel, all workers together

	// rungRatio is how many times finer each picture is than the one
	// before it; the finest then costs nine times the last but one.
	rungRatio = 3

	// leastSide is the fewest pixels along the shorter side of a preview.
	leastSide = 48
)

// pace is the measured speed of tracing, in seconds a pixel; the zero pace
// has measured nothing yet.
type pace float64

// note takes in a measurement. Recent frames count most, because the speed
// changes with the scene.
func (p *pace) note(pixels int, took time.Duration) {
	if pixels < leastSide*leastSide || took <= 0 {
		return // too small to tell
	}
	measured := pace(took.Seconds() / float64(pixels))
	if *p == 0 {
		*p = measured
		return
	}
	*p += (measured - *p) / 2
}

// estimate returns how long a picture of that many pixels will take.
func (p pace) estimate(pixels int) time.Duration {
	if p == 0 {
		p = guessPerPixel
	}
	return time.Duration(float64(p) * float64(pixels) * float64(time.Second))
}

// rungs returns the coarsenings of the pictures to make one after the other:
// the first fits what is left of previewTime, but at least half of it; the
// last is 1.
func (p pace) rungs(columns, rows int, spent time.Duration) []int {
	left := max(previewTime-spent, previewTime/2)
	over := p.estimate(columns*rows).Seconds() / left.Seconds()
	k := int(math.Ceil(math.Sqrt(over)))
	k = max(1, min(k, min(columns, rows)/leastSide))
	var all []int
	for ; k > 1; k /= rungRatio {
		all = append(all, k)
	}
	return append(all, 1)
}
