package imaging

import (
	"context"
	"image"
	"image/color"
	"slices"
	"sync"
	"testing"
	"time"

	"annulet/raytrace"
)

// bench is a trace that the test holds in its hand.
type bench struct {
	begun    chan int // coarsening of each plate begun
	release  chan struct{}
	mu       sync.Mutex
	finished []int // serial of each plate finished
}

// benchView is a scene on the bench.
type benchView struct {
	*bench
	order Order
}

func (v benchView) Of() raytrace.Field {
	return raytrace.Field{Width: 1, Columns: v.order.Columns, Rows: v.order.Rows}
}

func (v benchView) Shown() raytrace.Field { return v.Of() }

// integrating is what a bench begins where a coarsening does not apply.
const integrating = 0

func (v benchView) Integrate(ctx context.Context, _ func(raytrace.Progress)) (*raytrace.Plate, error) {
	select {
	case v.begun <- integrating:
	case <-ctx.Done():
		return nil, ctx.Err()
	}
	select {
	case <-v.release:
	case <-ctx.Done():
		return nil, ctx.Err()
	}
	return &raytrace.Plate{Columns: 1, Rows: 1, Total: make([]float32, 1)}, nil
}

func (v benchView) Trace(ctx context.Context, coarsening int, _ func(raytrace.Progress)) (*raytrace.Plate, error) {
	select { // nobody takes it once the test is over
	case v.begun <- coarsening:
	case <-ctx.Done():
		return nil, ctx.Err()
	}
	select {
	case <-v.release:
	case <-ctx.Done():
		return nil, ctx.Err()
	}
	v.mu.Lock()
	v.finished = append(v.finished, v.order.Serial)
	v.mu.Unlock()
	columns, rows := v.order.Columns/coarsening, v.order.Rows/coarsening
	return &raytrace.Plate{Columns: columns, Rows: rows, Total: make([]float32, columns*rows)}, nil
}

func blank(p *raytrace.Plate) Developed {
	return Developed{Image: image.NewRGBA(image.Rect(0, 0, p.Columns, p.Rows))}
}

// side of the ordered pictures, in pixels: too many for one quick trace at the
// guessed speed.
const side = 2400

func order(serial int) Order {
	return Order{Serial: serial, Columns: side, Rows: side, Asked: time.Now(), Develop: blank}
}

// start returns a running maker and the frames it shows.
func start(t *testing.T) (*Maker, *bench, <-chan Frame) { return resting(t, time.Hour) }

// resting is start with a hand that rests after so long.
func resting(t *testing.T, rest time.Duration) (*Maker, *bench, <-chan Frame) {
	t.Helper()
	ctx, cancel := context.WithCancel(context.Background())
	b := &bench{begun: make(chan int), release: make(chan struct{})}
	frames := make(chan Frame, 16)
	m := NewMaker(func(o Order) (View, error) { return benchView{b, o}, nil }, func(f Frame) { frames <- f }, nil)
	m.rest = rest
	m.patience = time.Hour // tests hold plates as long as they like
	var running sync.WaitGroup
	running.Go(func() { m.Run(ctx) })
	t.Cleanup(func() { cancel(); running.Wait() })
	return m, b, frames
}

func TestCoarseThenFull(t *testing.T) {
	m, b, frames := start(t)
	m.Ask(order(1))
	for k, want := range []int{3, 1} { // 0.58 s at the guessed speed, 80 ms wanted
		if got := <-b.begun; got != want {
			t.Fatalf("plate %d has coarsening %d, want %d", k, got, want)
		}
		b.release <- struct{}{}
		f := <-frames
		if f.Coarsening != want || f.Settled() != (want == 1) || f.Image.Rect != image.Rect(0, 0, side, side) {
			t.Errorf("frame %d: coarsening %d, settled %v, %v", k, f.Coarsening, f.Settled(), f.Image.Rect)
		}
	}
}

