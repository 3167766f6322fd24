package geodesic

import (
	"math"

	"gonum.org/v1/gonum/mathext"
)

// CriticalImpact is the impact parameter b_c = 3√3 M of light that circles
// the photon sphere; it is the same for every observer, who sees it at
// sin a = b_c √(1-2/r)/r. Source: Synge, MNRAS 131, 463 (1966), from memory.
const CriticalImpact = 5.196152422706632

// CriticalDistance returns x = b/b_c - 1 with b taken as exact, to full
// relative precision also where b and b_c agree in all digits.
func CriticalDistance(b float64) float64 {
	// b - 3√3 without cancellation: (b² - 27)/(b + 3√3)
	return squareExcess(b) / ((b + CriticalImpact) * CriticalImpact)
}

// squareExcess returns b² - 27 to full relative precision for a float64 b
// taken as exact.
func squareExcess(b float64) float64 {
	square := b * b
	rest := math.FMA(b, b, -square)
	return (square - 27) + rest
}

// ClosedOrbit is the light orbit of one impact parameter in closed form: the
// roots of 2u³ - u² + 1/b², kept so that no difference of two of them
// cancels. Beyond the critical impact parameter there are three real roots
// u1 < 0 < u2 <= u3, the periapsis being 1/u2; within it u1 and a pair
// p ± iq. Sources: Darwin (1959); Čadež & Kostić, Phys. Rev. D 72, 104024
// (2005); both from memory.
type ClosedOrbit struct {
	b          float64
	scattering bool // three real roots
	u1, u2, u3 float64
	d21, d32   float64 // u2 - u1, u3 - u2
	d31        float64
	p, q       float64
	amp, m, m1 float64 // Jacobi form: amplitude A, parameter and 1 - parameter
}

// NewClosedOrbit returns the orbit of impact parameter b > 0, in M, taken as
// exact.
func NewClosedOrbit(b float64) ClosedOrbit {
	o := ClosedOrbit{b: b}
	excess := squareExcess(b)
	o.scattering = excess >= 0
	if o.scattering {
		// u = 1/6 + cos(χ)/3 with cos 3χ = 1 - 54/b² = -cos ε
		third := 2 * math.Asin(min(1, math.Sqrt(excess)/b)) / 3
		near, far := math.Cos((math.Pi/3)-third), math.Cos((math.Pi/3)+third)
		end := math.Cos(third)
		o.u1, o.u2, o.u3 = (0.5-end)/3, (0.5+far)/3, (0.5+near)/3
		if b > newtonFrom {
			o.smallRoots()
			o.d21, o.d31, o.d32 = o.u2-o.u1, o.u3-o.u1, o.u3-o.u2
		} else {
			o.d32 = math.Sin(third) / math.Sqrt(3)
			o.d21, o.d31 = (far+end)/3, (near+end)/3
		}
		o.setScattering()
		return o
	}
	t := 2 * math.Asinh(math.Sqrt(-excess)/b) / 3
	cosh := math.Cosh(t)
	o.u1 = (0.5 - cosh) / 3
	o.p = (1 + cosh) / 6
	o.q = math.Sinh(t) / (2 * math.Sqrt(3))
	reach := o.p - o.u1
	o.amp = math.Hypot(reach, o.q)
	o.m1 = o.q * o.q / (2 * o.amp * (o.amp + reach))
	o.m = (o.amp + reach) / (2 * o.amp)
	return o
}

// NewClosedOrbitFromPeriapsis returns the orbit whose periapsis is r0 >= 3,
// in M, taken as exact: the better parameter near the critical curve, where
// b fixes r0 only to half the digits.
func NewClosedOrbitFromPeriapsis(r0 float64) ClosedOrbit {
	q := math.Sqrt((r0 - 2) * (r0 + 6))
	o := ClosedOrbit{b: ImpactAtPeriapsis(r0), scattering: true}
	o.u1 = -2 * (r0 - 2) / (r0 * (r0 - 2 + q))
	o.u2 = 1 / r0
	o.u3 = (r0 - 2 + q) / (4 * r0)
	o.d21 = o.u2 - o.u1
	o.d31 = q / (2 * r0)
	o.d32 = 4 * (r0 - 3) / (r0 * (q + 6 - r0))
	if r0 > 6 {
		o.d32 = o.u3 - o.u2
	}
	o.setScattering()
	return o
}

