package state

import (
	"math"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// closedFigures is how many figures a closed form is shown with; they are
// good to about 12. Taste.
const closedFigures = 8

// ObserverTable lists what the observer's own clocks, rulers and eyes show.
func ObserverTable(s scenes.Scene) Table {
	var t Table
	t.section("Observer")
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		t.say("none", err.Error())
		return t
	}
	o := s.Observer
	at := object.Station(o.Radius)
	t.place("r", o.Radius, s)
	t.say("motion", o.Motion)
	motion := map[string]geodesic.Motion{"orbit": geodesic.Orbit, "infall": geodesic.Infall}[o.Motion]
	speed, shadow := 0., at.ShadowStatic
	switch motion {
	case geodesic.Orbit:
		speed, shadow = at.OrbitSpeed, at.ShadowOrbit
	case geodesic.Infall:
		speed, shadow = at.InfallSpeed, at.ShadowInfall
	}
	t.number("speed", speed, "c")
	t.number("clock rate", at.ClockRate*math.Sqrt(1-speed*speed), "")
	t.number("static clock", at.ClockRate, "")
	t.number("ruler stretch", at.RulerStretch, "")
	t.angle("escape cone", at.EscapeCone)
	if math.IsInf(o.Radius, 1) {
		t.number("critical b", object.CriticalImpact(), "M")
		if theta, ok := s.ThetaG(); ok {
			t.number("shadow radius", object.CriticalImpact()*theta, "µas")
		}
	} else {
		t.angle("shadow radius", shadow)
		if motion == geodesic.Orbit {
			t.angle("its centre", at.ShadowCentre)
		}
	}
	t.section("Object")
	t.say("kind", s.Object.Kind)
	t.place("edge", object.Edge(), s)
	t.place("photon sphere", object.PhotonSphere(), s)
	t.place("isco", s.Object.ISCO(), s)
	t.number("critical b", object.CriticalImpact(), "M")
	if theta, ok := s.ThetaG(); ok {
		t.number("1 M on the sky", theta, "µas")
	}
	if seconds, ok := s.SecondsPerM(); ok {
		t.number("1 M of time", seconds, "s")
	}
	t.Remark = "Closed forms, good to 12 digits. The clock rate is proper time over time far away, of a clock that moves with the observer; the speed is that in the static frame."
	if object.PhotonSphere() < object.Edge() {
		t.Remark += " The photon sphere and the critical b are those of the mass alone: the object is larger."
	}
	return t
}

// place lists a radius, in km too if the scene has a mass.
func (t *Table) place(name string, r float64, s scenes.Scene) {
	t.number(name, r, "M")
	if metres, ok := s.MetresPerM(); ok && !math.IsInf(r, 0) {
		const metresPerKm = 1000
		t.number("", r*metres/metresPerKm, "km")
	}
}

// number lists a closed form's value, or that there is none.
func (t *Table) number(name string, x float64, unit string) {
	if math.IsNaN(x) || math.IsInf(x, 0) {
		unit = ""
	}
	t.add(name, figures(x, closedFigures), unit, x)
}

// angle lists an angle given in radians.
func (t *Table) angle(name string, x float64) { t.number(name, x*180/math.Pi, "deg") }
