package rim

import (
	"math"

	"annulet/geodesic"
)

// Geometry is how one observer sees the disk plane of a round object: where
// on the screen a radius appears, at a screen angle and in an image order.
// The paths that it roots on are integrated one by one; the closed forms
// beside them are elliptic integrals.
type Geometry struct {
	Object     *geodesic.Round
	Observer   geodesic.Observer
	SinI, CosI float64 // of the inclination
	UObs       float64 // 1/r of the observer, 1/M
	Widest     float64 // largest impact parameter of this observer, M; +Inf at infinity
	Barrier    float64 // impact parameter below which paths end on object or horizon, M
	Closed     bool    // closed forms hold here
}

// RootTolerance is that of the paths that rims are rooted on. Method: near
// the tightest that the tracer takes.
const RootTolerance = 1e-12

// NewGeometry returns how an observer sees the plane. It must be static and
// outside the object and its photon sphere, so that an impact parameter and a
// screen angle name a path; light must not pass through the object.
func NewGeometry(spacetime geodesic.Spacetime, o geodesic.Observer) (*Geometry, error) {
	object, ok := spacetime.(*geodesic.Round)
	if !ok {
		return nil, cannot("paths are straight: bending is not among trace.effects")
	}
	switch {
	case o.Motion != geodesic.Static:
		return nil, cannot("the observer moves: images of circles have no impact parameter at a screen angle of their own")
	case o.Radius <= max(object.PhotonSphere(), object.Edge()):
		return nil, cannot("the observer at %g M is not outside the object and its photon sphere", o.Radius)
	case !object.Opaque():
		return nil, cannot("light passes through the object, so that a circle has several images of one order")
	}
	g := &Geometry{Object: object, Observer: o, UObs: 1 / o.Radius, Widest: math.Inf(1)}
	g.SinI, g.CosI = geodesic.SinCosDeg(o.InclinationDeg)
	if !math.IsInf(o.Radius, 1) {
		g.Widest = o.Radius / object.Lapse(o.Radius)
	}
	g.Barrier = object.CriticalImpact()
	if r := object.Edge(); r > object.PhotonSphere() {
		g.Barrier = r / object.Lapse(r)
	}
	g.Closed = object.PhotonSphere() == geodesic.PhotonSphere
	return g, nil
}

// Swept returns the angle after which the path with screen angle s, radians
// counter-clockwise from +α, meets the disk plane in image order n.
func (g *Geometry) Swept(s float64, n int) float64 { return g.SweptTo(math.Sin(s), n) }

// SweptTo is Swept for a screen angle given by its sine.
func (g *Geometry) SweptTo(sinS float64, n int) float64 {
	return geodesic.FirstPlaneAngle(g.SinI, g.CosI, sinS) + float64(n)*math.Pi
}

// ClosedImpact returns by closed form the impact parameter, M, at which the
// circle of radius r appears at a swept angle; NaN where it has no image
// there, or no closed form.
func (g *Geometry) ClosedImpact(psi, r float64) float64 {
	if !g.Closed {
		return math.NaN()
	}
	b := g.Exterior(psi, r)
	if math.IsNaN(b) {
		return b
	}
	if edge := g.Object.Edge(); edge > geodesic.HorizonRadius && b < g.Barrier {
		// on its way out again such a path has met the star
		if r < edge {
			return math.NaN()
		}
		orbit := geodesic.NewClosedOrbit(b)
		if low := orbit.Periapsis(); low < edge && psi > orbit.Sweep(g.UObs, 1/max(edge, low))*(1+1e-9) {
			return math.NaN()
		}
	}
	return b
}

// Exterior is ClosedImpact as if no surface stood in the way.
func (g *Geometry) Exterior(psi, r float64) float64 {
	b := geodesic.RimImpact(g.UObs, psi, r)
	if b >= g.Widest {
		return math.NaN()
	}
	return b
}

// Pencil traces paths one at a time. One a goroutine.
type Pencil struct {
	g      *Geometry
	tracer geodesic.Tracer
	dirs   []geodesic.Direction
	rays   geodesic.Rays
	At     geodesic.Crossings // of the last path
}

// NewPencil returns a tracer of single paths up to an image order.
func (g *Geometry) NewPencil(maxOrder int) (*Pencil, error) {
	t, err := g.Object.Tracer(g.Observer, geodesic.Plan{Tolerance: RootTolerance, MaxOrder: maxOrder, Plane: true})
	if err != nil {
		return nil, err
	}
	return &Pencil{g: g, tracer: t}, nil
}

// Radius returns where the path with impact parameter b and screen angle s
// meets the plane in order n: 0 if it ended before, +Inf if it escaped.
func (p *Pencil) Radius(b, s float64, n int) (float64, error) {
	sin, cos := math.Sincos(s)
	if p.g.CosI == 0 && math.Abs(sin) < rounding*4 {
		// within the plane nothing is crossed; next to it, and at every other
		// screen angle, all is met behind the object
		sin, cos = 1, 0
	}
	p.dirs = append(p.dirs[:0], geodesic.Direction{Alpha: b * cos, Beta: b * sin})
	if err := p.g.Object.Aim(p.g.Observer, true, p.dirs, &p.rays); err != nil {
		return 0, err
	}
	p.tracer.Cross(&p.rays, geodesic.Want{NoPlace: true}, &p.At)
	for j := range p.At.R {
		if p.At.Surface[j] == geodesic.Plane && int(p.At.Order[j]) == n {
			return p.At.R[j], nil
		}
	}
	if b > p.g.Barrier {
		return math.Inf(1), nil
	}
	return 0, nil
}

// Impact roots r(b) on traced paths: the impact parameter, M, at which the
// circle of radius r appears at screen angle s in order n; NaN where it has
// no image there.
func (p *Pencil) Impact(s float64, n int, r float64) (float64, error) {
	var failed error
	off := func(b float64) float64 {
		at, err := p.Radius(b, s, n)
		if err != nil {
			failed = err
		}
		switch at {
		case 0:
			return 1
		case math.Inf(1):
			return -1
		}
		return 1/at - 1/r
	}
	hi := p.g.Barrier * (1 + 1e-9)
	if r > p.g.Object.PhotonSphere() {
		hi = max(hi, r/p.g.Object.Lapse(r)*(1+1e-9))
	}
	hi = min(hi, p.g.Widest*(1-1e-12))
	offHi := off(hi)
	if failed != nil || offHi > 0 {
		return math.NaN(), failed
	}
	b := BisectToRoot(off, 0, 1, hi, offHi)
	if failed != nil {
		return math.NaN(), failed
	}
	// where the star hides the image the sign changes by a jump from 0
	const ulps, near = 16 * rounding, 0.01
	if at, err := p.Radius(b*(1+ulps), s, n); err != nil || !(math.Abs(at-r) < near*r) {
		return math.NaN(), err
	}
	return b, nil
}
