package desk

import (
	"math"
	"slices"

	"annulet/app/desk/imaging"
	"annulet/app/desk/state"
	"annulet/app/tone"
	"annulet/raytrace"
)

// What the hand does with the scene's controls.

func (c *commands) slide(k *state.Control, position float64) {
	c.state.Slide(k, position)
	c.sync()
}

func (c *commands) step(k *state.Control, stops int) {
	c.state.Step(k, stops)
	c.sync()
}

func (c *commands) typed(k *state.Control, text string) {
	c.state.Type(k, text)
	c.view.panel.sync(c.state)
}

func (c *commands) submit(k *state.Control, text string) {
	c.state.Submit(k, text)
	c.judge(k, text)
}

func (c *commands) restore(k *state.Control) {
	c.state.Restore(k)
	c.sync()
}

func (c *commands) reset(k *state.Control) {
	c.state.Reset(k)
	c.judge(k, k.Default())
}

func (c *commands) choose(k *state.Control, option int) {
	c.state.Choose(k, option)
	c.judge(k, k.Options[option].Label)
}

// judge shows the state, and logs what was refused.
func (c *commands) judge(k *state.Control, text string) {
	if k.Wrong != "" {
		c.log.wrong(k.Key, text, k.Wrong)
	}
	c.sync()
}

func (c *commands) addEmitter(kind string) {
	c.state.AddEmitter(kind)
	c.sync()
}

func (c *commands) arrange(n int, what state.Arrangement) {
	c.state.Arrange(n, what)
	c.sync()
}

func (c *commands) help(text string) { c.view.panel.setHelp(text) }

func (c *commands) turnSide(readings bool) { c.view.turnSide(readings) }

func (c *commands) dismiss() {
	c.state.Notice = ""
	c.sync()
}

func (c *commands) undo() { c.travel(c.state.Undo, "undone") }
func (c *commands) redo() { c.travel(c.state.Redo, "redone") }

func (c *commands) travel(step func() bool, word string) {
	if f, ok := c.window.Canvas().Focused().(*entry); ok && f.Text != f.shown {
		f.onRestore() // what is being typed goes first
		return
	}
	if step() {
		c.log.line("%s", word)
		c.sync()
		c.inquire(c.order())
	}
}

// What the hand does with the picture.

func (c *commands) space(columns, rows int) {
	if c.state.Resize(columns, rows) && c.view != nil {
		c.sync()
	}
}

func (c *commands) point(at [2]float64, column, row int) {
	c.pointer = &pixel{at, column, row}
	c.inquire(c.order())
}

func (c *commands) leave() { c.pointer = nil }

// looked notes a change of the look and shows it.
func (c *commands) looked(what, gesture string, anew bool) {
	c.state.Looked(what, gesture, anew)
	c.sync()
}

func (c *commands) showLayer(l raytrace.Layer) {
	c.state.Look.Layer = l
	c.looked("layer", "", true)
}

func (c *commands) showOrder(order int) {
	c.state.Look.Order = order
	c.looked("order", "", true)
}

func (c *commands) turnOverlay(k int) {
	before := layersOf(c.state.Look)
	c.state.Look.Overlays.Turn(k)
	c.looked("overlay", "", !slices.Equal(before, layersOf(c.state.Look)))
}

func (c *commands) turnOwn() {
	c.state.Look.Own = !c.state.Look.Own
	c.looked("own pixels", "", true)
}

func (c *commands) take(t tool) {
	c.tool = t
	c.sync()
}

func (c *commands) setTone(curve tone.Curve) {
	if c.state.Look.Tone().Curve != curve {
		c.state.Look.Tone().Curve = curve
		c.state.Look.Tone().Fixed = false
		c.looked("tone", "", false)
	}
}

func (c *commands) setLimit(which int, value float64) {
	if c.frame == nil || math.IsNaN(value) || math.IsInf(value, 0) {
		return
	}
	t := c.state.Look.Tone()
	if !t.Fixed {
		t.Low, t.High = c.frame.Low, c.frame.High
	}
	low, high := t.Low, t.High
	if which == 0 {
		low = value
	} else {
		high = value
	}
	if !(low < high) || t.Curve == tone.Logarithmic && low <= 0 {
		return
	}
	t.Fixed, t.Low, t.High = true, low, high
	c.looked("limits", "limits", false)
}

func (c *commands) automaticLimits() {
	c.state.Look.Tone().Fixed = !c.state.Look.Tone().Fixed
	if c.frame != nil && c.state.Look.Tone().Fixed {
		c.state.Look.Tone().Low, c.state.Look.Tone().High = c.frame.Low, c.frame.High
	}
	c.looked("limits", "", false)
}

func (c *commands) mark(at [2]float64) {
	c.state.Look.Marker = state.Mark{On: true, At: at}
	c.looked("marker", "", false)
	c.inquire(c.order())
	c.log.line("marker alpha=%.6g beta=%.6g", at[0], at[1])
}

// shownWindow is what the picture shows.
func shownWindow(f raytrace.Field) state.Window {
	return state.Window{Alpha: f.Center[0], Beta: f.Center[1], Width: f.Width}
}

