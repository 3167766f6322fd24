package figure

import (
	"image"
	"image/color"
)

// point is a place on the sheet, mm to the right and down.
type point struct{ X, Y float64 }

// rect is a rectangle of the sheet, mm.
type rect struct{ Left, Top, Right, Bottom float64 }

func (r rect) width() float64  { return r.Right - r.Left }
func (r rect) height() float64 { return r.Bottom - r.Top }

func (r rect) corners() []point {
	return []point{{r.Left, r.Top}, {r.Right, r.Top}, {r.Right, r.Bottom}, {r.Left, r.Bottom}, {r.Left, r.Top}}
}

// pen is how lines are drawn.
type pen struct {
	Width  float64 // mm
	Colour color.RGBA
	Dash   []float64 // ink and gap in turn, mm; nil for none
}

// align says which part of words stands at their place.
type align int

const (
	left align = iota
	centre
	right
)

// words is a piece of text.
type words struct {
	At      point // of the base line
	Text    string
	Size    float64 // mm of an em
	Colour  color.RGBA
	Align   align
	Upright bool // reads from the bottom up
}

// canvas is what a backend can do. Everything is in mm.
type canvas interface {
	stroke(p pen, line []point)
	fill(colour color.RGBA, outline []point)
	picture(img *image.Paletted, at rect)
	write(w words)
	clip(to rect)
	unclip()
}

// Sheet is a finished drawing.
type Sheet struct {
	Width, Height float64 // mm
	steps         []func(canvas)
	texts         []string // all that is written
}

func (s *Sheet) stroke(p pen, line []point) {
	s.steps = append(s.steps, func(c canvas) { c.stroke(p, line) })
}

func (s *Sheet) fill(colour color.RGBA, outline []point) {
	s.steps = append(s.steps, func(c canvas) { c.fill(colour, outline) })
}

func (s *Sheet) picture(img *image.Paletted, at rect) {
	s.steps = append(s.steps, func(c canvas) { c.picture(img, at) })
}

func (s *Sheet) write(w words) {
	s.texts = append(s.texts, w.Text)
	s.steps = append(s.steps, func(c canvas) { c.write(w) })
}

func (s *Sheet) clip(to rect) { s.steps = append(s.steps, func(c canvas) { c.clip(to) }) }
func (s *Sheet) unclip()      { s.steps = append(s.steps, func(c canvas) { c.unclip() }) }

// play draws the sheet on a canvas.
func (s *Sheet) play(c canvas) {
	for _, step := range s.steps {
		step(c)
	}
}

var _ canvas = (*Sheet)(nil)
