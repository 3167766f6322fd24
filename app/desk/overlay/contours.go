package overlay

import (
	"fmt"
	"math"

	"annulet/app/curves"
	"annulet/app/desk/state"
	"annulet/app/ink"
	"annulet/raytrace"
)

// Levels of the contours. Taste: g by fifths, r where radii have names.
var (
	levelsOfG = []float64{0.2, 0.4, 0.6, 0.8, 1, 1.2, 1.4}
	levelsOfR = []float64{3, 4, 6, 10, 20, 50, 100, 200, 500}
)

// contours draws lines of equal g or r of one order; of all orders, the
// lowest one's.
func (d *drawing) contours() {
	layer, levels, name := raytrace.Redshift, levelsOfG, "g"
	if d.Look.Overlays.Contours == state.ContoursOfR {
		layer, levels, name = raytrace.Radius, levelsOfR, "r"
	}
	values := d.Plate.Layer(layer, max(0, d.Look.Order))
	if values == nil {
		return
	}
	columns, rows := d.Plate.Columns, d.Plate.Rows
	pitch := d.Of.Pitch() * float64(d.Of.Columns) / float64(columns)
	if d.Of.Projection != raytrace.AllSky { // a coarse plate keeps the left edge
		pitch = d.Of.Pitch() * math.Round(float64(d.Of.Columns)/float64(columns))
	}
	left := d.Of.Center[0] - d.Of.Pitch()*float64(d.Of.Columns)/2
	bottom := d.Of.Center[1] - d.Of.Pitch()*float64(d.Of.Rows)/2
	place := func(column, row float64) ink.Point {
		return d.at(left+(column+0.5)*pitch, bottom+(row+0.5)*pitch)
	}
	var all, unity [][]ink.Point
	var labels []func()
	for _, level := range levels {
		var pieces [][]ink.Point
		for _, line := range curves.Isolines(values, columns, rows, level) {
			var piece []ink.Point
			for _, p := range line {
				piece = append(piece, place(p[0], p[1]))
			}
			pieces = append(pieces, piece)
		}
		if len(pieces) == 0 {
			continue
		}
		if level == 1 {
			unity = pieces
		} else {
			all = append(all, pieces...)
		}
		words := fmt.Sprintf("%g", level)
		if name == "r" {
			words += " M"
		}
		top := pieces[0][0]
		for _, p := range pieces {
			if p[0].Y < top.Y && p[0].Y > d.face.Height() {
				top = p[0]
			}
		}
		labels = append(labels, func() {
			d.face.Write(d.dst, ink.Point{X: top.X, Y: top.Y + d.face.Ascent()*0.4}, words, line, halo, ink.Centre)
		})
	}
	thin := d.pen()
	thin.Width, thin.Colour.A, thin.Halo.A = 0.9*d.px, 0xc0, 0x50
	ink.Stroke(d.dst, thin, all...)
	ink.Stroke(d.dst, d.pen(), unity...)
	for _, write := range labels {
		write()
	}
	d.say(fmt.Sprintf("contours of %s, order %d", name, max(0, d.Look.Order)))
}
