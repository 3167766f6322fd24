package scenes

import (
	"math"
	"strconv"
	"strings"
)

// Range is an interval of numbers; an open end does not belong to it.
type Range struct {
	Min, Max         float64 // ±Inf where there is no end
	OpenMin, OpenMax bool
}

// anyNumber is the range without ends.
var anyNumber = Range{Min: math.Inf(-1), Max: math.Inf(1)}

// between is the range with both its ends.
func between(lo, hi float64) Range { return Range{Min: lo, Max: hi} }

// inside is the range without its ends.
func inside(lo, hi float64) Range { return Range{Min: lo, Max: hi, OpenMin: true, OpenMax: true} }

// above is the range of all numbers larger than lo.
func above(lo float64) Range { return Range{Min: lo, Max: math.Inf(1), OpenMin: true} }

// atLeast is the range of lo and all larger numbers.
func atLeast(lo float64) Range { return Range{Min: lo, Max: math.Inf(1)} }

// Holds reports whether the finite number x belongs to the range.
func (r Range) Holds(x float64) bool {
	return (x > r.Min || x == r.Min && !r.OpenMin) && (x < r.Max || x == r.Max && !r.OpenMax) && !math.IsInf(x, 0)
}

// In describes the range with a unit, "more than 2 M"; "" for any number.
func (r Range) In(unit string) string {
	if unit != "" {
		unit = " " + unit
	}
	lo, hi := formatNumber(r.Min), formatNumber(r.Max)
	switch {
	case math.IsInf(r.Min, -1) && math.IsInf(r.Max, 1):
		return ""
	case math.IsInf(r.Max, 1) && r.OpenMin:
		return "more than " + lo + unit
	case math.IsInf(r.Max, 1):
		return lo + unit + " or more"
	case r.Min == r.Max:
		return lo + unit
	case r.OpenMin && r.OpenMax:
		return "between " + lo + " and " + hi + unit + ", both excluded"
	case r.OpenMin:
		return "more than " + lo + " and at most " + hi + unit
	case r.OpenMax:
		return "at least " + lo + " and less than " + hi + unit
	}
	return lo + " to " + hi + unit
}

// formatNumber writes x with as few digits as reading it back exactly takes,
// the exponent without padding: 5e9, 1e-13.
func formatNumber(x float64) string {
	text := strconv.FormatFloat(x, 'g', -1, 64)
	return shortExponent.Replace(text)
}

// formatShort writes x to four digits, for messages.
func formatShort(x float64) string {
	return shortExponent.Replace(strconv.FormatFloat(x, 'g', 4, 64))
}

// shortExponent takes the padding that strconv writes off an exponent.
var shortExponent = strings.NewReplacer("e+0", "e", "e-0", "e-", "e+", "e")
