package geodesic

import (
	"fmt"
	"math"
	"testing"
)

// orderConditions returns how far the weights w are from the order
// conditions of all rooted trees up to the given order, scaled to a step of
// length theta (1 for a whole step). Source: Butcher, Numerical Methods for
// Ordinary Differential Equations, 2nd ed. (2008), table 310 (from memory).
func orderConditions(tb *tableau, w [7]float64, theta float64, order int) []float64 {
	apply := func(v [7]float64) (out [7]float64) { // A v
		for i, row := range tb.a {
			for j, a := range row {
				out[i] += a * v[j]
			}
		}
		return out
	}
	times := func(v, u [7]float64) (out [7]float64) {
		for i := range v {
			out[i] = v[i] * u[i]
		}
		return out
	}
	one := [7]float64{1, 1, 1, 1, 1, 1, 1}
	c := tb.c
	cc, ac := times(c, c), apply(c)
	ccc := times(cc, c)
	acc, aac := apply(cc), apply(ac)
	trees := []struct {
		order   int
		phi     [7]float64
		density float64
	}{
		{1, one, 1},
		{2, c, 2},
		{3, cc, 3}, {3, ac, 6},
		{4, ccc, 4}, {4, times(c, ac), 8}, {4, acc, 12}, {4, aac, 24},
		{5, times(ccc, c), 5}, {5, times(cc, ac), 10}, {5, times(ac, ac), 20},
		{5, times(c, acc), 15}, {5, apply(ccc), 20}, {5, times(c, aac), 30},
		{5, apply(times(c, ac)), 40}, {5, apply(acc), 60}, {5, apply(aac), 120},
	}
	var off []float64
	for _, tree := range trees {
		if tree.order > order {
			continue
		}
		sum := 0.0
		for i := range w {
			sum += w[i] * tree.phi[i]
		}
		off = append(off, sum-math.Pow(theta, float64(tree.order))/tree.density)
	}
	return off
}

// denseWeights returns b_i(theta) of the dense output as dense evaluates it.
func denseWeights(tb *tableau, theta float64) (w [7]float64) {
	for i := range w {
		var f0, f1 float64
		if i == 0 {
			f0 = 1
		}
		if i == 6 {
			f1 = 1
		}
		w[i] = dense(theta, 1, 0, tb.b[i], f0, f1, tb.d[i])
	}
	return w
}

// tableauFaults lists what is wrong with a tableau.
func tableauFaults(tb *tableau) (faults []string) {
	const fewUlps = 5e-15 // coefficients up to 12 enter sums of six terms
	check := func(what string, off float64) {
		if !(math.Abs(off) <= fewUlps) {
			faults = append(faults, fmt.Sprintf("%s is off by %g", what, off))
		}
	}
	for i, row := range tb.a {
		sum := 0.0
		for _, a := range row {
			sum += a
		}
		check(fmt.Sprintf("row sum %d", i+1), sum-tb.c[i])
	}
	for j := range 6 { // first same as last
		check("last row", tb.a[6][j]-tb.b[j])
	}
	var low [7]float64
	for i := range low {
		low[i] = tb.b[i] - tb.e[i]
	}
	for k, off := range orderConditions(tb, tb.b, 1, 5) {
		check(fmt.Sprintf("fifth-order condition %d", k+1), off)
	}
	for k, off := range orderConditions(tb, low, 1, 4) {
		check(fmt.Sprintf("fourth-order condition %d", k+1), off)
	}
	for _, theta := range []float64{0.2, 0.5, 0.9} {
		for k, off := range orderConditions(tb, denseWeights(tb, theta), theta, 4) {
			check(fmt.Sprintf("dense condition %d at %g", k+1, theta), off)
		}
	}
	return faults
}

func TestTableauOrderConditions(t *testing.T) {
	for _, fault := range tableauFaults(&dormandPrince) {
		t.Error(fault)
	}
}

// A wrong ninth digit does not crash, it costs an order: every single
// coefficient must be caught when it is off by 1e-6.
func TestTableauFaultsAreCaught(t *testing.T) {
	perturbed := 0
	try := func(what string, change func(tb *tableau) *float64) {
		tb := dormandPrince
		p := change(&tb)
		if *p == 0 {
			return
		}
		*p += 1e-6
		perturbed++
		if len(tableauFaults(&tb)) == 0 {
			t.Errorf("%s off by 1e-6 passes all checks", what)
		}
	}
	for i := range 7 {
		try(fmt.Sprintf("c%d", i+1), func(tb *tableau) *float64 { return &tb.c[i] })
		try(fmt.Sprintf("b%d", i+1), func(tb *tableau) *float64 { return &tb.b[i] })
		try(fmt.Sprintf("e%d", i+1), func(tb *tableau) *float64 { return &tb.e[i] })
		try(fmt.Sprintf("d%d", i+1), func(tb *tableau) *float64 { return &tb.d[i] })
		for j := range 6 {
			try(fmt.Sprintf("a%d%d", i+1, j+1), func(tb *tableau) *float64 { return &tb.a[i][j] })
		}
	}
	if want := 6 + 5 + 6 + 6 + 20; perturbed != want {
		t.Errorf("perturbed %d coefficients, want %d", perturbed, want)
	}
}

