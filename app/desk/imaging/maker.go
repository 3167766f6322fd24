package imaging

import (
	"context"
	"errors"
	"image"
	"sync"
	"time"

	"annulet/raytrace"
	"annulet/scenes"
)

// patience is how long the first picture of an order may still go on when it
// has become stale. It is longer than one takes when the pace is known, so a
// hand that never rests still sees every picture that was begun.
const patience = 3 * previewTime

// Order asks for the picture of a scene.
type Order struct {
	Serial        int // changes with the scene or the pixel count; equal serials share a trace
	Scene         scenes.Scene
	Folder        string // of the scene file, from which images are taken
	Columns, Rows int
	Asked         time.Time // when the hand moved

	// Shown is the part of the field that the picture shows, in screen
	// coordinates; the zero Window is the whole.
	Shown Window
	// Own asks for the scene's own pixels, each magnified.
	Own bool
	// Layers are those that Develop needs beside the total.
	Layers []raytrace.Layer

	// Develop turns a plate into an image of the plate's size, and Ink
	// draws what lies over it, on the picture's field; nil for nothing. Both
	// run off the window's thread.
	Develop func(*raytrace.Plate) Developed
	Ink     func(p *raytrace.Plate, of, shown raytrace.Field) *image.RGBA
}

// Window is a part of a field.
type Window struct {
	Center [2]float64
	Width  float64 // 0 for the whole
}

// Developed is a plate in colours.
type Developed struct {
	Image     *image.RGBA
	Low, High float64 // values at the ends of the colours
	// Axis is the range of the histogram Counts, along which values lie as
	// the tone's curve has them.
	Axis   [2]float64
	Counts []int
}

// Frame is a picture ready to show.
type Frame struct {
	Order      Order
	Plate      *raytrace.Plate
	Of         raytrace.Field // of the plate, if it were traced in full
	Shown      raytrace.Field // of the picture
	Developed                 // with Image of Order.Columns × Order.Rows, top row first
	Ink        *image.RGBA    // over it, of the same size; nil for nothing
	Coarsening int            // 1 when every pixel was traced
	Areas      bool           // pixels are areas and not their middles
	Traced     time.Duration  // how long this plate took
	Retoned    bool           // the plate had been shown before with another tone
	Err        error          // the scene cannot be traced; then Plate and Image are nil
}

// Settled says whether nothing finer will follow.
func (f Frame) Settled() bool { return f.Err != nil || f.Coarsening == 1 }

// View is a scene made ready to trace.
type View interface {
	// Trace makes a plate with the picture's pixels divided by the
	// coarsening, rounded up.
	Trace(ctx context.Context, coarsening int, report func(raytrace.Progress)) (*raytrace.Plate, error)
	// Integrate makes the plate of coarsening 1 with pixels as areas; nil if
	// nothing there is integrated.
	Integrate(ctx context.Context, report func(raytrace.Progress)) (*raytrace.Plate, error)
	// Of is the field that a plate holds, and Shown the one that the
	// picture shows.
	Of() raytrace.Field
	Shown() raytrace.Field
}

// Prepare makes a view of an order's scene, of Order.Columns × Order.Rows
// pixels.
type Prepare func(Order) (View, error)

// Maker makes pictures. Its methods may be called from any goroutine.
type Maker struct {
	prepare Prepare
	show    func(Frame)           // called from one goroutine, in order
	report  func(done, tiles int) // called from several; never more than ten times a second

	patience, rest time.Duration

	mu     sync.Mutex
	order  Order     // the latest
	begun  int       // Serial of the order being traced or already traced
	first  time.Time // when the first picture of an order, being traced, was begun; zero for none
	cancel context.CancelFunc
	plate  *Frame // the latest traced, without Image; nil before the first
	view   View   // of the order begun

	traceWake, toneWake chan struct{} // capacity 1
}

// NewMaker returns a maker; Run starts it.
func NewMaker(prepare Prepare, show func(Frame), report func(done, tiles int)) *Maker {
	return &Maker{
		prepare: prepare, show: show, report: report, patience: patience, rest: Rest,
		begun:     -1,
		traceWake: make(chan struct{}, 1),
		toneWake:  make(chan struct{}, 1),
	}
}

// Ask replaces whatever was asked before.
func (m *Maker) Ask(o Order) {
	m.mu.Lock()
	retone := o.Serial == m.order.Serial && m.plate != nil
	m.order = o
	if o.Serial != m.begun && m.cancel != nil {
		// An order's first picture goes on for a while, or a hand that never
		// rests would see none; anything finer is stale at once.
		if m.first.IsZero() || time.Since(m.first) > m.patience {
			m.cancel()
		}
	}
	m.mu.Unlock()
	if retone {
		wake(m.toneWake)
	}
	wake(m.traceWake)
}

// Run works until ctx ends.
func (m *Maker) Run(ctx context.Context) {
	var loops sync.WaitGroup
	loops.Go(func() { m.traceLoop(ctx) })
	loops.Go(func() { m.toneLoop(ctx) })
	loops.Wait()
}

func (m *Maker) traceLoop(ctx context.Context) {
	var speed pace
	var rested <-chan time.Time
	for {
		select {
		case <-ctx.Done():
			return
		case <-rested:
			m.integrate(ctx)
			rested = nil
			continue
		case <-m.traceWake:
		}
		for m.traceLatest(ctx, &speed) {
		}
		rested = time.After(m.rest)
	}
}

