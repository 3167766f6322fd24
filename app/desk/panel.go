package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/state"
)

// panel is the scene: every key of the file under its table's heading, each
// of which folds.
type panel struct {
	hands     hands
	rows      []*controlRow
	list      *fyne.Container
	scroll    *container.Scroll
	help      *widget.Label
	below     fyne.CanvasObject // the help with its line
	structure int
	folded    map[string]bool
	hint      string // what the control under the pointer means; "" for none
	standing  string // told otherwise
}

const (
	panelWidth = 338
	panelInset = 10
	helpHeight = 92 // five lines
)

// startFolded are the headings that open folded. Taste: they are seldom
// needed in the first minute.
var startFolded = []string{"Scene", "Telescope", "Measured", "Numerics"}

func newPanel(h hands) *panel {
	p := &panel{hands: h, list: container.New(tightColumn{}), help: widget.NewLabel(""), structure: -1, folded: map[string]bool{}}
	for _, name := range startFolded {
		p.folded[name] = true
	}
	p.help.SizeName = theme.SizeNameCaptionText
	p.help.Importance = widget.LowImportance
	p.help.Wrapping = fyne.TextWrapWord
	p.scroll = container.NewVScroll(container.New(layout.NewCustomPaddedLayout(4, 4, panelInset, panelInset), p.list))
	return p
}

// content is the panel with, under it, what the key under the pointer means.
func (p *panel) content() fyne.CanvasObject {
	p.below = container.New(tightColumn{}, line1(), room(helpHeight, container.NewVScroll(container.New(layout.NewCustomPaddedLayout(0, 0, panelInset-4, 4), p.help))))
	return container.NewBorder(nil, p.below, nil, nil, p.scroll)
}

// compact leaves the help out.
func (p *panel) compact(is bool) { setVisible(p.below, !is) }

// setHelp tells what the control under the pointer means; without one, what
// stands there always.
func (p *panel) setHelp(text string) {
	if p.hint = text; text == "" {
		text = p.standing
	}
	if p.help.Text != text {
		p.help.SetText(text)
	}
}

// sync shows the scene as it is now.
func (p *panel) sync(s *state.State) {
	if s.Structure != p.structure {
		p.structure = s.Structure
		p.build(s)
	}
	for _, r := range p.rows {
		r.sync()
	}
}

// build makes the rows of the scene's keys.
func (p *panel) build(s *state.State) {
	focused := ""
	if c := fyne.CurrentApp().Driver().CanvasForObject(p.scroll); c != nil {
		for _, r := range p.rows {
			if f := c.Focused(); f != nil && r.holds(f) {
				focused = r.control.Key
			}
		}
	}
	p.rows = nil
	p.list.Objects = nil
	group := ""
	for _, c := range s.Controls {
		if c.Group != group {
			group = c.Group
			p.addHeading(s, c)
		}
		r := newControlRow(c, p.hands)
		p.rows = append(p.rows, r)
		if !p.folded[group] {
			p.list.Add(r)
		}
		r.sync()
	}
	add := hbox(2, heading("Add emitter"))
	for _, kind := range state.EmitterKinds() {
		add.Add(newAction(kind, func() { p.hands.addEmitter(kind) }))
	}
	p.list.Add(container.New(layout.NewCustomPaddedLayout(6, 4, 0, 0), add))
	p.list.Refresh()
	for _, r := range p.rows {
		if r.control.Key == focused {
			r.focus()
		}
	}
}

// addHeading adds the heading of a control's table.
func (p *panel) addHeading(s *state.State, c *state.Control) {
	name := c.Group
	sign := "▾ "
	if p.folded[name] {
		sign = "▸ "
	}
	title := newAction(sign+name, func() {
		p.folded[name] = !p.folded[name]
		p.build(s)
	})
	title.inset, title.heading = 0, true
	row := hbox(2, title)
	if n, ok := state.EmitterOf(c); ok {
		for _, a := range []struct {
			label string
			what  state.Arrangement
			shown bool
		}{
			{"duplicate", state.Duplicate, true},
			{"up", state.Up, n > 0},
			{"down", state.Down, n+1 < s.Emitters()},
			{"remove", state.Remove, true},
		} {
			if a.shown {
				w := newAction(a.label, func() { p.hands.arrange(n, a.what) })
				w.size, w.inset = choiceTextSize, 4
				row.Add(w)
			}
		}
	}
	p.list.Add(container.New(layout.NewCustomPaddedLayout(5, 1, 0, 0), row))
}

// unfold opens a control's heading.
func (p *panel) unfold(s *state.State, group string) {
	if p.folded[group] {
		p.folded[group] = false
		p.build(s)
	}
}

// row returns the row of a key, nil if there is none.
func (p *panel) row(key string) *controlRow {
	for _, r := range p.rows {
		if r.control.Key == key {
			return r
		}
	}
	return nil
}

// holds says whether the focus is on the row.
func (r *controlRow) holds(f fyne.Focusable) bool {
	if r.choice != nil {
		for _, w := range r.choice.words {
			if f == fyne.Focusable(w) {
				return true
			}
		}
		return false
	}
	return f == fyne.Focusable(r.entry) || f == fyne.Focusable(r.slider)
}

// focus puts the focus on the row.
func (r *controlRow) focus() {
	c := fyne.CurrentApp().Driver().CanvasForObject(r)
	switch {
	case c == nil:
	case r.choice != nil:
		for _, w := range r.choice.words {
			if w.chosen {
				c.Focus(w)
				return
			}
		}
		c.Focus(r.choice.words[0])
	default:
		c.Focus(r.entry)
	}
}

// tightColumn lays out objects one under another with nothing between.
type tightColumn struct{}

func (tightColumn) MinSize(objects []fyne.CanvasObject) fyne.Size {
	var size fyne.Size
	for _, o := range objects {
		m := o.MinSize()
		size.Width = max(size.Width, m.Width)
		size.Height += m.Height
	}
	return size
}

func (tightColumn) Layout(objects []fyne.CanvasObject, size fyne.Size) {
	y := float32(0)
	for _, o := range objects {
		h := o.MinSize().Height
		o.Move(fyne.NewPos(0, y))
		o.Resize(fyne.NewSize(size.Width, h))
		y += h
	}
}

func heading(text string) fyne.CanvasObject {
	t := canvas.NewText(text, accent)
	t.TextSize = headingTextSize
	t.TextStyle.Bold = true
	return t
}

const headingTextSize = 12

// show scrolls to a row.
func (p *panel) show(r *controlRow) {
	y := float32(0)
	for _, o := range p.list.Objects {
		if o == fyne.CanvasObject(r) {
			break
		}
		y += o.MinSize().Height
	}
	p.scroll.Offset.Y = max(0, min(y-p.scroll.Size().Height/2, p.list.MinSize().Height-p.scroll.Size().Height))
	p.scroll.Refresh()
}
