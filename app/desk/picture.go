package desk

import (
	"image"
	"image/color"
	"math"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/state"
	"annulet/raytrace"
)

var (
	_ desktop.Hoverable  = (*picture)(nil)
	_ desktop.Cursorable = (*picture)(nil)
	_ desktop.Mouseable  = (*picture)(nil)
	_ fyne.Draggable     = (*picture)(nil)
	_ fyne.Tappable      = (*picture)(nil)
	_ fyne.Scrollable    = (*picture)(nil)
	_ fyne.Focusable     = (*picture)(nil)
)

// onPicture is what the picture does with the hand. Places are in screen
// coordinates of the field.
type onPicture interface {
	space(columns, rows int)                 // it has that many screen pixels
	point(at [2]float64, column, row int)    // the pointer is there; row 0 at the bottom
	leave()                                  // the pointer has left
	mark(at [2]float64)                      // a click
	zoom(factor float64, about [2]float64)   // the wheel
	pan(start raytrace.Field, by [2]float64) // the image is moved by that since the field was start
	drawCut(from, to [2]float64, done bool)  // a line is drawn or one of its ends moved
	drawCircle(c [2]float64, radius float64, done bool)
	nudge(columns, rows int) // arrow keys
	command(r rune)          // a letter while the picture has the focus
}

// tool says what dragging over the picture does.
type tool int

const (
	toolPan tool = iota
	toolCut
	toolCircle
)

// picture shows the image, one image pixel a screen pixel, in the middle of
// the space it has, with what can be taken hold of over it.
type picture struct {
	widget.BaseWidget

	image, ink    *canvas.Image
	columns, rows int            // of the image wanted
	field         raytrace.Field // that the image shows; no columns before the first
	look          state.Look
	tool          tool

	across, down        [2]*stroke // the marker's cross
	cut                 *stroke
	circle, underCircle *canvas.Circle
	grips               [4]*canvas.Rectangle // ends of the cut, middle and rim of the circle
	frame               *canvas.Rectangle    // tells that the picture has the focus
	held                grip
	from                [2]float64 // where a drag began
	start               state.Look // and what it began with
	startField          raytrace.Field
	pressed             fyne.Position
	focused, wasDragged bool

	on onPicture
}

// grip is what a drag moves.
type grip int

const (
	noGrip grip = iota
	gripFrom
	gripTo
	gripCentre
	gripRim
)

const (
	gripSize  = 9 // logical pixels
	crossArm  = 11
	crossGap  = 4
	wheelZoom = 1.2 // a notch. Taste.
)

func newPicture(on onPicture) *picture {
	p := &picture{on: on}
	blank := func() *canvas.Image {
		m := canvas.NewImageFromImage(image.NewRGBA(image.Rect(0, 0, 1, 1)))
		m.ScaleMode, m.FillMode = canvas.ImageScalePixels, canvas.ImageFillStretch
		return m
	}
	p.image, p.ink = blank(), blank()
	for k := range 2 {
		p.across[k], p.down[k] = newStroke(), newStroke()
	}
	p.cut = newStroke()
	ring := func(c color.Color, width float32) *canvas.Circle {
		o := canvas.NewCircle(color.Transparent)
		o.StrokeColor, o.StrokeWidth = c, width
		return o
	}
	p.underCircle, p.circle = ring(underInk, underWidth), ring(overInk, overWidth)
	for k := range p.grips {
		g := canvas.NewRectangle(withAlpha(color.NRGBA{A: 0xff}, 0x70))
		g.StrokeColor, g.StrokeWidth = overInk, 1.4
		p.grips[k] = g
	}
	p.frame = canvas.NewRectangle(color.Transparent)
	p.frame.StrokeWidth = 1
	p.ExtendBaseWidget(p)
	return p
}

// overInk is the colour of what can be taken hold of, on any image.
var overInk = color.NRGBA{0xff, 0xe9, 0xa8, 0xff}

// underInk is drawn beneath it, wider, so that it shows on light images too.
var underInk = color.NRGBA{0, 0, 0, 0xa0}

const (
	overWidth  = 1.4
	underWidth = 3.6
)

// stroke is a line that shows on any image.
type stroke struct{ under, over *canvas.Line }

