package geodesic

import (
	"fmt"
	"math"
)

// Fate says how a path's story ended.
type Fate int

// The fates of a path.
const (
	Captured  Fate = iota // reached the horizon
	Escaped               // back at the observer's radius, or at infinity
	OnSurface             // met the star's opaque surface
	Trapped               // goes round within a shell's light ring for ever
)

// String returns the word that files and verbs use.
func (f Fate) String() string {
	return [...]string{"captured", "escaped", "surface", "trapped"}[f]
}

// Path asks for one light path, followed backwards from an observer at rest,
// inward first, until it is back at the observer's radius or ends before. A
// path that starts within a shell, where the observer's radius says little,
// is followed to infinity.
type Path struct {
	ObserverRadius float64 // M; +Inf at infinity
	Impact         float64 // b, M, >= 0
	Tolerance      float64 // relative, in [MinTolerance, MaxTolerance]
}

// Story is what became of a path.
type Story struct {
	Fate Fate
	// FateByClosedForm says that b is closer to the critical curve than
	// the tolerance can tell: the integration's error in b reaches the
	// distance, or it came out on the other side. Fate, Swept and Closest
	// are then the closed form's.
	FateByClosedForm bool
	Swept            float64 // radians, from the observer to the end; NaN if only a charged hole's fate could be told
	Deflection       float64 // radians; NaN unless escaped and the observer is at infinity
	Closest          float64 // smallest r on the path, M; the edge's if it ends there
	TravelTime       float64 // M; NaN unless escaped or on a surface; less r* at every end that is at infinity
	Steps            int     // accepted
	Evaluations      int     // of the right-hand side
	Bound            float64 // on Swept, radians
	ClosedFormSwept  float64 // radians; NaN where there is no closed form (a charged hole)
}

// Trace integrates one path in the Schwarzschild exterior of a hole; see
// Round.Trace.
func Trace(p Path) (Story, error) { return schwarzschild.Trace(p) }

// Trace integrates one path. It fails if no such path leaves the observer
// inward, Impact above r/√A, or if ObserverRadius or Tolerance are out of
// range.
func (s *Round) Trace(p Path) (Story, error) {
	if err := s.checkPath(p); err != nil {
		return Story{}, err
	}
	t, err := s.newTracer(Observer{Radius: p.ObserverRadius}, Plan{Tolerance: p.Tolerance})
	if err != nil {
		return Story{}, err
	}
	t.limit = math.Inf(1)
	t.target = math.Inf(1)
	t.want.Delay, t.tracing = true, true
	closedFate, closedSwept := s.SweptToEnd(p)
	story := Story{
		Fate: closedFate, ClosedFormSwept: closedSwept,
		Closest: s.Edge(), TravelTime: math.NaN(), Deflection: math.NaN(),
	}
	switch {
	case closedFate == Trapped: // it would go round for ever; nothing to integrate
		story.FateByClosedForm = true
		story.Swept, story.Closest = math.Inf(1), p.Impact*s.inside.Lapse(p.ObserverRadius)
		return story, nil
	case p.Impact < radial && s.inside == nil: // straight in
		if s.end == OnSurface {
			story.TravelTime = -s.tortoise(s.edge)
			if t.uObs > 0 {
				story.TravelTime += s.Tortoise(p.ObserverRadius)
			}
		}
		return story, nil
	}
	uStop := t.uObs
	if t.within {
		uStop = 0
	}
	b := max(p.Impact, radial)
	end := t.follow(b, s.inwardKR(p), uStop)
	story.Steps, story.Evaluations = t.pace.accepted, 6*t.pace.tried+1
	if end == lost {
		return Story{}, fmt.Errorf("geodesic: b = %v M from r = %v M: %w after %d", p.Impact, p.ObserverRadius, ErrSteps, maxSteps)
	}
	t.settle(end, uStop, &story)
	decided := s.end != Captured || t.pace.local() < math.Abs(s.criticalDistance(p.Impact))
	if story.Fate != closedFate || !decided {
		story.FateByClosedForm = true
		story.Fate, story.Swept = closedFate, closedSwept
		story.Bound = closedFormBound(p.Impact)
		story.TravelTime, story.Closest = math.NaN(), s.Edge()
		if closedFate == Escaped {
			story.Closest = s.periapsis(p.Impact)
		}
	}
	if story.Fate == Escaped && uStop == 0 && !t.within {
		story.Deflection = story.Swept - math.Pi
	}
	return story, nil
}

