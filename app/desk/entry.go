package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/widget"
)

// entry takes a quantity: number and unit, or a word such as "isco". What it
// means is decided elsewhere; here is only when the hand is done.
type entry struct {
	widget.Entry

	onTyped   func(text string) // while typing
	onDone    func(text string) // Enter, or the focus left
	onStep    func(stops int)   // arrow and page keys
	onRestore func()            // Escape
	onFocus   func(has bool)    // nil for nobody
	setting   bool              // the program, not the hand, changes the text
	shown     string            // the last text that the program set
	focused   bool
	fresh     bool // the mouse button that goes up has given the focus
}

func newEntry() *entry {
	e := &entry{}
	e.ExtendBaseWidget(e)
	e.OnChanged = func(text string) {
		if !e.setting {
			e.onTyped(text)
		}
	}
	e.OnSubmitted = func(text string) {
		e.onDone(text)
		if e.Text != text { // taken, and rewritten
			e.selectAll()
		}
	}
	return e
}

// set shows a text.
func (e *entry) set(text string) {
	e.shown = text
	if text == e.Text {
		return
	}
	e.setting = true
	e.SetText(text)
	e.setting = false
}

func (e *entry) TypedKey(key *fyne.KeyEvent) {
	switch key.Name {
	case fyne.KeyUp:
		e.onStep(1)
	case fyne.KeyDown:
		e.onStep(-1)
	case fyne.KeyPageUp:
		e.onStep(pageStops)
	case fyne.KeyPageDown:
		e.onStep(-pageStops)
	case fyne.KeyEscape:
		e.onRestore()
		e.selectAll()
	default:
		e.Entry.TypedKey(key)
	}
}

// A first click selects everything, a second one sets the cursor.
func (e *entry) MouseDown(m *desktop.MouseEvent) {
	e.fresh = !e.focused
	e.Entry.MouseDown(m)
}

func (e *entry) MouseUp(m *desktop.MouseEvent) {
	e.Entry.MouseUp(m)
	if e.fresh && e.SelectedText() == "" {
		e.selectAll()
	}
	e.fresh = false
}

func (e *entry) FocusGained() {
	e.focused = true
	e.Entry.FocusGained()
	e.selectAll()
	if e.onFocus != nil {
		e.onFocus(true)
	}
}

// selectAll makes the next key replace the value.
func (e *entry) selectAll() { e.TypedShortcut(&fyne.ShortcutSelectAll{}) }

func (e *entry) FocusLost() {
	e.focused = false
	e.Entry.FocusLost()
	e.onDone(e.Text)
	if e.onFocus != nil {
		e.onFocus(false)
	}
}
