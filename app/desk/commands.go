package desk

import (
	"context"
	"image"
	"math"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/theme"

	"annulet/app/desk/imaging"
	"annulet/app/desk/keep"
	"annulet/app/desk/overlay"
	"annulet/app/desk/state"
	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
)

var _ hands = (*commands)(nil)

// commands turns what the user does into changes of the state and into work.
type commands struct {
	app    fyne.App
	window fyne.Window
	state  *state.State
	view   *view
	log    *log
	home   *home
	inbox  *funnel
	maker  *imaging.Maker
	asker  *imaging.Latest[inquiry, finding]

	asked      dialog.Dialog // the last one shown
	checks     []func() bool // bring check marks of the menu up to date; true if one changed
	tool       tool
	pointer    *pixel           // under the pointer, nil for elsewhere
	requested  int              // Serial of the last order
	appearance state.Appearance // of it
	frame      *imaging.Frame
	found      *finding
	measures   *imaging.Latest[measuring, measured]
	wanted     measuring // the latest of measures
	measured   *measured
	held       []held

	frameShown time.Duration  // from the order to the picture
	keeping    bool           // unsaved work will soon be kept
	kept       string         // the text last kept, or opened
	lost       *keep.Work     // of another window, not yet brought back
	traceError string         // why the latest scene could not be traced
	whole      raytrace.Field // the scene's, at the picture's pixels
}

// pixel is one pixel of the picture.
type pixel struct {
	at          [2]float64
	column, row int
}

func newCommands(a fyne.App, w fyne.Window, s *state.State, h *home, l *log) *commands {
	c := &commands{app: a, window: w, state: s, home: h, log: l, requested: -1, kept: string(s.Text())}
	setWorkers(h.settings.Workers)
	inbox := &funnel{deliver: c.receive}
	c.inbox = inbox
	ready := &views{}
	c.maker = imaging.NewMaker(func(o imaging.Order) (imaging.View, error) { return ready.of(o) },
		func(f imaging.Frame) { inbox.put(func(n *news) { n.frame = &f }) },
		func(done, tiles int) { inbox.put(func(n *news) { n.done, n.tiles = done, tiles }) })
	c.asker = imaging.NewLatest(ready.inquire, func(f finding) { inbox.put(func(n *news) { n.found = &f }) })
	c.measures = imaging.NewLatest(ready.measure, func(m measured) { inbox.put(func(n *news) { n.measured = &m }) })
	c.view = newView(c.window, c.state, c)
	c.sync()
	return c
}

// start begins to work, until ctx ends.
func (c *commands) start(ctx context.Context) {
	go c.maker.Run(ctx)
	go c.asker.Run(ctx)
	go c.measures.Run(ctx)
}

// sync shows the state, and orders what is not yet shown.
func (c *commands) sync() {
	if c.view == nil {
		return
	}
	c.view.sync(c.state, c.tool)
	c.request()
	c.showTable()
	c.syncMenu()
	if string(c.state.Text()) != c.kept {
		c.keepSoon()
	}
}

// order asks for the picture of the scene as it is now.
func (c *commands) order() imaging.Order {
	columns, rows := c.state.Picture()
	l := c.state.Look
	scene := c.state.Scene()
	o := imaging.Order{
		Serial: c.state.Serial(), Scene: scene, Folder: c.state.Folder(), Columns: columns, Rows: rows, Asked: time.Now(),
		Shown: imaging.Window{Center: [2]float64{l.Window.Alpha, l.Window.Beta}, Width: l.Window.Width},
		Own:   l.Own, Layers: layersOf(l),
		Develop: func(p *raytrace.Plate) imaging.Developed {
			return imaging.Develop(imaging.Values(p, l.Layer, l.Order), p.Columns, p.Rows, toneOf(l), coloursOf(l.Layer))
		},
	}
	if l.Overlays != (state.Overlays{}) {
		font, scale := theme.DefaultTheme().Font(fyne.TextStyle{}).Content(), float64(c.window.Canvas().Scale())
		o.Ink = func(p *raytrace.Plate, of, shown raytrace.Field) *image.RGBA {
			drawn, err := overlay.Draw(overlay.Order{Scene: scene, Look: l, Plate: p, Of: of, Shown: shown, Font: font, Scale: scale})
			if err != nil {
				panic("desk: " + err.Error()) // only the font could be wrong
			}
			return drawn
		}
	}
	return o
}

// layersOf are the layers that a look needs beside the total.
func layersOf(l state.Look) []raytrace.Layer {
	layers := []raytrace.Layer{}
	if l.Layer != raytrace.Intensity || l.Order != state.AllOrders {
		layers = append(layers, l.Layer)
	}
	return append(layers, overlay.Layers(l.Overlays)...)
}

// coloursOf returns the colour map of a layer.
func coloursOf(l raytrace.Layer) *assets.Map {
	name := "ember"
	switch l {
	case raytrace.Redshift:
		name = "shift"
	case raytrace.Azimuth:
		name = "wheel"
	}
	m, ok := assets.Lookup(name)
	if !ok {
		panic("desk: the colour map " + name + " is missing")
	}
	return m
}

