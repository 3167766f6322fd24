package figure

import (
	"image"
	"image/color"
	"math"
	"strings"

	"annulet/app/ink"
	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
	"annulet/scenes"
)

// overLine is a line over a picture, in screen coordinates.
type overLine struct {
	points [][2]float64
	dash   []float64 // em
	thin   bool
}

// imagePanel is a picture in axes, with a colour bar above.
type imagePanel struct {
	scene   scenes.Scene
	field   raytrace.Field
	values  []float32 // in the unit shown, row 0 at the bottom
	tone    tone.Tone // with fixed limits
	colours *assets.Map
	name    string // of the quantity, with its unit
	which   string // order, frequency or beam, told in the title where there is room
	turn    bool   // values are degrees of a full turn
	second  bool   // axes in M on the opposite sides
	lines   []overLine
	beam    [][2]float64 // about zero
	scale   bool
	north   bool
}

// paletteSize leaves one entry of a byte for what has no value.
const paletteSize = 255

// paint turns values into indices of the colour map: the file then holds one
// byte a pixel.
func (p *imagePanel) paint() *image.Paletted {
	palette := make(color.Palette, paletteSize+1)
	for k := range paletteSize {
		r, g, b := p.colours.At8(float32(k) / (paletteSize - 1))
		palette[k] = color.RGBA{r, g, b, 0xff}
	}
	r, g, b := p.colours.At8(float32(math.NaN()))
	palette[paletteSize] = color.RGBA{r, g, b, 0xff}
	columns, rows := p.field.Columns, p.field.Rows
	img := image.NewPaletted(image.Rect(0, 0, columns, rows), palette)
	lo, hi := p.tone.Limits(p.values)
	for k, v := range p.values {
		x := p.tone.Normalise(float64(v), lo, hi)
		index := uint8(paletteSize)
		if x == x {
			index = uint8(math.Round(x * (paletteSize - 1)))
		}
		img.Pix[(rows-1-k/columns)*img.Stride+k%columns] = index
	}
	return img
}

// edges are the screen coordinates at the sides of the picture.
func edges(f raytrace.Field) (left, right, bottom, top float64) {
	across, up := f.Pitches()
	w, h := across*float64(f.Columns)/2, up*float64(f.Rows)/2
	return f.Center[0] - w, f.Center[0] + w, f.Center[1] - h, f.Center[1] + h
}

// angular returns what M is on the sky, µas, if offsets there make sense.
func angular(s scenes.Scene, f raytrace.Field) (theta float64, ok bool) {
	theta, ok = s.ThetaG()
	return theta, ok && f.IsParallel() && math.IsInf(s.Observer.Radius, 1)
}

// axes returns the frame of a picture.
func (p *imagePanel) axes() frame {
	l, r, b, t := edges(p.field)
	if !p.field.IsParallel() {
		const deg = 180 / math.Pi
		x, y := "α (deg)", "β (deg)"
		if p.field.Projection == raytrace.AllSky {
			x, y = "longitude (deg)", "latitude (deg)"
		}
		if p.field.Projection == raytrace.AllSky {
			return frame{X: axis{Lo: l * deg, Hi: r * deg, Title: x, Step: 60}, Y: axis{Lo: b * deg, Hi: t * deg, Title: y, Step: 30}}
		}
		return frame{X: axis{Lo: l * deg, Hi: r * deg, Title: x}, Y: axis{Lo: b * deg, Hi: t * deg, Title: y}}
	}
	theta, sky := angular(p.scene, p.field)
	inM := frame{X: axis{Lo: l, Hi: r, Title: "α (M)"}, Y: axis{Lo: b, Hi: t, Title: "β (M)"}}
	if !sky {
		return inM
	}
	f := frame{X: axis{Lo: l * theta, Hi: r * theta, Title: "α (µas)"}, Y: axis{Lo: b * theta, Hi: t * theta, Title: "β (µas)"}}
	if p.scene.Observer.PositionAngle == 0 { // then up is north, and east is to the left
		f.X = axis{Lo: -l * theta, Hi: -r * theta, Title: "Δα (µas)"}
		f.Y.Title = "Δδ (µas)"
	}
	if p.second {
		f.Top, f.Right = &inM.X, &inM.Y
	}
	return f
}

func (p *imagePanel) shape() float64 {
	l, r, b, t := edges(p.field)
	return (t - b) / (r - l)
}

// Heights of the parts of a colour bar, em.
const (
	barHeight = 0.75
	barSpace  = barHeight + labelGap + capHeight + lineStep + 0.9
)

