package raytrace

import (
	"context"
	"errors"
	"math"
	"slices"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// A pixel is an area: its intensity is the mean over it, and the flux of an
// image is the sum over its pixels.
//
// Where the light is smooth the nine middles of a pixel and of its neighbours
// give the mean, by the parabolas through them. Where it is not, the pixel is
// cut along the images of rims, of the ISCO and of breaks of the emissivity,
// of every order, and integrated between them by Gauss and Legendre's rule;
// pieces that are not known well enough are integrated with more nodes, then
// quartered. What is well enough follows from the pixel, its neighbours and a
// pilot of fixed size, never from what other tiles have found.

const (
	// halo is how many pixels around a tile are followed with it. Method.
	halo = 1
	// pilotSide is the longer side of the pilot image, in pixels, and
	// pilotTolerance what it is integrated to. Method: it says how bright the
	// image is.
	pilotSide      = 32
	pilotTolerance = 0.1
	// faintOrder is the least share of the whole flux that an order's pixels
	// are judged against. Taste.
	faintOrder = 1e-4
	// orderRatio: see areas.allowed. Taste.
	orderRatio = 10
	// coarseOrder is the first order that is cut along only one in coarseMarks
	// of the radii between rims: it may be off by more, and its paths, so near
	// the critical curve, are integrated one by one. Method.
	coarseOrder, coarseMarks = 3, 4
	// curvesOff is the largest relative error of an impact parameter of
	// rims' images that pixels are cut along. Method: as the areas.
	curvesOff = 1e-6
	// innerRatio, outerRatio and spotMarks say how finely lensed orders are cut
	// in r within the ISCO, beyond it and across a spot: they change over a
	// small part of a pixel. Method.
	innerRatio, outerRatio = 1.25, 1.8
	spotMarks              = 7
)

// areas is what the integration over pixels knows of a view.
type areas struct {
	view      *View // without its skies: these average over pixels themselves
	tolerance float64
	rims      [][]float64   // by order: radii where light has edges, M, rising
	kinks     [][]float64   // and where it has kinks
	marks     [][]float64   // these, and radii between which it changes a lot: pixels are cut along them
	curves    []*rim.Curves // by order: their images; nil where they are not known
	geometry  *rim.Geometry // nil if no curves are known
	perScreen float64       // b over screen coordinates near the middle, M
	dark      float64       // impact parameter below which paths end on the object, M
	stars     bool          // not only the disk plane shines
	dims      bool          // light from behind an emitter is dimmed by it
	least     []float64     // by order: mean over a pixel, in screen coordinates, below which tolerance is absolute
	deepest   int           // how often a pixel may be quartered
	pilot     int           // light paths that the pilot followed
}

// Integrates says whether pixels are integrated over.
func (v *View) Integrates(o Options) bool {
	return !o.Centres && v.FluxTolerance > 0 && slices.ContainsFunc(v.Emitters, func(e Emitter) bool { return !isSky(e) })
}

func isSky(e Emitter) bool {
	_, yes := e.(*emit.Sky)
	return yes
}

// newAreas prepares the integration over pixels, with a pilot.
func (v *View) newAreas(ctx context.Context, o Options) (*areas, error) {
	const quarterings = 4
	lit := *v
	lit.Plan.Sky = false
	lit.Emitters = slices.DeleteFunc(slices.Clone(v.Emitters), isSky)
	a := &areas{view: &lit, tolerance: pilotTolerance, deepest: 1}
	for _, e := range lit.Emitters {
		if _, yes := e.(*emit.Surface); yes {
			a.stars = true
		}
		if d, yes := e.(*emit.Disk); yes && d.Depth != 0 {
			a.dims = true
		}
	}
	if err := a.cut(ctx); err != nil {
		return nil, err
	}
	a.least = make([]float64, v.Plan.MaxOrder+1)
	f := v.Field
	pilot := lit.Coarsened((max(f.Columns, f.Rows) + pilotSide - 1) / pilotSide)
	plate := newPlate(pilot.Field.Columns, pilot.Field.Rows, len(a.least), keep([]Layer{}))
	o.Report = nil
	if err := pilot.render(ctx, o, a, plate); err != nil {
		return nil, err
	}
	whole := 0.0
	for _, flux := range plate.Flux {
		whole += flux
	}
	across, up := f.Pitches()
	for n, flux := range plate.Flux {
		a.least[n] = max(flux, faintOrder*whole) / (float64(f.Columns) * float64(f.Rows) * across * up)
	}
	a.pilot = plate.Paths
	a.tolerance, a.deepest = v.FluxTolerance, quarterings
	return a, nil
}

// conclude sums the fluxes of a plate whose tiles are all done, and counts the
// pilot's paths; nil areas leave it without.
func (a *areas) conclude(plate *Plate) error {
	if a == nil {
		return nil
	}
	plate.Paths += a.pilot
	return plate.sum(plate.rows, a.view.Plan.Tolerance)
}

// cut finds the radii to cut along, and their images.
func (a *areas) cut(ctx context.Context) error {
	v := a.view
	orders := v.Plan.MaxOrder + 1
	a.curves = make([]*rim.Curves, orders)
	a.rims, a.kinks, a.marks = make([][]float64, orders), make([][]float64, orders), make([][]float64, orders)
	edge := 0.0
	if round, ok := v.Spacetime.(*geodesic.Round); ok {
		edge = round.Edge() * (1 + 1e-9) // where no path can be found any more
		if round.Opaque() {
			a.dark = round.DarkImpact()
		}
	}
	for n := range orders {
		for _, e := range v.Emitters {
			c := cutsOf(e)
			a.rims[n] = append(a.rims[n], c.rims...)
			a.kinks[n] = append(a.kinks[n], c.kinks...)
			a.marks[n] = append(a.marks[n], c.rims...)
			a.marks[n] = append(a.marks[n], c.kinks...)
			for k, r := range c.between {
				if n > 0 && (n < coarseOrder || k%coarseMarks == 1) {
					a.marks[n] = append(a.marks[n], r)
				}
			}
		}
		for _, r := range [...]*[]float64{&a.rims[n], &a.kinks[n], &a.marks[n]} {
			for k := range *r {
				(*r)[k] = max((*r)[k], edge)
			}
			slices.Sort(*r)
			*r = slices.Compact(*r)
		}
	}
	observer := v.Observer
	observer.Motion = geodesic.Static // of the same place: rays are named by what they are there
	g, err := rim.NewGeometry(v.Spacetime, observer)
	if err != nil {
		return nil // pixels are quartered instead
	}
	a.geometry, a.perScreen = g, 1
	if !v.Field.IsParallel() {
		a.perScreen = g.Widest
	}
	for n, marks := range a.marks {
		if len(marks) == 0 {
			continue
		}
		c, err := g.NewCurves(ctx, n, marks)
		switch {
		case errors.Is(err, rim.ErrCannot) || err == nil && c.Off > curvesOff:
		case err != nil:
			return err
		default:
			a.curves[n] = c
		}
	}
	return nil
}

// cuts are radii, M, of the light of an emitter of the disk plane.
type cuts struct{ rims, kinks, between []float64 }

func cutsOf(e Emitter) (c cuts) {
	switch e := e.(type) {
	case *emit.Disk:
		c.rims = []float64{e.Inner, e.Outer}
		isco := e.Gas.ISCO()
		if e.Gas.Plunges(e.Inner) && isco < e.Outer {
			c.kinks = append(c.kinks, isco)
		}
		if p, ok := e.Profile.(interface{ Breaks() []float64 }); ok {
			for _, b := range p.Breaks() {
				if b > e.Inner && b < e.Outer {
					c.kinks = append(c.kinks, b)
				}
			}
		}
		ratio := innerRatio
		for at := e.Inner * ratio; at < e.Outer; at *= ratio {
			c.between = append(c.between, at)
			if at > isco {
				ratio = outerRatio
			}
		}
	case *emit.Spot:
		c.rims = []float64{e.Inner(), e.Outer()}
		for k := 1; k < spotMarks; k++ {
			c.between = append(c.between, e.Inner()+(e.Outer()-e.Inner())*float64(k)/spotMarks)
		}
	}
	return c
}

// bin counts the rims and the kinks of an order within a radius.
func (a *areas) bin(order int, r float64) bin {
	return bin{within(a.rims[order], r), within(a.kinks[order], r)}
}

// bin says where among an order's rims and kinks a crossing lies.
type bin struct{ rims, kinks uint8 }

func within(marks []float64, r float64) (n uint8) {
	for _, mark := range marks {
		if mark >= r {
			break
		}
		n++
	}
	return n
}

// allowed is the relative error that an order's flux may have. Every order is
// e^π times fainter than the one before and may be off by orderRatio more.
func (a *areas) allowed(order int) float64 {
	return min(a.tolerance*math.Pow(orderRatio, float64(order)), pilotTolerance)
}

// weight is the solid angle of a place on the screen over its area there.
func (f *Field) weight(p [2]float64) float64 {
	switch f.Projection {
	case Perspective:
		s := 1 + p[0]*p[0] + p[1]*p[1]
		return 1 / (s * math.Sqrt(s))
	case AllSky:
		return math.Cos(p[1])
	}
	return 1
}
