package geodesic

import "errors"

// The limits of a path's relative tolerance: below, rounding rules; above,
// the step control has nothing to hold on to.
const (
	MinTolerance = 1e-13
	MaxTolerance = 1e-3
)

// What can be wrong with an observer, a field or a path.
var (
	ErrInside       = errors.New("an observer at rest must be outside the horizon or the surface")
	ErrTooFar       = errors.New("beyond 1e12 M place the observer at infinity")
	ErrInclination  = errors.New("the inclination must lie in [0, 180] deg")
	ErrMotion       = errors.New("no such motion there")
	ErrParallelNear = errors.New("a parallel field needs an observer outside the photon sphere and the object")
	// ErrParallelMoving and ErrAngularFar refuse fields by themselves.
	ErrParallelMoving = errors.New("geodesic: a parallel field needs an observer at rest")
	ErrAngularFar     = errors.New("geodesic: an angular field needs an observer at a finite radius")
	ErrTolerance      = errors.New("the tolerance must lie in [1e-13, 1e-3]")
	ErrOrder          = errors.New("the highest image order must lie in [0, 9]")
	ErrImpact         = errors.New("no light reaches the observer with this impact parameter")
	ErrSteps          = errors.New("out of steps")
)
