package geodesic

import "math"

// phase is the angle from the closest approach at which an observer within
// the edge stands on its path: before it (negative) if the path is traced
// inward first, kr > 0.
func (t *roundTracer) phase(b, kr float64) float64 {
	phi := t.spacetime.inside.Phase(b, t.observer.Radius, math.Abs(kr)/b)
	if kr > 0 {
		return -phi
	}
	return phi
}

// pass carries the path through the interior, from the angle phi before or
// after its closest approach out to the edge, and puts the orbit there on an
// outward leg. delay is that at phi. It returns false if the path went past
// the orders asked for.
func (t *roundTracer) pass(phi, delay float64) bool {
	s, o := t.spacetime, &t.orbit
	in, b := s.inside, o.b
	w := s.edgeSpeed(b)
	half := in.HalfSweep(b, w)
	halfSlope := slopeOf(b, func(b float64) float64 { return in.HalfSweep(b, s.edgeSpeed(b)) })
	var drift float64 // of phi with b at fixed ψ
	if starts := t.within && o.psi == 0; starts {
		drift = math.Copysign(1, phi) * slopeOf(b, t.phaseOf)
	} else if o.w0 != 0 {
		drift = o.p0/o.w0 - halfSlope
	}
	exit := o.psi + half - phi
	clock := delay - in.Time(b, phi)
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
	o.psi, o.u0, o.w0, o.leg = exit, s.edge, -w, -1
	turn := halfSlope - drift // of the exit angle with b
	o.p0, o.q0 = w*turn, 0
	if w > 0 {
		o.q0 = 1/(b*b*b*w) - bend(s.edge, o.curve)*turn
	}
	o.time0 = clock + in.Time(b, half) - s.tortoise(s.edge)
	t.pace.restart(b)
	return exit <= t.limit
}

// edgeSpeed is |du/dψ| just outside the edge.
func (s *Round) edgeSpeed(b float64) float64 { return math.Sqrt(max(s.speed2(b, s.edge), 0)) }

// speedWithin is |du/dψ| at r in the interior, from w² g_rr = 1/(b² A) - u².
func (s *Round) speedWithin(b, r float64) float64 {
	lapse := s.inside.Lapse(r)
	return math.Sqrt(max(1/(lapse*lapse*b*b)-1/(r*r), 0)) / s.inside.Ruler(r)
}

// phaseOf is the size of phase for another impact parameter.
func (t *roundTracer) phaseOf(b float64) float64 {
	r := t.observer.Radius
	return t.spacetime.inside.Phase(b, r, t.spacetime.speedWithin(b, r))
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