func newStroke() *stroke {
	s := &stroke{canvas.NewLine(underInk), canvas.NewLine(overInk)}
	s.under.StrokeWidth, s.over.StrokeWidth = underWidth, overWidth
	return s
}

// set draws it between two points, or not at all.
func (s *stroke) set(a, b fyne.Position, show bool) {
	for _, l := range []*canvas.Line{s.under, s.over} {
		if show {
			l.Position1, l.Position2 = a, b
		}
		setVisible(l, show)
		l.Refresh()
	}
}

// show replaces the image and what is drawn over it; nil for nothing.
func (p *picture) show(m, ink *image.RGBA, field raytrace.Field) {
	p.image.Image = m
	p.image.Refresh()
	if ink != nil {
		p.ink.Image = ink
		p.ink.Refresh()
	}
	setVisible(p.ink, ink != nil)
	if field != p.field {
		p.field = field
		p.placeMarks()
	}
}

// want says how many pixels the next image will have, and which marks lie
// over it.
func (p *picture) want(columns, rows int, look state.Look) {
	p.look = look
	if columns != p.columns || rows != p.rows {
		p.columns, p.rows = columns, rows
		p.place(p.Size())
		return
	}
	p.placeMarks()
}

// scale returns the number of screen pixels in a logical unit.
func (p *picture) scale() float32 {
	if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil {
		return c.Scale()
	}
	return 1
}

// place puts the image into the middle, its corner on a whole screen pixel:
// text on the left may have made the picture begin between two.
func (p *picture) place(size fyne.Size) {
	s := p.scale()
	w, h := float32(p.columns)/s, float32(p.rows)/s
	from := fyne.CurrentApp().Driver().AbsolutePositionForObject(p)
	whole := func(from, inset float32) float32 {
		return float32(math.Ceil(float64((from+inset)*s)))/s - from
	}
	at := fyne.NewPos(whole(from.X, (size.Width-w)/2), whole(from.Y, (size.Height-h)/2))
	for _, o := range []fyne.CanvasObject{p.image, p.ink, p.frame} {
		o.Move(at)
		o.Resize(fyne.NewSize(w, h))
	}
	p.placeMarks()
}

// at returns where screen coordinates of the field lie in the widget.
func (p *picture) at(c [2]float64) fyne.Position {
	if p.field.Columns == 0 {
		return fyne.Position{}
	}
	f, s := p.field, float64(p.scale())
	pitch := f.Pitch()
	x := (c[0]-f.Center[0])/pitch + float64(f.Columns)/2
	y := (f.Center[1]-c[1])/pitch + float64(f.Rows)/2
	return p.image.Position().AddXY(float32(x/s), float32(y/s))
}

// coordinates returns the screen coordinates of a place in the widget.
func (p *picture) coordinates(at fyne.Position) [2]float64 { return p.coordinatesOn(p.field, at) }

// coordinatesOn is coordinates while the image shows that field.
func (p *picture) coordinatesOn(f raytrace.Field, at fyne.Position) [2]float64 {
	s := float64(p.scale())
	at = at.Subtract(p.image.Position())
	return [2]float64{
		f.Center[0] + (float64(at.X)*s-float64(f.Columns)/2)*f.Pitch(),
		f.Center[1] - (float64(at.Y)*s-float64(f.Rows)/2)*f.Pitch(),
	}
}

