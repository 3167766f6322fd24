package figure

import (
	"image/color"
	"math"

	"annulet/assets"
)

// curve is one of a graph, in the units of its axes.
type curve struct {
	name   string // in the legend; "" for none
	points []point
	dash   []float64 // em
	order  int       // image order, whose colour it has; -1 for the ink's
	fine   bool
}

// graphPanel is curves in axes, with the legend above.
type graphPanel struct {
	f      frame
	curves []curve
	square bool
	// Shapes of solid ground, in the units of the axes.
	solids [][]point
}

// orderColour is that of an image order: dark ones first on a light ground.
func (st style) orderColour(n int) color.RGBA {
	const orders = 10
	m, ok := assets.Lookup("orders")
	if !ok {
		panic("the map of orders is part of the program")
	}
	n = min(n, orders-1)
	if st.dark {
		n = orders - 1 - n
	}
	r, g, b := m.At8((float32(n) + 0.5) / orders)
	return color.RGBA{r, g, b, 0xff}
}

func (g *graphPanel) shape() float64 {
	if g.square {
		return 1
	}
	return 0
}

const (
	sampleLength = 2.4 // of a line in the legend, em
	entryGap     = 1.0
)

// legendRows breaks the entries of the legend into rows of a width.
func (g *graphPanel) legendRows(st style, width float64) (rows [][]int, widths []float64) {
	for k, c := range g.curves {
		if c.name == "" {
			continue
		}
		w := textWidth(c.name, st.em) + (sampleLength+0.4)*st.em
		n := len(rows) - 1
		if n < 0 || widths[n]+entryGap*st.em+w > width {
			rows, widths = append(rows, []int{k}), append(widths, w)
			continue
		}
		rows[n], widths[n] = append(rows[n], k), widths[n]+entryGap*st.em+w
	}
	return rows, widths
}

func (g *graphPanel) room(st style, width, height float64) (l, t, r, b float64) {
	l, t, r, b = g.f.room(st, width, height)
	rows, _ := g.legendRows(st, width)
	t += float64(len(rows)) * lineStep * st.em
	if len(rows) > 0 || g.f.Top != nil {
		t += 0.3 * st.em
	} else {
		t += lineStep * st.em // for the letter
	}
	return l, t, r, b
}

func (g *graphPanel) draw(sheet *Sheet, box rect, st style) {
	at := func(p point) point {
		return point{box.Left + g.f.X.at(p.X)*box.width(), box.Bottom - g.f.Y.at(p.Y)*box.height()}
	}
	inside := func(p point) point { // far points would lose precision
		q := at(p)
		if math.IsNaN(q.X + q.Y) {
			return nowhere
		}
		far := 5 * (box.width() + box.height())
		return point{min(max(q.X, -far), far), min(max(q.Y, -far), far)}
	}
	sheet.clip(box)
	for _, s := range g.solids {
		var outline []point
		for _, p := range s {
			outline = append(outline, inside(p))
		}
		sheet.fill(st.quiet, outline)
	}
	for k := len(g.curves) - 1; k >= 0; k-- { // the first on top
		var line []point
		for _, p := range g.curves[k].points {
			line = append(line, inside(p))
		}
		for _, piece := range finitePieces(line) {
			sheet.stroke(g.pen(g.curves[k], st), piece)
		}
	}
	sheet.unclip()
	g.f.draw(sheet, box, st, nil)
	_, frameTop, _, _ := g.f.room(st, box.width(), box.height())
	rows, _ := g.legendRows(st, box.width())
	for n, row := range rows {
		y := box.Top - frameTop - (float64(len(rows)-1-n)*lineStep+0.1)*st.em
		x := box.Left
		for _, k := range row {
			c := g.curves[k]
			mid := y - capHeight/2*st.em
			sheet.stroke(g.pen(c, st), []point{{x, mid}, {x + sampleLength*st.em, mid}})
			x += (sampleLength + 0.4) * st.em
			sheet.write(words{At: point{x, y}, Text: c.name, Size: st.em, Colour: st.ink})
			x += textWidth(c.name, st.em) + entryGap*st.em
		}
	}
}

func (g *graphPanel) pen(c curve, st style) pen {
	p := pen{Width: dataLine, Colour: st.ink}
	if c.fine {
		p.Width = thinLine
	}
	if c.order >= 0 {
		p.Colour = st.orderColour(c.order)
	}
	for _, d := range c.dash {
		p.Dash = append(p.Dash, d*st.em)
	}
	return p
}
