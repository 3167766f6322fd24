package desk

import (
	"image/color"
	"math"
	"testing"
)

// luminance is the relative luminance of WCAG 2.1 (definitions), of sRGB.
func luminance(c color.NRGBA) float64 {
	channel := func(v uint8) float64 {
		x := float64(v) / 255
		if x <= 0.04045 {
			return x / 12.92
		}
		return math.Pow((x+0.055)/1.055, 2.4)
	}
	return 0.2126*channel(c.R) + 0.7152*channel(c.G) + 0.0722*channel(c.B)
}

// WCAG 2.1, success criterion 1.4.3: words have a contrast of at least 4.5:1,
// (L1 + 0.05)/(L2 + 0.05).
func TestContrast(t *testing.T) {
	const least = 4.5
	for name, p := range map[string]palette{"dark": dark, "light": light} {
		checked := 0
		for _, back := range []color.NRGBA{p.ground, p.raised, p.field} {
			for _, front := range append([]color.NRGBA{p.words, p.quiet, p.faint, p.accent, p.wrong}, p.lines...) {
				a, b := luminance(front), luminance(back)
				if ratio := (max(a, b) + 0.05) / (min(a, b) + 0.05); !(ratio >= least) {
					t.Errorf("%s: %v on %v has a contrast of %.2f:1", name, front, back, ratio)
				}
				checked++
			}
		}
		if checked != 3*(5+len(p.lines)) {
			t.Errorf("%s: checked %d pairs", name, checked)
		}
	}
	if got := (luminance(color.NRGBA{0xff, 0xff, 0xff, 0xff}) + 0.05) / 0.05; math.Abs(got-21) > 1e-9 {
		t.Errorf("white on black has a contrast of %g:1, WCAG says 21", got)
	}
}
