package desk

import (
	"image"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/graph"
	"annulet/app/desk/state"
)

// sidebar holds the readings, as tables of which one is shown, over a graph.
type sidebar struct {
	tabs     *segments
	radii    *entry // of the stations
	radiiRow fyne.CanvasObject
	wrong    *canvas.Text
	text     *widget.Label
	remark   *widget.Label
	graphs   *segments
	graph    *graphView
	why      *widget.Label // where there is no graph
	hold     *word
	reading  *canvas.Text
	tables   fyne.CanvasObject // all that is shown of a table
	file     *widget.Entry     // the scene's text
	fault    *widget.Label     // what is wrong with it
	editor   fyne.CanvasObject // both
	setting  bool              // the program, not the hand, changes the text
	lower    fyne.CanvasObject // the graph
	content  fyne.CanvasObject
}

const (
	sidebarWidth = 318
	graphHeight  = 232
)

func newSidebar(h hands) *sidebar {
	b := &sidebar{
		text:    widget.NewLabel(""),
		remark:  widget.NewLabel(""),
		wrong:   canvas.NewText("", wrong),
		reading: canvas.NewText("", quiet),
	}
	b.tabs = newSegments(state.TabNames(), func(k int) { h.showTab(state.Tab(k)) })
	for _, w := range b.tabs.words {
		w.inset = 5
	}
	b.text.TextStyle.Monospace = true
	b.text.SizeName = theme.SizeNameCaptionText
	b.text.Selectable = true
	b.remark.SizeName = theme.SizeNameCaptionText
	b.remark.Importance = widget.LowImportance
	b.remark.Wrapping = fyne.TextWrapWord
	b.wrong.TextSize = choiceTextSize
	b.radii = newEntry()
	b.radii.set(state.FirstStations)
	b.radii.onTyped = func(string) {}
	b.radii.onDone = h.setStations
	b.radii.onStep = func(int) {}
	b.radii.onRestore = func() {}
	b.radiiRow = container.NewVBox(container.NewBorder(nil, nil, plain("Radii [M]"), nil, b.radii), b.wrong)
	copied := hbox(2, newAction("copy as text", h.copyText), newAction("copy as CSV", h.copyCSV))
	b.graphs = newSegments(state.GraphNames(), func(k int) { h.showGraph(state.Graph(k)) })
	for _, w := range b.graphs.words {
		w.inset = 5
	}
	b.why = widget.NewLabel("")
	b.why.Wrapping = fyne.TextWrapWord
	b.why.SizeName = theme.SizeNameCaptionText
	b.why.Selectable = true
	b.why.Hide()
	measured := b.graphs.split(int(state.GraphLine))
	b.graph = newGraphView(func(text string) { setText(b.reading, text) })
	b.reading.TextSize = choiceTextSize
	b.hold = newAction("hold", h.holdCurve)
	saved := hbox(2, newAction("save CSV…", h.saveGraphCSV), newAction("save PNG…", h.saveGraphPNG), b.hold, newAction("drop", h.dropCurves))
	lower := container.NewBorder(
		container.NewVBox(widget.NewSeparator(), row(container.NewVBox(b.graphs.row, measured))),
		container.NewVBox(container.New(layout.NewCustomPaddedLayout(0, 0, 10, 6), container.NewStack(spacer(16), b.reading)), row(saved)),
		nil, nil, room(graphHeight, container.NewStack(b.graph, container.NewVBox(b.why))))
	b.tables = container.NewBorder(nil, row(copied), nil, nil, container.NewVScroll(container.NewVBox(
		container.New(layout.NewCustomPaddedLayout(0, 0, 10, 8), b.radiiRow),
		container.New(layout.NewCustomPaddedLayout(0, 0, 8, 4), b.text),
		container.New(layout.NewCustomPaddedLayout(0, 0, 8, 4), b.remark))))
	b.file = widget.NewMultiLineEntry()
	b.file.TextStyle.Monospace = true
	b.file.Wrapping = fyne.TextWrapOff
	b.file.OnChanged = func(text string) {
		if !b.setting {
			h.editText(text)
		}
	}
	b.fault = widget.NewLabel("")
	b.fault.SizeName = theme.SizeNameCaptionText
	b.fault.Wrapping = fyne.TextWrapWord
	b.fault.Importance = widget.DangerImportance
	b.fault.Selectable = true
	b.editor = container.NewBorder(nil, b.fault, nil, nil, container.NewThemeOverride(b.file, smallText{}))
	upper := container.NewBorder(row(b.tabs.row), nil, nil, nil, container.NewStack(b.tables, b.editor))
	b.lower = lower
	b.content = container.NewBorder(nil, lower, nil, nil, upper)
	return b
}

// tell says what a graph waits for, or why there is none.
func (b *sidebar) tell(words string) {
	if g := b.graph.graph; g != nil { // the last one stays meanwhile
		if words == "" {
			words = g.Note
		}
		setText(b.reading, words)
		words = ""
	}
	b.why.SetText(words)
	setVisible(b.why, words != "")
}

