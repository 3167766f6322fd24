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
	layers, orders  *segments
	ordersRow       *fyne.Container
	overlays        *segments
	tools           *segments
	whole           *word // shows the whole field
	scene, readings *word // turn the sides on and off
	first, second   *flowRow
	hands           hands
	content         fyne.CanvasObject
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
	own := newWord("own pixels", h.turnOwn)
	own.inset = 6
	b.overlays.words = append(b.overlays.words, own)
	helpful(h, fit, "Show the whole field again.")
	helpful(h, own, "Show the pixels that the scene asks for, each magnified.")
	helpful(h, b.tools.words[0], "Dragging moves the image, the wheel zooms, a click marks a point.")
	helpful(h, b.tools.words[1], "Dragging draws a line; its values are in the graph Cut.")
	helpful(h, b.tools.words[2], "Dragging draws a circle from its middle; its diameter is in the table Pixel.")
	b.scene = newWord("scene", func() { h.turnSide(false) })
	b.readings = newWord("readings", func() { h.turnSide(true) })
	helpful(h, b.scene, "Show or hide the scene's keys.")
	helpful(h, b.readings, "Show or hide readings and graph.")
	b.scene.chosen, b.readings.chosen = true, true
	b.first = &flowRow{gap: 8, lastRight: true}
	b.second = &flowRow{gap: 1, lastRight: true}
	first := container.New(b.first, b.layers.row, b.ordersRow, hbox(1, b.scene, b.readings))
	second := container.New(b.second)
	for _, w := range b.overlays.words {
		second.Add(w)
	}
	second.Add(hbox(4, b.tools.row, fit))
	b.content = container.New(layout.NewCustomPaddedLayout(3, 3, barInset, barInset), container.New(tightColumn{}, first, second))
	return b
}

const barInset = 7

// setWidth says how wide the bar will be.
func (b *topBar) setWidth(width float32) {
	b.first.width, b.second.width = width-2*barInset, width-2*barInset
}

// sides shows which sides are shown.
func (b *topBar) sides(scene, readings bool) {
	b.scene.choose(scene)
	b.readings.choose(readings)
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
