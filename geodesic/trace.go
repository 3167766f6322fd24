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
	Trapped               // circles for ever
)

// String returns the word that files and verbs use.
func (f Fate) String() string {
	return [...]string{"captured", "escaped", "surface", "trapped"}[f]
}

// Path asks for one light path, followed backwards from an observer until it
// is back at the observer's radius or at the horizon.
type Path struct {
	ObserverRadius float64 // M, > 2; +Inf at infinity
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
	Swept            float64 // radians, from the observer to the end
	Deflection       float64 // radians; NaN unless escaped and the observer is at infinity
	Closest          float64 // smallest r on the path, M; the horizon's if captured
	TravelTime       float64 // M; NaN if captured; from infinity less r*(r_obs) at both ends
	Steps            int     // accepted
	Evaluations      int     // of the right-hand side
	Bound            float64 // on Swept, radians
	ClosedFormSwept  float64 // radians
}

// Trace integrates one path in the Schwarzschild exterior. It fails if no
// such path leaves the observer inward, Impact above r/√(1-2/r), or if
// ObserverRadius or Tolerance are out of range.
func Trace(p Path) (Story, error) {
	if err := p.check(); err != nil {
		return Story{}, err
	}
	s := Story{Closest: HorizonRadius, TravelTime: math.NaN(), Deflection: math.NaN()}
	closedFate, closedSwept := SweptToEnd(p)
	s.ClosedFormSwept = closedSwept
	if p.Impact < radial {
		s.Fate = Captured
		return s, nil
	}
	var o orbit
	c := newPace(p.Tolerance)
	if err := o.follow(&c, p, &s); err != nil {
		return Story{}, err
	}
	if s.Fate != closedFate || c.local() >= math.Abs(CriticalDistance(p.Impact)) {
		s.FateByClosedForm = true
		s.Fate, s.Swept = closedFate, closedSwept
		s.Bound = closedFormBound(p.Impact)
		s.TravelTime = math.NaN()
	}
	if s.Fate == Escaped {
		closed := NewClosedOrbit(p.Impact)
		if s.FateByClosedForm {
			s.Closest = closed.Periapsis()
		}
		if math.IsInf(p.ObserverRadius, 1) {
			s.Deflection = s.Swept - math.Pi
		}
	} else {
		s.Closest, s.TravelTime = HorizonRadius, math.NaN()
	}
	return s, nil
}

// closedFormBound is what SweptToEnd promises, radians.
func closedFormBound(b float64) float64 {
	return 1e-12 + roundoff/math.Abs(CriticalDistance(b))
}

func (p Path) check() error {
	if err := (Observer{Radius: p.ObserverRadius}).check(); err != nil {
		return err
	}
	if reach := p.ObserverRadius / Lapse(p.ObserverRadius); !(p.Impact >= 0 && p.Impact <= reach) || math.IsInf(p.Impact, 1) {
		return fmt.Errorf("geodesic: impact parameter %v M: %w: at r = %v M it must lie in [0, %.6g] M",
			p.Impact, ErrImpact, p.ObserverRadius, reach)
	}
	if !(p.Tolerance >= MinTolerance && p.Tolerance <= MaxTolerance) {
		return fmt.Errorf("geodesic: tolerance %v: %w", p.Tolerance, ErrTolerance)
	}
	return nil
}

// follow integrates to the end of the path and fills in what integration
// alone can tell.
func (o *orbit) follow(c *pace, p Path, s *Story) error {
	uObs := 1 / p.ObserverRadius
	o.launch(uObs, p.Impact, false)
	c.start(p.Impact)
	for range maxSteps {
		h := c.h
		errU, errW := o.try(h)
		if !c.judge(h, errU, errW) {
			continue
		}
		if o.w0 > 0 && o.w <= 0 { // the turning point lies in this step
			theta := o.locate(func(theta float64) float64 { return o.wAt(theta) })
			s.Closest = 1 / o.uAt(theta)
		}
		in, out := o.u >= 0.5, o.w < 0 && o.u <= uObs
		if in || out {
			end := uObs
			s.Fate = Escaped
			if in {
				s.Fate, end = Captured, 0.5
			}
			o.finish(end)
			o.rideSlope()
			o.rideTime()
			s.Steps, s.Evaluations = c.accepted, 6*c.tried+1+6
			// a last correction along the orbit: the retaken step ends within
			// the dense output's error of the event
			rest := (end - o.u) / o.w
			s.Swept = o.psi + o.h + rest
			s.Bound = c.global(o.b, o.w, o.p) / math.Abs(o.w)
			if s.Fate == Escaped {
				s.TravelTime = o.travelTime(end)
			}
			return nil
		}
		o.rideSlope()
		o.rideTime()
		o.accept()
	}
	return fmt.Errorf("geodesic: b = %v M from r = %v M: %w after %d", p.Impact, p.ObserverRadius, ErrSteps, maxSteps)
}

// travelTime returns Δt at the end of an escaped path, back at uEnd = 1/r_obs,
// or Δt - 2 r*(r_obs) where that is at infinity.
func (o *orbit) travelTime(uEnd float64) float64 {
	if uEnd == 0 {
		return o.time // Δt - r*(r_obs) - r*(r), both radii at infinity
	}
	return o.time + 2*tortoise(uEnd)
}

// finish retakes the trial step so that it ends where the dense output
// reaches u = end.
func (o *orbit) finish(end float64) {
	theta := o.locate(func(theta float64) float64 { return o.uAt(theta) - end })
	o.try(o.h * theta)
}

// locate finds the zero of a dense-output function that changes sign within
// the trial step, by bisection to the last bit; it is called once a path.
func (o *orbit) locate(f func(theta float64) float64) float64 {
	lo, hi := 0.0, 1.0
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
