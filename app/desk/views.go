package desk

import (
	"context"
	"runtime"
	"sync"
	"sync/atomic"
	"time"

	"annulet/app/desk/imaging"
	"annulet/raytrace"
)

// sight is a scene made ready to trace.
type sight struct {
	*raytrace.View
	whole  raytrace.Field // of the scene, at the picture's pixels
	shown  raytrace.Field // of the picture
	layers []raytrace.Layer
	kept   *keptPaths
	moving *atomic.Bool // the hand is, and no picture was traced yet
}

func (s sight) options(report func(raytrace.Progress)) raytrace.Options {
	return raytrace.Options{Workers: workers(), Report: report, Layers: s.layers, Centres: true}
}

func (s sight) Trace(ctx context.Context, coarsening int, report func(raytrace.Progress)) (*raytrace.Plate, error) {
	o := s.options(report)
	if s.moving.Swap(false) {
		// toning and drawing the picture before take about as long
		o.Workers = max(1, o.Workers-1)
	}
	if coarsening == 1 {
		return s.kept.render(ctx, s.View, o)
	}
	return s.Coarsened(coarsening).Render(ctx, o)
}

// Integrate implements imaging.View.
func (s sight) Integrate(ctx context.Context, report func(raytrace.Progress)) (*raytrace.Plate, error) {
	o := s.options(report)
	o.Centres = false
	if !s.Integrates(o) {
		return nil, nil
	}
	return s.Render(ctx, o)
}

func (s sight) Of() raytrace.Field    { return s.Field }
func (s sight) Shown() raytrace.Field { return s.shown }

// keptPaths keeps the paths of the picture while the hand changes only what
// shines, so that these are shaded and not traced again.
type keptPaths struct {
	mu     sync.Mutex
	last   *raytrace.View // of the last full picture
	traced *raytrace.Traced
}

// mostKept is how many pixels' paths are kept, at 150 bytes each. Taste.
const mostKept = 3_000_000

func (k *keptPaths) render(ctx context.Context, v *raytrace.View, o raytrace.Options) (*raytrace.Plate, error) {
	k.mu.Lock()
	defer k.mu.Unlock()
	if k.traced != nil && !k.traced.Serves(v, o) {
		k.traced = nil
	}
	again := k.last != nil && k.last.Observer == v.Observer && k.last.Field == v.Field
	k.last = v
	if k.traced == nil && (!again || v.Field.Columns*v.Field.Rows > mostKept) {
		return v.Render(ctx, o) // the first look from here: keeping may not pay
	}
	if k.traced == nil {
		traced, err := v.Trace(ctx, o)
		if err != nil {
			return nil, err
		}
		k.traced = traced
	}
	return k.traced.Shade(ctx, v, o)
}

// fewer is how many workers the user wants; 0 for one a core.
var fewer atomic.Int64

func setWorkers(n int) { fewer.Store(int64(n)) }

// workers is one for each core, or fewer as the user wants. Run makes room
// for the window's thread beside them.
func workers() int {
	if n := int(fewer.Load()); n > 0 {
		return n
	}
	return runtime.NumCPU()
}

// views makes each scene ready once, for the picture and the readings alike:
// finding the width of an automatic field takes longer than a preview may.
// Its methods run off the window's thread, on any goroutine.
type views struct {
	mu     sync.Mutex
	serial int       // of the order that latest is of, plus one
	asked  time.Time // that order
	latest sight
	err    error
}

func (v *views) of(o imaging.Order) (sight, error) {
	v.mu.Lock()
	defer v.mu.Unlock()
	if v.serial != o.Serial+1 {
		latest, err := prepare(o)
		if err == nil {
			latest.kept = new(keptPaths)
			latest.moving = new(atomic.Bool)
			latest.moving.Store(o.Asked.Sub(v.asked) < imaging.Rest)
			if v.latest.View != nil {
				latest.Follow(v.latest.View)
				latest.kept = v.latest.kept
			}
		}
		v.latest, v.err, v.asked = latest, err, o.Asked
		v.serial = o.Serial + 1
	}
	return v.latest, v.err
}

// last returns the last view made ready, nil for none.
func (v *views) last() *raytrace.View {
	v.mu.Lock()
	defer v.mu.Unlock()
	return v.latest.View
}

// prepare makes the scene of an order ready to trace.
func prepare(o imaging.Order) (sight, error) {
	s := o.Scene
	if !o.Own {
		s.Field.Pixels = [2]int{o.Columns, o.Rows}
	}
	v, err := raytrace.NewViewIn(s, o.Folder)
	if err != nil {
		return sight{}, err
	}
	seen := sight{View: v, whole: v.Field, shown: v.Field, layers: o.Layers}
	seen.whole.Columns, seen.whole.Rows = o.Columns, o.Rows
	seen.shown.Columns, seen.shown.Rows = o.Columns, o.Rows
	if o.Shown.Width > 0 {
		seen.shown.Center, seen.shown.Width = o.Shown.Center, o.Shown.Width
	}
	if !o.Own {
		v.Field = seen.shown
	}
	return seen, nil
}
