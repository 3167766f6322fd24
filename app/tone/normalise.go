package tone

import "math"

// Normalise returns the position in [0, 1] of value v between the limits that
// Limits returned, and NaN for NaN. Infinite values lie at the ends; on a
// logarithmic curve all that is not positive lies at 0.
func (t Tone) Normalise(v, lo, hi float64) float64 {
	var x float64
	switch t.Curve {
	case SquareRoot:
		x = math.Sqrt(max((v-lo)/(hi-lo), 0))
	case Logarithmic:
		x = math.Log(max(v, 0)/lo) / math.Log(hi/lo)
	default:
		x = (v - lo) / (hi - lo)
	}
	return min(max(x, 0), 1) // min and max pass NaN on
}
