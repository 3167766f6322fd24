package geodesic

import (
	"fmt"
	"math"
)

// roundTracer follows light paths one by one through a round spacetime. What
// relies on a path lying in a plane stays here.
type roundTracer struct {
	spacetime  *Round
	plan       Plan
	observer   Observer
	uObs       float64
	within     bool // the observer is inside the edge, in an Interior
	sinI, cosI float64
	tanI       float64 // +Inf edge-on
	azimuth    float64 // of the observer, radians
	origin     float64 // delay at the observer: -r*(r_obs), or r*(r_obs) for a falling one
	limit      float64 // swept angle up to which paths are followed
	orbit      orbit
	pace       pace

	// the ray in hand
	cosS, sinS float64
	target     float64 // swept angle of the next crossing of the disk plane
	order      int     // its image order
	tracing    bool    // a Story is wanted, not crossings
	closest    float64 // when tracing, the smallest radius at a turning point so far
	reach      float64 // the share of the trial step before it dips through the edge
	want       Want
	out        *Crossings
}

// Tracer implements Spacetime.
func (s *Round) Tracer(o Observer, plan Plan) (Tracer, error) { return s.newTracer(o, plan) }

func (s *Round) newTracer(o Observer, plan Plan) (*roundTracer, error) {
	if err := s.Check(o); err != nil {
		return nil, err
	}
	if !(plan.Tolerance >= MinTolerance && plan.Tolerance <= MaxTolerance) {
		return nil, fmt.Errorf("geodesic: tolerance %v: %w", plan.Tolerance, ErrTolerance)
	}
	if plan.MaxOrder < 0 || plan.MaxOrder > 9 {
		return nil, fmt.Errorf("geodesic: order %d: %w", plan.MaxOrder, ErrOrder)
	}
	t := &roundTracer{
		spacetime: s, plan: plan, observer: o,
		within:  s.inside != nil && o.Radius*s.edge < 1,
		azimuth: o.AzimuthDeg * math.Pi / 180,
		limit:   float64(plan.MaxOrder+1) * math.Pi,
		pace:    newPace(plan.Tolerance),
	}
	t.observer.Radius = max(o.Radius, centreRadius)
	t.uObs = 1 / t.observer.Radius
	t.sinI, t.cosI = SinCosDeg(o.InclinationDeg)
	t.tanI = math.Inf(1)
	if t.cosI != 0 {
		t.tanI = t.sinI / t.cosI
	}
	t.orbit.curve = 2 * s.charge2
	return t, nil
}

// maxSteps ends a path that would never end. A path to order 9 at the
// tightest tolerance takes a few hundred steps.
const maxSteps = 20000

// radial is the impact parameter, M, below which a path falls straight in and
// sweeps no angle that a float64 could tell; 1/b² would overflow soon after.
const radial = 1e-100

// Cross implements Tracer: the crossings of every ray with the wanted
// surfaces, orders 0 to MaxOrder, up to the horizon, an opaque surface or
// infinity, also beyond the observer's radius.
func (t *roundTracer) Cross(rays *Rays, want Want, out *Crossings) {
	out.Reset(rays.Len())
	t.want, t.out = want, out
	for k := range rays.Lambda {
		if rays.Seen[k] {
			t.cosS, t.sinS = rays.CosS[k], rays.SinS[k]
			t.crossOne(max(rays.Impact(k), radial), rays.KR[k])
		}
		out.Start = append(out.Start, int32(len(out.R)))
	}
}

// crossOne appends the crossings of the ray in hand.
func (t *roundTracer) crossOne(b, kr float64) {
	t.target, t.order = math.Inf(1), 0
	if t.plan.Plane {
		t.target = t.firstAngle()
	}
	switch end := t.follow(b, kr, 0); {
	case end == atStop && t.plan.Sky:
		t.finish(0)
		t.recordEnd(Sky)
	case end == atEdge && t.spacetime.end == OnSurface:
		t.finish(t.spacetime.edge)
		t.recordEnd(Star)
	}
}

// firstAngle is FirstPlaneAngle of the ray in hand; +Inf if the ray lies within
// the plane, which it then never crosses.
func (t *roundTracer) firstAngle() float64 {
	if t.cosI == 0 {
		if t.sinS == 0 {
			return math.Inf(1)
		}
		return math.Pi
	}
	return math.Pi/2 + math.Atan(t.tanI*t.sinS)
}

// ending says where a leg in the exterior ended.
type ending int

const (
	atEdge     ending = iota // inward, at the edge
	atStop                   // outward, at the radius asked for or at infinity
	pastOrders               // beyond the last order asked for
	lost                     // out of steps
)

