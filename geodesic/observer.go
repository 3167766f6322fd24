package geodesic

import (
	"fmt"
	"math"
)

// Motion is how an observer moves.
type Motion int

// The motions of observers.
const (
	Static Motion = iota
	// Orbit is a circular geodesic that carries the observer towards +α.
	Orbit
	// Infall is the radial fall from rest at infinity, also through a
	// Schwarzschild horizon.
	Infall
)

// Observer is where the light is received. The axes of an angular field are
// those of the static observer's frame, boosted without rotation: ahead
// towards the centre, α to the right, β up along the projected disk axis.
type Observer struct {
	Radius         float64 // M; +Inf at infinity
	Motion         Motion
	InclinationDeg float64 // [0, 180], from the disk axis
	AzimuthDeg     float64 // of the observer in the disk plane
}

// Direction is one line of sight, in the way its field names it.
type Direction struct {
	// Alpha and Beta: on a parallel field the components of L/E in M; on
	// an angular field the components of the unit vector that looks along
	// the line of sight, to the right and up.
	Alpha, Beta float64
	// Ahead is the third component of that unit vector, towards the
	// centre; 0 on a parallel field.
	Ahead float64
}

// The limits of an observer's finite radius, M. Beyond the upper one only an
// observer at infinity makes sense in float64; nearer than the lower ones
// numbers would be rounding errors of the distance to horizon and centre.
const (
	MaxRadius     = 1e12
	horizonMargin = 1e-8 // relative, of observers at rest
	centreRadius  = 1e-9 // stands for the centre of a shell, where b says nothing
)

// Check refuses observers that this spacetime cannot hold. The errors wrap
// ErrInside, ErrTooFar, ErrInclination or ErrMotion.
func (s *Round) Check(o Observer) error {
	r := o.Radius
	if math.IsNaN(r) || r < 0 {
		return fmt.Errorf("geodesic: observer at r = %v M: %w", r, ErrInside)
	}
	if r > MaxRadius && !math.IsInf(r, 1) {
		return fmt.Errorf("geodesic: observer at r = %v M: %w", r, ErrTooFar)
	}
	if !(o.InclinationDeg >= 0 && o.InclinationDeg <= 180) {
		return fmt.Errorf("geodesic: inclination %v deg: %w", o.InclinationDeg, ErrInclination)
	}
	outside := r*s.edge >= 1+horizonMargin
	switch o.Motion {
	case Static:
		if !outside && s.end != Trapped {
			return fmt.Errorf("geodesic: observer at rest at r = %v M: %w", r, ErrInside)
		}
	case Orbit:
		if !(outside && r > s.PhotonSphere()) || math.IsInf(r, 1) {
			return fmt.Errorf("geodesic: observer orbiting at r = %v M: %w: circular orbits lie beyond r = %.6g M and outside the object",
				r, ErrMotion, s.PhotonSphere())
		}
	case Infall:
		free := s.end == Captured && s.charge2 == 0 && r > 0 // also inside the horizon
		if !(outside || free) || math.IsInf(r, 1) {
			return fmt.Errorf("geodesic: observer falling at r = %v M: %w", r, ErrMotion)
		}
	default:
		return fmt.Errorf("geodesic: motion %d: %w", o.Motion, ErrMotion)
	}
	return nil
}

// CircularSpeed returns the speed in the static frame of a circular geodesic
// at r, 1/√(r-2) without charge, and FallSpeed that of a fall from rest at
// infinity, √(2/r) without charge. Bardeen, Press & Teukolsky, ApJ 178, 347
// (1972), from memory.
func (s *Round) CircularSpeed(r float64) float64 {
	u := 1 / r
	return math.Sqrt(u * (1 - s.charge2*u) / s.lapse2(u))
}

// FallSpeed: see CircularSpeed.
func (s *Round) FallSpeed(r float64) float64 {
	u := 1 / r
	return math.Sqrt(u * (2 - s.charge2*u))
}

// sightline is what an observer's line of sight is to the spacetime: the
// impact parameter b = L/E, the light's k^r/E where it is received (> 0 for
// light on its way out), and ν_obs/E. No path has it if !seen.
type sightline struct {
	b, kr, gObs float64
	cosS, sinS  float64
	seen        bool
}

