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

// controlRow is one key of the scene on one line: its name, then a slider and
// an entry, an entry alone, or a choice of words; under it what is wrong with
// what was typed.
type controlRow struct {
	widget.BaseWidget

	control *state.Control
	name    *canvas.Text
	entry   *entry    // nil for a choice
	slider  *slider   // nil without an axis
	choice  *segments // nil for an entry
	reset   *word
	wrong   *widget.Label
	onHelp  func(text string) // the pointer or the focus is on the row; "" when it has left
}

func newControlRow(c *state.Control, h hands) *controlRow {
	r := &controlRow{
		control: c,
		name:    canvas.NewText(c.Name, words),
		wrong:   widget.NewLabel(""),
		onHelp:  h.help,
	}
	r.name.TextSize = rowTextSize
	r.wrong.SizeName = theme.SizeNameCaptionText
	r.wrong.Importance = widget.DangerImportance
	r.wrong.Wrapping = fyne.TextWrapWord
	r.reset = newWord("×", func() { h.reset(c) })
	r.reset.inset, r.reset.unlined, r.reset.skipped = 3, true, true
	r.reset.onHover = func(over bool) {
		if over {
			h.help(resetHelp(c))
		} else {
			h.help("")
		}
	}
	if c.IsChoice() {
		labels := make([]string, len(c.Options))
		for k, o := range c.Options {
			labels[k] = o.Label
		}
		r.choice = newSegments(labels, func(k int) { h.choose(c, k) })
		for _, w := range r.choice.words {
			w.inset, w.size = 5, choiceTextSize
			w.onHover = r.hover
			w.onFocus = r.hover
		}
		r.ExtendBaseWidget(r)
		return r
	}
	r.entry = newEntry()
	r.entry.onTyped = func(text string) { h.typed(c, text) }
	r.entry.onDone = func(text string) { h.submit(c, text) }
	r.entry.onStep = func(stops int) { h.step(c, stops) }
	r.entry.onRestore = func() { h.restore(c) }
	r.entry.onFocus = r.hover
	r.slider = newSlider(
		func(position float64) { h.slide(c, position) },
		func(stops int) { h.step(c, stops) })
	r.slider.onHover = r.hover // it hides the row from the pointer
	r.ExtendBaseWidget(r)
	return r
}

func resetHelp(c *state.Control) string {
	if c.Default() == "" {
		return "Take " + c.Key + " out of the scene."
	}
	return "Return " + c.Key + " to its default, " + c.Default() + ". Emptying the entry does the same."
}

// sync shows the control as it is now.
func (r *controlRow) sync() {
	c := r.control
	if r.name.Color = quiet; c.Given {
		r.name.Color = words
	}
	if r.choice != nil {
		for k, o := range c.Options {
			r.choice.words[k].choose(o.Chosen)
		}
	} else {
		r.slider.set(c.Position, c.Axis.Last())
		r.entry.set(c.Text)
		setVisible(r.slider, len(c.Axis) > 1)
	}
	setVisible(r.reset, c.Given && c.Key != "title" && c.Name != "Kind")
	changed := r.wrong.Text != c.Wrong
	if changed {
		r.wrong.SetText(c.Wrong)
	}
	setVisible(r.wrong, c.Wrong != "")
	r.name.Refresh()
	if changed {
		r.Refresh() // its height may differ
	}
}

func (r *controlRow) MouseIn(*desktop.MouseEvent)    { r.hover(true) }
func (r *controlRow) MouseMoved(*desktop.MouseEvent) {}
func (r *controlRow) MouseOut()                      { r.hover(false) }

func (r *controlRow) hover(over bool) {
	if !over {
		r.onHelp("")
		return
	}
	c := r.control
	text := c.Help
	if !c.IsChoice() {
		text += "\n" + c.Range
	}
	r.onHelp(text)
}

func (r *controlRow) CreateRenderer() fyne.WidgetRenderer { return controlRowRenderer{r} }

type controlRowRenderer struct{ row *controlRow }

const (
	rowTextSize    = 12
	choiceTextSize = 11.5
	nameWidth      = 104
	entryWidth     = 100
	resetWidth     = 16
	rowGap         = 3
	panelInner     = panelWidth - 2*panelInset
)

