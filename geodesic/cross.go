package geodesic

import "math"

// planeTracer follows Schwarzschild light paths one by one to their
// crossings of the disk plane. What relies on a path lying in a plane stays
// in this file.
type planeTracer struct {
	plan       Plan
	uObs       float64
	sinI, cosI float64
	azimuth    float64 // of the observer, radians
	orbit      orbit
	pace       pace
}

// maxSteps ends a path that would never end. A path to order 9 at the
// tightest tolerance takes a few hundred steps.
const maxSteps = 20000

// radial is the impact parameter, M, below which a path falls straight in and
// sweeps no angle that a float64 could tell; 1/b² would overflow soon after.
const radial = 1e-100

// Cross implements Tracer: the crossings of every ray with the disk plane,
// orders 0 to MaxOrder, up to the horizon or infinity, also beyond the
// observer's radius.
func (t *planeTracer) Cross(rays *Rays, want Want, out *Crossings) {
	out.Reset(rays.Len())
	for k := range rays.Lambda {
		if b := rays.Impact(k); rays.SignR[k] != 0 && b > radial {
			t.crossOne(rays, k, b, want, out)
		}
		out.Start = append(out.Start, int32(len(out.R)))
	}
}

// launch puts the orbit at the observer with impact parameter b.
func (o *orbit) launch(uObs, b float64, outward bool) {
	*o = orbit{b: b, u0: uObs, leg: 1}
	if outward {
		o.leg = -1
	}
	// w² = 1/b² - u²(1 - 2u), and its slope with b at fixed u
	square := 1/(b*b) - uObs*uObs*(1-2*uObs)
	o.w0 = o.leg * math.Sqrt(max(square, 0))
	if outward {
		o.time0 = -2 * tortoise(uObs)
	}
	if o.w0 != 0 {
		o.q0 = -1 / (b * b * b * o.w0)
	}
}

// crossOne appends the crossings of ray k.
func (t *planeTracer) crossOne(rays *Rays, k int, b float64, want Want, out *Crossings) {
	o, c := &t.orbit, &t.pace
	o.launch(t.uObs, b, rays.SignR[k] > 0)
	c.start(b)
	cosS, sinS := rays.CosS[k], rays.SinS[k]
	target := FirstPlaneAngle(t.sinI, t.cosI, sinS)
	order := 0
	for range maxSteps {
		h := c.h
		errU, errW := o.try(h)
		if !c.judge(h, errU, errW) {
			continue
		}
		if want.DrDb {
			o.rideSlope()
		} else {
			o.glideSlope()
		}
		if want.Delay {
			o.rideTime()
		}
		for target <= o.psi+o.h {
			theta := (target - o.psi) / o.h
			u := o.uAt(theta)
			if !(u > 0 && u < 0.5) {
				return // infinity or the horizon came first
			}
			t.record(theta, u, target, order, cosS, sinS, want, out)
			if order++; order > t.plan.MaxOrder {
				return
			}
			target += math.Pi
		}
		if !(o.u > 0 && o.u < 0.5) {
			return
		}
		o.accept()
	}
}

// record appends one crossing, found at theta of the last step.
func (t *planeTracer) record(theta, u, psi float64, order int, cosS, sinS float64, want Want, out *Crossings) {
	o := &t.orbit
	w := o.wAt(theta)
	slope := o.slopeAt(theta)
	out.Surface = append(out.Surface, Plane)
	out.Order = append(out.Order, uint8(order))
	out.R = append(out.R, 1/u)
	out.Phi = append(out.Phi, wrapped(t.azimuth+PlaneAzimuth(t.sinI, t.cosI, cosS, sinS, psi)))
	out.KR = append(out.KR, o.b*w)
	if want.Delay {
		out.Delay = append(out.Delay, o.timeAt(theta)-o.leg*tortoise(u))
	}
	if want.DrDb {
		out.DrDb = append(out.DrDb, -slope/(u*u))
	}
	out.Bound = append(out.Bound, t.pace.global(o.b, w, slope)/u)
}

// global bounds the error of u after the steps so far. A local error is a
// shift along the orbit plus a change of b, and both are carried on by
// w = ∂u/∂ψ and by slope = ∂u/∂b, which grows as 1/|b/b_c - 1| near the
// critical curve.
func (c *pace) global(b, w, slope float64) float64 {
	return c.local() * (2*(math.Abs(w)*min(b, 1/plungeScale)+1/max(b, 1/plungeScale)) + math.Abs(b*slope))
}