func TestStaleFullPlateIsCancelled(t *testing.T) {
	m, b, frames := start(t)
	m.Ask(order(1))
	<-b.begun
	b.release <- struct{}{}
	<-frames
	<-b.begun // the full one, never released
	m.Ask(order(2))
	<-b.begun
	b.release <- struct{}{}
	if f := <-frames; f.Order.Serial != 2 {
		t.Errorf("frame of scene %d, want 2", f.Order.Serial)
	}
}

// A hand that never rests must see pictures: an order's first plate that has
// been begun is finished although newer orders have come, be it coarse or not.
func TestFirstPlateOutlivesNewOrders(t *testing.T) {
	t.Run("coarse", func(t *testing.T) { firstPlateOutlivesNewOrders(t, order) })
	t.Run("full", func(t *testing.T) {
		firstPlateOutlivesNewOrders(t, func(serial int) Order {
			o := order(serial)
			o.Columns, o.Rows = leastSide, leastSide
			return o
		})
	})
}

func firstPlateOutlivesNewOrders(t *testing.T, order func(serial int) Order) {
	m, b, frames := start(t)
	m.Ask(order(1))
	<-b.begun
	for serial := 2; serial <= 9; serial++ {
		m.Ask(order(serial))
	}
	b.release <- struct{}{}
	if f := <-frames; f.Order.Serial != 1 {
		t.Fatalf("frame of scene %d, want 1", f.Order.Serial)
	}
	<-b.begun // of the latest
	b.release <- struct{}{}
	if f := <-frames; f.Order.Serial != 9 {
		t.Errorf("frame of scene %d, want 9: those between are stale", f.Order.Serial)
	}
	b.mu.Lock()
	defer b.mu.Unlock()
	if !slices.Equal(b.finished, []int{1, 9}) {
		t.Errorf("finished %v, want 1 and 9", b.finished)
	}
}

// A hand that rests sees pixels that are areas, once; a hand that moves on
// does not wait for them.
func TestRestIntegrates(t *testing.T) {
	m, b, frames := resting(t, 50*time.Millisecond)
	full := func(serial int) {
		t.Helper()
		m.Ask(order(serial))
		for k := 0; k != 1; { // the coarse ones first, if any
			k = <-b.begun
			b.release <- struct{}{}
			<-frames
		}
	}
	full(1)
	if got := <-b.begun; got != integrating {
		t.Fatalf("a rested hand has a plate of coarsening %d", got)
	}
	full(2) // the plate of areas is never released
	if got := <-b.begun; got != integrating {
		t.Fatalf("a rested hand has a plate of coarsening %d", got)
	}
	b.release <- struct{}{}
	if f := <-frames; !f.Areas || !f.Settled() || f.Order.Serial != 2 {
		t.Errorf("frame of scene %d, areas %v, coarsening %d", f.Order.Serial, f.Areas, f.Coarsening)
	}
	m.Ask(order(2)) // another tone
	if f := <-frames; !f.Areas || !f.Retoned {
		t.Errorf("areas %v, retoned %v", f.Areas, f.Retoned)
	}
	select {
	case k := <-b.begun:
		t.Errorf("a change of tone began a plate of coarsening %d", k)
	case <-time.After(3 * m.rest):
	}
}

func TestToneDoesNotTrace(t *testing.T) {
	m, b, frames := start(t)
	o := order(1)
	m.Ask(o)
	for range 2 {
		<-b.begun
		b.release <- struct{}{}
		<-frames
	}
	developed := make(chan struct{}, 1)
	o.Develop = func(p *raytrace.Plate) Developed { developed <- struct{}{}; return blank(p) }
	m.Ask(o)
	select {
	case k := <-b.begun:
		t.Fatalf("a change of tone traced a plate of coarsening %d", k)
	case f := <-frames:
		if <-developed; !f.Retoned || f.Coarsening != 1 {
			t.Errorf("retoned %v, coarsening %d", f.Retoned, f.Coarsening)
		}
	}
}

