package measure

import (
	"math"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/raytrace/emit"
)

// Geometry is how one observer sees the disk plane of a round object: where
// on the screen a radius appears, at a screen angle and in an image order.
// The paths that it roots on are integrated one by one; the closed forms
// beside them are elliptic integrals.
type Geometry struct {
	object     *geodesic.Round
	observer   geodesic.Observer
	sinI, cosI float64
	uObs       float64
	widest     float64 // largest impact parameter of this observer, M; +Inf at infinity
	barrier    float64 // impact parameter below which paths end on object or horizon
	closed     bool    // RimImpact holds here
}

// rootTolerance is that of the paths that edges are rooted on. Method: near
// the tightest that the tracer takes.
const rootTolerance = 1e-12

// NewGeometry returns the geometry of a view. The observer must be static and
// outside the object and its photon sphere, so that an impact parameter and a
// screen angle name a path; light must not pass through the object.
func NewGeometry(v *raytrace.View) (*Geometry, error) {
	object, ok := v.Spacetime.(*geodesic.Round)
	if !ok {
		return nil, cannot("paths are straight: bending is not among trace.effects")
	}
	o := v.Observer
	switch {
	case o.Motion != geodesic.Static:
		return nil, cannot("the observer moves: images of circles have no impact parameter at a screen angle of their own")
	case o.Radius <= max(object.PhotonSphere(), object.Edge()):
		return nil, cannot("the observer at %g M is not outside the object and its photon sphere", o.Radius)
	case !object.Opaque():
		return nil, cannot("light passes through the object, so that a circle has several images of one order")
	}
	g := &Geometry{object: object, observer: o, uObs: 1 / o.Radius, widest: math.Inf(1)}
	g.sinI, g.cosI = geodesic.SinCosDeg(o.InclinationDeg)
	if !math.IsInf(o.Radius, 1) {
		g.widest = o.Radius / object.Lapse(o.Radius)
	}
	g.barrier = object.CriticalImpact()
	if r := object.Edge(); r > object.PhotonSphere() {
		g.barrier = r / object.Lapse(r)
	}
	g.closed = object.PhotonSphere() == geodesic.PhotonSphere
	return g, nil
}

// Swept returns the angle after which the path with screen angle s, radians
// counter-clockwise from +α, meets the disk plane in image order n.
func (g *Geometry) Swept(s float64, n int) float64 {
	return geodesic.FirstPlaneAngle(g.sinI, g.cosI, math.Sin(s)) + float64(n)*math.Pi
}

// ClosedImpact returns by closed form the impact parameter, M, at which the
// circle of radius r appears at a swept angle; NaN where it has no image
// there, or no closed form.
func (g *Geometry) ClosedImpact(psi, r float64) float64 {
	if !g.closed {
		return math.NaN()
	}
	b := g.exterior(psi, r)
	if math.IsNaN(b) {
		return b
	}
	if edge := g.object.Edge(); edge > geodesic.HorizonRadius && b < g.barrier {
		// on its way out again such a path has met the star
		if r < edge {
			return math.NaN()
		}
		orbit := geodesic.NewClosedOrbit(b)
		if low := orbit.Periapsis(); low < edge && psi > orbit.Sweep(g.uObs, 1/max(edge, low))*(1+1e-9) {
			return math.NaN()
		}
	}
	return b
}

// exterior is ClosedImpact as if no surface stood in the way.
func (g *Geometry) exterior(psi, r float64) float64 {
	b := geodesic.RimImpact(g.uObs, psi, r)
	if b >= g.widest {
		return math.NaN()
	}
	return b
}

// pencil traces paths one at a time. One a goroutine.
type pencil struct {
	g      *Geometry
	tracer geodesic.Tracer
	dirs   []geodesic.Direction
	rays   geodesic.Rays
	at     geodesic.Crossings
}

func (g *Geometry) pencil(maxOrder int) (*pencil, error) {
	t, err := g.object.Tracer(g.observer, geodesic.Plan{Tolerance: rootTolerance, MaxOrder: maxOrder, Plane: true})
	if err != nil {
		return nil, err
	}
	return &pencil{g: g, tracer: t}, nil
}

// radius returns where the path with impact parameter b and screen angle s
// meets the plane in order n: 0 if it ended before, +Inf if it escaped.
func (p *pencil) radius(b, s float64, n int) (float64, error) {
	sin, cos := math.Sincos(s)
	if p.g.cosI == 0 && math.Abs(sin) < rounding*4 {
		// within the plane nothing is crossed; next to it, and at every other
		// screen angle, all is met behind the object
		sin, cos = 1, 0
	}
	p.dirs = append(p.dirs[:0], geodesic.Direction{Alpha: b * cos, Beta: b * sin})
	if err := p.g.object.Aim(p.g.observer, true, p.dirs, &p.rays); err != nil {
		return 0, err
	}
	p.tracer.Cross(&p.rays, geodesic.Want{NoPlace: true}, &p.at)
	for j := range p.at.R {
		if p.at.Surface[j] == geodesic.Plane && int(p.at.Order[j]) == n {
			return p.at.R[j], nil
		}
	}
	if b > p.g.barrier {
		return math.Inf(1), nil
	}
	return 0, nil
}

// impact roots r(b) on traced paths: the impact parameter, M, at which the
// circle of radius r appears at screen angle s in order n; NaN where it has
// no image there.
func (p *pencil) impact(s float64, n int, r float64) (float64, error) {
	var failed error
	off := func(b float64) float64 {
		at, err := p.radius(b, s, n)
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
	hi := p.g.barrier * (1 + 1e-9)
	if r > p.g.object.PhotonSphere() {
		hi = max(hi, r/p.g.object.Lapse(r)*(1+1e-9))
	}
	hi = min(hi, p.g.widest*(1-1e-12))
	offHi := off(hi)
	if failed != nil || offHi > 0 {
		return math.NaN(), failed
	}
	b := bisectToRoot(off, 0, 1, hi, offHi)
	if failed != nil {
		return math.NaN(), failed
	}
	// where the star hides the image the sign changes by a jump from 0
	const ulps, near = 16 * rounding, 0.01
	if at, err := p.radius(b*(1+ulps), s, n); err != nil || !(math.Abs(at-r) < near*r) {
		return math.NaN(), err
	}
	return b, nil
}

// disks returns the disks of a view and their places among its emitters.
func disks(v *raytrace.View) (found []*emit.Disk, at []int) {
	for k, e := range v.Emitters {
		if d, ok := e.(*emit.Disk); ok {
			found, at = append(found, d), append(at, k)
		}
	}
	return found, at
}

// rims returns between which radii an emitter lies on the disk plane.
func rims(e raytrace.Emitter) (inner, outer float64, ok bool) {
	switch e := e.(type) {
	case *emit.Disk:
		return e.Inner, e.Outer, true
	case *emit.Spot:
		return e.Inner(), e.Outer(), true
	}
	return 0, 0, false
}

// flats returns the places of the emitters of the disk plane.
func flats(v *raytrace.View) (at []int) {
	for k, e := range v.Emitters {
		if _, _, flat := rims(e); flat {
			at = append(at, k)
		}
	}
	return at
}
