// Package graph holds the desk's graphs: curves with axes and units, drawn on
// pixels, read under the pointer and written as CSV. It imports no window
// toolkit.
package graph

import (
	"fmt"
	"image"
	"image/color"
	"math"
	"strconv"
	"strings"

	"annulet/app/ink"
)

// Graph is curves over one pair of axes.
type Graph struct {
	Title        string
	XName, XUnit string
	YName, YUnit string
	Curves       []Curve
	Dots         []Dot
	LogX, LogY   bool
	SameScale    bool // one unit is as long on both axes
	X, Y         *[2]float64
	FromZero     bool // the y axis begins at 0
	Note         string
}

// Curve is a line through points; NaN breaks it.
type Curve struct {
	Name  string
	X, Y  []float64
	Style Style
	Step  bool // a histogram: X are edges, one more than Y
}

// Dot marks a point with words.
type Dot struct {
	X, Y float64
	Name string
}

// Style tells curves apart without colour.
type Style int

// The styles.
const (
	Solid Style = iota
	Dashed
	Dotted
	DashDotted
	Faint // thin, for what the others are compared with
)

// Paint is what a graph is drawn with.
type Paint struct {
	Ground, Words, Quiet, Edge color.NRGBA
	Lines                      []color.NRGBA
	Font                       []byte
	Scale                      float64 // screen pixels in a logical one
}

const (
	fontSize  = 11
	tickSize  = 4
	margin    = 8
	lineWidth = 1.5
)

// Plot is a graph as it was drawn: it knows which pixel is which value.
type Plot struct {
	Graph  Graph
	Image  *image.RGBA
	frame  [4]float64 // left, right, top, bottom of the axes, pixels
	x, y   [2]float64 // what they span
	locate func(x, y float64) ink.Point
}

// Draw draws a graph of columns × rows pixels; nil if that is too small.
func Draw(g Graph, columns, rows int, p Paint) (*Plot, error) {
	face, err := ink.NewFace(p.Font, fontSize*p.Scale)
	if err != nil {
		return nil, fmt.Errorf("graph: %w", err)
	}
	px := p.Scale
	if float64(columns) < 80*px || float64(rows) < 60*px {
		return nil, nil
	}
	plot := &Plot{Graph: g, Image: image.NewRGBA(image.Rect(0, 0, columns, rows))}
	m := plot.Image
	ink.Fill(m, p.Ground)
	plot.x, plot.y = g.extent(true), g.extent(false)
	line := face.Height()
	top, bottom := margin*px, float64(rows)-2*line-margin*px
	if g.Title != "" {
		top += line
	}
	yTicks, yDecimals := g.ticks(plot.y, g.LogY, int((bottom-top)/(2.2*line)))
	widest := 0.
	for _, v := range yTicks {
		widest = max(widest, face.Width(g.label(v, yDecimals, g.LogY)))
	}
	left, right := margin*px+line+widest+6*px, float64(columns)-margin*px
	if g.SameScale { // make the frame as wide as the axes ask for
		plot.equalise((right-left)/(bottom-top), g)
		yTicks, yDecimals = g.ticks(plot.y, g.LogY, int((bottom-top)/(2.2*line)))
	}
	plot.frame = [4]float64{left, right, top, bottom}
	plot.locate = func(x, y float64) ink.Point {
		return ink.Point{
			X: left + (right-left)*along(x, plot.x, g.LogX),
			Y: bottom - (bottom-top)*along(y, plot.y, g.LogY),
		}
	}
	frame := ink.Pen{Width: px, Colour: p.Edge}
	none := color.NRGBA{}
	for _, v := range yTicks {
		at := plot.locate(plot.x[0], v)
		ink.Stroke(m, frame, []ink.Point{{X: left, Y: at.Y}, {X: left + tickSize*px, Y: at.Y}}, []ink.Point{{X: right - tickSize*px, Y: at.Y}, {X: right, Y: at.Y}})
		face.Write(m, ink.Point{X: left - 4*px, Y: at.Y + face.Ascent()*0.35}, g.label(v, yDecimals, g.LogY), p.Quiet, none, ink.Right)
	}
	xTicks, xDecimals := g.ticks(plot.x, g.LogX, int((right-left)/(58*px)))
	for _, v := range xTicks {
		at := plot.locate(v, plot.y[0])
		ink.Stroke(m, frame, []ink.Point{{X: at.X, Y: bottom}, {X: at.X, Y: bottom - tickSize*px}}, []ink.Point{{X: at.X, Y: top}, {X: at.X, Y: top + tickSize*px}})
		words := g.label(v, xDecimals, g.LogX)
		half := face.Width(words) / 2
		x := min(max(at.X, half+2*px), float64(columns)-half-2*px)
		face.Write(m, ink.Point{X: x, Y: bottom + line}, words, p.Quiet, none, ink.Centre)
	}
	ink.Stroke(m, frame, []ink.Point{{X: left, Y: top}, {X: right, Y: top}, {X: right, Y: bottom}, {X: left, Y: bottom}, {X: left, Y: top}})
	face.Write(m, ink.Point{X: (left + right) / 2, Y: bottom + 2*line}, named(g.XName, g.XUnit), p.Words, none, ink.Centre)
	if g.Title != "" {
		face.Write(m, ink.Point{X: left, Y: top - 4*px}, g.Title, p.Words, none, ink.Left)
	}
	upright(m, face, named(g.YName, g.YUnit), ink.Point{X: margin*px + line*0.5, Y: (top + bottom) / 2}, p.Words)
	plot.curves(p, face)
	return plot, nil
}

