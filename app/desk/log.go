package desk

import (
	"fmt"
	"io"
	"math"
	"strconv"
	"sync"
	"time"

	"fyne.io/fyne/v2"

	"annulet/app/desk/imaging"
)

// log writes one line for each thing that has become visible, for tests and
// for the curious. Its writer is nil unless ANNULET_LOG=1.
type log struct {
	mu sync.Mutex
	to io.Writer
}

func (l *log) on() bool { return l.to != nil }

func (l *log) line(format string, args ...any) {
	if l.to == nil {
		return
	}
	l.mu.Lock()
	defer l.mu.Unlock()
	fmt.Fprintf(l.to, "annulet: "+format+"\n", args...)
}

// frame logs a picture that has been painted.
func (l *log) frame(f imaging.Frame, scene string, latest bool) {
	if f.Err != nil {
		l.line("not traced scene=%q error=%q", scene, f.Err)
		return
	}
	word := "preview"
	switch {
	case f.Retoned:
		word = "toned"
	case f.Areas:
		word = "integrated"
	case f.Coarsening == 1 && latest:
		word = "settled"
	}
	o := f.Order.Scene.Observer
	radius := strconv.FormatFloat(o.Radius, 'g', -1, 64)
	if math.IsInf(o.Radius, 1) {
		radius = "infinity"
	}
	l.line("%s pixels=%dx%d coarsening=%d scene=%q inclination=%g radius=%s trace_ms=%d shown_ms=%d",
		word, f.Plate.Columns, f.Plate.Rows, f.Coarsening, scene, o.Inclination, radius,
		f.Traced.Milliseconds(), time.Since(f.Order.Asked).Milliseconds())
}

// found logs the readings of the pixel under the pointer that are being
// shown.
func (l *log) found(f finding) {
	if p := f.pointer; p != nil {
		l.line("reading column=%d row=%d alpha=%.6g beta=%.6g b=%.6g crossings=%d",
			f.inquiry.column, f.inquiry.row, p.Alpha, p.Beta, p.Impact, len(p.Readings))
	}
	if m := f.marker; m != nil {
		l.line("marked alpha=%.6g beta=%.6g crossings=%d", m.Alpha, m.Beta, len(m.Readings))
	}
	if g := f.graph; g != nil {
		l.line("graphed title=%q curves=%d", g.Title, len(g.Curves))
	}
}

// logPlaces logs where the hand finds things, in screen pixels from the
// window's top left corner: left,top,width,height.
func (v *view) logPlaces(l *log) {
	driver := fyne.CurrentApp().Driver()
	scale := v.window.Canvas().Scale()
	place := func(o fyne.CanvasObject) string {
		at, size := driver.AbsolutePositionForObject(o), o.Size()
		return fmt.Sprintf("%.0f,%.0f,%.0f,%.0f", at.X*scale, at.Y*scale, size.Width*scale, size.Height*scale)
	}
	for _, r := range v.panel.rows {
		if r.entry != nil && !v.panel.folded[r.control.Group] {
			l.line("place key=%s entry=%s slider=%s", r.control.Key, place(r.entry), place(r.slider))
		}
		for k, o := range r.control.Options {
			if !v.panel.folded[r.control.Group] {
				l.line("place key=%s option=%q word=%s", r.control.Key, o.Label, place(r.choice.words[k]))
			}
		}
	}
	for _, s := range []*segments{v.top.layers, v.top.orders, v.top.overlays, v.top.tools, v.tones.curves, v.side.tabs, v.side.graphs} {
		for _, w := range s.all() {
			l.line("place say=%q word=%s", w.label, place(w))
		}
	}
	for _, w := range []*word{v.top.whole, v.tones.automatic, v.side.hold} {
		l.line("place say=%q word=%s", w.label, place(w))
	}
	l.line("place stations=%s", place(v.side.radii))
	l.line("place picture=%s", place(v.picture.image))
}

// wrong logs that what was typed cannot be taken.
func (l *log) wrong(key, typed, why string) {
	l.line("wrong key=%s typed=%q why=%q", key, typed, why)
}

// afterPaint calls f once what was refreshed just now has been painted. The
// toolkit ticks animations right before it paints, so at the second tick the
// first painting is over.
func afterPaint(f func()) {
	ticks := 0
	var waiting *fyne.Animation
	waiting = fyne.NewAnimation(time.Hour, func(float32) {
		if ticks++; ticks == 2 {
			waiting.Stop()
			f()
		}
	})
	waiting.Start()
}
