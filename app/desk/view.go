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
	editText(text string)
	copyText()
	copyCSV()
	saveGraphCSV()
	saveGraphPNG()
	holdCurve()
	dropCurves()

	help(text string)
	dismiss()
	turnSide(readings bool)
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

	content     *fyne.Container
	arrangement *arrangement
	stripFlow   *flowRow
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
	v.notice.Wrapping = fyne.TextWrapWord
	v.notice.Selectable = true
	close := widget.NewButton("Dismiss", h.dismiss)
	v.noticed = container.NewStack(canvas.NewRectangle(raised),
		container.NewBorder(nil, nil, nil, container.NewCenter(close), v.notice))
	middle := container.New(middleColumn{v}, v.top.content, v.noticed, v.picture, v.tones.content)
	line := func() fyne.CanvasObject { return canvas.NewRectangle(edge) }
	v.arrangement = &arrangement{view: v, scene: true, readings: true}
	v.content = container.New(v.arrangement, v.panel.content(), line(), middle, line(), v.side.content, v.strip())
	w.SetContent(container.NewStack(canvas.NewRectangle(ground), v.content))
	return v
}

// turnSide shows or hides the scene (or the readings).
func (v *view) turnSide(readings bool) {
	a := v.arrangement
	wanted := &a.scene
	if readings {
		wanted = &a.readings
	}
	shown := v.panelShown()
	if readings {
		shown = v.side.content.Visible()
	}
	*wanted = !shown
	if *wanted {
		a.preferred = readings
	} else {
		a.preferred = !readings
	}
	v.content.Layout.Layout(v.content.Objects, v.content.Size())
	v.content.Refresh()
}

func (v *view) panelShown() bool { return v.content.Objects[0].Visible() }

// strip says what the model leaves out and what the picture is.
func (v *view) strip() fyne.CanvasObject {
	v.stripFlow = &flowRow{lastRight: true, gap: 10}
	left := canvas.NewText(state.LeftOut, quiet)
	left.TextSize = v.picked.TextSize
	pad := func(o fyne.CanvasObject) fyne.CanvasObject {
		return container.New(layout.NewCustomPaddedLayout(3, 3, 10, 10), o)
	}
	return container.New(tightColumn{}, line1(), container.New(v.stripFlow, pad(left), pad(v.picked)))
}

// line1 is a line across.
func line1() fyne.CanvasObject {
	l := canvas.NewRectangle(edge)
	l.SetMinSize(fyne.NewSize(0, lineWidth))
	return l
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
		v.notice.Importance = widget.DangerImportance
		if s.Calm {
			v.notice.Importance = widget.MediumImportance
		}
		v.notice.SetText(s.Notice)
	}
	if shows := s.Notice != ""; shows != v.noticed.Visible() {
		setVisible(v.noticed, shows)
		v.content.Layout.Layout(v.content.Objects, v.content.Size())
		v.content.Objects[2].Refresh()
	}
	v.panel.standing = s.Remark
	if s.Remark == "" {
		v.panel.standing = s.Scene().Title
	}
	if v.panel.hint == "" {
		v.panel.setHelp("")
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
func (v *view) setPicked(text string) {
	if v.picked.Text != text {
		setText(v.picked, text)
		v.content.Layout.Layout(v.content.Objects, v.content.Size()) // it stands at the right end
	}
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