// placeMarks puts marker, cut and circle where they belong; what would lie
// outside the image is cut off at its edge or hidden.
func (p *picture) placeMarks() {
	ready := p.field.Columns > 0
	inside := func(at fyne.Position) bool {
		at = at.Subtract(p.image.Position())
		size := p.image.Size()
		return at.X >= 0 && at.Y >= 0 && at.X <= size.Width && at.Y <= size.Height
	}
	marker := p.at(p.look.Marker.At)
	shows := ready && p.look.Marker.On && inside(marker)
	for k, side := range []float32{-1, 1} {
		p.across[k].set(marker.AddXY(side*crossGap, 0), marker.AddXY(side*crossArm, 0), shows)
		p.down[k].set(marker.AddXY(0, side*crossGap), marker.AddXY(0, side*crossArm), shows)
	}
	hold := func(g *canvas.Rectangle, at fyne.Position, on bool) {
		g.Move(at.SubtractXY(gripSize/2, gripSize/2))
		g.Resize(fyne.NewSize(gripSize, gripSize))
		setVisible(g, on && inside(at))
	}
	if cut := p.look.Cut; ready && cut.On {
		from, to := p.at(cut.From), p.at(cut.To)
		hold(p.grips[0], from, true)
		hold(p.grips[1], to, true)
		a, b, some := p.clip(from, to)
		p.cut.set(a, b, some)
	} else {
		p.cut.set(fyne.Position{}, fyne.Position{}, false)
		p.grips[0].Hide()
		p.grips[1].Hide()
	}
	circle := ready && p.look.Circle.On
	if circle {
		middle := p.at(p.look.Circle.Centre)
		radius := float32(p.look.Circle.Radius/p.field.Pitch()) / p.scale()
		for _, o := range []*canvas.Circle{p.circle, p.underCircle} {
			o.Move(middle.SubtractXY(radius, radius))
			o.Resize(fyne.NewSize(2*radius, 2*radius))
		}
		circle = p.fits(middle, radius)
		hold(p.grips[2], middle, true)
		hold(p.grips[3], middle.AddXY(radius, 0), true)
	} else {
		p.grips[2].Hide()
		p.grips[3].Hide()
	}
	for _, o := range []*canvas.Circle{p.circle, p.underCircle} {
		setVisible(o, circle)
		o.Refresh()
	}
}

// fits says whether a circle lies within the widget, so that it is not drawn
// over its neighbours.
func (p *picture) fits(at fyne.Position, radius float32) bool {
	size := p.Size()
	return at.X-radius >= 0 && at.Y-radius >= 0 && at.X+radius <= size.Width && at.Y+radius <= size.Height
}

// clip cuts a line to the image.
func (p *picture) clip(a, b fyne.Position) (fyne.Position, fyne.Position, bool) {
	from, to := float32(0), float32(1)
	corner, size := p.image.Position(), p.image.Size()
	dx, dy := b.X-a.X, b.Y-a.Y
	for _, side := range [4][2]float32{{-dx, a.X - corner.X}, {dx, corner.X + size.Width - a.X}, {-dy, a.Y - corner.Y}, {dy, corner.Y + size.Height - a.Y}} {
		switch {
		case side[0] == 0 && side[1] < 0:
			return a, b, false
		case side[0] < 0:
			from = max(from, side[1]/side[0])
		case side[0] > 0:
			to = min(to, side[1]/side[0])
		}
	}
	return a.AddXY(from*dx, from*dy), a.AddXY(to*dx, to*dy), from < to
}

func (p *picture) MouseIn(e *desktop.MouseEvent) { p.MouseMoved(e) }

func (p *picture) MouseMoved(e *desktop.MouseEvent) {
	s := p.scale()
	at := e.Position.Subtract(p.image.Position())
	column := int(math.Floor(float64(at.X * s)))
	fromTop := int(math.Floor(float64(at.Y * s)))
	if column < 0 || column >= p.columns || fromTop < 0 || fromTop >= p.rows || p.field.Columns == 0 {
		p.on.leave()
		return
	}
	row := p.rows - 1 - fromTop
	alpha, beta := p.field.PixelCenter(column, row)
	p.on.point([2]float64{alpha, beta}, column, row)
}

func (p *picture) MouseOut() { p.on.leave() }

func (p *picture) MouseDown(e *desktop.MouseEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(p); c != nil {
		c.Focus(p)
	}
	if p.field.Columns == 0 {
		return
	}
	p.pressed, p.wasDragged = e.Position, false
	p.from, p.start, p.startField = p.coordinates(e.Position), p.look, p.field
	p.held = p.gripAt(e.Position)
}

func (p *picture) MouseUp(*desktop.MouseEvent) {}

// gripAt returns what lies under the pointer.
func (p *picture) gripAt(at fyne.Position) grip {
	for k, g := range p.grips {
		const reach = gripSize/2 + 3
		d := at.Subtract(g.Position().AddXY(gripSize/2, gripSize/2))
		if g.Visible() && max(d.X, -d.X) <= reach && max(d.Y, -d.Y) <= reach {
			return grip(k + 1)
		}
	}
	return noGrip
}

