package state

import (
	"math"

	"annulet/scenes"
)

// CircleSection lists a circle drawn over the image.
func CircleSection(s scenes.Scene, c Circle) Section {
	var t Table
	t.section("Circle")
	theta, sky := s.ThetaG()
	size := func(name string, v float64) {
		if angular(s) {
			t.add(name, figures(v*180/math.Pi, 5), "deg", v*180/math.Pi)
			return
		}
		t.add(name, figures(v, 5), "M", v)
		if sky && math.IsInf(s.Observer.Radius, 1) {
			t.add("", figures(v*theta, 5), "µas", v*theta)
		}
	}
	size("diameter", 2*c.Radius)
	size("centre α", c.Centre[0])
	size("centre β", c.Centre[1])
	return t.Sections[0]
}
