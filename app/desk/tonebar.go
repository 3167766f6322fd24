package desk

import (
	"image"
	"image/color"
	"math"
	"strconv"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/imaging"
	"annulet/app/desk/state"
	"annulet/app/ink"
	"annulet/app/tone"
	"annulet/assets"
)

// toneBar shows the histogram of the layer with its colours under it; the
// two limits can be dragged and typed.
type toneBar struct {
	widget.BaseWidget

	picture *canvas.Image
	limits  [2]*canvas.Rectangle
	shown   imaging.Developed
	colours *assets.Map
	tone    tone.Tone
	held    int // which limit is dragged

	onLimit func(which int, value float64)

	low, high *entry
	curves    *segments
	automatic *word
	unit      *canvas.Text
	flow      *flowRow
	content   fyne.CanvasObject
}

var (
	_ fyne.Draggable = (*toneBar)(nil)
	_ fyne.Tappable  = (*toneBar)(nil)
)

const (
	toneHeight  = 38
	colourStrip = 8
	limitWidth  = 3
	limitEntry  = 86
)

func newToneBar(h hands) *toneBar {
	b := &toneBar{onLimit: h.setLimit}
	b.picture = canvas.NewImageFromImage(image.NewRGBA(image.Rect(0, 0, 1, 1)))
	b.picture.ScaleMode, b.picture.FillMode = canvas.ImageScalePixels, canvas.ImageFillStretch
	for k := range b.limits {
		b.limits[k] = canvas.NewRectangle(accent)
	}
	b.ExtendBaseWidget(b)
	typed := func(which int) *entry {
		e := newEntry()
		e.onTyped = func(string) {}
		e.onDone = func(text string) {
			v, err := strconv.ParseFloat(text, 64)
			if err == nil && text != short(b.limit(which)) {
				h.setLimit(which, v)
			} else {
				e.set(short(b.limit(which)))
			}
		}
		e.onStep = func(n int) { h.setLimit(which, b.stepped(which, n)) }
		e.onRestore = func() { e.set(short(b.limit(which))) }
		e.onFocus = func(has bool) {
			if has {
				h.help("The " + []string{"lowest", "highest"}[which] + " value of the colours. Arrow keys move it.")
			} else {
				h.help("")
			}
		}
		return e
	}
	b.low, b.high = typed(0), typed(1)
	b.curves = newSegments(state.Curves(), func(k int) { h.setTone(tone.Curve(k)) })
	b.automatic = newWord("automatic limits", h.automaticLimits)
	b.unit = canvas.NewText("", quiet)
	b.unit.TextSize = choiceTextSize
	entryBox := func(e *entry) fyne.CanvasObject {
		return container.New(fixedWidth{limitEntry}, e)
	}
	bar := container.NewBorder(nil, nil, entryBox(b.low), entryBox(b.high), b)
	b.flow = &flowRow{gap: 4, lastRight: true}
	words := container.New(b.flow, b.curves.row, hbox(4, b.unit, b.automatic))
	b.content = container.New(layout.NewCustomPaddedLayout(3, 2, barInset, barInset), container.New(tightColumn{}, bar, spacer(3), words))
	return b
}

// setWidth says how wide the bar will be.
func (b *toneBar) setWidth(width float32) { b.flow.width = width - 2*barInset }

// fixedWidth gives objects a width, centred vertically at their own height.
type fixedWidth struct{ width float32 }

func (f fixedWidth) MinSize(objects []fyne.CanvasObject) fyne.Size {
	return fyne.NewSize(f.width, objects[0].MinSize().Height)
}

func (f fixedWidth) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	h := objects[0].MinSize().Height
	objects[0].Move(fyne.NewPos(0, (size.Height-h)/2))
	objects[0].Resize(fyne.NewSize(f.width, h))
}

func short(v float64) string { return strconv.FormatFloat(v, 'g', 4, 64) }

func (b *toneBar) limit(which int) float64 { return []float64{b.shown.Low, b.shown.High}[which] }

// stepped returns a limit some hundredths of the axis further.
func (b *toneBar) stepped(which, n int) float64 {
	at := b.tone.Normalise(b.limit(which), b.shown.Axis[0], b.shown.Axis[1])
	return b.value(at + float64(n)/100)
}

// value returns the value at a place along the axis, from 0 to 1.
func (b *toneBar) value(at float64) float64 {
	lo, hi := b.shown.Axis[0], b.shown.Axis[1]
	at = max(0, min(1, at))
	switch b.tone.Curve {
	case tone.SquareRoot:
		return lo + at*at*(hi-lo)
	case tone.Logarithmic:
		return lo * math.Pow(hi/lo, at)
	}
	return lo + at*(hi-lo)
}