func (p *imagePanel) room(st style, width, height float64) (l, t, r, b float64) {
	f := p.axes()
	l, t, r, b = f.room(st, width, width*p.shape())
	if f.Top == nil {
		t = 0.5 * st.em
	}
	return l, t + barSpace*st.em, r, b
}

func (p *imagePanel) draw(sheet *Sheet, box rect, st style) {
	sheet.picture(p.paint(), box)
	at := p.place(box)
	sheet.clip(box)
	for _, line := range p.lines {
		points := make([]point, len(line.points))
		for k, q := range line.points {
			points[k] = at(q[0], q[1])
			if far := 10 * sheet.Width; math.Abs(points[k].X) > far || math.Abs(points[k].Y) > far {
				points[k] = nowhere
			}
		}
		width := dataLine
		if line.thin {
			width = thinLine
		}
		st.over(sheet, points, width, append([]float64(nil), line.dash...)...)
	}
	p.marks(sheet, box, st)
	sheet.unclip()
	f := p.axes()
	f.draw(sheet, box, st, &overTicks{})
	_, frameTop, _, _ := f.room(st, box.width(), box.height())
	if f.Top == nil {
		frameTop = 0.5 * st.em
	}
	p.bar(sheet, rect{box.Left, box.Top - frameTop - barHeight*st.em, box.Right, box.Top - frameTop}, st)
}

// place returns where screen coordinates lie.
func (p *imagePanel) place(box rect) func(alpha, beta float64) point {
	l, r, b, t := edges(p.field)
	return func(alpha, beta float64) point {
		return point{box.Left + (alpha-l)/(r-l)*box.width(), box.Bottom - (beta-b)/(t-b)*box.height()}
	}
}

// bar draws the colour bar, with numbers and title above.
func (p *imagePanel) bar(sheet *Sheet, box rect, st style) {
	strip := image.NewPaletted(image.Rect(0, 0, paletteSize, 1), p.paint().Palette)
	for k := range paletteSize {
		strip.Pix[k] = uint8(k)
	}
	sheet.picture(strip, box)
	lo, hi := p.tone.Limits(p.values)
	a := axis{Lo: lo, Hi: hi, Log: p.tone.Curve == tone.Logarithmic, Title: p.name}
	if p.turn {
		a.Step = 90
	}
	major, _, power := a.ticks(min(max(3, int(box.width()/(3*st.em))), 6))
	last := math.Inf(-1)
	for _, m := range major {
		x := m.at
		if p.tone.Curve == tone.SquareRoot {
			x = math.Sqrt(max(0, x))
		}
		px := box.Left + x*box.width()
		half := textWidth(m.label, st.em) / 2
		sheet.stroke(pen{Width: thinLine, Colour: st.ink}, []point{{px, box.Top}, {px, box.Top - minorTick*st.em}})
		if px-half < last+0.5*st.em { // a number would touch the last one
			continue
		}
		last = px + half
		sheet.write(words{At: point{px, box.Top - (labelGap+0.1)*st.em}, Text: m.label, Size: st.em, Colour: st.ink, Align: centre})
	}
	sheet.stroke(pen{Width: thinLine, Colour: st.ink}, box.corners())
	title := a.title(power)
	if whole := title + ", " + p.which; p.which != "" && fits(whole, box, st) {
		title = whole
	}
	sheet.write(words{At: point{(box.Left + box.Right) / 2, box.Top - (labelGap+lineStep)*st.em}, Text: title, Size: st.em, Colour: st.ink, Align: centre})
}

// marks draws beam, scale bar and directions in the picture's corners, each
// on a dark plate that shows on any colours.
func (p *imagePanel) marks(sheet *Sheet, box rect, st style) {
	em := st.em
	inset := 0.9 * em
	plate := func(r rect) { sheet.fill(overEdge, r.corners()) }
	if p.scale {
		p.scaleBar(sheet, rect{box.Left + inset, box.Top + inset, box.Right - inset, box.Bottom - inset}, st, plate)
	}
	if p.north {
		p.directions(sheet, point{box.Right - inset, box.Top + inset}, st, plate)
	}
	lo, hi := p.tone.Limits(p.values)
	_, _, power := axis{Lo: lo, Hi: hi, Log: p.tone.Curve == tone.Logarithmic}.ticks(3)
	if title := (axis{Title: p.name}).title(power) + ", " + p.which; p.which != "" && !fits(title, box, st) {
		p.label(sheet, point{box.Left + inset, box.Top + inset}, box.width()-2*inset, em, plate)
	}
	if p.beam != nil {
		l, r, _, _ := edges(p.field)
		perM := box.width() / (r - l)
		var wide, high float64
		for _, q := range p.beam {
			wide, high = max(wide, q[0]*perM), max(high, q[1]*perM)
		}
		middle := point{box.Left + inset + wide, box.Bottom - inset - high}
		var outline []point
		for _, q := range p.beam {
			outline = append(outline, point{middle.X + q[0]*perM, middle.Y - q[1]*perM})
		}
		sheet.fill(color.RGBA{0xb0, 0xb0, 0xb0, 0xff}, outline)
		st.over(sheet, outline, thinLine)
	}
}

