package figure

import "image/color"

// style is how a figure looks.
type style struct {
	em                float64 // mm
	dark              bool
	paper, ink, quiet color.RGBA // ground, lines and words, lesser lines
}

// themes: light for paper, dark for slides. Taste.
func newStyle(dark bool, points float64) style {
	s := style{em: points * mmPerPoint, paper: color.RGBA{0xff, 0xff, 0xff, 0xff}, ink: color.RGBA{0, 0, 0, 0xff}, quiet: color.RGBA{0x77, 0x77, 0x77, 0xff}}
	if dark {
		s.dark = true
		s.paper, s.ink, s.quiet = color.RGBA{0x12, 0x14, 0x18, 0xff}, color.RGBA{0xee, 0xee, 0xea, 0xff}, color.RGBA{0x99, 0x99, 0x99, 0xff}
	}
	return s
}

// Widths of lines, mm: journals want half a point or more.
const (
	thinLine = 0.18
	dataLine = 0.32
)

// What lies over a picture is light on a dark edge, so that it shows on any
// colour and in grey.
var (
	overInk  = color.RGBA{0xff, 0xff, 0xff, 0xff}
	overEdge = color.RGBA{0x18, 0x18, 0x18, 0xff}
)

// overPen draws over a picture; its edge is drawn first.
func (st style) over(sheet *Sheet, line []point, width float64, dash ...float64) {
	for k := range dash {
		dash[k] *= st.em
	}
	for _, piece := range finitePieces(line) {
		sheet.stroke(pen{Width: width + 0.2, Colour: overEdge}, piece)
	}
	for _, piece := range finitePieces(line) {
		sheet.stroke(pen{Width: width, Colour: overInk, Dash: dash}, piece)
	}
}

// finitePieces cuts a line where a point is not finite.
func finitePieces(line []point) [][]point {
	var all [][]point
	var piece []point
	for _, p := range append(line, nowhere) {
		if p == p && p.X-p.X == 0 && p.Y-p.Y == 0 {
			piece = append(piece, p)
			continue
		}
		if len(piece) > 1 {
			all = append(all, piece)
		}
		piece = nil
	}
	return all
}

// Line styles of curves, in turn: ink and gap, em. Orders differ by style and
// lightness, not by hue alone.
var dashes = [][]float64{nil, {1.1, 0.45}, {0.3, 0.35}, {1.1, 0.35, 0.3, 0.35}}