// follow traces the ray in hand from the observer to its end: the edge, the
// inverse radius uStop on the way out, or past the orders asked for. The last
// step at an edge or a stop overshoots it: finish retakes it.
func (t *roundTracer) follow(b, kr, uStop float64) ending {
	s, o := t.spacetime, &t.orbit
	t.launch(b, kr)
	if t.within && !t.pass(t.observer.Radius, kr/b, t.origin) {
		return pastOrders
	}
	for {
		end := t.outside(uStop)
		if end != atEdge || s.inside == nil {
			return end
		}
		t.finish(s.edge)
		if !t.pass(s.Edge(), s.speedBelowEdge(b), o.time0-o.leg*s.tortoise(s.edge)) {
			return pastOrders
		}
	}
}

// launch puts the orbit at the observer.
func (t *roundTracer) launch(b, kr float64) {
	o, s := &t.orbit, t.spacetime
	*o = orbit{b: b, curve: o.curve, u0: t.uObs, w0: kr / b, leg: 1}
	if kr < 0 {
		o.leg = -1
	}
	if o.w0 != 0 { // the slope of w with b at fixed u; w² = 1/b² - u² A
		o.q0 = -1 / (b * b * b * o.w0)
	}
	if t.want.Delay {
		t.origin = -s.Tortoise(t.observer.Radius)
		switch {
		case t.uObs == 0: // Tortoise is infinite there, and the delay regular
			t.origin, o.time0 = math.Inf(-1), 0
		case t.observer.Motion != Infall:
			o.time0 = t.origin + o.leg*s.Tortoise(t.observer.Radius)
		case o.leg < 0: // v_obs - t_em less r*: nothing leans on r* at the observer
			o.time0 = 0
		default:
			o.time0 = -2 * t.origin
		}
	}
	t.pace.start(b)
	t.closest = math.Inf(1)
}

// outside integrates in the exterior until the path reaches the edge inward,
// uStop outward, or is past the orders asked for.
func (t *roundTracer) outside(uStop float64) ending {
	o, c, edge := &t.orbit, &t.pace, t.spacetime.edge
	for range maxSteps {
		h := c.h
		errU, errW := o.try(h)
		if !c.judge(h, errU, errW) {
			continue
		}
		t.ride()
		t.reach = 1
		if o.w0 > 0 && o.w <= 0 && (t.tracing || o.peak() >= edge) {
			// a turning point; it may dip through the edge and out again
			theta := o.locate(1, func(theta float64) float64 { return o.wAt(theta) })
			u := o.uAt(theta)
			if u >= edge {
				t.reach = theta
			} else {
				t.closest = min(t.closest, 1/u)
			}
		}
		for t.target <= o.psi+t.reach*o.h {
			theta := (t.target - o.psi) / o.h
			u := o.uAt(theta)
			if u <= 0 || u >= edge && o.wAt(theta) > 0 {
				break // infinity or the edge came first
			}
			if u < edge { // an observer within the horizon looks out through more
				t.recordPlane(theta, u)
			}
			if !t.nextOrder() {
				return pastOrders
			}
		}
		if t.reach < 1 || o.w > 0 && o.u >= edge {
			return atEdge
		}
		if o.w < 0 && o.u <= uStop {
			return atStop
		}
		if o.psi > t.limit {
			return pastOrders
		}
		o.accept()
	}
	return lost
}

// peak is an upper limit of u within a trial step that turns: it cannot rise
// beyond where the steeper of its ends points at its middle.
func (o *orbit) peak() float64 { return max(o.u0, o.u) + 0.5*o.h*max(o.w0, -o.w) }

// ride carries the riders over the trial step.
func (t *roundTracer) ride() {
	o := &t.orbit
	if t.want.Slope {
		o.rideSlope()
	} else {
		o.glideSlope()
	}
	if t.want.Delay {
		o.rideTime(t.spacetime)
	}
}

// nextOrder moves on to the next crossing of the plane; false when nothing
// more is asked for.
func (t *roundTracer) nextOrder() bool {
	t.order++
	t.target += math.Pi
	if t.order > t.plan.MaxOrder {
		t.target = math.Inf(1)
		return t.plan.Sky || t.spacetime.end == OnSurface
	}
	return true
}

