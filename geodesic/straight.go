package geodesic

import "math"

// Straight is what a round spacetime would look like if light went straight
// through flat space, to show what bending does: the same lines of sight,
// paths by Euclid's geometry in the radius r. A horizon or an opaque surface
// hides what lies behind it, as a ball; light passes through everything else.
// Observers rest.
type Straight struct{ round *Round }

// NewStraight returns s with straight paths.
func NewStraight(s *Round) Straight { return Straight{s} }

// Same says whether both make the same paths.
func (s Straight) Same(other Straight) bool { return s.round.Same(other.round) }

// Aim is that of the round spacetime but for moving observers, which
// ErrMotion refuses: lines of sight keep their angle from the centre, sin a =
// b √A/r, for which b √A(r_obs) is the line's distance from the centre.
func (s Straight) Aim(o Observer, parallel bool, dirs []Direction, rays *Rays) error {
	if o.Motion != Static {
		return ErrMotion
	}
	return s.round.Aim(o, parallel, dirs, rays)
}

// Tracer implements Spacetime.
func (s Straight) Tracer(o Observer, plan Plan) (Tracer, error) {
	t, err := s.round.newTracer(o, plan)
	if err != nil {
		return nil, err
	}
	return &straightTracer{frame: *t, lapse: s.round.Lapse(o.Radius)}, nil
}

// straightTracer finds crossings of straight lines.
type straightTracer struct {
	frame roundTracer // where things are; its orbit is not used
	lapse float64     // of the observer
}

// straightBound is the relative error of its closed forms: a few roundings.
const straightBound = 4e-16

// Cross implements Tracer.
func (t *straightTracer) Cross(rays *Rays, want Want, out *Crossings) {
	out.Reset(rays.Len())
	f := &t.frame
	f.want, f.out = want, out
	for k := range rays.Lambda {
		if rays.Seen[k] {
			f.cosS, f.sinS = rays.CosS[k], rays.SinS[k]
			t.crossOne(max(rays.Impact(k)*t.lapse, radial), rays.KR[k])
		}
		out.Start = append(out.Start, int32(len(out.R)))
	}
}

// crossOne follows the line at distance p from the centre. Angles start at
// its point nearest to the centre, in the direction of the path.
func (t *straightTracer) crossOne(p, kr float64) {
	f := &t.frame
	// r = p/cos(angle); the path starts at the observer
	from := math.Copysign(math.Acos(min(1, p*f.uObs)), -kr)
	edge := f.spacetime.edge
	end, surface := math.Pi/2, Sky
	if f.spacetime.inside == nil && p*edge < 1 {
		if meets := -math.Acos(p * edge); meets >= from {
			end, surface = meets, Star
		}
	}
	if f.plan.Plane {
		if angle := from + f.firstAngle(); angle < end {
			t.record(Plane, angle-from, angle, p)
		}
	}
	if surface == Star && f.spacetime.end == OnSurface || surface == Sky && f.plan.Sky {
		t.record(surface, end-from, end, p)
	}
}

// record appends a crossing at an angle past the nearest point, psi past the
// observer.
func (t *straightTracer) record(surface Surface, psi, angle, p float64) {
	f, out := &t.frame, t.frame.out
	cos := math.Cos(angle)
	r := p / cos
	switch surface {
	case Sky:
		r = math.Inf(1)
	case Star:
		r = f.spacetime.Edge()
	}
	f.place(surface, orderOf(psi), psi, r)
	if !f.want.NoKR {
		out.KR = append(out.KR, -math.Sin(angle))
	}
	if f.want.Delay {
		// behind the nearest point by p tan(angle); the observer before it
		// by √(r_obs² - p²), of which r_obs is taken off
		delay := p * math.Tan(angle)
		if f.uObs > 0 {
			ahead := math.Sqrt(max(0, 1/(f.uObs*f.uObs)-p*p))
			if psi < angle { // the path starts on its way out
				ahead = -ahead
			}
			delay += ahead - 1/f.uObs
		}
		if surface == Sky {
			delay = math.NaN()
		}
		out.Delay = append(out.Delay, delay)
	}
	if f.want.Slope {
		// in b, p = b √A(r_obs), of: r at fixed psi; psi at fixed r
		fromSlope := 0.0 // of -from, with p
		if f.uObs > 0 {
			fromSlope = f.uObs / math.Sqrt(max(1-p*p*f.uObs*f.uObs, math.SmallestNonzeroFloat64))
			if psi < angle {
				fromSlope = -fromSlope
			}
		}
		var slope float64
		switch surface {
		case Plane: // angle = psi + from, from = -acos(p u): d(from)/dp = fromSlope
			slope = 1/cos + p*math.Sin(angle)/(cos*cos)*fromSlope
		case Star:
			edge := f.spacetime.edge
			slope = edge/math.Sqrt(max(1-p*p*edge*edge, math.SmallestNonzeroFloat64)) - fromSlope
		default:
			slope = -fromSlope
		}
		out.Slope = append(out.Slope, slope*t.lapse)
	}
	out.Bound = append(out.Bound, straightBound)
}
