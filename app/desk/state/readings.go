package state

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"annulet/raytrace"
	"annulet/scenes"
)

// Sight is one line of sight: the centre of a pixel, and what it meets.
type Sight struct {
	Alpha, Beta float64 // M, or radians on an angular field
	Impact      float64 // b, M; NaN when not known
	Readings    []raytrace.Reading
}

// Readings writes a line of sight for the panel beside the picture, one
// quantity a line, with no more digits than its bound supports.
func Readings(s scenes.Scene, at Sight) string {
	var b strings.Builder
	theta, sky := ThetaG(s)
	line := func(name, value, unit string) {
		value = strings.Replace(value, "-", "−", 1)
		fmt.Fprintf(&b, "%-6s%12s %s\n", name, value, unit)
	}
	screen := func(name string, v float64) {
		switch {
		case angular(s):
			line(name, fixed(v*180/math.Pi, 4), "deg")
		default:
			line(name, fixed(v, 4), "M")
			if sky && math.IsInf(s.Observer.Radius, 1) {
				line("", figures(v*theta, 4), "µas")
			}
		}
	}
	screen("α", at.Alpha)
	screen("β", at.Beta)
	if !math.IsNaN(at.Impact) {
		line("b", fixed(at.Impact, 4), "M")
	}
	if len(at.Readings) == 0 {
		b.WriteString("\nmeets no gas\n")
	}
	for _, r := range at.Readings {
		n := supported(r.RBound)
		fmt.Fprintf(&b, "\nOrder %d\n", r.Order)
		line("r", figures(r.R, n), "M")
		line("φ", fixed(r.Phi*180/math.Pi, 3), "deg")
		line("g", figures(r.G, n), "")
		line("delay", fixed(r.Delay, delayDecimals(r)), "M")
	}
	return b.String()
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

// delayDecimals returns how many decimals of the delay, in M, the bound on r
// supports: near the crossing dt/dr is of order 1/(1 - 2/r).
func delayDecimals(r raytrace.Reading) int {
	const mostDecimals = 4
	slope := 1 / math.Max(1-2/r.R, 1e-3)
	bound := r.RBound * r.R * slope
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
	if v == 0 {
		return "0"
	}
	decimals := n - 1 - int(math.Floor(math.Log10(math.Abs(v))))
	if decimals < 0 || decimals > 9 {
		return strconv.FormatFloat(v, 'g', n, 64)
	}
	return fixed(v, decimals)
}
