package desk

import (
	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/canvas"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/driver/desktop"
	"fyne.io/fyne/v2/theme"
	"fyne.io/fyne/v2/widget"
)

// segments is a row of words of which one is chosen.
type segments struct {
	words []*word
	row   *fyne.Container
}

func newSegments(labels []string, onChosen func(k int)) *segments {
	s := &segments{row: container.NewHBox()}
	for k, label := range labels {
		w := newWord(label, func() { onChosen(k) })
		s.words = append(s.words, w)
		s.row.Add(w)
	}
	return s
}

// set shows which word is chosen.
func (s *segments) set(chosen int) {
	for k, w := range s.words {
		if is := k == chosen; is != w.chosen {
			w.chosen = is
			w.Refresh()
		}
	}
}

var (
	_ fyne.Tappable     = (*word)(nil)
	_ fyne.Focusable    = (*word)(nil)
	_ desktop.Hoverable = (*word)(nil)
)

// word is one word of segments: a click, or Enter or the space bar while it
// has the focus, chooses it.
type word struct {
	widget.BaseWidget

	label                    string
	chosen, focused, hovered bool
	onChosen                 func()
}

func newWord(label string, onChosen func()) *word {
	w := &word{label: label, onChosen: onChosen}
	w.ExtendBaseWidget(w)
	return w
}

func (w *word) Tapped(*fyne.PointEvent) { w.onChosen() }

func (w *word) TypedKey(e *fyne.KeyEvent) {
	switch e.Name {
	case fyne.KeyReturn, fyne.KeyEnter, fyne.KeySpace:
		w.onChosen()
	}
}

func (w *word) TypedRune(rune) {}

func (w *word) FocusGained() { w.focused = true; w.Refresh() }
func (w *word) FocusLost()   { w.focused = false; w.Refresh() }

func (w *word) MouseIn(*desktop.MouseEvent)    { w.hovered = true; w.Refresh() }
func (w *word) MouseMoved(*desktop.MouseEvent) {}
func (w *word) MouseOut()                      { w.hovered = false; w.Refresh() }

func (w *word) CreateRenderer() fyne.WidgetRenderer {
	r := &wordRenderer{
		word: w,
		text: canvas.NewText(w.label, quiet),
		back: canvas.NewRectangle(ground),
		line: canvas.NewRectangle(edge),
	}
	r.text.TextSize = theme.Size(theme.SizeNameText)
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

const (
	wordInset     = 8
	wordUnderline = 2
)

func (r *wordRenderer) Layout(size fyne.Size) {
	r.back.Resize(size)
	r.text.Resize(size)
	r.line.Move(fyne.NewPos(0, size.Height-wordUnderline))
	r.line.Resize(fyne.NewSize(size.Width, wordUnderline))
}

func (r *wordRenderer) MinSize() fyne.Size {
	return r.text.MinSize().AddWidthHeight(2*wordInset, 2*wordUnderline+4)
}

func (r *wordRenderer) Refresh() {
	r.text.Color, r.back.FillColor, r.line.FillColor = quiet, ground, edge
	if r.word.chosen {
		r.text.Color, r.back.FillColor, r.line.FillColor = words, field, accent
	}
	if r.word.hovered {
		r.text.Color = words
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
