package geodesic

import "math"

// clockRider carries the regularised time of rideTime, and its slope with v,
// along an orbit of a table:
//
//	dtime/dψ = 1/(e + leg w),  e = 1/b,
//
// and its derivative by v, with de/dv = v/e at fixed observer.
type clockRider struct {
	clock
	object   *Round
	inverse  float64 // e
	inverseV float64 // de/dv
}

// newClockRider starts at the observer, whose delay is -r*(r_obs), or
// r*(r_obs) in free fall; see launch.
func newClockRider(t *roundTracer, v float64) clockRider {
	s := t.spacetime
	c := clockRider{object: s, clock: clock{leg: t.orbit.leg}}
	c.inverse = math.Sqrt(v*v + t.uObs*t.uObs*s.lapse2(t.uObs))
	c.inverseV = v / c.inverse
	if t.uObs == 0 {
		return c
	}
	origin := -s.Tortoise(t.observer.Radius)
	switch {
	case t.observer.Motion != Infall:
		c.time = origin - c.leg*origin
	case c.leg > 0:
		c.time = -2 * origin
	}
	return c
}

// advance carries the clock over the trial step of o; see rideTime.
func (c *clockRider) advance(o *orbit) {
	leg := 1.0
	if o.w0 < 0 {
		leg = -1
	}
	if leg != c.leg {
		c.clock = c.clock.as(leg, c.object, o.u0, o.p0)
	}
	var rate, rateV [7]float64
	for i, w := range o.slopes() {
		rate[i] = 1 / (c.inverse + leg*w)
		rateV[i] = -(c.inverseV + leg*o.qs[i]) * rate[i] * rate[i]
	}
	c.time += o.h * (a71*rate[0] + a73*rate[2] + a74*rate[3] + a75*rate[4] + a76*rate[5])
	c.slope += o.h * (a71*rateV[0] + a73*rateV[2] + a74*rateV[3] + a75*rateV[4] + a76*rateV[5])
}

// as converts the clock of a point at u, with ∂u/∂v = p, to the other leg's
// form: time is delay + leg r*(u), dr*/du = -1/(u² A).
func (c clock) as(leg float64, s *Round, u, p float64) clock {
	if leg == c.leg {
		return c
	}
	change := leg - c.leg
	c.time += change * s.tortoise(u)
	c.slope -= change * p / (u * u * s.lapse2(u))
	c.leg = leg
	return c
}

// delay interpolates the delay in a cell at share s of the way to the next
// row, where the path is at u. Between rows it interpolates time/b: in flat
// space time itself is b tan(ψ/2), and wide paths' rows are far apart in b.
func (tb *OrbitTable) delay(c *cell, s, u float64) float64 {
	i := c.row*tb.knots + c.knot
	leg := tb.times[i].leg
	va, vn := tb.v[c.row], tb.v[c.row+1]
	ta, sa := tb.timeAlong(i, c.a, c.theta, leg, va)
	tn, sn := tb.timeAlong(i+tb.knots, c.b, c.theta, leg, vn)
	ea, en := tb.perB(va), tb.perB(vn)
	scaled := cubic(s, ea*ta, en*tn, (ea*sa+ta*va/ea)*c.dv, (en*sn+tn*vn/en)*c.dv)
	return scaled/tb.perB(va+s*c.dv) - leg*tb.object.tortoise(u)
}

// perB is 1/b of the path with that slope at the observer; d(1/b)/dv = v b.
func (tb *OrbitTable) perB(v float64) float64 {
	return math.Sqrt(v*v + tb.uObs*tb.uObs*tb.object.lapse2(tb.uObs))
}

// timeAlong interpolates time and its slope within one row, time by the
// quintic, with its rate 1/(e + leg w) and that rate's change.
func (tb *OrbitTable) timeAlong(i int, n *[2]node, theta, leg, v float64) (time, slope float64) {
	s := tb.object
	e := tb.perB(v)
	curve := 2 * s.charge2
	var at [2]clock
	var rate, bent, rateV [2]float64
	for k := range at {
		at[k] = tb.times[i+k].as(leg, s, n[k].u, n[k].p)
		rate[k] = 1 / (e + leg*n[k].w)
		bent[k] = -leg * bend(n[k].u, curve) * rate[k] * rate[k]
		rateV[k] = -(v/e + leg*n[k].q) * rate[k] * rate[k]
	}
	time = quintic(theta, tb.step, at[0].time, at[1].time, rate[0], rate[1], bent[0], bent[1])
	slope = cubic(theta, at[0].slope, at[1].slope, tb.step*rateV[0], tb.step*rateV[1])
	return time, slope
}
