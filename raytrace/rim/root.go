package rim

import "math"

// BisectToRoot returns where f, which falls from positive to not positive
// between lo and hi, changes its sign, to rounding. It is Brent's method
// (Algorithms for Minimization without Derivatives (1973), chapter 4, from
// memory). Jumps of f only cost bisections.
func BisectToRoot(f func(float64) float64, lo, fLo, hi, fHi float64) float64 {
	a, b, c := lo, hi, lo
	fa, fb, fc := fLo, fHi, fLo
	d := b - a
	e := d
	for range 300 {
		if (fb > 0) == (fc > 0) {
			c, fc = a, fa
			d = b - a
			e = d
		}
		if math.Abs(fc) < math.Abs(fb) {
			a, b, c = b, c, b
			fa, fb, fc = fb, fc, fb
		}
		tolerance := 2 * rounding * math.Abs(b)
		half := (c - b) / 2
		if math.Abs(half) <= tolerance || fb == 0 {
			break
		}
		if math.Abs(e) < tolerance || math.Abs(fa) <= math.Abs(fb) {
			d, e = half, half
		} else {
			p, q := brentStep(a, b, c, fa, fb, fc, half)
			if 2*p < min(3*half*q-math.Abs(tolerance*q), math.Abs(e*q)) {
				e, d = d, p/q
			} else {
				d, e = half, half
			}
		}
		a, fa = b, fb
		if math.Abs(d) > tolerance {
			b += d
		} else {
			b += math.Copysign(tolerance, half)
		}
		fb = f(b)
	}
	return b
}

// brentStep is the secant or inverse quadratic step p/q, p >= 0.
func brentStep(a, b, c, fa, fb, fc, half float64) (p, q float64) {
	s := fb / fa
	if a == c {
		p, q = 2*half*s, 1-s
	} else {
		q, r := fa/fc, fb/fc
		p = s * (2*half*q*(q-r) - (b-a)*(r-1))
		return signed(p, (q-1)*(r-1)*(s-1))
	}
	return signed(p, q)
}

func signed(p, q float64) (float64, float64) {
	if p > 0 {
		return p, -q
	}
	return -p, q
}

// rounding is that of a float64, relative.
const rounding = 1.1102230246251565e-16