// finish retakes the trial step so that it ends where the dense output
// reaches u = end, moves it along the orbit onto the exact end, and accepts
// it. The exact end is the point (end, w) with w² = 1/b² - u² A; going there
// by the nearest point of the orbit, and not by u alone, keeps the angle
// right on grazing paths, where w vanishes.
func (t *roundTracer) finish(end float64) {
	o := &t.orbit
	theta := o.locate(t.reach, func(theta float64) float64 { return o.uAt(theta) - end })
	o.try(o.h * theta)
	t.ride()
	o.accept()
	w := math.Copysign(math.Sqrt(max(t.spacetime.speed2(o.b, end), 0)), o.w0)
	pull := bend(o.u0, o.curve)
	if size := o.w0*o.w0 + pull*pull; size > 0 {
		rest := ((end-o.u0)*o.w0 + (w-o.w0)*pull) / size // radians
		o.psi += rest
		o.time0 += rest * o.b / (1 + o.b*math.Abs(o.w0))
	}
	o.u0, o.w0 = end, w
}

// locate finds the zero before hi of a dense-output function that changes
// sign within the trial step, by bisection to the last bit; it is called once
// or twice a path.
func (o *orbit) locate(hi float64, f func(theta float64) float64) float64 {
	lo := 0.0
	below := f(hi) < 0
	for range 60 {
		mid := (lo + hi) / 2
		if (f(mid) < 0) == below {
			hi = mid
		} else {
			lo = mid
		}
	}
	return hi
}

// recordPlane appends a crossing of the disk plane, at theta of the last
// step.
func (t *roundTracer) recordPlane(theta, u float64) {
	o, out := &t.orbit, t.out
	w, slope := o.wAt(theta), o.slopeAt(theta)
	t.place(Plane, t.order, t.target, 1/u)
	if !t.want.NoKR {
		out.KR = append(out.KR, o.b*w)
	}
	if t.want.Delay {
		out.Delay = append(out.Delay, o.timeAt(theta)-o.leg*t.spacetime.tortoise(u))
	}
	if t.want.Slope {
		out.Slope = append(out.Slope, -slope/(u*u))
	}
	out.Bound = append(out.Bound, t.pace.global(o.b, w, slope)/u)
}

// recordEnd appends the end of a path on a star or the sky, where the orbit
// stands after finish.
func (t *roundTracer) recordEnd(surface Surface) {
	o, out := &t.orbit, t.out
	if o.psi > t.limit {
		return
	}
	t.place(surface, orderOf(o.psi), o.psi, 1/o.u0)
	if !t.want.NoKR {
		out.KR = append(out.KR, o.b*o.w0)
	}
	if t.want.Delay {
		delay := math.NaN()
		if surface == Star {
			delay = o.time0 - o.leg*t.spacetime.tortoise(o.u0)
		}
		out.Delay = append(out.Delay, delay)
	}
	if t.want.Slope {
		out.Slope = append(out.Slope, -o.p0/o.w0)
	}
	out.Bound = append(out.Bound, t.angleBound())
}

// place appends what a crossing of any surface says about where it is.
func (t *roundTracer) place(surface Surface, order int, psi, r float64) {
	out := t.out
	out.Surface = append(out.Surface, surface)
	out.Order = append(out.Order, uint8(order))
	out.R = append(out.R, r)
	if t.want.NoPlace {
		return
	}
	cosTheta := 0.0
	if surface != Plane {
		sinPsi, cosPsi := math.Sincos(psi)
		cosTheta = cosPsi*t.cosI + sinPsi*t.sinS*t.sinI
	}
	out.CosTheta = append(out.CosTheta, cosTheta)
	out.Phi = append(out.Phi, wrapped(t.azimuth+PlaneAzimuth(t.sinI, t.cosI, t.cosS, t.sinS, psi)))
}

// orderOf is the image order of a swept angle psi > 0.
func orderOf(psi float64) int { return max(0, int(math.Ceil(psi/math.Pi))-1) }

// global bounds the error of u after the steps so far. A local error is a
// shift along the orbit plus a change of b, and both are carried on by
// w = ∂u/∂ψ and by slope = ∂u/∂b, which grows as 1/|b/b_c - 1| near the
// critical curve.
func (c *pace) global(b, w, slope float64) float64 {
	return c.local() * (2*(math.Abs(w)*min(b, 1/plungeScale)+1/max(b, 1/plungeScale)) + math.Abs(b*slope))
}

// angleBound bounds the swept angle, radians, after finish.
func (t *roundTracer) angleBound() float64 {
	o, c := &t.orbit, &t.pace
	pull := bend(o.u0, o.curve)
	size := o.w0*o.w0 + pull*pull
	slope := math.Abs(o.b*(o.p0*o.w0+o.q0*pull)) / size
	phase := 2 * (min(o.b, 1/plungeScale) + 1/(max(o.b, 1/plungeScale)*math.Sqrt(size)))
	return c.local() * (phase + slope)
}