// The unrolled step, its riders and its dense output against the tableau.
func TestUnrolledStep(t *testing.T) {
	const b, h, fewUlps = 5.3, 0.21, 2e-15
	rhs := func(y []float64) []float64 { // u, w, time, ∂u/∂b, ∂w/∂b
		return []float64{y[1], 3*y[0]*y[0] - y[0], b / (1 + b*y[1]), y[4], (6*y[0] - 1) * y[3]}
	}
	start := []float64{0.11, 0.13, 0.7, 0.02, -0.05}
	next, diff, quart := dormandPrince.step(start, h, rhs)
	o := orbit{b: b, u0: start[0], w0: start[1], time0: start[2], p0: start[3], q0: start[4], leg: 1}
	errU, errW := o.try(h)
	o.rideTime(schwarzschild)
	o.rideSlope()
	for k, got := range []float64{o.u, o.w, o.time, o.p, o.q} {
		near(t, fmt.Sprintf("state %d", k), got, next[k], fewUlps)
	}
	near(t, "error of u", errU, diff[0], fewUlps)
	near(t, "error of w", errW, diff[1], fewUlps)
	f0, f1 := rhs(start), rhs(next)
	for _, theta := range []float64{0.1, 0.5, 0.8, 1} {
		want := func(k int) float64 { return dense(theta, h, start[k], next[k], f0[k], f1[k], quart[k]) }
		near(t, "dense w", o.wAt(theta), want(1), fewUlps)
		near(t, "dense time", o.timeAt(theta), want(2), fewUlps)
		// the quintics agree with the pair's own dense output to its order
		near(t, "u by the quintic", o.uAt(theta), want(0), 1e-6)
		near(t, "∂u/∂b by the quintic", o.slopeAt(theta), want(3), 1e-6)
	}
	exact := o.p
	o.glideSlope()
	near(t, "glided slope", o.p, exact, 0.01*math.Abs(exact))
}

// The error of paths integrated with fixed steps falls as h⁵, at the end as
// between the steps, where the quintic is of order h⁶.
func TestConvergenceOrder(t *testing.T) {
	const sweep = 2.5
	rms := func(steps int) (atEnd, between float64) {
		for b := 5.5; b < 12; b += 0.25 {
			closed := NewClosedOrbit(b)
			o := launched(0, b)
			h := sweep / float64(steps)
			for range steps {
				o.try(h)
				between += math.Pow(o.uAt(0.5)-closed.U(0, false, o.psi+h/2), 2)
				o.accept()
			}
			atEnd += math.Pow(o.u-closed.U(0, false, sweep), 2)
		}
		return math.Sqrt(atEnd), math.Sqrt(between / float64(steps))
	}
	const coarse, fine = 40, 80
	end1, between1 := rms(coarse)
	end2, between2 := rms(fine)
	near(t, "slope at the end", math.Log2(end1/end2), 5, 0.4)
	near(t, "slope between steps", math.Log2(between1/between2), 5, 0.4)
}

// launched is an orbit that leaves inverse radius u inward.
func launched(u, b float64) *orbit {
	w := math.Sqrt(1/(b*b) - u*u*(1-2*u))
	return &orbit{b: b, u0: u, w0: w, q0: -1 / (b * b * b * w), leg: 1}
}

func TestStepAllocatesNothing(t *testing.T) {
	o := launched(0, 6)
	if n := testing.AllocsPerRun(100, func() {
		o.try(0.1)
		o.rideTime(schwarzschild)
		o.rideSlope()
	}); n != 0 {
		t.Errorf("a step allocates %v times, want 0", n)
	}
}

func TestRoughPowers(t *testing.T) {
	for x := 1e-10; x < 1e10; x *= 1.37 {
		near(t, fmt.Sprintf("log2 %g", x), roughLog2(x), math.Log2(x), 0.01)
		y := math.Log2(x)
		near(t, fmt.Sprintf("exp2 %g", y), roughExp2(y)/math.Exp2(y), 1, 0.01)
	}
}
