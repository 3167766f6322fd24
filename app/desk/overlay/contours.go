package overlay

import (
	"fmt"
	"math"

	"annulet/app/desk/ink"
	"annulet/app/desk/state"
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
		pieces := isolines(values, columns, rows, level, place)
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

// isolines returns the pieces of a level's line by marching squares: within
// each cell of four pixel centres the line is straight. Cells with a value
// that is missing have none.
func isolines(values []float32, columns, rows int, level float64, place func(column, row float64) ink.Point) [][]ink.Point {
	var all [][]ink.Point
	v := func(c, r int) float64 { return float64(values[r*columns+c]) - level }
	for r := range rows - 1 {
		for c := range columns - 1 {
			a, b, e, f := v(c, r), v(c+1, r), v(c+1, r+1), v(c, r+1)
			if math.IsNaN(a + b + e + f) {
				continue
			}
			if a > 0 && b > 0 && e > 0 && f > 0 || a <= 0 && b <= 0 && e <= 0 && f <= 0 {
				continue
			}
			var ends []ink.Point
			edge := func(p, q float64, x0, y0, dx, dy float64) {
				if (p > 0) != (q > 0) {
					t := p / (p - q)
					ends = append(ends, place(float64(c)+x0+t*dx, float64(r)+y0+t*dy))
				}
			}
			edge(a, b, 0, 0, 1, 0)
			edge(b, e, 1, 0, 0, 1)
			edge(e, f, 1, 1, -1, 0)
			edge(f, a, 0, 1, 0, -1)
			for k := 0; k+1 < len(ends); k += 2 {
				all = append(all, []ink.Point{ends[k], ends[k+1]})
			}
		}
	}
	return all
}
