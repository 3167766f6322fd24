package rim

import "math"

// chebyshevNodes returns the n nodes of the first kind on [lo, hi].
func chebyshevNodes(n int, lo, hi float64) []float64 {
	x := make([]float64, n)
	for k := range x {
		x[k] = (lo+hi)/2 + (hi-lo)/2*math.Cos(math.Pi*(float64(k)+0.5)/float64(n))
	}
	return x
}

// chebyshevFit turns values at the nodes into coefficients, in place of out.
func chebyshevFit(values, out []float64) {
	n := len(values)
	for l := range out {
		sum := 0.0
		for k, v := range values {
			sum += v * math.Cos(math.Pi*float64(l)*(float64(k)+0.5)/float64(n))
		}
		out[l] = sum * 2 / float64(n)
	}
	out[0] /= 2
}

// chebyshevBasis fills out with T_l at x in [lo, hi].
func chebyshevBasis(x, lo, hi float64, out []float64) {
	t := 0.0
	if hi > lo {
		t = (2*x - lo - hi) / (hi - lo)
	}
	for l := range out {
		switch l {
		case 0:
			out[0] = 1
		case 1:
			out[1] = t
		default:
			out[l] = 2*t*out[l-1] - out[l-2]
		}
	}
}
