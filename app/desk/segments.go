package desk

import (
	"image/color"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// segments is a row of words of which one, or several, are chosen.
type segments struct {
	words []*word
	row   *fyne.Container
}

func newSegments(labels []string, onChosen func(k int)) *segments {
	s := &segments{row: hbox(1)}
	for k, label := range labels {
		w := newWord(label, func() { onChosen(k) })
		s.words = append(s.words, w)
		s.row.Add(w)
	}
	return s
}

// split puts the words from the kth on into a row of their own.
func (s *segments) split(k int) *fyne.Container {
	rest := hbox(1)
	for _, w := range s.words[k:] {
		s.row.Remove(w)
		rest.Add(w)
	}
	return rest
}

// set shows which word is chosen.
func (s *segments) set(chosen int) {
	for k, w := range s.words {
		w.choose(k == chosen)
	}
}

var (
	_ fyne.Tappable     = (*word)(nil)
	_ fyne.Focusable    = (*word)(nil)
	_ desktop.Hoverable = (*word)(nil)
)

// word is a word to click: a click, or Enter or the space bar while it has
// the focus, chooses it.
type word struct {
	widget.BaseWidget

	label                    string
	size, inset              float32
	unlined                  bool // it does something and is not chosen
	heading                  bool // of what it folds
	skipped                  bool // by the Tab key: the same can be done elsewhere
	chosen, focused, hovered bool
	onChosen                 func()
	onHover, onFocus         func(over bool) // nil for nobody
}

func newWord(label string, onChosen func()) *word {
	w := &word{label: label, onChosen: onChosen, size: rowTextSize, inset: 7}
	w.ExtendBaseWidget(w)
	return w
}

// newAction returns a word that does something.
func newAction(label string, act func()) *word {
	w := newWord(label, act)
	w.unlined = true
	return w
}

// choose shows whether the word is chosen.
func (w *word) choose(is bool) {
	if is != w.chosen {
		w.chosen = is
		w.Refresh()
	}
}

func (w *word) Tapped(*fyne.PointEvent) { w.onChosen() }

func (w *word) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeyReturn, fyne.KeyEnter, fyne.KeySpace:
		w.onChosen()
	default:
		passOn(w, e)
	}
}

// passOn gives the window a key that a widget with the focus has no use for.
func passOn(o fyne.CanvasObject, e *fyne.KeyEvent) {
	if c := fyne.CurrentApp().Driver().CanvasForObject(o); c != nil && c.OnTypedKey() != nil {
		c.OnTypedKey()(e)
	}
}

func (w *word) TypedRune(rune) {}

func (w *word) FocusGained() { w.focus(true) }
func (w *word) FocusLost()   { w.focus(false) }

func (w *word) focus(has bool) {
	w.focused = has
	w.Refresh()
	if w.onFocus != nil {
		w.onFocus(has)
	}
}

func (w *word) MouseIn(*desktop.MouseEvent)    { w.hover(true) }
func (w *word) MouseMoved(*desktop.MouseEvent) {}
func (w *word) MouseOut()                      { w.hover(false) }

func (w *word) hover(over bool) {
	w.hovered = over
	w.Refresh()
	if w.onHover != nil {
		w.onHover(over)
	}
}

func (w *word) CreateRenderer() fyne.WidgetRenderer {
	r := &wordRenderer{
		word: w,
		text: canvas.NewText(w.label, quiet),
		back: canvas.NewRectangle(ground),
		line: canvas.NewRectangle(edge),
	}
	r.text.Alignment = fyne.TextAlignCenter
	r.back.CornerRadius = theme.Size(theme.SizeNameInputRadius)
	r.Refresh()
	return r
}

type wordRenderer struct {
	word       *word
	text       *canvas.Text
	back, line *canvas.Rectangle
}

const wordUnderline = 2

func (r *wordRenderer) Layout(size fyne.Size) {
	r.back.Resize(size)
	r.text.Resize(size)
	r.line.Move(fyne.NewPos(0, size.Height-wordUnderline))
	r.line.Resize(fyne.NewSize(size.Width, wordUnderline))
}

func (r *wordRenderer) MinSize() fyne.Size {
	r.text.Text, r.text.TextSize, r.text.TextStyle.Bold = r.word.label, r.word.size, r.word.heading
	return r.text.MinSize().AddWidthHeight(2*r.word.inset, 2*wordUnderline+3)
}

func (r *wordRenderer) Refresh() {
	r.text.Text, r.text.TextSize = r.word.label, r.word.size
	r.text.Color, r.back.FillColor, r.line.FillColor = quiet, color.Transparent, edge
	if r.word.unlined {
		r.line.FillColor = color.Transparent
		r.text.Color = words
	}
	if r.word.heading {
		r.text.Color = accent
	}
	if r.word.chosen {
		r.text.Color, r.back.FillColor, r.line.FillColor = words, field, accent
	}
	if r.word.hovered {
		r.text.Color = words
		if r.word.unlined {
			r.line.FillColor = quiet
		}
	}
	if r.word.focused {
		r.back.FillColor = withAlpha(accent, 0x48)
	}
	canvas.Refresh(r.word)
}

func (r *wordRenderer) Objects() []fyne.CanvasObject {
	return []fyne.CanvasObject{r.back, r.line, r.text}
}

func (*wordRenderer) Destroy() {}

// Enable, Disable and Disabled let the Tab key skip a word.
func (w *word) Enable()        { w.skipped = false }
func (w *word) Disable()       { w.skipped = true }
func (w *word) Disabled() bool { return w.skipped }
