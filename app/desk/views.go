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
type sight struct{ *raytrace.View }

func (s sight) Trace(ctx context.Context, coarsening int, report func(raytrace.Progress)) (*raytrace.Plate, error) {
	return s.Coarsened(coarsening).Render(ctx, raytrace.Options{Workers: workers(), Report: report})
}

func (s sight) Width() float64 { return s.Field.Width }

// workers is one for each core. Run makes room for the window's thread beside
// them.
func workers() int { return runtime.NumCPU() }

// prepare makes a scene ready to trace.
func prepare(s scenes.Scene) (sight, error) {
	v, err := raytrace.NewView(s)
	return sight{v}, err
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
		v.latest, v.err = prepare(s)
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
