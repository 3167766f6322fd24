package geodesic

// tableau is an embedded explicit Runge–Kutta pair with its dense output,
// laid out as printed.
type tableau struct {
	c    [7]float64
	a    [7][6]float64
	b    [7]float64 // fifth order; the last stage is the next step's first
	e    [7]float64 // b minus the fourth-order weights
	d    [7]float64 // quartic term of the dense output
	name string
}

// dormandPrince is RK5(4)7M: Dormand & Prince, J. Comput. Appl. Math. 6, 19
// (1980), table 2. The dense-output row d is Shampine's, as given in Hairer,
// Nørsett & Wanner, Solving Ordinary Differential Equations I, 2nd ed.
// (1993), section II.6, and used in their code. Digits from memory; the
// order conditions in the tests prove every one of them.
var dormandPrince = tableau{
	name: "Dormand–Prince 5(4)",
	c:    [7]float64{0, 1. / 5, 3. / 10, 4. / 5, 8. / 9, 1, 1},
	a: [7][6]float64{
		{},
		{1. / 5},
		{3. / 40, 9. / 40},
		{44. / 45, -56. / 15, 32. / 9},
		{19372. / 6561, -25360. / 2187, 64448. / 6561, -212. / 729},
		{9017. / 3168, -355. / 33, 46732. / 5247, 49. / 176, -5103. / 18656},
		{35. / 384, 0, 500. / 1113, 125. / 192, -2187. / 6784, 11. / 84},
	},
	b: [7]float64{35. / 384, 0, 500. / 1113, 125. / 192, -2187. / 6784, 11. / 84, 0},
	e: [7]float64{
		71. / 57600, 0, -71. / 16695, 71. / 1920,
		-17253. / 339200, 22. / 525, -1. / 40,
	},
	d: [7]float64{
		-12715105075. / 11282082432, 0, 87487479700. / 32700410799,
		-10690763975. / 1880347072, 701980252875. / 199316789632,
		-1453857185. / 822651844, 69997945. / 29380423,
	},
}

// step advances y by h with the derivative f, as the printed method says,
// and returns the new state, the difference to the fourth-order solution and
// the quartic coefficients of the dense output. It is the oracle that the
// unrolled steps are tested against.
func (tb *tableau) step(y []float64, h float64, f func(y []float64) []float64) (next, diff, quartic []float64) {
	n := len(y)
	var k [7][]float64
	for i := range k {
		yi := append([]float64(nil), y...)
		for j := range i {
			for l := range yi {
				yi[l] += h * tb.a[i][j] * k[j][l]
			}
		}
		k[i] = f(yi)
	}
	next = append([]float64(nil), y...)
	diff = make([]float64, n)
	quartic = make([]float64, n)
	for i := range k {
		for l := range next {
			next[l] += h * tb.b[i] * k[i][l]
			diff[l] += h * tb.e[i] * k[i][l]
			quartic[l] += h * tb.d[i] * k[i][l]
		}
	}
	return next, diff, quartic
}

// dense interpolates within one step: theta in [0, 1], y0 and y1 the values
// and f0 and f1 the derivatives at its ends, quartic the coefficient from
// row d times h. Hairer, Nørsett & Wanner (1993), section II.6.
func dense(theta, h, y0, y1, f0, f1, quartic float64) float64 {
	dy := y1 - y0
	bend := h*f0 - dy
	return y0 + theta*(dy+(1-theta)*(bend+theta*(dy-h*f1-bend+(1-theta)*quartic)))
}

// quintic is Hermite's interpolation from values y, first derivatives f and
// second derivatives g at both ends of a step of length h.
func quintic(theta, h, y0, y1, f0, f1, g0, g1 float64) float64 {
	v0, v1 := h*f0, h*f1
	a0, a1 := 0.5*h*h*g0, 0.5*h*h*g1
	d := y1 - y0 - v0 - a0
	e := v1 - v0 - 2*a0
	s := a1 - a0
	c3 := 10*d - 4*e + s
	c4 := -15*d + 7*e - 2*s
	c5 := 6*d - 3*e + s
	return y0 + theta*(v0+theta*(a0+theta*(c3+theta*(c4+theta*c5))))
}
