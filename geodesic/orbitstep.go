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

// The same coefficients folded once: because u′ = w, a stage of u is
// u + c h w + h² Σ (A²)_ij f_j, so that only the f of earlier stages enter. The
// sums b·A are b_j (1 - c_j).
const (
	g31 = a32 * a21
	g41 = a42*a21 + a43*a31
	g42 = a43 * a32
	g51 = a52*a21 + a53*a31 + a54*a41
	g52 = a53*a32 + a54*a42
	g53 = a54 * a43
	g61 = a62*a21 + a63*a31 + a64*a41 + a65*a51
	g62 = a63*a32 + a64*a42 + a65*a52
	g63 = a64*a43 + a65*a53
	g64 = a65 * a54
	g71 = a71
	g73 = a73 * (1 - 3./10)
	g74 = a74 * (1 - 4./5)
	g75 = a75 * (1 - 8./9)
	eg1 = e3*a31 + e4*a41 + e5*a51 + e6*a61 + e7*a71
	eg2 = e3*a32 + e4*a42 + e5*a52 + e6*a62
	eg3 = e4*a43 + e5*a53 + e6*a63 + e7*a73
	eg4 = e5*a54 + e6*a64 + e7*a74
	eg5 = e6*a65 + e7*a75
	eg6 = e7 * a76
)

// try takes a step of length h from the end of the last one and returns the
// embedded estimates of the local error of u and w. The orbit's stages and
// end state are those of the trial; retry with another h or call accept.
func (o *orbit) try(h float64) (errU, errW float64) {
	u, w, curve := o.u0, o.w0, o.curve
	o.h = h
	hw, hh := h*w, h*h
	f1 := bend(u, curve)
	u2 := u + 1./5*hw
	f2 := bend(u2, curve)
	u3 := u + 3./10*hw + hh*(g31*f1)
	f3 := bend(u3, curve)
	u4 := u + 4./5*hw + hh*(g41*f1+g42*f2)
	f4 := bend(u4, curve)
	u5 := u + 8./9*hw + hh*(g51*f1+g52*f2+g53*f3)
	f5 := bend(u5, curve)
	u6 := u + hw + hh*(g61*f1+g62*f2+g63*f3+g64*f4)
	f6 := bend(u6, curve)
	u7 := u + hw + hh*(g71*f1+g73*f3+g74*f4+g75*f5)
	f7 := bend(u7, curve)
	o.us = [7]float64{u, u2, u3, u4, u5, u6, u7}
	o.fs = [7]float64{f1, f2, f3, f4, f5, f6, f7}
	o.u, o.w = u7, w+h*(a71*f1+a73*f3+a74*f4+a75*f5+a76*f6)
	errU = hh * (eg1*f1 + eg2*f2 + eg3*f3 + eg4*f4 + eg5*f5 + eg6*f6)
	errW = h * (e1*f1 + e3*f3 + e4*f4 + e5*f5 + e6*f6 + e7*f7)
	return errU, errW
}

// slopes returns w at the stages of the trial step.
func (o *orbit) slopes() [7]float64 {
	h, w, f := o.h, o.w0, &o.fs
	return [7]float64{
		w,
		w + h*(a21*f[0]),
		w + h*(a31*f[0]+a32*f[1]),
		w + h*(a41*f[0]+a42*f[1]+a43*f[2]),
		w + h*(a51*f[0]+a52*f[1]+a53*f[2]+a54*f[3]),
		w + h*(a61*f[0]+a62*f[1]+a63*f[2]+a64*f[3]+a65*f[4]),
		o.w,
	}
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
	for i, w := range o.slopes() {
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
	return quintic(theta, o.h, o.u0, o.u, o.w0, o.w, o.fs[0], o.fs[6])
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