func (p *picture) Dragged(e *fyne.DragEvent) { p.drag(e.Position, false) }

func (p *picture) DragEnd() {
	if p.wasDragged {
		p.drag(p.pressed, true)
	}
	p.wasDragged = false
}

func (p *picture) drag(at fyne.Position, done bool) {
	if p.startField.Columns == 0 {
		return
	}
	p.wasDragged, p.pressed = true, at
	to := p.coordinates(at)
	cut, circle := p.start.Cut, p.start.Circle
	switch {
	case p.held == gripFrom:
		p.on.drawCut(to, cut.To, done)
	case p.held == gripTo:
		p.on.drawCut(cut.From, to, done)
	case p.held == gripCentre:
		p.on.drawCircle(to, circle.Radius, done)
	case p.held == gripRim:
		p.on.drawCircle(circle.Centre, math.Hypot(to[0]-circle.Centre[0], to[1]-circle.Centre[1]), done)
	case p.tool == toolCut:
		p.on.drawCut(p.from, to, done)
	case p.tool == toolCircle:
		p.on.drawCircle(p.from, math.Hypot(to[0]-p.from[0], to[1]-p.from[1]), done)
	default:
		to = p.coordinatesOn(p.startField, at)
		p.on.pan(p.startField, [2]float64{to[0] - p.from[0], to[1] - p.from[1]})
	}
}

func (p *picture) Tapped(e *fyne.PointEvent) {
	if p.field.Columns > 0 {
		p.on.mark(p.coordinates(e.Position))
	}
}

func (p *picture) Scrolled(e *fyne.ScrollEvent) {
	if p.field.Columns == 0 || e.Scrolled.DY == 0 {
		return
	}
	factor := wheelZoom
	if e.Scrolled.DY < 0 {
		factor = 1 / wheelZoom
	}
	p.on.zoom(factor, p.coordinates(e.Position))
}

func (p *picture) FocusGained() { p.setFocus(true) }
func (p *picture) FocusLost()   { p.setFocus(false) }

func (p *picture) setFocus(has bool) {
	p.focused = has
	p.frame.StrokeColor = color.Transparent
	if has {
		p.frame.StrokeColor = accent
	}
	p.frame.Refresh()
}

func (p *picture) TypedRune(r rune) { p.on.command(r) }

func (p *picture) TypedKey(e *fyne.KeyEvent) {
	const far = 10 // pixels, for the page keys
	switch e.Name {
	case fyne.KeyLeft:
		p.on.nudge(-1, 0)
	case fyne.KeyRight:
		p.on.nudge(1, 0)
	case fyne.KeyUp:
		p.on.nudge(0, 1)
	case fyne.KeyDown:
		p.on.nudge(0, -1)
	case fyne.KeyPageUp:
		p.on.nudge(0, far)
	case fyne.KeyPageDown:
		p.on.nudge(0, -far)
	case fyne.KeyHome:
		p.on.nudge(-far, 0)
	case fyne.KeyEnd:
		p.on.nudge(far, 0)
	}
}

func (p *picture) Cursor() desktop.Cursor { return desktop.CrosshairCursor }

func (p *picture) CreateRenderer() fyne.WidgetRenderer { return pictureRenderer{p} }

type pictureRenderer struct{ picture *picture }

func (r pictureRenderer) Layout(size fyne.Size) {
	s := r.picture.scale()
	r.picture.on.space(int(size.Width*s), int(size.Height*s))
	r.picture.place(size)
}

func (r pictureRenderer) MinSize() fyne.Size { return fyne.NewSize(240, 240) }

func (r pictureRenderer) Refresh() { canvas.Refresh(r.picture) }

func (r pictureRenderer) Objects() []fyne.CanvasObject {
	p := r.picture
	all := []fyne.CanvasObject{p.image, p.ink, p.underCircle, p.circle}
	for _, s := range []*stroke{p.cut, p.across[0], p.across[1], p.down[0], p.down[1]} {
		all = append(all, s.under, s.over)
	}
	for _, g := range p.grips {
		all = append(all, g)
	}
	return append(all, p.frame)
}

func (r pictureRenderer) Destroy() {}
