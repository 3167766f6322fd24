package tone

import "math"

// Limits returns the values, in the layer's unit, at the two ends of the map:
// finite, lo < hi, and lo > 0 for a logarithmic curve. Fixed limits are taken
// as they are, then Centre and Decades apply; percentiles skip NaN, ±Inf and
// (unless CountZeros) zeros, and on a logarithmic curve all that is not
// positive. If nothing is left to count, lo is 0 and hi is 1 before Centre
// and Decades apply; limits that coincide are widened by a little.
func (t Tone) Limits(values []float32) (lo, hi float64) {
	lo, hi = t.Low, t.High
	if !t.fixed() {
		lo, hi = t.percentiles(values)
	}
	if t.Centre != 0 {
		half := max(hi-t.Centre, t.Centre-lo)
		lo, hi = t.Centre-half, t.Centre+half
	}
	if t.Curve == Logarithmic {
		return t.decadesBelow(lo, hi)
	}
	return widen(lo, hi)
}

// Fixed returns the Tone with the limits of these values fixed, Centre and
// Decades included: its Limits are the same for any other values. It serves
// series of pictures that must be comparable, and work that is repeated.
func (t Tone) Fixed(values []float32) Tone {
	lo, hi := t.Limits(values)
	return Tone{Curve: t.Curve, Low: lo, High: hi}
}

func (t Tone) percentiles(values []float32) (lo, hi float64) {
	which := counted{zeros: t.CountZeros, negative: true}
	if t.Curve == Logarithmic {
		which = counted{}
	}
	low, high := t.percents()
	lo, hi, some := selectPercentiles(values, which, low, high)
	if !some {
		return 0, 1
	}
	if t.FromZero && hi > 0 {
		lo = min(lo, 0)
	}
	return lo, hi
}

func (t Tone) decadesBelow(lo, hi float64) (float64, float64) {
	switch {
	case t.Decades > 0:
		lo = hi * math.Pow(10, -t.Decades)
	case !t.fixed() || !(lo > 0):
		lo = hi * math.Pow(10, -DefaultDecades)
	}
	return lo, hi
}

// widen keeps lo below hi where a layer holds a single value, which then lies
// half-way between.
func widen(lo, hi float64) (float64, float64) {
	// aside is relative, far below what float32 values resolve, far above
	// what float64 arithmetic loses. Method.
	const aside = 1e-9
	if lo < hi {
		return lo, hi
	}
	half := aside * math.Abs(lo)
	if half == 0 {
		half = aside
	}
	return lo - half, hi + half
}
