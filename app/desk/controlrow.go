package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/state"
)

// controlRow is one quantity: its name and entry, its slider, and under them
// what may be typed, or what is wrong with what was.
type controlRow struct {
	widget.BaseWidget

	control *state.Control
	name    *canvas.Text
	entry   *entry
	slider  *slider
	limits  *canvas.Text
	wrong   *widget.Label
	onHelp  func(text string) // the pointer is on the row; "" when it has left
}

func newControlRow(c *state.Control, h hands) *controlRow {
	r := &controlRow{
		control: c,
		name:    canvas.NewText(c.Name, words),
		entry:   newEntry(),
		slider: newSlider(
			func(position float64) { h.slide(c, position) },
			func(stops int) { h.step(c, stops) }),
		limits: canvas.NewText("", quiet),
		wrong:  widget.NewLabel(""),
		onHelp: h.help,
	}
	r.name.TextSize = theme.Size(theme.SizeNameText)
	r.limits.TextSize = theme.Size(theme.SizeNameCaptionText)
	r.wrong.SizeName = theme.SizeNameCaptionText
	r.wrong.Importance = widget.DangerImportance
	r.wrong.Wrapping = fyne.TextWrapWord
	r.entry.onTyped = func(text string) { h.typed(c, text) }
	r.entry.onDone = func(text string) { h.submit(c, text) }
	r.entry.onStep = func(stops int) { h.step(c, stops) }
	r.entry.onRestore = func() { h.restore(c) }
	r.slider.onHover = r.hover // it hides the row from the pointer
	r.ExtendBaseWidget(r)
	return r
}

// sync shows the control as it is now.
func (r *controlRow) sync() {
	c := r.control
	r.slider.set(c.Position, c.Axis.Last())
	r.entry.set(c.Text)
	setText(r.limits, c.Range)
	if r.wrong.Text != c.Wrong {
		r.wrong.SetText(c.Wrong)
		r.Refresh() // its height may differ
	}
}

func (r *controlRow) MouseIn(*desktop.MouseEvent)    { r.hover(true) }
func (r *controlRow) MouseMoved(*desktop.MouseEvent) {}
func (r *controlRow) MouseOut()                      { r.hover(false) }

func (r *controlRow) hover(over bool) {
	if over {
		r.onHelp(r.control.Help)
	} else {
		r.onHelp("")
	}
}

func (r *controlRow) CreateRenderer() fyne.WidgetRenderer { return controlRowRenderer{r} }

type controlRowRenderer struct{ row *controlRow }

const (
	entryWidth = 112
	rowGap     = 10
)

// Layout puts name over limits on the left, the entry on the right, the
// slider below both, and what is wrong under that.
func (v controlRowRenderer) Layout(size fyne.Size) {
	r := v.row
	head := v.headHeight()
	r.name.Move(fyne.NewPos(0, 0))
	r.limits.Move(fyne.NewPos(0, r.name.MinSize().Height-1))
	entryHeight := r.entry.MinSize().Height
	r.entry.Move(fyne.NewPos(size.Width-entryWidth, head-entryHeight))
	r.entry.Resize(fyne.NewSize(entryWidth, entryHeight))
	r.slider.Move(fyne.NewPos(0, head))
	r.slider.Resize(fyne.NewSize(size.Width, sliderHeight))
	inner := theme.Size(theme.SizeNameInnerPadding)
	r.wrong.Move(fyne.NewPos(-inner, head+sliderHeight-inner))
	r.wrong.Resize(fyne.NewSize(size.Width+2*inner, r.wrong.MinSize().Height))
	setVisible(r.wrong, r.control.Wrong != "")
}

// headHeight is that of name and limits, or of the entry.
func (v controlRowRenderer) headHeight() float32 {
	r := v.row
	return max(r.entry.MinSize().Height, r.name.MinSize().Height+r.limits.MinSize().Height-1)
}

func (v controlRowRenderer) MinSize() fyne.Size {
	r := v.row
	height := v.headHeight() + sliderHeight
	if r.control.Wrong != "" {
		height += r.wrong.MinSize().Height - 2*theme.Size(theme.SizeNameInnerPadding)
	}
	return fyne.NewSize(entryWidth+160, height+rowGap)
}

func (v controlRowRenderer) Refresh() {
	v.Layout(v.row.Size())
	canvas.Refresh(v.row)
}

func (v controlRowRenderer) Objects() []fyne.CanvasObject {
	r := v.row
	return []fyne.CanvasObject{r.name, r.entry, r.slider, r.limits, r.wrong}
}

func (controlRowRenderer) Destroy() {}

// choiceRow is one property with few values.
type choiceRow struct {
	choice   *state.Choice
	segments *segments
	content  fyne.CanvasObject
}

func newChoiceRow(c *state.Choice, h hands) *choiceRow {
	labels := make([]string, len(c.Options))
	for k, o := range c.Options {
		labels[k] = o.Label
	}
	s := newSegments(labels, func(k int) { h.choose(c, k) })
	return &choiceRow{choice: c, segments: s, content: named(c.Name, s.row)}
}

func (r *choiceRow) sync() { r.segments.set(r.choice.Chosen) }

// named puts a name to the left of an object.
func named(name string, o fyne.CanvasObject) fyne.CanvasObject {
	const nameWidth = 84
	text := canvas.NewText(name, words)
	text.TextSize = theme.Size(theme.SizeNameText)
	return container.NewBorder(nil, nil, column(nameWidth, text), nil, o)
}

func setText(t *canvas.Text, text string) {
	if t.Text != text {
		t.Text = text
		t.Refresh()
	}
}