// toneOf returns the tone of the layer shown.
func toneOf(l state.Look) tone.Tone {
	set := l.Tone()
	t := tone.Tone{Curve: set.Curve, FromZero: l.Layer == raytrace.Intensity && set.Curve != tone.Logarithmic}
	if l.Layer != raytrace.Intensity {
		t.CountZeros = true
		t.LowPercent, t.HighPercent = 0.2, 99.8 // without a few extremes
	}
	if l.Layer == raytrace.Redshift && set.Curve == tone.Linear {
		t.Centre = 1
	}
	if l.Layer == raytrace.Azimuth && set.Curve == tone.Linear {
		t.Low, t.High, t.Centre = -math.Pi, math.Pi, 0 // once round the wheel
	}
	if set.Fixed {
		t.Low, t.High, t.Centre = set.Low, set.High, 0
	}
	return t
}

// request orders the picture, and the readings.
func (c *commands) request() {
	o := c.order()
	if o.Columns == 0 || o.Rows == 0 {
		return // the window has no size yet
	}
	if seen := c.state.Look.Appearance(); c.requested != o.Serial || seen != c.appearance {
		c.appearance = seen
		c.maker.Ask(o)
	}
	if c.requested != o.Serial {
		c.requested = o.Serial
		c.inquire(o)
	}
}

// inquire asks for the readings.
func (c *commands) inquire(o imaging.Order) {
	q := inquiry{order: o, look: c.state.Look}
	if p := c.pointer; p != nil {
		q.pointer, q.column, q.row = &p.at, p.column, p.row
	}
	c.asker.Ask(q)
}

// receive shows what work has brought.
func (c *commands) receive(n news) {
	if n.tiles > 0 {
		c.view.setPicked(state.Working(n.done, n.tiles))
	}
	if n.frame != nil {
		c.receiveFrame(*n.frame)
	}
	if n.found != nil {
		c.receiveFound(*n.found)
	}
	if n.measured != nil {
		c.receiveMeasured(*n.measured)
	}
	if n.keep {
		c.keepNow()
	}
}

func (c *commands) receiveFrame(f imaging.Frame) {
	latest := f.Order.Serial == c.state.Serial()
	name := c.state.Name()
	if f.Err != nil {
		if latest {
			c.state.Notice, c.state.Calm = f.Err.Error(), false
			c.traceError = f.Err.Error()
			c.view.sync(c.state, c.tool)
			c.view.setPicked("not traced")
		}
		c.log.frame(f, name, latest)
		return
	}
	if latest && c.traceError != "" { // it belongs to an earlier scene
		if c.state.Notice == c.traceError {
			c.state.Notice = ""
		}
		c.traceError = ""
		c.view.sync(c.state, c.tool)
	}
	shown := time.Since(f.Order.Asked)
	c.frame, c.frameShown = &f, shown
	c.showFrame(f)
	c.view.setPicked(state.Picture{
		Scene: f.Order.Scene, Width: f.Shown.Width,
		Columns: f.Plate.Columns, Rows: f.Plate.Rows, Coarsening: f.Coarsening,
		Traced: f.Traced, WorstBound: f.Plate.WorstBound,
	}.Describe())
	if c.state.Look.Tab == state.TabNumerics && f.Settled() {
		c.showTable()
	}
	if c.state.Look.Graph == state.GraphOrders && f.Settled() {
		c.showGraphNow()
	}
	if f.Areas && latest { // the hand rests
		c.measure()
	}
	if c.log.on() {
		afterPaint(func() { c.log.frame(f, name, latest) })
	}
}

// measure asks for the graph shown, if it takes a while and is not known.
func (c *commands) measure() {
	q := measuring{order: c.order(), graph: c.state.Look.Graph}
	if !q.graph.Measured() || c.wanted.of(q) {
		return
	}
	c.wanted = q
	c.view.side.tell("measuring …")
	c.measures.Ask(q)
}

func (c *commands) receiveMeasured(m measured) {
	if !m.asked.of(c.wanted) {
		return
	}
	c.measured = &m
	words := ""
	if m.err != nil {
		words = m.err.Error()
	}
	c.showGraphNow()
	if words != "" {
		c.view.side.tell(words)
	}
	if c.log.on() {
		afterPaint(func() { c.log.line("measured graph=%d error=%q", int(m.asked.graph), words) })
	}
}

// showFrame shows a picture and its histogram.
func (c *commands) showFrame(f imaging.Frame) {
	c.view.picture.show(f.Image, f.Ink, f.Shown)
	l := c.state.Look
	c.view.tones.show(f.Developed, toneOf(l), coloursOf(l.Layer))
}

// forget drops what is known of another scene.
func (c *commands) forget() { c.found, c.frame, c.whole = nil, nil, raytrace.Field{} }

func (c *commands) receiveFound(f finding) {
	if f.err == nil {
		c.whole = f.whole
	}
	c.found = &f
	c.showTable()
	c.showGraphNow()
	c.log.found(f)
}
