package desk

import (
	"image"
	"math"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

var (
	_ desktop.Hoverable  = (*picture)(nil)
	_ desktop.Cursorable = (*picture)(nil)
)

// picture shows the image, one image pixel a screen pixel, in the middle of
// the space it has.
type picture struct {
	widget.BaseWidget

	image         *canvas.Image
	columns, rows int // of the image wanted

	onSpace func(columns, rows int) // the space has changed, in screen pixels
	onPoint func(column, row int)   // the pointer is over that pixel; row 0 at the bottom
	onLeave func()
}

func newPicture() *picture {
	p := &picture{image: canvas.NewImageFromImage(image.NewRGBA(image.Rect(0, 0, 1, 1)))}
	p.image.ScaleMode = canvas.ImageScalePixels
	p.image.FillMode = canvas.ImageFillStretch
	p.ExtendBaseWidget(p)
	return p
}

// show replaces the image.
func (p *picture) show(m *image.RGBA) {
	p.image.Image = m
	p.image.Refresh()
}

// want says how many pixels the next image will have.
func (p *picture) want(columns, rows int) {
	if columns == p.columns && rows == p.rows {
		return
	}
	p.columns, p.rows = columns, rows
	p.place(p.Size())
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
	p.image.Move(fyne.NewPos(whole(from.X, (size.Width-w)/2), whole(from.Y, (size.Height-h)/2)))
	p.image.Resize(fyne.NewSize(w, h))
}

func (p *picture) MouseIn(e *desktop.MouseEvent) { p.MouseMoved(e) }

func (p *picture) MouseMoved(e *desktop.MouseEvent) {
	s := p.scale()
	at := e.Position.Subtract(p.image.Position())
	column := int(math.Floor(float64(at.X * s)))
	fromTop := int(math.Floor(float64(at.Y * s)))
	if column < 0 || column >= p.columns || fromTop < 0 || fromTop >= p.rows {
		p.onLeave()
		return
	}
	p.onPoint(column, p.rows-1-fromTop)
}

func (p *picture) MouseOut() { p.onLeave() }

func (p *picture) Cursor() desktop.Cursor { return desktop.CrosshairCursor }

func (p *picture) CreateRenderer() fyne.WidgetRenderer { return pictureRenderer{p} }

type pictureRenderer struct{ picture *picture }

func (r pictureRenderer) Layout(size fyne.Size) {
	s := r.picture.scale()
	r.picture.onSpace(int(size.Width*s), int(size.Height*s))
	r.picture.place(size)
}

func (r pictureRenderer) MinSize() fyne.Size { return fyne.NewSize(240, 240) }

func (r pictureRenderer) Refresh() { canvas.Refresh(r.picture) }

func (r pictureRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.picture.image}
}

func (r pictureRenderer) Destroy() {}
