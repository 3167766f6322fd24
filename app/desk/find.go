package desk

import (
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/widget"
)

// mostFound is how many actions the finder lists at once. Taste.
const mostFound = 12

// find asks for a few letters and lists the actions, and keys of the scene,
// that hold them.
func (c *commands) find() {
	if c.asking() {
		return
	}
	all := c.actions()
	for _, r := range c.view.panel.rows {
		all = append(all, action{menu: r.control.Group, label: r.control.Name + "   (" + r.control.Key + ")", do: func() {
			c.view.panel.unfold(c.state, r.control.Group)
			if row := c.view.panel.row(r.control.Key); row != nil {
				c.view.panel.show(row)
				row.focus()
			}
		}})
	}
	var d dialog.Dialog
	words := newFinderEntry()
	list := container.New(tightColumn{})
	var found []action
	chosen := 0
	show := func() {
		list.Objects = nil
		for k, a := range found {
			w := newAction(a.menu+" ▸ "+a.label, func() { d.Hide(); a.do() })
			w.chosen = k == chosen
			list.Objects = append(list.Objects, container.NewHBox(w))
		}
		list.Refresh()
	}
	search := func(text string) {
		found, chosen = nil, 0
		for _, a := range all {
			if holdsAll(a.menu+" "+a.label, text) && len(found) < mostFound {
				found = append(found, a)
			}
		}
		show()
	}
	words.OnChanged = search
	words.onMove = func(by int) {
		if len(found) > 0 {
			chosen = (chosen + by + len(found)) % len(found)
			show()
		}
	}
	words.onEscape = c.escape
	words.OnSubmitted = func(string) {
		if chosen < len(found) {
			d.Hide()
			found[chosen].do()
			c.log.line("found %q", found[chosen].label)
		}
	}
	words.SetPlaceHolder("undo, redshift, inclination, …")
	d = dialog.NewCustom("Find an action or a key", "Close", container.NewBorder(words, nil, nil, nil, room(mostFound*24, list)), c.window)
	c.ask(d)
	d.Resize(fyne.NewSize(560, 0))
	search("")
	c.window.Canvas().Focus(words)
}

// holdsAll says whether a text holds every word, in any case and order.
func holdsAll(text, words string) bool {
	text = strings.ToLower(text)
	for _, w := range strings.Fields(strings.ToLower(words)) {
		if !strings.Contains(text, w) {
			return false
		}
	}
	return true
}

// finderEntry takes letters; up and down move along the list.
type finderEntry struct {
	widget.Entry
	onMove   func(by int)
	onEscape func()
}

func newFinderEntry() *finderEntry {
	e := &finderEntry{}
	e.ExtendBaseWidget(e)
	return e
}

func (e *finderEntry) TypedKey(key *fyne.KeyEvent) {
	switch key.Name {
	case fyne.KeyUp:
		e.onMove(-1)
	case fyne.KeyDown:
		e.onMove(1)
	case fyne.KeyEscape:
		e.onEscape()
	default:
		e.Entry.TypedKey(key)
	}
}
