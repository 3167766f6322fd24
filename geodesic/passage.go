package geodesic

import "math"

// pass carries the path through the interior, from radius r, M, out to the
// edge, and puts the orbit there on an outward leg. w is du/dψ at r, as
// measured inside; the closest approach is still to come if it is positive.
// delay is that at r. It returns false if the path went past the orders asked
// for.
func (t *roundTracer) pass(r, w, delay float64) bool {
	s, o := t.spacetime, &t.orbit
	in, b := s.inside, o.b
	edge, wEdge := s.Edge(), s.edgeSpeed(b)
	wWithin := s.speedBelowEdge(b)
	half, halfSlope := in.Phase(b, edge, wWithin), in.PhaseSlope(b, edge, wWithin)
	if wWithin == 0 {
		halfSlope = 0 // it grazes: nothing of the path lies within
	}
	side := math.Copysign(1, -w)
	phi := side * in.Phase(b, r, math.Abs(w))
	var drift float64 // of phi with b at fixed ψ
	switch starts := t.within && o.psi == 0; {
	case starts && w != 0:
		drift = side * in.PhaseSlope(b, r, math.Abs(w))
	case !starts && o.w0 != 0:
		drift = o.p0/o.w0 - halfSlope
	}
	exit := o.psi + half - phi
	clock := delay - side*in.TimeTo(b, r, math.Abs(w))
	for t.target <= exit {
		at := phi + t.target - o.psi
		t.recordWithin(at, drift, clock+in.Time(b, at))
		if !t.nextOrder() {
			return false
		}
	}
	if phi < 0 {
		t.closest = min(t.closest, in.Radius(b, 0))
	}
	o.psi, o.u0, o.w0, o.leg = exit, s.edge, -wEdge, -1
	turn := halfSlope - drift // of the exit angle with b
	o.p0, o.q0 = wEdge*turn, 0
	if wEdge > 0 {
		o.q0 = 1/(b*b*b*wEdge) - bend(s.edge, o.curve)*turn
	}
	o.time0 = clock + in.TimeTo(b, edge, wWithin) - s.tortoise(s.edge)
	t.pace.restart(b)
	return exit <= t.limit
}

// edgeSpeed is |du/dψ| just outside the edge.
func (s *Round) edgeSpeed(b float64) float64 { return math.Sqrt(max(s.speed2(b, s.edge), 0)) }

// speedBelowEdge is |du/dψ| just inside the edge, where w √(-g_tt g_rr) has
// the value that it has outside, √(1/b² - A/r²).
func (s *Round) speedBelowEdge(b float64) float64 {
	r := s.Edge()
	return s.edgeSpeed(b) / (s.inside.Lapse(r) * s.inside.Ruler(r))
}

// halfSweep is the angle from the edge to the closest approach inside.
func (s *Round) halfSweep(b float64) float64 {
	return s.inside.Phase(b, s.Edge(), s.speedBelowEdge(b))
}

// speedWithin is |du/dψ| at r in the interior, from w² g_rr = 1/(b² A) - u².
func (s *Round) speedWithin(b, r float64) float64 {
	lapse := s.inside.Lapse(r)
	return math.Sqrt(max(1/(lapse*lapse*b*b)-1/(r*r), 0)) / s.inside.Ruler(r)
}

// slopeOf is df/db by a central difference, right to about 1e-10 where f is
// smooth over its step.
func slopeOf(b float64, f func(b float64) float64) float64 {
	const step = 1e-6 // relative
	return (f(b*(1+step)) - f(b*(1-step))) / (2 * step * b)
}

// recordWithin appends a crossing of the disk plane inside the edge, at angle
// phi from the closest approach; drift is dphi/db at fixed ψ.
func (t *roundTracer) recordWithin(phi, drift, delay float64) {
	s, out := t.spacetime, t.out
	b := t.orbit.b
	r := s.inside.Radius(b, phi)
	w := math.Copysign(s.speedWithin(b, r), -phi)
	t.place(Plane, t.order, t.target, r)
	if !t.want.NoKR {
		out.KR = append(out.KR, b*w)
	}
	if t.want.Delay {
		out.Delay = append(out.Delay, delay)
	}
	if t.want.Slope {
		atPhi := slopeOf(b, func(b float64) float64 { return s.inside.Radius(b, phi) })
		out.Slope = append(out.Slope, atPhi-r*r*w*drift)
	}
	// the interior itself is in closed form; what came before is not
	out.Bound = append(out.Bound, t.pace.local()*(1+math.Abs(b*drift))*r*math.Abs(w)+roundoff)
}