// curves draws the curves, cut to the frame, the dots and a legend.
func (plot *Plot) curves(p Paint, face ink.Face) {
	px := p.Scale
	inner := image.Rect(int(plot.frame[0]+1), int(plot.frame[2]+1), int(plot.frame[1]), int(plot.frame[3]))
	layer := image.NewRGBA(plot.Image.Rect)
	named := 0
	corner := plot.legendAt(face, px)
	for k, c := range plot.Graph.Curves {
		pen := pen(c.Style, p.Lines[k%len(p.Lines)], px)
		if c.Style == Faint {
			pen.Colour = p.Quiet
		}
		ink.Stroke(layer, pen, plot.points(c))
		if c.Name == "" {
			continue
		}
		y := corner.Y + (float64(named)+1)*face.Height()
		named++
		right, width := corner.X, face.Width(c.Name)
		ink.Stroke(layer, pen, []ink.Point{{X: right - width - 28*px, Y: y - face.Ascent()*0.35}, {X: right - width - 5*px, Y: y - face.Ascent()*0.35}})
		face.Write(layer, ink.Point{X: right, Y: y}, c.Name, p.Words, p.Ground, ink.Right)
	}
	for _, d := range plot.Graph.Dots {
		at := plot.locate(d.X, d.Y)
		ink.Disc(layer, at, 3*px, p.Words)
		face.Write(layer, ink.Point{X: at.X + 6*px, Y: at.Y - 3*px}, d.Name, p.Words, p.Ground, ink.Left)
	}
	ink.Lay(plot.Image, layer, inner)
}

// legendAt returns the top right corner of the legend, in that corner of the
// frame where it hides least of the curves.
func (plot *Plot) legendAt(face ink.Face, px float64) ink.Point {
	wide, lines := 0., 0.
	for _, c := range plot.Graph.Curves {
		if c.Name != "" {
			wide, lines = max(wide, face.Width(c.Name)+28*px), lines+1
		}
	}
	high := (lines + 0.5) * face.Height()
	left, right, top, bottom := plot.frame[0], plot.frame[1], plot.frame[2], plot.frame[3]
	corners := [...]ink.Point{
		{X: right - 8*px, Y: top}, {X: left + wide + 8*px, Y: top},
		{X: right - 8*px, Y: bottom - high}, {X: left + wide + 8*px, Y: bottom - high},
	}
	var hidden [len(corners)]int
	for _, c := range plot.Graph.Curves {
		for _, at := range plot.points(c) {
			for k, corner := range corners {
				if at.X > corner.X-wide && at.X < corner.X && at.Y > corner.Y && at.Y < corner.Y+high {
					hidden[k]++
				}
			}
		}
	}
	best := 0
	for k := range corners {
		if hidden[k] < hidden[best] {
			best = k
		}
	}
	return corners[best]
}

