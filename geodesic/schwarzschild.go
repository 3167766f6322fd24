package geodesic

import (
	"fmt"
	"math"
)

// Schwarzschild is the exterior of a non-rotating hole of mass M = 1, down
// to the horizon at r = 2.
type Schwarzschild struct{}

var _ Spacetime = Schwarzschild{}

// HorizonRadius is the radius of the Schwarzschild horizon, M.
const HorizonRadius = 2.0

// MinRadius and MaxRadius limit a static observer's finite radius, M. Beyond
// the upper one only an observer at infinity makes sense in float64; the
// lower keeps the static frame's blueshift below about 1e4.
const (
	MinRadius = HorizonRadius * (1 + 1e-8)
	MaxRadius = 1e12
)

// check refuses observers that this spacetime cannot hold.
func (o Observer) check() error {
	switch {
	case math.IsNaN(o.Radius) || o.Radius < MinRadius:
		return fmt.Errorf("geodesic: observer at r = %v M: %w", o.Radius, ErrInside)
	case o.Radius > MaxRadius && !math.IsInf(o.Radius, 1):
		return fmt.Errorf("geodesic: observer at r = %v M: %w", o.Radius, ErrTooFar)
	case !(o.InclinationDeg >= 0 && o.InclinationDeg <= 180):
		return fmt.Errorf("geodesic: inclination %v deg: %w", o.InclinationDeg, ErrInclination)
	}
	return nil
}

// Lapse returns √(1-2/r), the rate of a static clock at r, M; 1 at infinity.
func Lapse(r float64) float64 { return math.Sqrt(1 - 2/r) }

// Aim implements Spacetime for a static observer.
//
// On a parallel field α and β are the components of L/E and only the inward
// leg exists; a line of sight with b > r/√(1-2/r) has no path. On an angular
// field sin a = b √(1-2/r)/r, a the angle from the direction of the centre.
func (Schwarzschild) Aim(o Observer, parallel bool, dirs []Direction, rays *Rays) error {
	if err := o.check(); err != nil {
		return err
	}
	if parallel && o.Radius <= PhotonSphere {
		return fmt.Errorf("geodesic: parallel field at r = %v M: %w", o.Radius, ErrParallelNear)
	}
	if !parallel && math.IsInf(o.Radius, 1) {
		return ErrAngularFar
	}
	lapse := Lapse(o.Radius)
	reach := o.Radius / lapse // largest b at the observer; +Inf at infinity
	sinI, cosI := sinCosDeg(o.InclinationDeg)
	rays.Resize(len(dirs))
	for k, d := range dirs {
		size := math.Hypot(d.Alpha, d.Beta)
		cosS, sinS := 1.0, 0.0
		if size > 0 {
			cosS, sinS = d.Alpha/size, d.Beta/size
		}
		b, sign := size, int8(-1)
		if parallel {
			if b > reach {
				sign = 0
			}
		} else {
			b = reach * size
			if d.Ahead < 0 {
				sign = 1
			}
		}
		alpha, beta := b*cosS, b*sinS
		rays.Lambda[k] = -alpha * sinI
		rays.Eta[k] = beta*beta + alpha*alpha*cosI*cosI
		rays.CosS[k], rays.SinS[k] = cosS, sinS
		rays.SignR[k] = sign
		rays.GObs[k] = 1 / lapse
	}
	return nil
}

// Tracer implements Spacetime.
func (Schwarzschild) Tracer(o Observer, plan Plan) (Tracer, error) {
	if err := o.check(); err != nil {
		return nil, err
	}
	if !(plan.Tolerance >= MinTolerance && plan.Tolerance <= MaxTolerance) {
		return nil, fmt.Errorf("geodesic: tolerance %v: %w", plan.Tolerance, ErrTolerance)
	}
	if plan.MaxOrder < 0 || plan.MaxOrder > 9 {
		return nil, fmt.Errorf("geodesic: highest order %d: want 0 to 9", plan.MaxOrder)
	}
	t := &planeTracer{plan: plan, uObs: 1 / o.Radius, azimuth: o.AzimuthDeg * math.Pi / 180, pace: newPace(plan.Tolerance)}
	t.sinI, t.cosI = sinCosDeg(o.InclinationDeg)
	return t, nil
}
