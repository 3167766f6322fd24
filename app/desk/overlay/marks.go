package overlay

import (
	"fmt"
	"math"

	"annulet/app/curves"
	"annulet/app/ink"
	"annulet/raytrace"
)

// barShare is how much of the picture's width a scale bar takes at most.
// Taste.
const barShare = 0.22

// scaleBar draws a length of the screen, at the lower right.
func (d *drawing) scaleBar() {
	pitch := d.Shown.Pitch()
	longest := barShare * float64(d.Shown.Columns) * pitch
	unit, name := 1., "M"
	if !d.Shown.IsParallel() {
		unit, name = math.Pi/180, "deg"
	}
	length := roundDown(longest / unit)
	words := fmt.Sprintf("%g %s", length, name)
	if theta, ok := d.Scene.ThetaG(); ok && d.Shown.IsParallel() && math.IsInf(d.Scene.Observer.Radius, 1) {
		words += fmt.Sprintf(" = %.3g µas", length*theta)
	}
	if d.Shown.Projection == raytrace.Perspective {
		words += " at the middle"
	}
	pixels := length * unit / pitch
	right := float64(d.Shown.Columns) - inset*d.px
	y := float64(d.Shown.Rows) - inset*d.px
	const tick = 4
	ink.Stroke(d.dst, d.pen(),
		[]ink.Point{{X: right - pixels, Y: y}, {X: right, Y: y}},
		[]ink.Point{{X: right - pixels, Y: y - tick*d.px}, {X: right - pixels, Y: y}},
		[]ink.Point{{X: right, Y: y - tick*d.px}, {X: right, Y: y}})
	d.face.Write(d.dst, ink.Point{X: right, Y: y - (tick+3)*d.px}, words, line, halo, ink.Right)
}

// roundDown returns the largest of 1, 2, 5 times a power of ten that is not
// larger.
func roundDown(x float64) float64 {
	power := math.Pow(10, math.Floor(math.Log10(x)))
	for _, m := range []float64{5, 2} {
		if m*power <= x {
			return m * power
		}
	}
	return power
}

// north draws the directions of north and east, at the upper right. The
// position angle of the projected disk axis, up on the screen, goes from north
// through east, which is to the left.
func (d *drawing) north() {
	const length = 30
	sin, cos := math.Sincos(d.Scene.Observer.PositionAngle * math.Pi / 180)
	from := ink.Point{X: float64(d.Shown.Columns) - (inset+length+14)*d.px, Y: (inset + length + 14) * d.px}
	for _, arm := range []struct {
		x, y float64 // to the right and up
		name string
	}{{sin, cos, "N"}, {-cos, sin, "E"}} {
		tip := ink.Point{X: from.X + arm.x*length*d.px, Y: from.Y - arm.y*length*d.px}
		const head, slope = 6, 0.4
		barb := func(side float64) ink.Point {
			return ink.Point{
				X: tip.X - head*d.px*(arm.x+side*slope*arm.y),
				Y: tip.Y + head*d.px*(arm.y-side*slope*arm.x),
			}
		}
		ink.Stroke(d.dst, d.pen(), []ink.Point{from, tip}, []ink.Point{barb(1), tip, barb(-1)})
		d.face.Write(d.dst, ink.Point{X: tip.X + arm.x*10*d.px, Y: tip.Y - arm.y*10*d.px + d.face.Ascent()*0.4},
			arm.name, line, halo, ink.Centre)
	}
}

// beam draws the telescope's beam at half power, at the lower left.
func (d *drawing) beam() {
	theta, ok := d.Scene.ThetaG()
	if !ok || !d.Scene.Telescope.GivenBeam || !d.Shown.IsParallel() {
		d.say("no beam: the scene gives none, or no angular scale")
		return
	}
	b := d.Scene.Telescope.Beam
	major := b[0] / theta / 2 / d.Shown.Pitch()
	centre := ink.Point{X: major + inset*d.px, Y: float64(d.Shown.Rows) - major - inset*d.px}
	var points []ink.Point
	for _, p := range curves.Beam(d.Scene, theta) {
		points = append(points, ink.Point{X: centre.X + p[0]/d.Shown.Pitch(), Y: centre.Y - p[1]/d.Shown.Pitch()})
	}
	ink.Stroke(d.dst, d.pen(), points)
	d.face.Write(d.dst, ink.Point{X: centre.X, Y: centre.Y - major - 5*d.px}, "beam FWHM", line, halo, ink.Centre)
}