func pen(s Style, colour color.NRGBA, px float64) ink.Pen {
	p := ink.Pen{Width: lineWidth * px, Colour: colour}
	switch s {
	case Dashed:
		p.Dash = []float64{6 * px, 4 * px}
	case Dotted:
		p.Dash = []float64{1.5 * px, 3 * px}
	case DashDotted:
		p.Dash = []float64{8 * px, 3 * px, 2 * px, 3 * px}
	case Faint:
		p.Width = px
	}
	return p
}

// points returns where a curve lies.
func (plot *Plot) points(c Curve) []ink.Point {
	var all []ink.Point
	if c.Step {
		for k, y := range c.Y {
			all = append(all, plot.locate(c.X[k], y), plot.locate(c.X[k+1], y))
		}
		return all
	}
	for k := range c.X {
		all = append(all, plot.locate(c.X[k], c.Y[k]))
	}
	return all
}

// along returns where a value lies between the ends of an axis, 0 to 1.
func along(v float64, axis [2]float64, log bool) float64 {
	if log {
		return math.Log(v/axis[0]) / math.Log(axis[1]/axis[0])
	}
	return (v - axis[0]) / (axis[1] - axis[0])
}

// extent returns what an axis spans.
func (g Graph) extent(x bool) [2]float64 {
	fixed, log := g.Y, g.LogY
	if x {
		fixed, log = g.X, g.LogX
	}
	if fixed != nil {
		return *fixed
	}
	lo, hi := math.Inf(1), math.Inf(-1)
	for _, c := range g.Curves {
		values := c.Y
		if x {
			values = c.X
		}
		for _, v := range values {
			if math.IsNaN(v) || math.IsInf(v, 0) || log && v <= 0 {
				continue
			}
			lo, hi = min(lo, v), max(hi, v)
		}
	}
	switch {
	case lo > hi:
		return [2]float64{1, 2}
	case log:
		const mostDecades = 1e6
		lo = max(lo, hi/mostDecades)
		return [2]float64{lo / 1.3, hi * 1.3}
	case x:
	case g.FromZero:
		lo, hi = 0, hi*1.08
	default:
		lo, hi = lo-0.05*(hi-lo), hi+0.05*(hi-lo)
	}
	if hi == lo {
		d := max(math.Abs(hi), 1) * 0.05
		lo, hi = lo-d, hi+d
	}
	return [2]float64{lo, hi}
}

// equalise widens one axis so that a unit is as long on both; shape is width
// over height.
func (plot *Plot) equalise(shape float64, g Graph) {
	w, h := plot.x[1]-plot.x[0], plot.y[1]-plot.y[0]
	if w < h*shape {
		d := (h*shape - w) / 2
		plot.x = [2]float64{plot.x[0] - d, plot.x[1] + d}
		return
	}
	d := (w/shape - h) / 2
	plot.y = [2]float64{plot.y[0] - d, plot.y[1] + d}
}

func (g Graph) ticks(axis [2]float64, log bool, n int) ([]float64, int) {
	if !log {
		return ink.Ticks(axis[0], axis[1], max(3, n))
	}
	var all []float64
	decades := math.Log10(axis[1] / axis[0])
	step := max(1, math.Ceil(decades/float64(max(1, n))))
	for k := math.Ceil(math.Log10(axis[0])); k <= math.Log10(axis[1]); k += step {
		all = append(all, math.Pow(10, k))
	}
	if len(all) < 2 {
		return ink.Ticks(axis[0], axis[1], max(3, n))
	}
	return all, 0
}

func (g Graph) label(v float64, decimals int, log bool) string {
	if power := math.Log10(v); log && (v >= 1e4 || v < 1e-2) && power == math.Round(power) {
		return "10" + raised.Replace(strconv.Itoa(int(power)))
	}
	if log {
		return strconv.FormatFloat(v, 'g', 4, 64)
	}
	return ink.Decimal(v, decimals)
}

