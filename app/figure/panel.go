package figure

import "math"

// panel is one of a figure's drawings: a box with what stands around it.
type panel interface {
	// room is what the panel needs around a box of that size, mm.
	room(st style, width, height float64) (left, top, right, bottom float64)
	// shape is the box's height over its width; 0 for any.
	shape() float64
	draw(sheet *Sheet, box rect, st style)
}

// anyShape is the height over the width of a box that may have any. Taste.
const anyShape = 0.72

// arrange lays panels out in rows, across of them side by side, on a sheet of
// a width in mm. Boxes of one column have the same width, those of one row the
// same height.
func arrange(panels []panel, across int, width float64, st style) (*Sheet, error) {
	rows := (len(panels) + across - 1) / across
	gap := 0.8 * st.em
	type margins struct{ l, t, r, b float64 }
	columns, lines := make([]margins, across), make([]margins, rows)
	boxWidth := width / float64(across)
	heights := make([]float64, rows)
	for range 4 { // room depends on the ticks, ticks on the room
		columns, lines = make([]margins, across), make([]margins, rows)
		for k, p := range panels {
			l, t, r, b := p.room(st, boxWidth, max(heights[k/across], boxWidth*anyShape))
			c, w := &columns[k%across], &lines[k/across]
			c.l, c.r, w.t, w.b = max(c.l, l), max(c.r, r), max(w.t, t), max(w.b, b)
		}
		sum := gap * float64(across-1)
		for _, c := range columns {
			sum += c.l + c.r
		}
		boxWidth = (width - sum) / float64(across)
		if boxWidth < 8*st.em {
			return nil, refuse("%d panels side by side do not fit in %.1f mm at %.2g points: the boxes would be %.1f mm wide", across, width, st.em/mmPerPoint, boxWidth)
		}
		for k := range heights {
			heights[k] = 0
		}
		for k, p := range panels {
			heights[k/across] = max(heights[k/across], boxWidth*p.shape())
		}
		for k := range heights {
			if heights[k] == 0 {
				heights[k] = boxWidth * anyShape
			}
		}
	}
	height := gap * float64(rows-1)
	for k := range rows {
		height += lines[k].t + heights[k] + lines[k].b
	}
	const whole = 100 // hundredths of a millimetre
	height = math.Ceil(height*whole) / whole
	sheet := &Sheet{Width: width, Height: height}
	sheet.fill(st.paper, rect{0, 0, width, height}.corners())
	y := 0.
	for row := range rows {
		x := 0.
		for column := range across {
			k := row*across + column
			if k >= len(panels) {
				break
			}
			m := columns[column]
			box := rect{x + m.l, y + lines[row].t, x + m.l + boxWidth, y + lines[row].t + heights[row]}
			if s := panels[k].shape(); s > 0 && s*boxWidth < heights[row] { // keeps its shape, at the bottom
				box.Top = box.Bottom - s*boxWidth
			}
			panels[k].draw(sheet, box, st)
			if len(panels) > 1 {
				sheet.write(words{At: point{x + 0.2*st.em, y + (0.3+capHeight)*st.em}, Text: "(" + string(rune('a'+k)) + ")", Size: st.em, Colour: st.ink})
			}
			x += m.l + boxWidth + m.r + gap
		}
		y += lines[row].t + heights[row] + lines[row].b + gap
	}
	return sheet, nil
}