// angular resolves a unit vector of an observer's frame.
func (s *Round) angular(o Observer, d Direction) (l sightline) {
	across := math.Hypot(d.Alpha, d.Beta)
	ahead := d.Ahead
	l.cosS, l.sinS, l.seen = 1, 0, true
	if across > 0 {
		l.cosS, l.sinS = d.Alpha/across, d.Beta/across
	}
	r := max(o.Radius, centreRadius)
	if o.Motion == Infall {
		// E = ν (1 - β cos a), L = r ν sin a in the falling frame; nothing
		// here leans on t, so it holds on and inside the horizon. No light
		// that was emitted outside has E <= 0.
		beta := s.FallSpeed(r)
		energy := 1 - beta*ahead
		if energy <= 0 {
			return sightline{}
		}
		l.b, l.kr, l.gObs = r*across/energy, (ahead-beta)/energy, 1/energy
		return l
	}
	lapse := s.Lapse(r)
	l.gObs = 1 / lapse
	if o.Motion == Orbit { // aberration along +α
		v := s.CircularSpeed(r)
		gamma := 1 / math.Sqrt(1-v*v)
		doppler := gamma * (1 - v*d.Alpha) // ν_static/ν_obs
		alpha, beta := gamma*(d.Alpha-v)/doppler, d.Beta/doppler
		ahead /= doppler
		across = math.Hypot(alpha, beta)
		if across > 0 {
			l.cosS, l.sinS = alpha/across, beta/across
		}
		l.gObs /= doppler
	}
	l.b = r * across / lapse
	l.kr = ahead
	if s.inside != nil && r*s.edge < 1 {
		l.kr = ahead / (lapse * s.inside.Ruler(r)) // outside √-g_tt times √g_rr is 1
	}
	return l
}

// Aim fills rays from an observer's lines of sight.
//
// On a parallel field α and β are the components of L/E and only light that
// arrives from inside counts; a line of sight with b > r/√A has no path. On
// an angular field they belong to the observer's own frame.
func (s *Round) Aim(o Observer, parallel bool, dirs []Direction, rays *Rays) error {
	if err := s.Check(o); err != nil {
		return err
	}
	if parallel && (o.Radius <= s.PhotonSphere() || o.Radius*s.edge < 1) {
		return fmt.Errorf("geodesic: parallel field at r = %v M: %w", o.Radius, ErrParallelNear)
	}
	if parallel && o.Motion != Static {
		return ErrParallelMoving
	}
	if !parallel && math.IsInf(o.Radius, 1) {
		return ErrAngularFar
	}
	rays.Resize(len(dirs))
	if parallel {
		s.aimParallel(o, dirs, rays)
		return nil
	}
	sinI, cosI := SinCosDeg(o.InclinationDeg)
	for k, d := range dirs {
		l := s.angular(o, d)
		alpha, beta := l.b*l.cosS, l.b*l.sinS
		rays.Lambda[k] = -alpha * sinI
		rays.Eta[k] = beta*beta + alpha*alpha*cosI*cosI
		rays.B[k] = l.b
		rays.CosS[k], rays.SinS[k] = l.cosS, l.sinS
		rays.KR[k] = l.kr
		rays.GObs[k] = l.gObs
		rays.Seen[k] = l.seen
	}
	return nil
}

// aimParallel is Aim for components of L/E on a static observer's field.
func (s *Round) aimParallel(o Observer, dirs []Direction, rays *Rays) {
	sinI, cosI := SinCosDeg(o.InclinationDeg)
	cos2 := cosI * cosI
	u := 1 / o.Radius
	reach2 := u * u * s.lapse2(u) // 1 over the square of the largest b
	gObs := 1 / s.Lapse(o.Radius)
	n := len(dirs)
	lambda, eta, impact := rays.Lambda[:n], rays.Eta[:n], rays.B[:n]
	cosS, sinS, kr := rays.CosS[:n], rays.SinS[:n], rays.KR[:n]
	for k, d := range dirs {
		alpha2, beta2 := d.Alpha*d.Alpha, d.Beta*d.Beta
		b := math.Sqrt(alpha2 + beta2)
		cosS[k], sinS[k] = 1, 0
		if b > 0 {
			cosS[k], sinS[k] = d.Alpha/b, d.Beta/b
		}
		lambda[k] = -d.Alpha * sinI
		eta[k] = beta2 + alpha2*cos2
		impact[k] = b
		square := 1 - (alpha2+beta2)*reach2
		kr[k] = math.Sqrt(max(square, 0))
		rays.Seen[k] = square >= 0
		rays.GObs[k] = gObs
	}
}