// raised turns a whole number into an exponent.
var raised = strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹")

func named(name, unit string) string {
	if unit == "" {
		return name
	}
	return name + " [" + unit + "]"
}

// upright writes words from the bottom up, their middle at a point.
func upright(dst *image.RGBA, face ink.Face, words string, at ink.Point, colour color.NRGBA) {
	if words == "" {
		return
	}
	w, h := int(face.Width(words))+4, int(face.Height())+4
	flat := image.NewRGBA(image.Rect(0, 0, w, h))
	face.Write(flat, ink.Point{X: 2, Y: face.Ascent() + 1}, words, colour, color.NRGBA{}, ink.Left)
	turned := image.NewRGBA(image.Rect(0, 0, h, w))
	for y := range h {
		for x := range w {
			turned.SetRGBA(y, w-1-x, flat.RGBAAt(x, y))
		}
	}
	corner := image.Pt(int(at.X)-h/2, int(at.Y)-w/2)
	ink.LayAt(dst, turned, corner)
}

// At returns the values at a pixel, within the axes only.
func (plot *Plot) At(x, y float64) (vx, vy float64, ok bool) {
	f := plot.frame
	if x < f[0] || x > f[1] || y < f[2] || y > f[3] {
		return 0, 0, false
	}
	back := func(t float64, axis [2]float64, log bool) float64 {
		if log {
			return axis[0] * math.Pow(axis[1]/axis[0], t)
		}
		return axis[0] + t*(axis[1]-axis[0])
	}
	return back((x-f[0])/(f[1]-f[0]), plot.x, plot.Graph.LogX), back((f[3]-y)/(f[3]-f[2]), plot.y, plot.Graph.LogY), true
}

// Reading returns, in words, the values nearest to a pixel: along x for
// functions of it, and the place itself on a plane.
func (plot *Plot) Reading(px, py float64) string {
	x, y, ok := plot.At(px, py)
	if !ok {
		return ""
	}
	g := plot.Graph
	if g.SameScale {
		return fmt.Sprintf("%s %.4g %s   %s %.4g %s", g.XName, x, g.XUnit, g.YName, y, g.YUnit)
	}
	var b strings.Builder
	fmt.Fprintf(&b, "%s %.4g %s", g.XName, x, g.XUnit)
	for _, c := range g.Curves {
		v := c.value(x)
		if math.IsNaN(v) || c.Style == Faint {
			continue
		}
		name := c.Name
		if name == "" {
			name = g.YName
		}
		fmt.Fprintf(&b, "   %s %.4g %s", name, v, g.YUnit)
	}
	return b.String()
}

// value returns a curve's value at the sample nearest to x; NaN outside it.
func (c Curve) value(x float64) float64 {
	if c.Step {
		for k := range c.Y {
			if x >= c.X[k] && x < c.X[k+1] {
				return c.Y[k]
			}
		}
		return math.NaN()
	}
	best, at := math.Inf(1), math.NaN()
	for k, v := range c.X {
		if d := math.Abs(v - x); d < best {
			best, at = d, c.Y[k]
		}
	}
	return at
}

// CSV writes every curve's points, one a row.
func (g Graph) CSV() string {
	var b strings.Builder
	write := func(v float64) string { return strconv.FormatFloat(v, 'g', -1, 64) }
	fmt.Fprintf(&b, "curve,%s,%s\n", field(named(g.XName, g.XUnit)), field(named(g.YName, g.YUnit)))
	for _, c := range g.Curves {
		name := c.Name
		if name == "" {
			name = g.YName
		}
		for k, y := range c.Y {
			x := c.X[k]
			if c.Step {
				x = (c.X[k] + c.X[k+1]) / 2
			}
			fmt.Fprintf(&b, "%s,%s,%s\n", field(name), write(x), write(y))
		}
	}
	return b.String()
}

func field(text string) string {
	if strings.ContainsAny(text, ",\"\n") {
		return `"` + strings.ReplaceAll(text, `"`, `""`) + `"`
	}
	return text
}
