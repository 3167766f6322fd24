package oklab

import (
	"math"
	"testing"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) { // <= is false for NaN, so NaN fails
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

// printedDigits is how well matrices printed with ten decimals can invert one
// another and meet the white point.
const printedDigits = 1e-6

func TestTransferFunction(t *testing.T) {
	// The two pieces of IEC 61966-2-1 meet to the digits of its constants.
	const meets = 1e-6
	near(t, "toe end", Encode(toeLinear), Encode(math.Nextafter(toeLinear, 1)), meets)
	near(t, "toe end, encoded", Encode(toeLinear), toeEncoded, meets)
	near(t, "white", Encode(1), 1, printedDigits)
	// 18 % grey is code 118 of 255: two roads, the second by hand from the
	// formula, 1.055·0.18^(1/2.4) − 0.055 = 0.4614.
	near(t, "18 % grey", Encode(0.18), 0.4614, 5e-5)
	for k := range 256 {
		v := float64(k) / 255
		near(t, "round trip", Encode(Decode(v)), v, meets)
	}
}

func TestWhiteAndGreys(t *testing.T) {
	white := RGB{1, 1, 1}.Lab()
	near(t, "L of white", white.L, 1, printedDigits)
	near(t, "a of white", white.A, 0, printedDigits)
	near(t, "b of white", white.B, 0, printedDigits)
	for _, y := range []float64{0.001, 0.18, 0.5} {
		near(t, "L of a grey", RGB{y, y, y}.Lab().L, math.Cbrt(y), printedDigits)
	}
}

// primaries are Lab coordinates of the sRGB primaries to three digits.
// Source: widely printed values, e.g. CSS Color 4, from memory.
var primaries = []struct {
	rgb  RGB
	want Lab
}{
	{RGB{1, 0, 0}, Lab{0.628, 0.225, 0.126}},
	{RGB{0, 1, 0}, Lab{0.866, -0.234, 0.179}},
	{RGB{0, 0, 1}, Lab{0.452, -0.032, -0.312}},
}

func TestPrimaries(t *testing.T) {
	const threeDigits = 6e-4
	for _, p := range primaries {
		got := p.rgb.Lab()
		near(t, "L", got.L, p.want.L, threeDigits)
		near(t, "a", got.A, p.want.A, threeDigits)
		near(t, "b", got.B, p.want.B, threeDigits)
	}
}

func TestRoundTrip(t *testing.T) {
	steps := []float64{0, 0.25, 0.5, 0.75, 1}
	var checked int
	for _, r := range steps {
		for _, g := range steps {
			for _, b := range steps {
				back := RGB{r, g, b}.Lab().RGB()
				near(t, "R", back.R, r, printedDigits)
				near(t, "G", back.G, g, printedDigits)
				near(t, "B", back.B, b, printedDigits)
				checked++
			}
		}
	}
	if want := len(steps) * len(steps) * len(steps); checked != want {
		t.Fatalf("checked %d colours, want %d", checked, want)
	}
}

func TestFromHue(t *testing.T) {
	c := FromHue(0.5, 0.1, math.Pi/2)
	near(t, "a", c.A, 0, printedDigits)
	near(t, "b", c.B, 0.1, printedDigits)
	near(t, "distance to grey", c.Distance(Lab{L: 0.5}), 0.1, printedDigits)
	if (RGB{1.01, 0.5, 0.5}).Inside() || !(RGB{1, 0, 0.5}).Inside() {
		t.Error("Inside misjudges the gamut")
	}
}
