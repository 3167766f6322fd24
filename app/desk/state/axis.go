package state

import (
	"math"
	"sort"
	"strconv"
)

// Stop is one resting place of a slider: a value of the scene, and the text
// that the scene file holds for it.
type Stop struct {
	Value float64 // in the key's unit; orders the stops
	Text  string  // "20 deg", "isco", "infinity"
}

// Axis is the list of a slider's stops, by rising Value. Between stops the
// slider only shows a value that was typed; dragging and stepping always land
// on a stop.
type Axis []Stop

// Last returns the position of the last stop.
func (a Axis) Last() float64 { return float64(len(a) - 1) }

// At returns the stop nearest to a slider position.
func (a Axis) At(position float64) Stop {
	k := int(math.Round(position))
	return a[max(0, min(k, len(a)-1))]
}

// Position returns where along the slider a value lies, from 0 to Last,
// interpolating between stops; values beyond the ends lie at the ends. A value
// between the last finite stop and infinity lies at that finite stop.
func (a Axis) Position(value float64) float64 {
	k := sort.Search(len(a), func(i int) bool { return a[i].Value >= value })
	switch {
	case k == 0:
		return 0
	case k == len(a):
		return a.Last()
	case a[k].Value == value:
		return float64(k)
	case math.IsInf(a[k].Value, 1):
		return float64(k - 1)
	case math.IsInf(a[k-1].Value, -1):
		return float64(k)
	}
	below, above := a[k-1].Value, a[k].Value
	return float64(k-1) + (value-below)/(above-below)
}

// Step returns the stop n stops above the value (below for negative n). From
// between two stops the first step only reaches the next stop.
func (a Axis) Step(value float64, n int) Stop {
	at := a.Position(value)
	if n > 0 {
		at = math.Floor(at)
	} else {
		at = math.Ceil(at)
	}
	return a.At(at + float64(n))
}

// linear returns stops from first to last, both included, with the unit
// appended; decimals is how many the texts show.
func linear(first, last, step float64, decimals int, unit string) Axis {
	n := int(math.Round((last - first) / step))
	a := make(Axis, 0, n+1)
	for k := 0; k <= n; k++ {
		text := strconv.FormatFloat(first+float64(k)*step, 'f', decimals, 64)
		value, _ := strconv.ParseFloat(text, 64) // the value is what the text says
		a = append(a, Stop{value, withUnit(text, unit)})
	}
	return a
}

// preferred is one decade of the preferred numbers R40 of ISO 3: 6 % apart,
// and with 2, 3 and 6 among them, where the physics has its landmarks.
var preferred = []float64{
	1, 1.06, 1.12, 1.18, 1.25, 1.32, 1.4, 1.5, 1.6, 1.7,
	1.8, 1.9, 2, 2.12, 2.24, 2.36, 2.5, 2.65, 2.8, 3,
	3.15, 3.35, 3.55, 3.75, 4, 4.25, 4.5, 4.75, 5, 5.3,
	5.6, 6, 6.3, 6.7, 7.1, 7.5, 8, 8.5, 9, 9.5,
}

// logarithmic returns the preferred numbers from first to last, both included.
func logarithmic(first, last float64, unit string) Axis {
	var a Axis
	for decade := math.Floor(math.Log10(first)); ; decade++ {
		for _, m := range preferred {
			value := roundTo3(m * math.Pow(10, decade))
			switch {
			case value < first:
			case value > last:
				return a
			default:
				a = append(a, Stop{value, withUnit(strconv.FormatFloat(value, 'f', -1, 64), unit)})
			}
		}
	}
}

// with returns the axis with a named stop put where its value belongs; it
// takes the place of a plain stop of the same value.
func (a Axis) with(value float64, name string) Axis {
	k := sort.Search(len(a), func(i int) bool { return a[i].Value >= value })
	out := append(Axis{}, a[:k]...)
	out = append(out, Stop{value, name})
	if k < len(a) && a[k].Value == value {
		k++
	}
	return append(out, a[k:]...)
}

func roundTo3(x float64) float64 {
	v, _ := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 3, 64), 64)
	return v
}

func withUnit(text, unit string) string {
	if unit == "" {
		return text
	}
	return text + " " + unit
}
