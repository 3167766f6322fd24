package raytrace

import (
	"cmp"
	"fmt"
	"image"
	"math"
	"slices"
)

// mostOrders is how many image orders a plan may ask for.
const mostOrders = 10

// fluxes is what tiles know of the flux in them, order by order.
type fluxes struct {
	flux [mostOrders]float64 // ∫ I over the pixels
	off  [mostOrders]float64 // sum of the estimated errors
}

func (f *fluxes) add(g *fluxes) {
	for n := range f.flux {
		f.flux[n] += g.flux[n]
		f.off[n] += g.off[n]
	}
}

// row is what a row of tiles knows.
type row struct {
	bottom int
	light  fluxes
}

// inRows sums tiles row by row, from the left, whatever their order.
func inRows(tiles []image.Rectangle, light []fluxes) (rows []row) {
	index := make([]int, len(tiles))
	for k := range index {
		index[k] = k
	}
	slices.SortFunc(index, func(i, j int) int {
		a, b := tiles[i].Min, tiles[j].Min
		return cmp.Or(cmp.Compare(a.Y, b.Y), cmp.Compare(a.X, b.X))
	})
	for _, k := range index {
		if y := tiles[k].Min.Y; len(rows) == 0 || rows[len(rows)-1].bottom != y {
			rows = append(rows, row{bottom: y})
		}
		rows[len(rows)-1].light.add(&light[k])
	}
	return rows
}

const (
	// offRoom is by how much the estimated errors may be too small together.
	// Method: TestFluxBounds.
	offRoom = 5
	// pathShare is the relative error of a flux from that of its paths, in
	// units of their tolerance. Method: TestFluxBounds.
	pathShare = 10
)

// sum sets the fluxes and their bounds from rows of tiles, from the bottom up.
// Its error wraps ErrBrightness.
func (p *Plate) sum(rows []row, tolerance float64) error {
	slices.SortFunc(rows, func(a, b row) int { return cmp.Compare(a.bottom, b.bottom) })
	var all fluxes
	for k := range rows {
		all.add(&rows[k].light)
	}
	p.Flux, p.FluxBound = make([]float64, p.Orders), make([]float64, p.Orders)
	for n := range p.Flux {
		p.Flux[n] = all.flux[n]
		p.FluxBound[n] = offRoom*all.off[n] + pathShare*tolerance*all.flux[n]
		if !(math.Abs(p.Flux[n])+p.FluxBound[n] <= math.MaxFloat64) {
			return fmt.Errorf("raytrace: %w: the flux of order %d would be %g, its bound %g", ErrBrightness, n, p.Flux[n], p.FluxBound[n])
		}
	}
	return nil
}

// WholeFlux returns the flux of the plate and a bound on its error; NaN if
// pixels were not integrated over.
func (p *Plate) WholeFlux() (flux, bound float64) {
	if p.Flux == nil {
		return math.NaN(), math.NaN()
	}
	for n := range p.Flux {
		flux += p.Flux[n]
		bound += p.FluxBound[n]
	}
	return flux, bound
}
