package desk

import (
	"fmt"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/container"
	"fyne.io/fyne/v2/layout"

	"annulet/app/desk/state"
)

// topBar holds, above the image, what it shows and what the hand does.
type topBar struct {
	layers, orders *segments
	ordersRow      *fyne.Container
	overlays       *segments
	tools          *segments
	whole          *word // shows the whole field
	hands          hands
	content        fyne.CanvasObject
}

func newTopBar(h hands) *topBar {
	b := &topBar{hands: h}
	var names []string
	for _, l := range state.LayerNames() {
		names = append(names, l.Word)
	}
	b.layers = newSegments(names, func(k int) { h.showLayer(state.LayerNames()[k].Layer) })
	b.ordersRow = hbox(1)
	b.overlays = newSegments(state.OverlayNames(), h.turnOverlay)
	b.tools = newSegments([]string{"pan", "cut", "circle"}, func(k int) { h.take(tool(k)) })
	for _, s := range []*segments{b.layers, b.overlays, b.tools} {
		for _, w := range s.words {
			w.inset = 6
		}
	}
	fit := newAction("fit", h.fit)
	b.whole = fit
	own := newAction("own pixels", h.turnOwn)
	own.unlined = false
	b.overlays.words = append(b.overlays.words, own)
	helpful(h, fit, "Show the whole field again.")
	helpful(h, own, "Show the pixels that the scene asks for, each magnified.")
	helpful(h, b.tools.words[0], "Dragging moves the image, the wheel zooms, a click marks a point.")
	helpful(h, b.tools.words[1], "Dragging draws a line; its values are in the graph Cut.")
	helpful(h, b.tools.words[2], "Dragging draws a circle from its middle; its diameter is in the table Pixel.")
	first := container.NewBorder(nil, nil, hbox(8, b.layers.row, b.ordersRow), nil)
	second := container.NewBorder(nil, nil, hbox(4, b.overlays.row, own), hbox(4, b.tools.row, fit))
	b.content = container.New(layout.NewCustomPaddedLayout(3, 3, 8, 6), container.New(tightColumn{}, first, second))
	return b
}

// helpful gives a word its help.
func helpful(h hands, w *word, text string) {
	show := func(over bool) {
		if over {
			h.help(text)
		} else {
			h.help("")
		}
	}
	w.onHover, w.onFocus = show, show
}

// sync shows what is chosen.
func (b *topBar) sync(s *state.State, t tool) {
	b.layers.set(int(s.Look.Layer))
	orders := s.Scene().Trace.MaxOrder + 1
	if len(b.orders.all()) != orders+1 {
		labels := []string{"all orders"}
		for n := range orders {
			labels = append(labels, fmt.Sprint(n))
		}
		b.orders = newSegments(labels, func(k int) { b.hands.showOrder(k - 1) })
		for _, w := range b.orders.words {
			w.inset = 6
		}
		b.ordersRow.Objects = []fyne.CanvasObject{b.orders.row}
		b.ordersRow.Refresh()
		b.content.Refresh()
	}
	b.orders.set(s.Look.Order + 1)
	on := s.Look.Overlays.List()
	for k, w := range b.overlays.words[:len(on)] {
		w.choose(on[k])
	}
	b.overlays.words[len(on)].choose(s.Look.Own)
	b.tools.set(int(t))
}

// all returns the words, also of a row not yet made.
func (s *segments) all() []*word {
	if s == nil {
		return nil
	}
	return s.words
}