func (c *commands) zoom(factor float64, about [2]float64) {
	if c.frame == nil {
		return
	}
	w := c.state.Look.Window
	if w.Width == 0 {
		w = shownWindow(c.frame.Shown)
	}
	c.state.SetWindow(w.Zoom(factor, about), c.wholeWindow(), "zoom")
	c.sync()
}

// wholeWindow is the scene's field.
func (c *commands) wholeWindow() state.Window {
	if c.whole.Columns == 0 && c.frame != nil {
		return shownWindow(c.frame.Shown)
	}
	return shownWindow(c.whole)
}

func (c *commands) pan(start raytrace.Field, by [2]float64) {
	w := shownWindow(start)
	w.Alpha -= by[0]
	w.Beta -= by[1]
	c.state.SetWindow(w, c.wholeWindow(), "pan")
	c.sync()
}

func (c *commands) fit() {
	c.state.SetWindow(c.wholeWindow(), c.wholeWindow(), "")
	c.sync()
}

func (c *commands) drawCut(from, to [2]float64, done bool) {
	c.state.Look.Cut = state.Cut{On: true, From: from, To: to}
	if c.state.Look.Graph != state.GraphCut {
		c.state.Look.Graph = state.GraphCut
	}
	c.looked("cut", "cut", false)
	c.inquire(c.order())
	if done {
		c.log.line("cut from=%.5g,%.5g to=%.5g,%.5g", from[0], from[1], to[0], to[1])
	}
}

func (c *commands) drawCircle(centre [2]float64, radius float64, done bool) {
	c.state.Look.Circle = state.Circle{On: true, Centre: centre, Radius: radius}
	c.looked("circle", "circle", false)
	c.showTable()
	if done {
		c.log.line("circle centre=%.5g,%.5g radius=%.5g", centre[0], centre[1], radius)
	}
}

// nudge moves the marker by pixels, from the middle if there is none.
func (c *commands) nudge(columns, rows int) {
	if c.frame == nil {
		return
	}
	f := c.frame.Shown
	at := f.Center
	if m := c.state.Look.Marker; m.On {
		at = m.At
		at[0] += float64(columns) * f.Pitch()
		at[1] += float64(rows) * f.Pitch()
	}
	c.state.Look.Marker = state.Mark{On: true, At: at}
	c.looked("marker", "marker", false)
	c.inquire(c.order())
	c.log.line("marker alpha=%.6g beta=%.6g", at[0], at[1])
}

// command carries out a letter that is typed over the picture.
func (c *commands) command(r rune) {
	const key = 1.5 // zoom of a key. Taste.
	about := c.wholeWindow()
	if c.frame != nil {
		about = shownWindow(c.frame.Shown)
	}
	at := [2]float64{about.Alpha, about.Beta}
	if m := c.state.Look.Marker; m.On {
		at = m.At
	}
	switch r {
	case '+', '=':
		c.zoom(key, at)
	case '-':
		c.zoom(1/key, at)
	case '0':
		c.fit()
	case 'm':
		c.markBrightest()
	case 'x':
		c.clearMarks()
	}
}

// markBrightest puts the marker on the brightest pixel of the picture.
func (c *commands) markBrightest() {
	f := c.frame
	if f == nil {
		return
	}
	values := imaging.Values(f.Plate, c.state.Look.Layer, c.state.Look.Order)
	best := -1
	for k, v := range values {
		if v == v && (best < 0 || v > values[best]) {
			best = k
		}
	}
	if best < 0 {
		return
	}
	of := f.Of
	if f.Coarsening == 1 {
		alpha, beta := of.PixelCenter(best%f.Plate.Columns, best/f.Plate.Columns)
		c.mark([2]float64{alpha, beta})
	}
}

func (c *commands) clearMarks() {
	l := &c.state.Look
	l.Marker, l.Cut, l.Circle = state.Mark{}, state.Cut{}, state.Circle{}
	c.looked("marks", "", false)
	c.inquire(c.order())
}

// nextOrder shows all orders, then each alone.
func (c *commands) nextOrder() {
	next := c.state.Look.Order + 1
	if next > c.state.Scene().Trace.MaxOrder {
		next = state.AllOrders
	}
	c.showOrder(next)
}

// cutAcross cuts the picture along α through its middle.
func (c *commands) cutAcross() {
	if c.frame == nil {
		return
	}
	f := c.frame.Shown
	half := f.Pitch() * float64(f.Columns) / 2
	c.drawCut([2]float64{f.Center[0] - half, f.Center[1]}, [2]float64{f.Center[0] + half, f.Center[1]}, true)
}

// circleCritical puts the circle on the critical curve of a parallel field,
// and elsewhere on a quarter of the picture.
func (c *commands) circleCritical() {
	if c.frame == nil {
		return
	}
	f := c.frame.Shown
	object, err := raytrace.NewObject(c.state.Scene().Object)
	if err == nil && f.IsParallel() {
		c.drawCircle([2]float64{}, object.CriticalImpact(), true)
		return
	}
	c.drawCircle(f.Center, f.Pitch()*float64(f.Columns)/8, true)
}