// sync shows the tone's settings.
func (b *toneBar) sync(s *state.State) {
	t := s.Look.Tone()
	b.curves.set(int(t.Curve))
	b.automatic.choose(!t.Fixed)
	name := state.LayerNames()[s.Look.Layer]
	text := name.Name
	if name.Unit != "" {
		text += " [" + name.Unit + "]"
	}
	setText(b.unit, text)
}

// show shows the histogram of a picture.
func (b *toneBar) show(d imaging.Developed, t tone.Tone, colours *assets.Map) {
	b.shown, b.tone, b.colours = d, t, colours
	if !b.low.focused {
		b.low.set(short(d.Low))
	}
	if !b.high.focused {
		b.high.set(short(d.High))
	}
	b.draw()
}

func (b *toneBar) draw() {
	s := float32(1)
	if c := fyne.CurrentApp().Driver().CanvasForObject(b); c != nil {
		s = c.Scale()
	}
	columns, rows := int(b.Size().Width*s), int(toneHeight*s)
	if columns < bins2 || b.colours == nil {
		return
	}
	m := image.NewRGBA(image.Rect(0, 0, columns, rows))
	strip := int(colourStrip * s)
	ink.Fill(m, field)
	most := 0.
	for _, n := range b.shown.Counts {
		most = max(most, math.Sqrt(float64(n)))
	}
	for x := range columns {
		at := (float64(x) + 0.5) / float64(columns)
		if most > 0 {
			n := b.shown.Counts[min(len(b.shown.Counts)-1, int(at*float64(len(b.shown.Counts))))]
			top := rows - strip - int(math.Sqrt(float64(n))/most*float64(rows-strip-2)+0.5)
			ink.Box(m, image.Rect(x, top, x+1, rows-strip), faint)
		}
		r, g, bl := b.colours.At8(float32(b.tone.Normalise(b.value(at), b.shown.Low, b.shown.High)))
		ink.Box(m, image.Rect(x, rows-strip, x+1, rows), color.NRGBA{r, g, bl, 0xff})
	}
	b.picture.Image = m
	b.picture.Refresh()
	b.placeLimits()
}

// bins2 is the narrowest bar that is drawn, pixels.
const bins2 = 40

func (b *toneBar) placeLimits() {
	for k, l := range b.limits {
		at := b.tone.Normalise(b.limit(k), b.shown.Axis[0], b.shown.Axis[1])
		if math.IsNaN(at) {
			at = float64(k)
		}
		x := float32(at)*b.Size().Width - limitWidth/2
		l.Move(fyne.NewPos(max(0, min(b.Size().Width-limitWidth, x)), 0))
		l.Resize(fyne.NewSize(limitWidth, toneHeight))
	}
}

// Tapped is here so that a click is not passed on to what lies below.
func (b *toneBar) Tapped(*fyne.PointEvent) {}

func (b *toneBar) Dragged(e *fyne.DragEvent) {
	if b.colours == nil {
		return
	}
	at := float64(e.Position.X / b.Size().Width)
	if b.held == 0 { // the nearer one is taken
		low := b.tone.Normalise(b.shown.Low, b.shown.Axis[0], b.shown.Axis[1])
		high := b.tone.Normalise(b.shown.High, b.shown.Axis[0], b.shown.Axis[1])
		from := at - float64(e.Dragged.DX/b.Size().Width)
		b.held = 1
		if math.Abs(from-high) < math.Abs(from-low) {
			b.held = 2
		}
	}
	b.onLimit(b.held-1, b.value(at))
}

func (b *toneBar) DragEnd() { b.held = 0 }

func (b *toneBar) CreateRenderer() fyne.WidgetRenderer { return toneBarRenderer{b} }

type toneBarRenderer struct{ bar *toneBar }

func (r toneBarRenderer) Layout(size fyne.Size) {
	r.bar.picture.Move(fyne.NewPos(0, 0))
	r.bar.picture.Resize(fyne.NewSize(size.Width, toneHeight))
	r.bar.draw()
}

func (r toneBarRenderer) MinSize() fyne.Size { return fyne.NewSize(120, toneHeight) }

func (r toneBarRenderer) Refresh() { canvas.Refresh(r.bar) }

func (r toneBarRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.bar.picture, r.bar.limits[0], r.bar.limits[1]}
}

func (toneBarRenderer) Destroy() {}
