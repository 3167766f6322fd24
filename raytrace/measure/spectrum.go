package measure

import (
	"context"

	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// Spectrum is the flux of a scene at some of its frequencies.
type Spectrum struct {
	Frequencies []float64 // observed, Hz
	// Flux is ∫ I over the whole image of the disks at each, in the unit of
	// intensity times M² (sr on an angular field); Orders by image order.
	Flux   []float64
	Orders [][]float64
	Bound  []float64 // on Flux
}

// CheckSpectrum refuses scenes with light that has no spectrum.
func CheckSpectrum(s scenes.Scene) error {
	for k, e := range s.Emitters {
		if e.Light != "blackbody" && e.Light != "monochromatic" {
			return cannot("emitter %d has light = %q, which has no spectrum", k+1, e.Light)
		}
	}
	return nil
}

// NewSpectrum integrates the disks of a view at every frequency of its scene
// from the given one on: paths are traced once. Other emitters have no
// spectrum here.
func NewSpectrum(ctx context.Context, v *raytrace.View, from int, o Options) (*Spectrum, error) {
	all := v.Frequencies()
	if from < 0 || from >= len(all) {
		return nil, cannot("the scene has no frequency")
	}
	for _, e := range v.Emitters {
		if _, ok := e.(*emit.Disk); !ok {
			return nil, cannot("the scene has an emitter other than disks, whose image this does not integrate")
		}
	}
	s := &Spectrum{Frequencies: all[from:]}
	var views []*raytrace.View
	for k := range s.Frequencies {
		tuned, err := v.WithFrequency(from + k)
		if err != nil {
			return nil, err
		}
		views = append(views, tuned)
	}
	o = o.filled()
	if o.Lines, o.Cells = min(o.Lines, spectrumLines), min(o.Cells, spectrumCells); o.Lines < 4 || o.Cells < 4 {
		return nil, cannot("%d lines of %d cells are too few", o.Lines, o.Cells)
	}
	fine, err := overViews(ctx, v, views, false, o)
	if err != nil {
		return nil, err
	}
	coarse, err := overViews(ctx, v, views, false, o.coarser())
	if err != nil {
		return nil, err
	}
	s.Flux, s.Bound = make([]float64, len(views)), make([]float64, len(views))
	for n := range fine {
		order := make([]float64, len(views))
		for k, x := range fine[n] {
			order[k] = x.flux
			s.Flux[k] += x.flux
			s.Bound[k] += samplingBound(x.flux, coarse[n][k].flux)
		}
		s.Orders = append(s.Orders, order)
	}
	return s, nil
}

// Finest grid of a spectrum: its light is smooth across disks. Method: the
// bound tells.
const spectrumLines, spectrumCells = 240, 120

// sums are integrals over the image of one order.
type sums struct{ flux, alpha, beta float64 }

// overViews integrates views that differ in nothing but their emitters'
// light: sums by order and view. Paths are traced once.
func overViews(ctx context.Context, v *raytrace.View, views []*raytrace.View, delay bool, o Options) ([][]sums, error) {
	s, err := newSampler(ctx, v, delay, o)
	if err != nil {
		return nil, err
	}
	at := flats(v)
	var orders [][]sums
	for n := range v.Plan.MaxOrder + 1 {
		total := make([]sums, len(views))
		for i, emitter := range at {
			c, err := s.circles(ctx, emitter, n)
			if err != nil {
				return nil, err
			}
			lines := make([][]sums, len(s.angles)-1)
			err = s.around(ctx, c, func(w *lineWorker, k int) error {
				patches, err := w.trace(s.angles[k], s.angles[k+1], n)
				if err != nil {
					return err
				}
				lines[k] = make([]sums, len(views))
				for f, other := range views {
					w.shade(other, patches, emitter, n)
					for _, p := range patches {
						light := p.area * p.intensity
						lines[k][f].flux += light
						lines[k][f].alpha += light * p.alpha
						lines[k][f].beta += light * p.beta
					}
				}
				return nil
			})
			if err != nil {
				return nil, err
			}
			for _, line := range lines {
				for f, x := range line {
					total[f].flux += x.flux
					total[f].alpha += x.alpha
					total[f].beta += x.beta
				}
			}
			if o.Report != nil {
				o.Report(n*len(at)+i+1, len(at)*(v.Plan.MaxOrder+1))
			}
		}
		orders = append(orders, total)
	}
	return orders, nil
}