// settle reads the story off the orbit at its end.
func (t *roundTracer) settle(end ending, uStop float64, story *Story) {
	s, o := t.spacetime, &t.orbit
	if end == atEdge {
		story.Fate = s.end
		t.finish(s.edge)
	} else {
		story.Fate = Escaped
		story.Closest = t.closest
		if o.b <= radial { // through the centre
			story.Closest = 0
		}
		t.finish(uStop)
	}
	story.Swept = o.psi
	story.Bound = t.angleBound()
	delay := o.time0 // regular at infinity: less r* on the way out
	if o.u0 > 0 {
		delay -= o.leg * s.tortoise(o.u0)
	}
	if t.uObs > 0 { // delay is Δt - r*(r_obs)
		delay += s.Tortoise(t.observer.Radius)
	}
	if story.Fate != Captured {
		story.TravelTime = delay
	}
}

// inwardKR is k^r/E of the light of p at its observer.
func (s *Round) inwardKR(p Path) float64 {
	if s.inside != nil && p.ObserverRadius*s.edge < 1 {
		r := max(p.ObserverRadius, centreRadius)
		return max(p.Impact, radial) * s.speedWithin(max(p.Impact, radial), r)
	}
	u := 1 / p.ObserverRadius
	return math.Sqrt(max(1-p.Impact*p.Impact*u*u*s.lapse2(u), 0))
}

// periapsis is Periapsis for an uncharged object; NaN for a charged one, for
// which there is no closed form here.
func (s *Round) periapsis(b float64) float64 {
	if s.charge2 > 0 {
		return math.NaN()
	}
	return Periapsis(b)
}

// closedFormBound is what SweptToEnd promises, radians.
func closedFormBound(b float64) float64 {
	return 1e-12 + roundoff/math.Abs(CriticalDistance(b))
}

func (s *Round) checkPath(p Path) error {
	if err := s.Check(Observer{Radius: p.ObserverRadius}); err != nil {
		return err
	}
	reach := min(p.ObserverRadius/s.Lapse(p.ObserverRadius), MaxRadius) // beyond it nothing bends
	if !(p.Impact >= 0 && p.Impact <= reach) {
		return fmt.Errorf("geodesic: impact parameter %v M: %w: at r = %v M it must lie in [0, %.6g] M",
			p.Impact, ErrImpact, p.ObserverRadius, reach)
	}
	return nil
}

// SweptToEnd returns the fate and the angle swept by the path p in closed
// form, the judge of Trace: elliptic integrals in the exterior, elementary
// functions within a shell or a uniform star. For a charged hole there is no
// closed form here: NaN, with the fate by the critical impact parameter.
func (s *Round) SweptToEnd(p Path) (Fate, float64) {
	uObs := 1 / p.ObserverRadius
	b := p.Impact
	if s.charge2 > 0 {
		if b > s.CriticalImpact() && uObs < 1/s.PhotonSphere() {
			return Escaped, math.NaN()
		}
		return Captured, math.NaN()
	}
	if b < radial {
		if s.inside != nil {
			return Escaped, math.Pi
		}
		return s.end, 0
	}
	o := NewClosedOrbit(b)
	if within := uObs > s.edge; within {
		if o.scattering && s.edge > 1./3 {
			return Trapped, math.Inf(1)
		}
		r := max(p.ObserverRadius, centreRadius)
		return Escaped, s.inside.Phase(b, r, s.speedWithin(b, r)) +
			s.halfSweep(b) + o.Sweep(0, s.edge)
	}
	if o.scattering && uObs < 1./3 && o.u2 <= s.edge { // turns outside the edge
		return Escaped, 2 * o.Sweep(min(uObs, o.u2), o.u2)
	}
	if s.inside == nil {
		return s.end, o.Sweep(uObs, s.edge)
	}
	return Escaped, 2 * (o.Sweep(uObs, s.edge) + s.halfSweep(b))
}
