package state

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// Sight is one line of sight: the centre of a pixel, and what it meets.
type Sight struct {
	Alpha, Beta float64 // M, or radians on an angular field
	Impact      float64 // b, M; NaN when not known
	Readings    []raytrace.Reading
}

// Readings lists a line of sight for the panel beside the picture, with no
// more digits than its bounds support.
func Readings(s scenes.Scene, at Sight) Table {
	var t Table
	t.section("Line of sight")
	theta, sky := s.ThetaG()
	screen := func(name string, v float64) {
		switch {
		case angular(s):
			degrees := v * 180 / math.Pi
			if s.Field.Projection != allSky { // a gnomonic plane holds tangents
				degrees = math.Atan(v) * 180 / math.Pi
			}
			t.add(name, fixed(degrees, 4), "deg", degrees)
		default:
			t.add(name, fixed(v, 4), "M", v)
			if sky && math.IsInf(s.Observer.Radius, 1) {
				t.add("", figures(v*theta, 4), "µas", v*theta)
			}
		}
	}
	screen("α", at.Alpha)
	screen("β", at.Beta)
	if !math.IsNaN(at.Impact) {
		t.add("b", fixed(at.Impact, 4), "M", at.Impact)
	}
	if len(at.Readings) == 0 {
		t.say("meets", "nothing that shines")
	}
	for _, r := range at.Readings {
		t.section(fmt.Sprintf("Order %d, %s", r.Order, surfaceName(r.Surface)))
		t.crossing(r)
	}
	return t
}

func surfaceName(s geodesic.Surface) string {
	switch s {
	case geodesic.Star:
		return "surface"
	case geodesic.Sky:
		return "sky"
	}
	return "disk"
}

// crossing lists what a path meets.
func (t *Table) crossing(r raytrace.Reading) {
	degrees := func(x float64) float64 { return x * 180 / math.Pi }
	angle := func(name string, x float64) {
		t.add(name, fixed(degrees(x), angleDecimals(degrees(r.AngleBound))), "deg", degrees(x))
	}
	n := supported(math.Max(r.RBound, r.AngleBound))
	switch r.Surface {
	case geodesic.Sky:
		t.say("r", "infinity")
	default:
		t.add("r", figures(r.R, supported(r.RBound)), "M", r.R)
	}
	if r.Surface != geodesic.Plane {
		angle("θ", math.Acos(math.Max(-1, math.Min(1, r.CosTheta))))
	}
	angle("φ", r.Phi)
	t.add("Lz/E", figures(r.Ell, mostFigures), "M", r.Ell)
	t.add("g", figures(r.G, n), "", r.G)
	if !math.IsNaN(r.Mu) {
		t.add("µ", figures(r.Mu, n), "", r.Mu)
	}
	if !math.IsNaN(r.Delay) {
		t.add("delay", fixed(r.Delay, delayDecimals(r)), "M", r.Delay)
	}
	t.add("I", strconv.FormatFloat(r.Intensity, 'e', 3, 64), "", r.Intensity)
}

// mostFigures is how many figures a reading may have. Taste.
const mostFigures = 7

// supported returns how many significant figures a relative bound supports.
func supported(bound float64) int {
	if !(bound > 0) {
		return mostFigures
	}
	return clamp(int(math.Floor(-math.Log10(bound))), 1, mostFigures)
}

// angleDecimals returns how many decimals of an angle a bound in its unit
// supports.
func angleDecimals(bound float64) int {
	const most = 4
	if !(bound > 0) {
		return most
	}
	return clamp(int(math.Floor(-math.Log10(bound))), 0, most)
}

// delayDecimals returns how many decimals of the delay, in M, the bound on r
// supports: near the crossing dt/dr is of order 1/(1 - 2/r).
func delayDecimals(r raytrace.Reading) int {
	const mostDecimals = 4
	slope := 1 / math.Max(1-2/r.R, 1e-3)
	bound := math.Max(r.RBound, r.AngleBound) * r.R * slope
	if !(bound > 0) {
		return mostDecimals
	}
	return clamp(int(math.Floor(-math.Log10(bound))), 0, mostDecimals)
}

func fixed(v float64, decimals int) string {
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if strings.Trim(text, "-0.") == "" {
		return strings.TrimPrefix(text, "-") // no minus zero
	}
	return text
}

// figures writes v with n significant figures and no exponent where that is
// short.
func figures(v float64, n int) string {
	switch {
	case v == 0:
		return "0"
	case math.IsInf(v, 1):
		return "infinity"
	case math.IsNaN(v):
		return "none"
	}
	decimals := n - 1 - int(math.Floor(math.Log10(math.Abs(v))))
	if decimals < 0 || decimals > 9 {
		return strconv.FormatFloat(v, 'g', n, 64)
	}
	return fixed(v, decimals)
}