// newtonFrom is the impact parameter beyond which the small roots come from
// Newton's method: the trigonometric form loses digits of u ≈ ±1/b there,
// while Newton's method would lose them at the double root.
const newtonFrom = 8.0

// newtonRounds doubles the digits of 1/b + 1/b², two at b = newtonFrom,
// beyond those of a float64.
const newtonRounds = 6

// smallRoots finds u1 and u2 by Newton's method.
func (o *ClosedOrbit) smallRoots() {
	inv := 1 / o.b
	root := func(u float64) float64 {
		for range newtonRounds {
			u -= (2*u*u*u - (u-inv)*(u+inv)) / (2 * u * (3*u - 1))
		}
		return u
	}
	o.u1, o.u2 = root(-inv+inv*inv), root(inv+inv*inv)
	o.u3 = 0.5 - o.u1 - o.u2
}

func (o *ClosedOrbit) setScattering() {
	o.m = o.d21 / o.d31
	o.m1 = o.d32 / o.d31
}

// Periapsis returns the smallest r of the orbit that comes from outside, M;
// NaN if it falls in.
func (o *ClosedOrbit) Periapsis() float64 {
	if !o.scattering {
		return math.NaN()
	}
	return 1 / o.u2
}

// ImpactAtPeriapsis returns b = r0/√(1-2/r0) of the orbit with periapsis
// r0 >= 3, M.
func ImpactAtPeriapsis(r0 float64) float64 { return r0 / math.Sqrt(1-2/r0) }

// Periapsis returns the smallest radius of light with impact parameter b
// coming from far away, M; NaN below the critical impact parameter.
func Periapsis(b float64) float64 {
	o := NewClosedOrbit(b)
	return o.Periapsis()
}

// Sweep returns the angle swept between two inverse radii on one leg, on
// which u does not turn; 0 <= from, to, in either order.
//
// Three real roots: Carlson's symmetric form of the integral between two
// finite limits, DLMF 19.29.4. A complex pair: Legendre's form.
func (o *ClosedOrbit) Sweep(from, to float64) float64 {
	lo, hi := min(from, to), max(from, to)
	if lo == hi {
		return 0
	}
	if !o.scattering {
		return (o.legendreF(hi) - o.legendreF(lo)) / math.Sqrt(2*o.amp)
	}
	// the factors |t - u_k| at both limits, and the length of the interval
	length := hi - lo
	x1, x2, x3 := hi-o.u1, math.Abs(hi-o.u2), math.Abs(hi-o.u3)
	y1, y2, y3 := lo-o.u1, math.Abs(lo-o.u2), math.Abs(lo-o.u3)
	switch {
	case hi == o.u2: // up to the periapsis, whose distances are known better
		x1, x2, x3 = o.d21, 0, o.d32
	case lo == o.u3: // down from the turning point inside the photon sphere
		y1, y2, y3 = o.d31, o.d32, 0
	}
	return math.Sqrt2 * carlsonBetween(x1, x2, x3, y1, y2, y3, length)
}

// carlsonBetween is DLMF 19.29.4 for a cubic: x and y hold the three linear
// factors at the upper and lower limit, length the interval.
func carlsonBetween(x1, x2, x3, y1, y2, y3, length float64) float64 {
	sx1, sx2, sx3 := math.Sqrt(x1), math.Sqrt(x2), math.Sqrt(x3)
	sy1, sy2, sy3 := math.Sqrt(y1), math.Sqrt(y2), math.Sqrt(y3)
	u12 := (sx1*sx2*sy3 + sy1*sy2*sx3) / length
	u13 := (sx1*sx3*sy2 + sy1*sy3*sx2) / length
	u23 := (sx2*sx3*sy1 + sy2*sy3*sx1) / length
	return mathext.EllipticRF(u12*u12, u13*u13, u23*u23)
}

