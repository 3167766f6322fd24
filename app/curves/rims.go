package curves

import (
	"fmt"
	"math"
	"sync"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// rimAngles is how many points of a rim's image are worked out. Method: an
// extremum between two of them is missed by less than 3e-4 of the diameter.
const rimAngles = 128

// HasRims says whether the images of rims have a closed form for the scene:
// a static observer outside an uncharged object.
func HasRims(s scenes.Scene) bool {
	o := s.Observer
	return o.Motion == "static" && s.Object.Charge == 0 && o.Radius > math.Max(geodesic.PhotonSphere, s.Object.Radius) &&
		(s.Object.Kind == "black-hole" || s.Object.Radius <= geodesic.PhotonSphere || s.Object.Interior == "opaque")
}

// Rim is the image of one rim of a disk, in one order.
type Rim struct {
	Emitter, Order int
	Outer          bool
	Radius         float64    // of the rim, M
	Curve          []RimPoint // around the screen, closed
}

// RimPoint is a point of a rim's image.
type RimPoint struct{ Impact, Cos, Sin float64 } // b in M, and the screen angle

// rimsOf remembers the last scene's rims, which the picture and the table
// want in turn.
var rimsOf struct {
	sync.Mutex
	key  string
	rims []Rim
}

// Rims returns the images of all rims of disks by closed form, in all orders;
// none where there is no closed form. It is safe for concurrent use.
func Rims(s scenes.Scene) []Rim {
	if !HasRims(s) {
		return nil
	}
	key := fmt.Sprint(s.Observer, s.Object.Radius, s.Trace.MaxOrder)
	for _, e := range s.Emitters {
		key += fmt.Sprint(e.Kind, e.Inner, e.Outer)
	}
	rimsOf.Lock()
	defer rimsOf.Unlock()
	if rimsOf.key != key {
		rimsOf.key, rimsOf.rims = key, rims(s)
	}
	return rimsOf.rims
}

func rims(s scenes.Scene) []Rim {
	var all []Rim
	sinI, cosI := geodesic.SinCosDeg(s.Observer.Inclination)
	for e, emitter := range s.Emitters {
		if emitter.Kind != "disk" {
			continue
		}
		for n := range s.Trace.MaxOrder + 1 {
			for _, outer := range []bool{false, true} {
				r := emitter.Inner.Radius
				if outer {
					r = emitter.Outer
				}
				if r <= geodesic.HorizonRadius*(1+1e-9) {
					r = geodesic.HorizonRadius * (1 + 1e-9) // the closed form's end
				}
				rim := Rim{Emitter: e, Order: n, Outer: outer, Radius: r}
				for k := range rimAngles {
					sin, cos := math.Sincos(2 * math.Pi * float64(k) / rimAngles)
					psi := geodesic.FirstPlaneAngle(sinI, cosI, sin) + float64(n)*math.Pi
					rim.Curve = append(rim.Curve, RimPoint{geodesic.RimImpact(1/s.Observer.Radius, psi, r), cos, sin})
				}
				all = append(all, rim)
			}
		}
	}
	return all
}

// On returns the curve in the screen coordinates of a field; NaN where the
// field shows no such direction.
func (r Rim) On(f raytrace.Field, s scenes.Scene) ([][2]float64, error) {
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		return nil, err
	}
	points := make([][2]float64, len(r.Curve))
	for k, p := range r.Curve {
		if f.IsParallel() {
			points[k] = [2]float64{p.Impact * p.Cos, p.Impact * p.Sin}
			continue
		}
		o := s.Observer.Radius
		angle := math.Asin(min(1, p.Impact*object.Lapse(o)/o))
		points[k][0], points[k][1] = project(f, math.Sin(angle)*p.Cos, math.Sin(angle)*p.Sin, math.Cos(angle))
	}
	return points, nil
}
