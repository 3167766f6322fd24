package desk

import (
	"context"
	"image"
	"time"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"

	"annulet/app/desk/imaging"
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
	maker  *imaging.Maker
	prober *imaging.Prober

	asked     dialog.Dialog // the last one shown
	spot      *image.Point  // column and row of the pixel that the readings are of; nil for none yet
	requested int           // Serial of the last order
}

func newCommands(a fyne.App, w fyne.Window, s *state.State, l *log) *commands {
	c := &commands{app: a, window: w, state: s, log: l, requested: -1}
	inbox := &funnel{deliver: c.receive}
	ready := &views{}
	c.maker = imaging.NewMaker(func(o imaging.Order) (imaging.View, error) { return ready.of(o) },
		func(f imaging.Frame) { inbox.put(func(n *news) { n.frame = &f }) },
		func(done, tiles int) { inbox.put(func(n *news) { n.done, n.tiles = done, tiles }) })
	c.prober = imaging.NewProber(ready.probe,
		func(f imaging.Found) { inbox.put(func(n *news) { n.found = &f }) })
	c.view = newView(w, s, c)
	return c
}

// start begins to work, until ctx ends.
func (c *commands) start(ctx context.Context) {
	go c.maker.Run(ctx)
	go c.prober.Run(ctx)
}

func (c *commands) slide(k *state.Control, position float64) {
	if c.state.Slide(k, position) {
		c.request()
	}
	c.view.sync(c.state)
}

func (c *commands) step(k *state.Control, stops int) {
	if c.state.Step(k, stops) {
		c.request()
	}
	c.view.sync(c.state)
}

func (c *commands) typed(k *state.Control, text string) {
	c.state.Type(k, text)
	c.view.sync(c.state)
}

func (c *commands) submit(k *state.Control, text string) {
	if c.state.Submit(k, text) {
		c.request()
	}
	if k.Wrong != "" {
		c.log.wrong(k.Key, text, k.Wrong)
	}
	c.view.sync(c.state)
}

func (c *commands) restore(k *state.Control) {
	c.state.Restore(k)
	c.view.sync(c.state)
}

func (c *commands) choose(k *state.Choice, option int) {
	if c.state.Choose(k, option) {
		c.request()
	}
	c.view.sync(c.state)
}

func (c *commands) setTone(curve tone.Curve) {
	if curve == c.state.Tone {
		return
	}
	c.state.Tone = curve
	c.request()
	c.view.sync(c.state)
}

func (c *commands) help(text string) { c.view.setHelp(text) }

func (c *commands) dismiss() {
	c.state.Notice = ""
	c.view.sync(c.state)
}

func (c *commands) space(columns, rows int) {
	if c.state.Resize(columns, rows) && c.view != nil {
		c.request()
		c.view.picture.want(c.state.Picture())
	}
}

func (c *commands) point(column, row int) {
	c.spot = &image.Point{X: column, Y: row}
	c.probe()
}

// order asks for the picture of the scene as it is now.
func (c *commands) order() imaging.Order {
	columns, rows := c.state.Picture()
	curve := c.state.Tone
	return imaging.Order{
		Serial: c.state.Serial(), Scene: c.state.Scene(), Folder: c.state.Folder(), Columns: columns, Rows: rows, Asked: time.Now(),
		Develop: func(p *raytrace.Plate) *image.RGBA { return develop(p, curve) },
	}
}

// request orders the picture, and the readings of the pixel that was pointed
// at.
func (c *commands) request() {
	o := c.order()
	if o.Columns == 0 || o.Rows == 0 {
		return // the window has no size yet
	}
	c.maker.Ask(o)
	if c.requested != o.Serial {
		c.requested = o.Serial
		c.probe()
	}
}

// probe orders the readings of the pixel that was pointed at.
func (c *commands) probe() {
	if c.spot == nil {
		return
	}
	spot := imaging.Spot{Order: c.order(), Column: c.spot.X, Row: c.spot.Y}
	if spot.Column < spot.Order.Columns && spot.Row < spot.Order.Rows {
		c.prober.Ask(&spot)
	}
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
}

func (c *commands) receiveFrame(f imaging.Frame) {
	latest := f.Order.Serial == c.state.Serial()
	name := c.state.Name()
	if f.Err != nil {
		if latest {
			c.state.Notice = f.Err.Error()
			c.view.sync(c.state)
			c.view.setPicked("not traced")
		}
		c.log.frame(f, name, latest)
		return
	}
	c.view.picture.show(f.Image)
	c.view.setPicked(state.Picture{
		Scene: f.Order.Scene, Width: f.Width,
		Columns: f.Plate.Columns, Rows: f.Plate.Rows, Coarsening: f.Coarsening,
		Traced: f.Traced, WorstBound: f.Plate.WorstBound,
	}.Describe())
	if c.log.on() {
		afterPaint(func() { c.log.frame(f, name, latest) })
	}
}

func (c *commands) receiveFound(f imaging.Found) {
	if f.Err != nil {
		c.view.setReadings("no reading:\n" + f.Err.Error())
		return
	}
	c.view.setReadings(state.Readings(f.Spot.Order.Scene, state.Sight{
		Alpha: f.Alpha, Beta: f.Beta, Impact: f.Impact, Readings: f.Readings,
	}))
	c.log.found(f)
}

// develop colours a plate; it runs off the window's thread.
func develop(p *raytrace.Plate, curve tone.Curve) *image.RGBA {
	ember, ok := assets.Lookup("ember")
	if !ok {
		panic("desk: the colour map ember is missing")
	}
	out := image.NewRGBA(image.Rect(0, 0, p.Columns, p.Rows))
	if err := (tone.Tone{Curve: curve, FromZero: true}).Apply(out, p.Total, p.Columns, p.Rows, ember); err != nil {
		panic("desk: " + err.Error()) // sizes fit by construction
	}
	return out
}