// legendreF returns F(ξ(u), m) of the orbit that falls in, ξ in [0, π).
func (o *ClosedOrbit) legendreF(u float64) float64 {
	v := u - o.u1
	cos := (o.amp - v) / (o.amp + v)
	sin := 2 * math.Sqrt(o.amp*v) / (o.amp + v)
	f := sin * mathext.EllipticRF(cos*cos, cos*cos+o.m1*sin*sin, 1)
	if cos < 0 {
		return 2*mathext.EllipticRF(0, o.m1, 1) - f
	}
	return f
}

// U returns the inverse radius after sweeping psi from an observer at
// inverse radius uObs, first leg inward (or outward), continued through the
// turning point; beyond infinity it is negative, beyond the horizon more
// than 1/2.
func (o *ClosedOrbit) U(uObs float64, outward bool, psi float64) float64 {
	leg := 1.0
	if outward {
		leg = -1
	}
	if !o.scattering {
		rate := math.Sqrt(2 * o.amp)
		_, cn, _ := jacobi(leg*rate*psi+o.legendreF(uObs), o.m1)
		return o.u1 + o.amp*(1-cn)/(1+cn)
	}
	rate := math.Sqrt(o.d31 / 2)
	if uObs > (o.u2+o.u3)/2 { // bound between the horizon and the outer turning point u3
		// u = u1 + d31/… : with sn² = (u-u3)/(u-u2) the orbit falls from u3
		start := o.Sweep(o.u3, max(uObs, o.u3))
		sn, _, _ := jacobi(rate*(start+leg*psi), o.m1)
		return (o.u3 - o.u2*sn*sn) / (1 - sn*sn)
	}
	start := o.Sweep(min(uObs, o.u2), o.u2) // measured from the periapsis
	_, cn, dn := jacobi(rate*(start-leg*psi), o.m1)
	cd := cn / dn // sn(K - x) = cd(x)
	return o.u1 + o.d21*cd*cd
}

// jacobi returns the Jacobi elliptic functions sn, cn, dn of x for the
// parameter 1 - m1, by the descending Landen transformation.
// Source: Abramowitz & Stegun (1964), 16.4, from memory.
func jacobi(x, m1 float64) (sn, cn, dn float64) {
	const rounds = 12 // the means agree to the last bit well before
	var a, c [rounds]float64
	a[0] = 1
	b := math.Sqrt(m1)
	c[0] = math.Sqrt(1 - m1)
	n := 0
	for n < rounds-1 && math.Abs(c[n]) > 1e-16*a[n] {
		a[n+1] = (a[n] + b) / 2
		c[n+1] = (a[n] - b) / 2
		b = math.Sqrt(a[n] * b)
		n++
	}
	phi := math.Ldexp(a[n]*x, n)
	for k := n; k > 0; k-- {
		phi = (phi + math.Asin(c[k]/a[k]*math.Sin(phi))) / 2
	}
	sn, cn = math.Sincos(phi)
	dn = math.Sqrt(cn*cn + m1*sn*sn)
	return sn, cn, dn
}

// Deflection returns the deflection angle, radians, of light with impact
// parameter b that comes from and returns to infinity; NaN below the
// critical impact parameter. Source: Darwin (1959), in Carlson's form.
func Deflection(b float64) float64 {
	o := NewClosedOrbit(b)
	if !o.scattering {
		return math.NaN()
	}
	return 2*o.Sweep(0, o.u2) - math.Pi
}

// DeflectionAtPeriapsis is Deflection as a function of the periapsis r0 > 3.
func DeflectionAtPeriapsis(r0 float64) float64 {
	o := NewClosedOrbitFromPeriapsis(r0)
	return 2*o.Sweep(0, o.u2) - math.Pi
}
