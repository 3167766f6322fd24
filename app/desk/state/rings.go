package state

import (
	"fmt"
	"math"

	"annulet/app/curves"
	"annulet/raytrace"
	"annulet/scenes"
)

// diameters returns 2 max|α| and 2 max|β|, M, with the extremum between
// points by a parabola.
func diameters(r curves.Rim) (horizontal, vertical float64) {
	widest := func(along func(curves.RimPoint) float64) float64 {
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
	return widest(func(p curves.RimPoint) float64 { return math.Abs(p.Impact * p.Cos) }),
		widest(func(p curves.RimPoint) float64 { return math.Abs(p.Impact * p.Sin) })
}

// rimFigures is what the parabola is good for.
const rimFigures = 6

// RingsTable lists the critical curve and the image of every rim. Rims are
// those that Rims returned.
func RingsTable(s scenes.Scene, rims []curves.Rim) Table {
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
		horizontal, vertical := diameters(r)
		size("across α", horizontal, rimFigures)
		size("along β", vertical, rimFigures)
	}
	switch {
	case len(rims) > 0:
		t.Remark = "Diameters 2b by closed form: 2 max|α| and 2 max|β| of each rim's image."
	case curves.HasRims(s):
		t.Remark = "The scene has no disk."
	default:
		t.Remark = "The images of rims have a closed form only for a static observer outside an uncharged object."
	}
	return t
}
