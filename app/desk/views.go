package desk

import (
	"context"
	"math"
	"runtime"
	"sync"

	"annulet/app/desk/imaging"
	"annulet/raytrace"
	"annulet/scenes"
)

// sight is a scene made ready to trace.
type sight struct {
	*raytrace.View
	kept *keptPaths
}

// totalOnly keeps nothing but the picture: readings are traced anew, in
// float64.
func totalOnly(report func(raytrace.Progress)) raytrace.Options {
	return raytrace.Options{Workers: workers(), Report: report, Layers: []raytrace.Layer{}}
}

func (s sight) Trace(ctx context.Context, coarsening int, report func(raytrace.Progress)) (*raytrace.Plate, error) {
	if coarsening == 1 {
		return s.kept.render(ctx, s.View, totalOnly(report))
	}
	return s.Coarsened(coarsening).Render(ctx, totalOnly(report))
}

func (s sight) Width() float64 { return s.Field.Width }

// keptPaths keeps the paths of the picture while the hand changes only what
// shines, so that these are shaded and not traced again.
type keptPaths struct {
	mu     sync.Mutex
	last   *raytrace.View // of the last full picture
	traced *raytrace.Traced
}

func (k *keptPaths) render(ctx context.Context, v *raytrace.View, o raytrace.Options) (*raytrace.Plate, error) {
	k.mu.Lock()
	defer k.mu.Unlock()
	if k.traced != nil && !k.traced.Serves(v, o) {
		k.traced = nil
	}
	again := k.last != nil && k.last.Observer == v.Observer && k.last.Field == v.Field
	k.last = v
	if k.traced == nil && !again { // the first look from here: keeping may not pay
		return v.Render(ctx, o)
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

// workers is one for each core. Run makes room for the window's thread beside
// them.
func workers() int { return runtime.NumCPU() }

// prepare makes a scene ready to trace; folder is that of its file.
func prepare(s scenes.Scene, folder string) (sight, error) {
	v, err := raytrace.NewViewIn(s, folder)
	return sight{v, new(keptPaths)}, err
}

// views makes each scene ready once, for the picture and the readings alike:
// finding the width of an automatic field takes longer than a preview may.
// Its methods run off the window's thread, on any goroutine.
type views struct {
	mu     sync.Mutex
	serial int // of the order that latest is of, plus one
	latest sight
	err    error
}

func (v *views) of(o imaging.Order) (sight, error) {
	v.mu.Lock()
	defer v.mu.Unlock()
	if v.serial != o.Serial+1 {
		s := o.Scene
		s.Field.Pixels = [2]int{o.Columns, o.Rows}
		latest, err := prepare(s, o.Folder)
		if err == nil && v.latest.View != nil {
			latest.Follow(v.latest.View)
			latest.kept = v.latest.kept
		}
		v.latest, v.err = latest, err
		v.serial = o.Serial + 1
	}
	return v.latest, v.err
}

// probe reads the centre of a pixel.
func (v *views) probe(ctx context.Context, at imaging.Spot) imaging.Found {
	found := imaging.Found{Spot: at, Impact: math.NaN()}
	view, err := v.of(at.Order)
	if err != nil {
		found.Err = err
		return found
	}
	found.Alpha, found.Beta = view.Field.PixelCenter(at.Column, at.Row)
	found.Readings, found.Err = view.Probe(ctx, [][2]float64{{found.Alpha, found.Beta}})
	switch {
	case view.Field.IsParallel():
		found.Impact = math.Hypot(found.Alpha, found.Beta)
	case len(found.Readings) > 0:
		found.Impact = found.Readings[0].Impact
	}
	return found
}
