package desk

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/state"
	"annulet/app/tone"
)

// hands is what the view does with what the user does.
type hands interface {
	slide(c *state.Control, position float64)
	step(c *state.Control, stops int)
	typed(c *state.Control, text string)
	submit(c *state.Control, text string)
	restore(c *state.Control)
	choose(c *state.Choice, option int)
	setTone(curve tone.Curve)
	help(text string)
	dismiss()
	space(columns, rows int)
	point(column, row int)
}

// view turns the state into widgets. It decides nothing.
type view struct {
	window fyne.Window

	picture  *picture
	rows     []*controlRow
	choices  []*choiceRow
	tone     *segments
	readings *widget.Label
	help     *widget.Label
	picked   *canvas.Text // the state of the picture
	notice   *widget.Label
	noticed  fyne.CanvasObject // the notice with its surroundings
}

const (
	panelWidth    = 330
	readingsWidth = 204
	helpHeight    = 84 // five lines
)

func newView(w fyne.Window, s *state.State, h hands) *view {
	v := &view{
		window:   w,
		picture:  newPicture(),
		readings: widget.NewLabel("Point at the image."),
		help:     widget.NewLabel(""),
		picked:   canvas.NewText("", words),
		notice:   widget.NewLabel(""),
	}
	v.picture.onSpace, v.picture.onPoint, v.picture.onLeave = h.space, h.point, func() {}
	v.readings.TextStyle.Monospace = true
	v.readings.SizeName = theme.SizeNameCaptionText
	v.readings.Selectable = true
	v.help.SizeName = theme.SizeNameCaptionText
	v.help.Importance = widget.LowImportance
	v.help.Wrapping = fyne.TextWrapWord
	v.picked.TextSize = theme.Size(theme.SizeNameCaptionText)
	v.notice.TextStyle.Monospace = true
	v.notice.SizeName = theme.SizeNameCaptionText
	v.notice.Importance = widget.DangerImportance
	v.notice.Wrapping = fyne.TextWrapBreak
	v.notice.Selectable = true
	close := widget.NewButton("Dismiss", h.dismiss)
	v.noticed = container.NewStack(canvas.NewRectangle(raised),
		container.NewBorder(nil, nil, nil, container.NewCenter(close), v.notice))

	middle := container.NewBorder(v.noticed, nil, nil, nil, v.picture)
	content := container.NewBorder(nil, v.strip(),
		column(panelWidth, v.panel(s, h)),
		column(readingsWidth, v.side()),
		middle)
	w.SetContent(content)
	v.sync(s)
	return v
}

// panel holds the controls under their headings.
func (v *view) panel(s *state.State, h hands) fyne.CanvasObject {
	groups := map[string]*fyne.Container{}
	list := container.NewVBox()
	for _, name := range []string{state.Observer, state.Disk, state.Image} {
		groups[name] = container.NewVBox()
		list.Add(container.New(layout.NewCustomPaddedLayout(4, 2, 0, 0), heading(name)))
		list.Add(groups[name])
	}
	for _, c := range s.Controls {
		row := newControlRow(c, h)
		v.rows = append(v.rows, row)
		groups[c.Group].Add(row)
	}
	for _, c := range s.Choices {
		row := newChoiceRow(c, h)
		v.choices = append(v.choices, row)
		groups[c.Group].Add(row.content)
	}
	v.tone = newSegments(state.Tones(), func(k int) { h.setTone(tone.Curve(k)) })
	groups[state.Image].Add(named("Tone", v.tone.row))
	return container.NewVScroll(padded(list))
}

// side holds the readings, and what the control under the pointer means.
func (v *view) side() fyne.CanvasObject {
	inset := theme.Size(theme.SizeNameInnerPadding)
	title := container.New(layout.NewCustomPaddedLayout(4, 0, inset, inset), heading("Reading"))
	return container.NewBorder(title, room(helpHeight, v.help), nil, nil, container.NewVScroll(v.readings))
}

// strip says what the model leaves out and what the picture is.
func (v *view) strip() fyne.CanvasObject {
	out := widget.NewLabel(state.LeftOut)
	out.SizeName = theme.SizeNameCaptionText
	out.Importance = widget.LowImportance
	out.Truncation = fyne.TextTruncateEllipsis
	picked := container.New(layout.NewCustomPaddedLayout(0, 0, 0, 10), container.NewCenter(v.picked))
	inset := canvas.NewRectangle(color.Transparent)
	inset.SetMinSize(fyne.NewSize(2, 0))
	return container.NewVBox(widget.NewSeparator(), container.NewBorder(nil, nil, inset, picked, out))
}

// sync shows the state as it is now.
func (v *view) sync(s *state.State) {
	for _, r := range v.rows {
		r.sync()
	}
	for _, r := range v.choices {
		r.sync()
	}
	v.tone.set(int(s.Tone))
	v.picture.want(s.Picture())
	if v.notice.Text != s.Notice {
		v.notice.SetText(s.Notice)
	}
	setVisible(v.noticed, s.Notice != "")
	if title := s.Title(); title != v.window.Title() {
		v.window.SetTitle(title)
	}
}

func setVisible(o fyne.CanvasObject, show bool) {
	switch {
	case show == o.Visible():
	case show:
		o.Show()
	default:
		o.Hide()
	}
}

// setPicked tells the state of the picture.
func (v *view) setPicked(text string) { setText(v.picked, text) }

// setHelp tells what the control under the pointer means.
func (v *view) setHelp(text string) {
	if v.help.Text != text {
		v.help.SetText(text)
	}
}

// setReadings shows the quantities of a line of sight.
func (v *view) setReadings(text string) {
	if v.readings.Text != text {
		v.readings.SetText(text)
	}
}

func heading(text string) fyne.CanvasObject {
	t := canvas.NewText(text, accent)
	t.TextSize = theme.Size(theme.SizeNameCaptionText)
	t.TextStyle.Bold = true
	return t
}

// padded keeps an object off the window's edges.
func padded(o fyne.CanvasObject) fyne.CanvasObject {
	const left, right, top, bottom = 10, 10, 4, 4
	return container.New(layout.NewCustomPaddedLayout(top, bottom, left, right), o)
}

// room keeps a height free for an object, so that nothing moves when its text
// grows.
func room(height float32, o fyne.CanvasObject) fyne.CanvasObject {
	post := canvas.NewRectangle(color.Transparent)
	post.SetMinSize(fyne.NewSize(0, height))
	return container.NewStack(post, o)
}

// column gives an object a fixed width.
func column(width float32, o fyne.CanvasObject) fyne.CanvasObject {
	post := canvas.NewRectangle(color.Transparent)
	post.SetMinSize(fyne.NewSize(width, 0))
	return container.NewStack(post, o)
}
