package state

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

// diameters returns 2 max|α| and 2 max|β|, M, with the extremum between
// points by a parabola.
func (r Rim) diameters() (horizontal, vertical float64) {
	widest := func(along func(RimPoint) float64) float64 {
		n, best := len(r.Curve), 0.
		for k := range r.Curve {
			a, b, c := along(r.Curve[(k+n-1)%n]), along(r.Curve[k]), along(r.Curve[(k+1)%n])
			if b < a || b < c || b < best {
				continue
			}
			best = b
			if bend := a - 2*b + c; bend < 0 {
				best = b - (a-c)*(a-c)/(8*bend)
			}
		}
		return 2 * best
	}
	return widest(func(p RimPoint) float64 { return math.Abs(p.Impact * p.Cos) }),
		widest(func(p RimPoint) float64 { return math.Abs(p.Impact * p.Sin) })
}

// rimFigures is what the parabola is good for.
const rimFigures = 6

// RingsTable lists the critical curve and the image of every rim. Rims are
// those that Rims returned.
func RingsTable(s scenes.Scene, rims []Rim) Table {
	var t Table
	theta, sky := s.ThetaG()
	sky = sky && math.IsInf(s.Observer.Radius, 1)
	size := func(name string, d float64, figs int) {
		t.add(name, figures(d, figs), "M", d)
		if sky {
			t.add("", figures(d*theta, figs), "µas", d*theta)
		}
	}
	t.section("Critical curve")
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		t.say("none", err.Error())
		return t
	}
	if object.Edge() >= object.PhotonSphere() {
		t.say("none", "the object is larger than its photon sphere")
	} else {
		size("diameter", 2*object.CriticalImpact(), closedFigures)
	}
	for _, r := range rims {
		edge := map[bool]string{false: "inner", true: "outer"}[r.Outer]
		title := fmt.Sprintf("Order %d, %s rim at %s", r.Order, edge, figures(r.Radius, 4)+" M")
		t.section(title)
		horizontal, vertical := r.diameters()
		size("across α", horizontal, rimFigures)
		size("along β", vertical, rimFigures)
	}
	switch {
	case len(rims) > 0:
		t.Remark = "Diameters 2b by closed form: 2 max|α| and 2 max|β| of each rim's image."
	case HasRims(s):
		t.Remark = "The scene has no disk."
	default:
		t.Remark = "The images of rims have a closed form only for a static observer outside an uncharged object."
	}
	return t
}
