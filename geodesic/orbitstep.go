package geodesic

// orbit is the state of one path in its plane, u = 1/r against the swept
// angle ψ, and the stages of the step just taken. Two riders use the same
// stages without steering them: the regularised time and the slope ∂/∂b at
// fixed ψ.
type orbit struct {
	b      float64 // impact parameter
	curve  float64 // 2Q², the charge's share of the bending
	psi, h float64 // start of the last step, its length
	u, w   float64 // at the end of the last step; w = du/dψ
	u0, w0 float64 // at its start
	us     [7]float64
	ws     [7]float64 // du/dψ at the stages
	fs     [7]float64 // dw/dψ at the stages
	time   float64    // delay + leg · r*(r), see rideTime
	time0  float64
	leg    float64    // the sign of w at the start of the step
	ts     [7]float64 // dtime/dψ at the stages
	p, q   float64    // ∂u/∂b and ∂w/∂b at fixed ψ
	p0, q0 float64
	qs     [7]float64 // ∂w/∂b at the stages
}

// Coefficients of dormandPrince for the unrolled steps; tests compare the
// steps with the tableau.
const (
	a21 = 1. / 5
	a31 = 3. / 40
	a32 = 9. / 40
	a41 = 44. / 45
	a42 = -56. / 15
	a43 = 32. / 9
	a51 = 19372. / 6561
	a52 = -25360. / 2187
	a53 = 64448. / 6561
	a54 = -212. / 729
	a61 = 9017. / 3168
	a62 = -355. / 33
	a63 = 46732. / 5247
	a64 = 49. / 176
	a65 = -5103. / 18656
	a71 = 35. / 384
	a73 = 500. / 1113
	a74 = 125. / 192
	a75 = -2187. / 6784
	a76 = 11. / 84
	e1  = 71. / 57600
	e3  = -71. / 16695
	e4  = 71. / 1920
	e5  = -17253. / 339200
	e6  = 22. / 525
	e7  = -1. / 40
	d1  = -12715105075. / 11282082432
	d3  = 87487479700. / 32700410799
	d4  = -10690763975. / 1880347072
	d5  = 701980252875. / 199316789632
	d6  = -1453857185. / 822651844
	d7  = 69997945. / 29380423
)

// bend is u″ = -u + 3u² - 2Q² u³ in the exterior (Darwin 1959; with charge,
// Chandrasekhar 1983, section 40), curve = 2Q².
func bend(u, curve float64) float64 { return u * (u*(3-curve*u) - 1) }

// tide is ∂u″/∂u = -1 + 6u - 6Q² u².
func tide(u, curve float64) float64 { return u*(6-3*curve*u) - 1 }

// try takes a step of length h from the end of the last one and returns the
// embedded estimates of the local error of u and w. The orbit's stages and
// end state are those of the trial; retry with another h or call accept.
func (o *orbit) try(h float64) (errU, errW float64) {
	u, w, curve := o.u0, o.w0, o.curve
	o.h = h
	w1, f1 := w, bend(u, curve)
	u2, w2 := u+h*(a21*w1), w+h*(a21*f1)
	f2 := bend(u2, curve)
	u3, w3 := u+h*(a31*w1+a32*w2), w+h*(a31*f1+a32*f2)
	f3 := bend(u3, curve)
	u4, w4 := u+h*(a41*w1+a42*w2+a43*w3), w+h*(a41*f1+a42*f2+a43*f3)
	f4 := bend(u4, curve)
	u5, w5 := u+h*(a51*w1+a52*w2+a53*w3+a54*w4), w+h*(a51*f1+a52*f2+a53*f3+a54*f4)
	f5 := bend(u5, curve)
	u6, w6 := u+h*(a61*w1+a62*w2+a63*w3+a64*w4+a65*w5), w+h*(a61*f1+a62*f2+a63*f3+a64*f4+a65*f5)
	f6 := bend(u6, curve)
	u7, w7 := u+h*(a71*w1+a73*w3+a74*w4+a75*w5+a76*w6), w+h*(a71*f1+a73*f3+a74*f4+a75*f5+a76*f6)
	f7 := bend(u7, curve)
	o.us = [7]float64{u, u2, u3, u4, u5, u6, u7}
	o.ws = [7]float64{w1, w2, w3, w4, w5, w6, w7}
	o.fs = [7]float64{f1, f2, f3, f4, f5, f6, f7}
	o.u, o.w = u7, w7
	errU = h * (e1*w1 + e3*w3 + e4*w4 + e5*w5 + e6*w6 + e7*w7)
	errW = h * (e1*f1 + e3*f3 + e4*f4 + e5*f5 + e6*f6 + e7*f7)
	return errU, errW
}

