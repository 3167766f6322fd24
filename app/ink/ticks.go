package ink

import (
	"math"
	"strconv"
)

// Ticks returns round values within [lo, hi], about n of them, with the
// decimals that tell them apart.
func Ticks(lo, hi float64, n int) (values []float64, decimals int) {
	if !(hi > lo) || n < 1 || math.IsInf(hi-lo, 0) {
		return nil, 0
	}
	step := Round((hi - lo) / float64(n))
	decimals = max(0, -int(math.Floor(math.Log10(step)+1e-9)))
	for k := math.Ceil(lo/step - 1e-9); k*step <= hi+1e-9*step; k++ {
		values = append(values, k*step)
	}
	return values, decimals
}

// Round returns the nearest of 1, 2 and 5 times a power of ten that is not
// smaller.
func Round(x float64) float64 {
	power := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{1, 2, 5, 10} {
		if m*power >= x*(1-1e-9) {
			return m * power
		}
	}
	return 10 * power
}

// Decimal writes a tick's value.
func Decimal(v float64, decimals int) string {
	const longest = 6
	if a := math.Abs(v); a >= 1e5 || decimals > longest {
		return strconv.FormatFloat(v, 'g', 4, 64)
	}
	text := strconv.FormatFloat(v, 'f', decimals, 64)
	if v == 0 {
		return "0"
	}
	if text[0] == '-' {
		text = "−" + text[1:]
	}
	return text
}