// Layout puts the name on the left, the rest in its column, and what is wrong
// under both.
func (v controlRowRenderer) Layout(size fyne.Size) {
	r := v.row
	height := v.lineHeight()
	first := v.firstHeight()
	r.name.Move(fyne.NewPos(0, (first-r.name.MinSize().Height)/2))
	r.reset.Move(fyne.NewPos(size.Width-resetWidth, (first-r.reset.MinSize().Height)/2))
	r.reset.Resize(fyne.NewSize(resetWidth, r.reset.MinSize().Height))
	right := size.Width - resetWidth
	switch {
	case r.choice != nil:
		flow(r.choice.words, nameWidth, right)
	case r.slider.Visible():
		r.slider.Move(fyne.NewPos(nameWidth, (first-sliderHeight)/2))
		r.slider.Resize(fyne.NewSize(right-entryWidth-nameWidth-8, sliderHeight))
		r.entry.Move(fyne.NewPos(right-entryWidth, 0))
		r.entry.Resize(fyne.NewSize(entryWidth, first))
	default:
		r.entry.Move(fyne.NewPos(nameWidth, 0))
		r.entry.Resize(fyne.NewSize(right-nameWidth, first))
	}
	inner := theme.Size(theme.SizeNameInnerPadding)
	r.wrong.Move(fyne.NewPos(-inner, height-inner))
	r.wrong.Resize(fyne.NewSize(size.Width+2*inner, r.wrong.MinSize().Height))
}

// firstHeight is that of a line of the row, and lineHeight that of all of
// them but for what is wrong.
func (v controlRowRenderer) firstHeight() float32 {
	if r := v.row; r.choice == nil {
		return r.entry.MinSize().Height
	}
	return v.row.choice.words[0].MinSize().Height
}

func (v controlRowRenderer) lineHeight() float32 {
	if v.row.choice == nil {
		return v.firstHeight()
	}
	return flow(v.row.choice.words, nameWidth, panelInner-resetWidth)
}

// flow puts words into lines between two abscissas and returns their height.
func flow(all []*word, left, right float32) float32 {
	x, y, line := left, float32(0), float32(0)
	for _, w := range all {
		size := w.MinSize()
		if x > left && x+size.Width > right {
			x, y, line = left, y+line, 0
		}
		w.Move(fyne.NewPos(x, y))
		w.Resize(size)
		x += size.Width + 1
		line = max(line, size.Height)
	}
	return y + line
}

func (v controlRowRenderer) MinSize() fyne.Size {
	r := v.row
	height := v.lineHeight()
	if r.control.Wrong != "" {
		height += r.wrong.MinSize().Height - 2*theme.Size(theme.SizeNameInnerPadding)
	}
	return fyne.NewSize(panelInner, height+rowGap)
}

func (v controlRowRenderer) Refresh() {
	v.Layout(v.row.Size())
	canvas.Refresh(v.row)
}

func (v controlRowRenderer) Objects() []fyne.CanvasObject {
	r := v.row
	all := []fyne.CanvasObject{r.name, r.reset, r.wrong}
	if r.choice != nil {
		for _, w := range r.choice.words {
			all = append(all, w)
		}
		return all
	}
	return append(all, r.slider, r.entry)
}

func (controlRowRenderer) Destroy() {}

func setText(t *canvas.Text, text string) {
	if t.Text != text {
		t.Text = text
		t.Refresh()
	}
}

// hbox puts objects side by side, closer than the toolkit's box does.
func hbox(gap float32, objects ...fyne.CanvasObject) *fyne.Container {
	return container.New(closeRow{gap}, objects...)
}

// closeRow lays out objects side by side at their own widths, centred
// vertically.
type closeRow struct{ gap float32 }

func (l closeRow) MinSize(objects []fyne.CanvasObject) fyne.Size {
	var size fyne.Size
	for _, o := range objects {
		if o.Visible() {
			m := o.MinSize()
			size.Width += m.Width + l.gap
			size.Height = max(size.Height, m.Height)
		}
	}
	return size
}

func (l closeRow) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	x := float32(0)
	for _, o := range objects {
		if o.Visible() {
			m := o.MinSize()
			o.Move(fyne.NewPos(x, (size.Height-m.Height)/2))
			o.Resize(m)
			x += m.Width + l.gap
		}
	}
}