func TestPace(t *testing.T) {
	var p pace
	if got := p.rungs(100, 100, 0); !slices.Equal(got, []int{1}) {
		t.Errorf("a small picture is made in %v", got)
	}
	p.note(1000*1000, 100*previewTime)
	if got := p.rungs(1000, 1000, 0); !slices.Equal(got, []int{10, 3, 1}) {
		t.Errorf("a slow picture is made in %v, want 10 3 1", got)
	}
	if got := p.rungs(1000, 1000, time.Second)[0]; got != 15 {
		t.Errorf("with the time spent already the first coarsening is %d, want 15", got)
	}
	p.note(10, time.Second) // tells nothing
	if got := p.rungs(1000, 1000, 0)[0]; got != 10 {
		t.Errorf("a tiny picture changed the pace to %d", got)
	}
	if got := p.rungs(100, 4000, 0)[0]; got > 2 {
		t.Errorf("a narrow picture is coarsened by %d", got)
	}
}

func TestFitKeepsTheBottomLeftCorner(t *testing.T) {
	coarse := image.NewRGBA(image.Rect(0, 0, 34, 34)) // 100 pixels by 3, rounded up
	for y := range 34 {
		for x := range 34 {
			if x < 17 && y >= 17 { // the bottom left quarter
				coarse.SetRGBA(x, y, color.RGBA{R: 0xff, A: 0xff})
			}
		}
	}
	out := fit(coarse, 3, 100, 100)
	if out.Rect != image.Rect(0, 0, 100, 100) {
		t.Fatalf("fits %v", out.Rect)
	}
	for _, k := range []struct {
		x, y int
		want uint8
	}{{0, 99, 0xff}, {48, 52, 0xff}, {53, 60, 0}, {40, 47, 0}, {99, 99, 0}, {0, 0, 0}} {
		if got := out.RGBAAt(k.x, k.y).R; got != k.want {
			t.Errorf("pixel %d, %d is %d, want %d", k.x, k.y, got, k.want)
		}
	}
}

// A pixel of the scene covers its own rectangle of the picture, whatever part
// of the field that shows.
func TestMagnifyShowsOwnPixels(t *testing.T) {
	of := raytrace.Field{Width: 8, Columns: 4, Rows: 4}
	m := image.NewRGBA(image.Rect(0, 0, 4, 4))
	m.SetRGBA(3, 0, color.RGBA{R: 0xff, A: 0xff}) // α from 2 to 4, β from 2 to 4
	shown := raytrace.Field{Width: 4, Center: [2]float64{3, 3}, Columns: 100, Rows: 100}
	out := magnify(m, 1, of, shown) // α and β from 1 to 5
	for _, k := range []struct {
		x, y int
		want color.RGBA
	}{
		{26, 26, color.RGBA{R: 0xff, A: 0xff}}, {73, 73, color.RGBA{R: 0xff, A: 0xff}}, {24, 50, color.RGBA{}}, {50, 76, color.RGBA{}}, {76, 50, color.RGBA{}},
	} {
		if got := out.RGBAAt(k.x, k.y); got != k.want {
			t.Errorf("pixel %d, %d is %v, want %v", k.x, k.y, got, k.want)
		}
	}
}

func TestLatestAnswersTheLatest(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	begun, answers := make(chan int), make(chan int)
	l := NewLatest(func(ctx context.Context, q int) int {
		begun <- q
		if q == 1 {
			<-ctx.Done()
		}
		return q
	}, func(a int) { answers <- a })
	var running sync.WaitGroup
	running.Go(func() { l.Run(ctx) })
	l.Ask(1)
	<-begun
	l.Ask(2)
	if q := <-begun; q != 2 {
		t.Errorf("answers %d", q)
	}
	if a := <-answers; a != 2 {
		t.Errorf("shows %d, the question was replaced", a)
	}
	cancel()
	running.Wait()
}
