package desk

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

var (
	_ fyne.Draggable    = (*slider)(nil)
	_ fyne.Tappable     = (*slider)(nil)
	_ fyne.Focusable    = (*slider)(nil)
	_ fyne.Scrollable   = (*slider)(nil)
	_ desktop.Hoverable = (*slider)(nil)
	_ desktop.Mouseable = (*slider)(nil)
)

// slider is a line of stops. Unlike the toolkit's it can show a position
// between two stops, for values that were typed, and setting its position
// from the program calls nobody.
type slider struct {
	widget.BaseWidget

	last, position   float64
	focused, hovered bool
	grip             float32 // from the thumb's middle to where it was taken

	onSlide func(position float64) // dragged or clicked there
	onStep  func(stops int)        // keys and the wheel
	onHover func(over bool)
}

func newSlider(onSlide func(float64), onStep func(int)) *slider {
	s := &slider{last: 1, onSlide: onSlide, onStep: onStep, onHover: func(bool) {}}
	s.ExtendBaseWidget(s)
	return s
}

// set shows a position.
func (s *slider) set(position, last float64) {
	if position == s.position && last == s.last {
		return
	}
	s.position, s.last = position, last
	s.Refresh()
}

const (
	sliderHeight = 18
	thumbWidth   = 7.0
	thumbHeight  = 14
	trackHeight  = 2
	pageStops    = 10 // for Page Up and Page Down
)

// thumb returns where the middle of the thumb is.
func (s *slider) thumb() float32 {
	if s.last <= 0 {
		return thumbWidth / 2
	}
	return thumbWidth/2 + (s.Size().Width-thumbWidth)*float32(s.position/s.last)
}

func (s *slider) slideTo(x float32) {
	span := s.Size().Width - thumbWidth
	if span <= 0 {
		return
	}
	at := float64((x-thumbWidth/2)/span) * s.last
	s.onSlide(max(0, min(at, s.last)))
}

func (s *slider) Dragged(e *fyne.DragEvent) { s.slideTo(e.Position.X - s.grip) }
func (s *slider) DragEnd()                  {}

// MouseDown takes the thumb where it is, or brings it under the pointer.
func (s *slider) MouseDown(e *desktop.MouseEvent) {
	if e.Button != desktop.MouseButtonPrimary {
		return
	}
	if c := fyne.CurrentApp().Driver().CanvasForObject(s); c != nil {
		c.Focus(s)
	}
	const reach = thumbWidth/2 + 2
	s.grip = e.Position.X - s.thumb()
	if s.grip < -reach || s.grip > reach {
		s.grip = 0
		s.slideTo(e.Position.X)
	}
}

func (s *slider) MouseUp(*desktop.MouseEvent) {}

// Tapped is here so that a click is not passed on to what lies below.
func (s *slider) Tapped(*fyne.PointEvent) {}

// Scrolled steps only the slider that has the focus, so that the wheel can
// scroll the panel without changing the scene.
func (s *slider) Scrolled(e *fyne.ScrollEvent) {
	switch {
	case !s.focused:
	case e.Scrolled.DY > 0:
		s.onStep(1)
	case e.Scrolled.DY < 0:
		s.onStep(-1)
	}
}

func (s *slider) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeyRight, fyne.KeyUp:
		s.onStep(1)
	case fyne.KeyLeft, fyne.KeyDown:
		s.onStep(-1)
	case fyne.KeyPageUp:
		s.onStep(pageStops)
	case fyne.KeyPageDown:
		s.onStep(-pageStops)
	case fyne.KeyHome:
		s.onSlide(0)
	case fyne.KeyEnd:
		s.onSlide(s.last)
	default:
		passOn(s, e)
	}
}

func (s *slider) TypedRune(rune) {}

func (s *slider) FocusGained() { s.focused = true; s.Refresh() }
func (s *slider) FocusLost()   { s.focused = false; s.Refresh() }

func (s *slider) MouseIn(*desktop.MouseEvent)    { s.hover(true) }
func (s *slider) MouseMoved(*desktop.MouseEvent) {}
func (s *slider) MouseOut()                      { s.hover(false) }

func (s *slider) hover(over bool) {
	s.hovered = over
	s.Refresh()
	s.onHover(over)
}

func (s *slider) CreateRenderer() fyne.WidgetRenderer {
	r := &sliderRenderer{
		slider: s,
		track:  canvas.NewRectangle(edge),
		below:  canvas.NewRectangle(faint),
		thumb:  canvas.NewRectangle(quiet),
	}
	r.thumb.CornerRadius = 2
	return r
}

type sliderRenderer struct {
	slider              *slider
	track, below, thumb *canvas.Rectangle
}

func (r *sliderRenderer) Layout(size fyne.Size) {
	at := r.slider.thumb() - thumbWidth/2
	middle := (size.Height - trackHeight) / 2
	r.track.Move(fyne.NewPos(0, middle))
	r.track.Resize(fyne.NewSize(size.Width, trackHeight))
	r.below.Move(fyne.NewPos(0, middle))
	r.below.Resize(fyne.NewSize(at, trackHeight))
	r.thumb.Move(fyne.NewPos(at, (size.Height-thumbHeight)/2))
	r.thumb.Resize(fyne.NewSize(thumbWidth, thumbHeight))
}

func (r *sliderRenderer) MinSize() fyne.Size { return fyne.NewSize(80, sliderHeight) }

func (r *sliderRenderer) Refresh() {
	r.thumb.FillColor = r.colour()
	r.Layout(r.slider.Size())
	canvas.Refresh(r.slider)
}

func (r *sliderRenderer) colour() color.Color {
	switch {
	case r.slider.focused:
		return accent
	case r.slider.hovered:
		return words
	}
	return quiet
}

func (r *sliderRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.track, r.below, r.thumb}
}

func (r *sliderRenderer) Destroy() {}