// scaleBar draws a round length at the lower right.
func (p *imagePanel) scaleBar(sheet *Sheet, inside rect, st style, plate func(rect)) {
	const share = 0.25 // of the width, at most
	l, r, _, _ := edges(p.field)
	unit, name := 1., "M"
	if !p.field.IsParallel() {
		unit, name = math.Pi/180, "deg"
	} else if theta, ok := angular(p.scene, p.field); ok {
		unit, name = 1/theta, "µas"
	}
	length := ink.Round((r - l) * share / unit / 2) // at most twice that
	wide := length * unit / (r - l) * (inside.width() + 1.8*st.em)
	label := roundLabel(length) + " " + name
	widest := max(wide, textWidth(label, st.em))
	pad := 0.4 * st.em
	low, x := inside.Bottom-pad, inside.Right-pad-widest/2
	plate(rect{inside.Right - widest - 2*pad, low - 1.75*st.em, inside.Right, inside.Bottom})
	sheet.stroke(pen{Width: 0.5, Colour: overInk}, []point{{x - wide/2, low - 0.2*st.em}, {x + wide/2, low - 0.2*st.em}})
	sheet.write(words{At: point{x, low - 0.65*st.em}, Text: label, Size: st.em, Colour: overInk, Align: centre})
}

// fits says whether a title has room above a box.
func fits(title string, box rect, st style) bool { return textWidth(title, st.em) <= box.width() }

// label tells in a corner which image this is, a line each; what has no room
// is left to the caption.
func (p *imagePanel) label(sheet *Sheet, corner point, most, em float64, plate func(rect)) {
	pad, widest := 0.4*em, 0.
	lines := strings.Split(p.which, ", ")
	for _, line := range lines {
		widest = max(widest, textWidth(line, em)+2*pad)
	}
	if widest > most {
		return
	}
	plate(rect{corner.X, corner.Y, corner.X + widest, corner.Y + (capHeight+lineStep*float64(len(lines)-1))*em + 2.4*pad})
	for k, line := range lines {
		sheet.write(words{At: point{corner.X + pad, corner.Y + pad + (capHeight+lineStep*float64(k))*em}, Text: line, Size: em, Colour: overInk})
	}
}

// roundLabel writes 1, 2 or 5 times a power of ten.
func roundLabel(x float64) string {
	e := int(math.Floor(math.Log10(x) + 1e-9))
	return logLabel(int(math.Round(x/math.Pow(10, float64(e)))), e, e >= -2 && e <= 3)
}

// directions draws north and east at the upper right: the position angle of
// the axis that is up goes from north through east, which is to the left.
func (p *imagePanel) directions(sheet *Sheet, corner point, st style, plate func(rect)) {
	em := st.em
	arm, reach := 2.2*em, 3.1*em // of the arrow, of its letter
	sin, cos := math.Sincos(p.scene.Observer.PositionAngle * math.Pi / 180)
	arms := []struct {
		x, y float64 // to the right and up
		name string
	}{{sin, cos, "N"}, {-cos, sin, "E"}}
	around := rect{0, 0, 0, 0}
	for _, a := range arms {
		around.Left, around.Right = min(around.Left, a.x*reach), max(around.Right, a.x*reach)
		around.Top, around.Bottom = min(around.Top, -a.y*reach), max(around.Bottom, -a.y*reach)
	}
	pad := 0.6 * em
	from := point{corner.X - pad - around.Right, corner.Y + pad - around.Top}
	plate(rect{from.X + around.Left - pad, corner.Y, corner.X, from.Y + around.Bottom + pad})
	for _, a := range arms {
		tip := point{from.X + a.x*arm, from.Y - a.y*arm}
		const head, slope = 0.55, 0.4
		barb := func(side float64) point {
			return point{tip.X - head*em*(a.x+side*slope*a.y), tip.Y + head*em*(a.y-side*slope*a.x)}
		}
		line := pen{Width: 0.25, Colour: overInk}
		sheet.stroke(line, []point{from, tip})
		sheet.stroke(line, []point{barb(1), tip, barb(-1)})
		sheet.write(words{At: point{from.X + a.x*(reach-0.3*em), from.Y - a.y*(reach-0.3*em) + capHeight/2*em}, Text: a.name, Size: em, Colour: overInk, Align: centre})
	}
}
