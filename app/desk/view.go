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
	"annulet/raytrace"
)

// hands is what the view does with what the user does.
type hands interface {
	onPicture

	slide(c *state.Control, position float64)
	step(c *state.Control, stops int)
	typed(c *state.Control, text string)
	submit(c *state.Control, text string)
	restore(c *state.Control)
	reset(c *state.Control)
	choose(c *state.Control, option int)
	addEmitter(kind string)
	arrange(emitter int, what state.Arrangement)

	showLayer(l raytrace.Layer)
	showOrder(order int)
	turnOverlay(k int)
	turnOwn()
	take(t tool)
	fit()
	setTone(curve tone.Curve)
	setLimit(which int, value float64)
	automaticLimits()

	showTab(t state.Tab)
	showGraph(g state.Graph)
	setStations(text string)
	copyText()
	copyCSV()
	saveGraphCSV()
	saveGraphPNG()

	help(text string)
	dismiss()
}

// view turns the state into widgets. It decides nothing.
type view struct {
	window fyne.Window

	panel   *panel
	top     *topBar
	picture *picture
	tones   *toneBar
	side    *sidebar
	picked  *canvas.Text // the state of the picture
	notice  *widget.Label
	noticed fyne.CanvasObject // the notice with its surroundings
}

func newView(w fyne.Window, s *state.State, h hands) *view {
	v := &view{
		window:  w,
		panel:   newPanel(h),
		top:     newTopBar(h),
		picture: newPicture(h),
		tones:   newToneBar(h),
		side:    newSidebar(h),
		picked:  canvas.NewText("", words),
		notice:  widget.NewLabel(""),
	}
	v.picked.TextSize = theme.Size(theme.SizeNameCaptionText)
	v.notice.TextStyle.Monospace = true
	v.notice.SizeName = theme.SizeNameCaptionText
	v.notice.Importance = widget.DangerImportance
	v.notice.Wrapping = fyne.TextWrapBreak
	v.notice.Selectable = true
	close := widget.NewButton("Dismiss", h.dismiss)
	v.noticed = container.NewStack(canvas.NewRectangle(raised),
		container.NewBorder(nil, nil, nil, container.NewCenter(close), v.notice))
	middle := container.NewBorder(container.New(tightColumn{}, v.top.content), v.tones.content, nil, nil,
		container.NewBorder(v.noticed, nil, nil, nil, v.picture))
	content := container.NewBorder(nil, v.strip(),
		container.NewHBox(column(panelWidth, v.panel.content()), widget.NewSeparator()),
		container.NewHBox(widget.NewSeparator(), column(sidebarWidth, v.side.content)),
		middle)
	w.SetContent(container.NewStack(canvas.NewRectangle(ground), content))
	return v
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
func (v *view) sync(s *state.State, t tool) {
	v.panel.sync(s)
	v.top.sync(s, t)
	v.tones.sync(s)
	v.side.sync(s)
	v.picture.tool = t
	columns, rows := s.Picture()
	v.picture.want(columns, rows, s.Look)
	if v.notice.Text != s.Notice {
		v.notice.SetText(s.Notice)
	}
	setVisible(v.noticed, s.Notice != "")
	if s.Remark != "" {
		v.panel.setHelp(s.Remark)
	}
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