// accept makes the end of the last trial the start of the next step.
func (o *orbit) accept() {
	o.psi += o.h
	o.u0, o.w0 = o.u, o.w
	o.time0 = o.time
	o.p0, o.q0 = o.p, o.q
}

// rideTime carries the regularised time over the trial step. On a leg with
// w > 0 it is the delay plus r*(r), of which
// d/dψ = (1/b - w)/(u² A) = b/(1 + b w)
// stays finite at infinity and at the horizon; with w < 0 it is the delay
// less r*(r), d/dψ = b/(1 - b w).
func (o *orbit) rideTime(s *Round) {
	leg := 1.0
	if o.w0 < 0 {
		leg = -1
	}
	if leg != o.leg { // here u is far from both ends: the path is at its turning point
		o.time0 -= 2 * o.leg * s.tortoise(o.u0)
		o.leg = leg
	}
	bl := o.b * leg
	k := &o.ts
	for i, w := range o.ws {
		k[i] = o.b / (1 + bl*w)
	}
	o.time = o.time0 + o.h*(a71*k[0]+a73*k[2]+a74*k[3]+a75*k[4]+a76*k[5])
}

// rideSlope carries ∂u/∂b and ∂w/∂b at fixed ψ over the trial step:
// p′ = q, q′ = (∂u″/∂u) p.
func (o *orbit) rideSlope() {
	h, p, q, curve := o.h, o.p0, o.q0, o.curve
	q1, s1 := q, tide(o.us[0], curve)*p
	q2, s2 := q+h*(a21*s1), tide(o.us[1], curve)*(p+h*(a21*q1))
	q3, s3 := q+h*(a31*s1+a32*s2), tide(o.us[2], curve)*(p+h*(a31*q1+a32*q2))
	q4, s4 := q+h*(a41*s1+a42*s2+a43*s3), tide(o.us[3], curve)*(p+h*(a41*q1+a42*q2+a43*q3))
	q5, s5 := q+h*(a51*s1+a52*s2+a53*s3+a54*s4), tide(o.us[4], curve)*(p+h*(a51*q1+a52*q2+a53*q3+a54*q4))
	q6, s6 := q+h*(a61*s1+a62*s2+a63*s3+a64*s4+a65*s5), tide(o.us[5], curve)*(p+h*(a61*q1+a62*q2+a63*q3+a64*q4+a65*q5))
	o.p = p + h*(a71*q1+a73*q3+a74*q4+a75*q5+a76*q6)
	o.q = q + h*(a71*s1+a73*s3+a74*s4+a75*s5+a76*s6)
	o.qs = [7]float64{q, q2, q3, q4, q5, q6, o.q}
}

// glideSlope is rideSlope with the coefficient ∂u″/∂u frozen at its mean over
// the step, right to about a percent: enough for a bound.
func (o *orbit) glideSlope() {
	mean := (tide(o.u0, o.curve) + tide(o.u, o.curve)) / 2
	z := mean * o.h * o.h
	even := 1 + z*(1./2+z*(1./24)) // cosh √z
	odd := o.h * (1 + z*(1./6+z*(1./120)))
	o.p = o.p0*even + o.q0*odd
	o.q = o.p0*mean*odd + o.q0*even
}

// quartic is the dense output's row d applied to stage derivatives.
func quartic(h float64, k *[7]float64) float64 {
	return h * (d1*k[0] + d3*k[2] + d4*k[3] + d5*k[4] + d6*k[5] + d7*k[6])
}

// The dense output of the trial step at theta in [0, 1].

// uAt takes the quintic through u, w and u″ at both ends instead, one order
// better than the pair's own dense output because u″ is known there.
func (o *orbit) uAt(theta float64) float64 {
	return quintic(theta, o.h, o.u0, o.u, o.ws[0], o.ws[6], o.fs[0], o.fs[6])
}

func (o *orbit) wAt(theta float64) float64 {
	return dense(theta, o.h, o.w0, o.w, o.fs[0], o.fs[6], quartic(o.h, &o.fs))
}

func (o *orbit) timeAt(theta float64) float64 {
	return dense(theta, o.h, o.time0, o.time, o.ts[0], o.ts[6], quartic(o.h, &o.ts))
}

func (o *orbit) slopeAt(theta float64) float64 {
	return quintic(theta, o.h, o.p0, o.p, o.q0, o.q, tide(o.u0, o.curve)*o.p0, tide(o.u, o.curve)*o.p)
}