// Rest is how long after a change the hand is taken to rest. Taste.
const Rest = 300 * time.Millisecond

// integrate makes the pixels of the picture areas, unless a newer order
// arrives.
func (m *Maker) integrate(ctx context.Context) {
	m.mu.Lock()
	o, view, last := m.order, m.view, m.plate
	m.mu.Unlock()
	if view == nil || last == nil || last.Err != nil || last.Areas || last.Order.Serial != o.Serial {
		return
	}
	frame, err := m.traceWith(ctx, view, o, false, func(ctx context.Context, report func(raytrace.Progress)) (*raytrace.Plate, error) {
		return view.Integrate(ctx, report)
	})
	if err != nil || frame.Plate == nil || m.stale(o) {
		return // the picture with pixel middles stays
	}
	frame.Coarsening, frame.Areas = 1, true
	m.keep(frame)
}

// traceLatest traces the latest order, coarse to fine, until it is done or a
// newer one arrives. It reports whether there is a newer one.
func (m *Maker) traceLatest(ctx context.Context, speed *pace) bool {
	m.mu.Lock()
	o := m.order
	fresh := o.Serial != m.begun
	m.begun = o.Serial
	m.mu.Unlock()
	if !fresh || ctx.Err() != nil {
		return false
	}
	begun := time.Now()
	view, err := m.prepare(o)
	if err != nil {
		m.keep(Frame{Order: o, Err: err})
		return m.stale(o)
	}
	m.mu.Lock()
	m.view = view
	m.mu.Unlock()
	rungs := speed.rungs(view.Of().Columns, view.Of().Rows, time.Since(begun))
	for k, coarsening := range rungs {
		frame, err := m.traceRung(ctx, view, o, coarsening, k == 0)
		switch {
		case errors.Is(err, context.Canceled):
			return ctx.Err() == nil
		case err != nil:
			frame.Err = err
			m.keep(frame)
			return m.stale(o)
		}
		speed.note(frame.Plate.Columns*frame.Plate.Rows, frame.Traced)
		m.keep(frame)
		if m.stale(o) {
			return true
		}
	}
	return false
}

// traceRung traces one picture; first says that newer orders must let it
// finish.
func (m *Maker) traceRung(ctx context.Context, view View, o Order, coarsening int, first bool) (Frame, error) {
	frame, err := m.traceWith(ctx, view, o, first, func(ctx context.Context, report func(raytrace.Progress)) (*raytrace.Plate, error) {
		return view.Trace(ctx, coarsening, report)
	})
	frame.Coarsening = coarsening
	return frame, err
}

func (m *Maker) traceWith(ctx context.Context, view View, o Order, first bool, trace func(context.Context, func(raytrace.Progress)) (*raytrace.Plate, error)) (Frame, error) {
	ctx, cancel := context.WithCancel(ctx)
	defer cancel()
	begun := time.Now()
	m.mu.Lock()
	m.cancel, m.first = cancel, time.Time{}
	if first {
		m.first = begun
	} else if m.order.Serial != o.Serial {
		cancel() // a newer order came between two rungs
	}
	m.mu.Unlock()
	defer func() {
		m.mu.Lock()
		m.cancel = nil
		m.mu.Unlock()
	}()
	plate, err := trace(ctx, m.throttled(begun))
	return Frame{Order: o, Plate: plate, Of: view.Of(), Shown: view.Shown(), Traced: time.Since(begun)}, err
}

// throttled returns a progress callback that passes on at most ten reports a
// second, and none for pictures that are done sooner.
func (m *Maker) throttled(begun time.Time) func(raytrace.Progress) {
	const interval = 100 * time.Millisecond
	var mu sync.Mutex
	next := begun.Add(5 * interval)
	return func(p raytrace.Progress) {
		mu.Lock()
		defer mu.Unlock()
		if now := time.Now(); now.After(next) && m.report != nil {
			next = now.Add(interval)
			m.report(p.TilesDone, p.Tiles)
		}
	}
}

func (m *Maker) stale(o Order) bool {
	m.mu.Lock()
	defer m.mu.Unlock()
	return m.order.Serial != o.Serial
}

// keep hands a traced plate to the toning loop; a plate not yet toned is
// overtaken.
func (m *Maker) keep(f Frame) {
	m.mu.Lock()
	m.plate = &f
	m.mu.Unlock()
	wake(m.toneWake)
}

func (m *Maker) toneLoop(ctx context.Context) {
	var shown *Frame
	for {
		select {
		case <-ctx.Done():
			return
		case <-m.toneWake:
		}
		m.mu.Lock()
		latest, order := m.plate, m.order
		m.mu.Unlock()
		f := *latest
		f.Retoned = shown == latest
		shown = latest
		if f.Err == nil {
			if order.Serial == f.Order.Serial { // the tone may be newer than the plate
				f.Order.Develop, f.Order.Ink = order.Develop, order.Ink
			}
			f.Developed = f.Order.Develop(f.Plate)
			if f.Of == f.Shown {
				f.Image = fit(f.Image, f.Coarsening, f.Order.Columns, f.Order.Rows)
			} else {
				f.Image = magnify(f.Image, f.Coarsening, f.Of, f.Shown)
			}
			if f.Order.Ink != nil {
				f.Ink = f.Order.Ink(f.Plate, f.Of, f.Shown)
			}
		}
		m.show(f)
	}
}

func wake(c chan struct{}) {
	select {
	case c <- struct{}{}:
	default: // it will wake anyway
	}
}
