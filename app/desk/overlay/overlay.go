package overlay

import (
	"fmt"
	"image"
	"image/color"
	"math"

	"annulet/app/curves"
	"annulet/app/desk/state"
	"annulet/app/ink"
	"annulet/raytrace"
	"annulet/scenes"
)

// Order asks for a drawing.
type Order struct {
	Scene scenes.Scene
	Look  state.Look
	Plate *raytrace.Plate // may be coarser than its field
	Of    raytrace.Field  // of the plate
	Shown raytrace.Field  // of the picture
	Font  []byte          // TrueType
	Scale float64         // screen pixels in a logical one
}

var (
	line = color.NRGBA{0xf4, 0xf4, 0xf0, 0xff}
	halo = color.NRGBA{0, 0, 0, 0x90}
)

const (
	lineWidth = 1.3 // logical pixels
	wordSize  = 12
	inset     = 12 // from the picture's edge
)

// drawing is a picture being drawn.
type drawing struct {
	Order
	dst  *image.RGBA
	face ink.Face
	at   func(alpha, beta float64) ink.Point
	px   float64 // of a logical pixel
	rows float64 // of the legend so far
}

// Layers returns the layers that a drawing needs.
func Layers(o state.Overlays) []raytrace.Layer {
	switch o.Contours {
	case state.ContoursOfG:
		return []raytrace.Layer{raytrace.Redshift}
	case state.ContoursOfR:
		return []raytrace.Layer{raytrace.Radius}
	}
	return nil
}

// Draw returns a picture of Shown's size, transparent but for the drawing;
// nil if there is nothing to draw. Where something has no closed form for the
// scene it is left out and the legend says so.
func Draw(o Order) (*image.RGBA, error) {
	if o.Look.Overlays == (state.Overlays{}) || o.Shown.Columns == 0 {
		return nil, nil
	}
	face, err := ink.NewFace(o.Font, wordSize*o.Scale)
	if err != nil {
		return nil, fmt.Errorf("overlay: %w", err)
	}
	d := &drawing{
		Order: o, face: face, px: o.Scale, at: Place(o.Shown),
		dst: image.NewRGBA(image.Rect(0, 0, o.Shown.Columns, o.Shown.Rows)),
	}
	if o.Look.Overlays.Contours != state.NoContours {
		d.contours()
	}
	if o.Look.Overlays.Rims {
		d.rims()
	}
	if o.Look.Overlays.Critical {
		d.critical()
	}
	if o.Look.Overlays.Scale {
		d.scaleBar()
	}
	if o.Look.Overlays.North {
		d.north()
	}
	if o.Look.Overlays.Beam {
		d.beam()
	}
	return d.dst, nil
}

// Place returns where screen coordinates lie on a picture.
func Place(shown raytrace.Field) func(alpha, beta float64) ink.Point {
	pitch := shown.Pitch()
	left := shown.Center[0] - pitch*float64(shown.Columns)/2
	top := shown.Center[1] + pitch*float64(shown.Rows)/2
	return func(alpha, beta float64) ink.Point {
		return ink.Point{X: (alpha - left) / pitch, Y: (top - beta) / pitch}
	}
}

// pen returns a pen with a dash in logical pixels.
func (d *drawing) pen(dash ...float64) ink.Pen {
	p := ink.Pen{Width: lineWidth * d.px, Colour: line, Halo: halo}
	for _, x := range dash {
		p.Dash = append(p.Dash, x*d.px)
	}
	return p
}

// legend names a line style.
func (d *drawing) legend(words string, pen ink.Pen) {
	const sample, gap = 26, 6
	y := inset*d.px + (d.rows+0.5)*d.face.Height()
	d.rows++
	ink.Stroke(d.dst, pen, []ink.Point{{X: inset * d.px, Y: y}, {X: (inset + sample) * d.px, Y: y}})
	d.face.Write(d.dst, ink.Point{X: (inset + sample + gap) * d.px, Y: y + d.face.Ascent()*0.35}, words, line, halo, ink.Left)
}

// say puts words where the legend is.
func (d *drawing) say(words string) {
	y := inset*d.px + (d.rows+0.5)*d.face.Height()
	d.rows++
	d.face.Write(d.dst, ink.Point{X: inset * d.px, Y: y + d.face.Ascent()*0.35}, words, line, halo, ink.Left)
}

// curve draws a closed line of screen coordinates.
func (d *drawing) curve(points [][2]float64, pen ink.Pen) {
	var all []ink.Point
	for k := 0; k <= len(points) && len(points) > 0; k++ {
		p := points[k%len(points)]
		all = append(all, d.at(p[0], p[1]))
	}
	if d.Shown.Projection == raytrace.AllSky { // no line across the whole sky
		for k := len(all) - 1; k > 0; k-- {
			if math.Abs(all[k].X-all[k-1].X) > float64(d.Shown.Columns)/2 {
				all = append(all[:k], append([]ink.Point{{X: math.NaN()}}, all[k:]...)...)
			}
		}
	}
	ink.Stroke(d.dst, pen, all)
}

// critical draws the critical curve, or the limb of an opaque star that is
// larger than its photon sphere.
func (d *drawing) critical() {
	points, name, err := curves.Critical(d.Scene, d.Shown)
	if err != nil {
		d.say(err.Error())
		return
	}
	pen := d.pen(9, 3, 2, 3)
	d.legend(name, pen)
	d.curve(points, pen)
}

// rims draws the images of the disks' rims.
func (d *drawing) rims() {
	if !curves.HasRims(d.Scene) {
		d.say("rims: no closed form for this object or observer")
		return
	}
	rims := curves.Rims(d.Scene)
	pens := []ink.Pen{d.pen(), d.pen(6, 4), d.pen(1.5, 3)}
	named := -1
	for _, r := range rims {
		if d.Look.Order != state.AllOrders && d.Look.Order != r.Order {
			continue
		}
		pen := pens[min(r.Order, len(pens)-1)]
		if named < r.Order {
			named = r.Order
			words := fmt.Sprintf("rims, order %d", r.Order)
			if r.Order >= len(pens)-1 && d.Look.Order == state.AllOrders && d.Scene.Trace.MaxOrder > r.Order {
				words, named = fmt.Sprintf("rims, orders %d to %d", r.Order, d.Scene.Trace.MaxOrder), d.Scene.Trace.MaxOrder
			}
			d.legend(words, pen)
		}
		points, err := r.On(d.Shown, d.Scene)
		if err != nil {
			return
		}
		d.curve(points, pen)
	}
	if len(rims) == 0 {
		d.say("no disk, no rims")
	}
}