// compact leaves the graph out.
func (b *sidebar) compact(is bool) { setVisible(b.lower, !is) }

// row insets a line of words.
func row(o fyne.CanvasObject) fyne.CanvasObject {
	return container.New(layout.NewCustomPaddedLayout(3, 3, 8, 4), o)
}

func spacer(height float32) fyne.CanvasObject {
	s := canvas.NewRectangle(nil)
	s.SetMinSize(fyne.NewSize(0, height))
	return s
}

// plain is a word of a row.
func plain(text string) fyne.CanvasObject {
	t := canvas.NewText(text, quiet)
	t.TextSize = rowTextSize
	return container.NewCenter(t)
}

// sync shows which table and graph are chosen.
func (b *sidebar) sync(s *state.State) {
	b.tabs.set(int(s.Look.Tab))
	b.graphs.set(int(s.Look.Graph))
	setVisible(b.radiiRow, s.Look.Tab == state.TabStations)
	setVisible(b.tables, s.Look.Tab != state.TabText)
	setVisible(b.editor, s.Look.Tab == state.TabText)
	if s.Look.Tab != state.TabText {
		return
	}
	if text := string(s.Text()); text != b.file.Text && s.TextWrong == "" {
		b.setting = true
		b.file.SetText(text)
		b.setting = false
	}
	if b.fault.Text != s.TextWrong {
		b.fault.SetText(s.TextWrong)
	}
	setVisible(b.fault, s.TextWrong != "")
}

// smallText is the window's theme with text as small as captions.
type smallText struct{ look }

func (smallText) Size(name fyne.ThemeSizeName) float32 {
	if name == theme.SizeNameText {
		name = theme.SizeNameCaptionText
	}
	return look{}.Size(name)
}

// show shows a table.
func (b *sidebar) show(t state.Table) {
	if text := t.Text(); text != b.text.Text {
		b.text.SetText(text)
	}
	if t.Remark != b.remark.Text {
		b.remark.SetText(t.Remark)
	}
}

// graphView draws a graph at the pixels of the screen.
type graphView struct {
	widget.BaseWidget

	image     *canvas.Image
	graph     *graph.Graph
	plot      *graph.Plot
	onReading func(text string)
}

var _ desktop.Hoverable = (*graphView)(nil)

func newGraphView(onReading func(string)) *graphView {
	g := &graphView{onReading: onReading}
	g.image = canvas.NewImageFromImage(image.NewRGBA(image.Rect(0, 0, 1, 1)))
	g.image.ScaleMode, g.image.FillMode = canvas.ImageScalePixels, canvas.ImageFillStretch
	g.ExtendBaseWidget(g)
	return g
}

// show draws a graph; nil for none.
func (g *graphView) show(what *graph.Graph) {
	g.graph = what
	g.draw()
}

func (g *graphView) draw() {
	setVisible(g.image, g.graph != nil)
	g.plot = nil
	if g.graph == nil {
		g.onReading("")
		return
	}
	s := g.scale()
	plot, err := graph.Draw(*g.graph, int(g.Size().Width*s), int(g.Size().Height*s), graphPaint(s))
	if err != nil || plot == nil {
		return
	}
	g.plot = plot
	g.image.Image = plot.Image
	g.image.Refresh()
	g.onReading(plot.Graph.Note)
}

func (g *graphView) scale() float32 {
	if c := fyne.CurrentApp().Driver().CanvasForObject(g); c != nil {
		return c.Scale()
	}
	return 1
}

// graphPaint is how graphs look in this theme.
func graphPaint(scale float32) graph.Paint {
	return graph.Paint{
		Ground: ground, Words: words, Quiet: quiet, Edge: faint,
		Lines: graphLines, Font: theme.DefaultTheme().Font(fyne.TextStyle{}).Content(), Scale: float64(scale),
	}
}

func (g *graphView) MouseIn(e *desktop.MouseEvent) { g.MouseMoved(e) }

func (g *graphView) MouseMoved(e *desktop.MouseEvent) {
	if g.plot != nil {
		s := g.scale()
		g.onReading(g.plot.Reading(float64(e.Position.X*s), float64(e.Position.Y*s)))
	}
}

func (g *graphView) MouseOut() {
	if g.plot != nil {
		g.onReading(g.plot.Graph.Note)
	}
}

func (g *graphView) CreateRenderer() fyne.WidgetRenderer { return graphViewRenderer{g} }

type graphViewRenderer struct{ view *graphView }

func (r graphViewRenderer) Layout(size fyne.Size) {
	s := r.view.scale()
	r.view.image.Resize(fyne.NewSize(float32(int(size.Width*s))/s, float32(int(size.Height*s))/s))
	r.view.draw()
}

func (r graphViewRenderer) MinSize() fyne.Size { return fyne.NewSize(120, 100) }

func (r graphViewRenderer) Refresh() { canvas.Refresh(r.view) }

func (r graphViewRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.view.image}
}

func (graphViewRenderer) Destroy() {}
