package geodesic

import (
	"errors"
	"math"

	"gonum.org/v1/gonum/integrate/quad"
)

// ErrNoClosedForm: there is no closed form here for paths of this object or
// observer.
var ErrNoClosedForm = errors.New("no closed form")

// ClosedTracer finds crossings without integrating any path: radii and angles
// by elliptic integrals, delays by quadrature of dt/dψ along the closed form.
// It judges the other tracers; it is some ten times slower than they are.
type ClosedTracer struct {
	frame roundTracer // where things are; its orbit is not used
}

// ClosedTracer returns a tracer for a Schwarzschild hole or an opaque star
// and an observer outside; ErrNoClosedForm otherwise.
func (s *Round) ClosedTracer(o Observer, plan Plan) (*ClosedTracer, error) {
	t, err := s.newTracer(o, plan)
	if err != nil {
		return nil, err
	}
	if s.charge2 > 0 || s.inside != nil || t.uObs >= s.edge {
		return nil, ErrNoClosedForm
	}
	return &ClosedTracer{*t}, nil
}

// Cross implements Tracer. Slope is filled for star and sky only.
func (t *ClosedTracer) Cross(rays *Rays, want Want, out *Crossings) {
	out.Reset(rays.Len())
	f := &t.frame
	f.want, f.out = want, out
	for k := range rays.Lambda {
		if rays.Seen[k] {
			f.cosS, f.sinS = rays.CosS[k], rays.SinS[k]
			t.crossOne(max(rays.Impact(k), radial), rays.KR[k] < 0)
		}
		out.Start = append(out.Start, int32(len(out.R)))
	}
}

// course is a path in closed form, leg by leg.
type course struct {
	orbit   ClosedOrbit
	outward bool
	uObs    float64
	turn    float64 // swept angle at the turning point; +Inf if there is none
	uTurn   float64
	total   float64 // swept angle at the end
	uEnd    float64 // 0 on the sky
}

// course returns the path of impact parameter b.
func (t *ClosedTracer) course(b float64, outward bool) course {
	edge := t.frame.spacetime.edge
	c := course{orbit: NewClosedOrbit(b), outward: outward, uObs: t.frame.uObs, turn: math.Inf(1), uEnd: edge}
	o := &c.orbit
	switch {
	case o.scattering && c.uObs > (o.u2+o.u3)/2: // bound to the hole
		u3 := min(o.u3, c.uObs)
		c.total = o.Sweep(c.uObs, edge)
		if outward {
			c.turn, c.uTurn = o.Sweep(u3, c.uObs), u3
			c.total = c.turn + o.Sweep(u3, edge)
		}
	case outward:
		c.total, c.uEnd = o.Sweep(0, min(c.uObs, uMax(o))), 0
	case o.scattering && o.u2 <= edge:
		c.turn, c.uTurn = o.Sweep(min(c.uObs, o.u2), o.u2), o.u2
		c.total, c.uEnd = c.turn+o.Sweep(0, o.u2), 0
	default:
		c.total = o.Sweep(c.uObs, edge)
	}
	return c
}

// uMax is the largest inverse radius of an orbit that comes from outside.
func uMax(o *ClosedOrbit) float64 {
	if o.scattering {
		return o.u2
	}
	return math.Inf(1)
}

// at returns inverse radius and du/dψ at the swept angle psi.
func (t *ClosedTracer) at(c *course, psi float64) (u, w float64) {
	u = c.orbit.U(c.uObs, c.outward, psi)
	w = math.Sqrt(max(t.frame.spacetime.speed2(c.orbit.b, u), 0))
	if inward := !c.outward != (psi > c.turn); !inward {
		w = -w
	}
	return u, w
}

// delay is t_obs - t_em - r*(r_obs) at psi, M; for an infaller v_obs - t_em.
// With v = t + r*, light inward has dv/dψ = b/(1 + b|w|), as has t - r* for
// light outward: regular at infinity and at the horizon.
func (t *ClosedTracer) delay(c *course, psi, u float64) float64 {
	s, b := t.frame.spacetime, c.orbit.b
	rate := func(psi float64) float64 {
		_, w := t.at(c, psi)
		return b / (1 + b*math.Abs(w))
	}
	const nodes = 40
	piece := func(from, to float64) (sum float64) {
		parts := 1 + math.Floor((to-from)/0.5)
		for k := range int(parts) {
			width := (to - from) / parts
			sum += quad.Fixed(rate, from+float64(k)*width, from+float64(k+1)*width, nodes, nil, 0)
		}
		return sum
	}
	d := piece(0, min(psi, c.turn))
	if psi > c.turn {
		d += piece(c.turn, psi)
	}
	origin := 0.0
	if c.outward {
		origin = 2 * s.tortoise(c.uObs)
	}
	switch turned := psi > c.turn; {
	case !c.outward && !turned:
		d -= s.tortoise(u)
	case !c.outward:
		d += s.tortoise(u) - 2*s.tortoise(c.uTurn)
	case !turned:
		d += s.tortoise(u) - origin
	default:
		d += 2*s.tortoise(c.uTurn) - s.tortoise(u) - origin
	}
	if t.frame.observer.Motion == Infall {
		d += 2 * s.tortoise(c.uObs)
	}
	return d
}

func (t *ClosedTracer) crossOne(b float64, outward bool) {
	f := &t.frame
	c := t.course(b, outward)
	if f.plan.Plane {
		psi := f.firstAngle()
		for order := 0; order <= f.plan.MaxOrder && psi < c.total; order++ {
			u, w := t.at(&c, psi)
			t.record(&c, Plane, order, psi, u, w)
			psi += math.Pi
		}
	}
	if c.total > f.limit {
		return
	}
	w := math.Sqrt(max(f.spacetime.speed2(b, c.uEnd), 0))
	switch {
	case c.uEnd == 0 && f.plan.Sky:
		t.record(&c, Sky, orderOf(c.total), c.total, 0, -w)
	case c.uEnd > 0 && f.spacetime.end == OnSurface:
		t.record(&c, Star, orderOf(c.total), c.total, c.uEnd, w)
	}
}

// record appends a crossing.
func (t *ClosedTracer) record(c *course, surface Surface, order int, psi, u, w float64) {
	f, out, b := &t.frame, t.frame.out, c.orbit.b
	f.place(surface, order, psi, 1/u)
	if !f.want.NoKR {
		out.KR = append(out.KR, b*w)
	}
	if f.want.Delay {
		delay := math.NaN()
		if surface != Sky {
			delay = t.delay(c, psi, u)
		}
		out.Delay = append(out.Delay, delay)
	}
	if f.want.Slope {
		slope := math.NaN()
		if surface != Plane {
			step := 1e-5 * b * min(math.Abs(CriticalDistance(b)), 1)
			lo, hi := t.course(b-step, c.outward), t.course(b+step, c.outward)
			slope = (hi.total - lo.total) / (2 * step)
		}
		out.Slope = append(out.Slope, slope)
	}
	out.Bound = append(out.Bound, closedFormBound(b))
}
