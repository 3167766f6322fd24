package raytrace

import (
	"errors"
	"fmt"
	"image"
	"math"
)

// Layer names one quantity of a plate.
type Layer int

// The layers of a plate, one of each per image order.
const (
	Intensity Layer = iota // as received, relative to the emitter's unit, see package emit
	Redshift               // g = ν_obs/ν_em
	Radius                 // r, M; NaN on the sky, as are Delay and Mu
	Azimuth                // φ, radians
	Delay                  // t_obs - t_em - r*(r_obs), M
	Mu                     // |cos| of the emission angle in the gas frame
	layerCount
)

// Plate is the traced and shaded image.
type Plate struct {
	Columns, Rows, Orders int
	Total                 []float32   // intensity summed over orders, Rows·Columns, row 0 at the bottom
	layers                [][]float32 // nil where not kept
	firstRow              int         // of the field: 0, or where a strip begins
	Paths                 int         // light paths followed
	Integrated            int         // of these, integrated one by one and not interpolated between shared orbits
	WorstBound            float64     // largest relative bound on r of any crossing of the disk plane shown
	WorstAngle            float64     // largest bound, radians, on the swept angle of any crossing of star or sky shown
	// Flux is ∫ I by image order, over the field: in the unit of intensity
	// times M² on a parallel field, sr on others; nil if pixels were not
	// integrated over.
	Flux []float64
	// FluxBound bounds the error of Flux from pixels and paths; that of what
	// skies send is not in it.
	FluxBound []float64
	rows      []row
}

// layerSet says which layers are kept.
type layerSet [layerCount]bool

// keep turns a list of layers into a set; nil means all.
func keep(layers []Layer) (kept layerSet) {
	for l := range kept {
		kept[l] = layers == nil
	}
	for _, l := range layers {
		kept[l] = true
	}
	return kept
}

// newPlate returns a plate on which nothing shines yet.
func newPlate(columns, rows, orders int, kept layerSet) *Plate {
	size := columns * rows
	p := &Plate{
		Columns: columns, Rows: rows, Orders: orders,
		Total: make([]float32, size), layers: make([][]float32, orders*int(layerCount)),
	}
	nothing := float32(math.NaN())
	for k := range p.layers {
		l := Layer(k % int(layerCount))
		if !kept[l] {
			continue
		}
		p.layers[k] = make([]float32, size)
		if l != Intensity {
			fill(p.layers[k], nothing)
		}
	}
	return p
}

// Layer returns the values of one quantity for one image order, with
// Rows·Columns entries, row 0 at the bottom. Where the order has no crossing
// intensity is 0 and every other layer NaN; where it has several, intensity
// is their sum and the others are of the first on the path. Layers that were
// not asked for are nil.
func (p *Plate) Layer(l Layer, order int) []float32 {
	return p.layers[order*int(layerCount)+int(l)]
}

// ErrBrightness: an image would hold numbers that are none, or too large for
// float32.
var ErrBrightness = errors.New("the brightness is out of the range of numbers; a profile, a contrast, a temperature or the field is extreme")

// finite returns an error that wraps ErrBrightness if a total of the tile is
// not a finite number, which the intensity of every order then is.
func (p *Plate) finite(tile image.Rectangle) error {
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		at := (row - p.firstRow) * p.Columns
		for column := tile.Min.X; column < tile.Max.X; column++ {
			if x := p.Total[at+column]; !(math.Abs(float64(x)) <= math.MaxFloat32) {
				return fmt.Errorf("raytrace: %w: pixel %d,%d would be %g", ErrBrightness, column, row, x)
			}
		}
	}
	return nil
}

// Tally adds the counts of another plate, and takes over the worse bounds.
func (p *Plate) Tally(other *Plate) {
	p.Paths += other.Paths
	p.Integrated += other.Integrated
	p.WorstBound = max(p.WorstBound, other.WorstBound)
	p.WorstAngle = max(p.WorstAngle, other.WorstAngle)
}

// emptied returns a plate in the memory of p, which has at least that many
// rows, on which nothing shines.
func (p *Plate) emptied(rows int) *Plate {
	q := &Plate{Columns: p.Columns, Rows: rows, Orders: p.Orders, layers: p.layers}
	size := p.Columns * rows
	q.Total = p.Total[:size]
	clear(q.Total)
	for k, values := range p.layers {
		if values == nil {
			continue
		}
		q.layers[k] = values[:size]
		if Layer(k%int(layerCount)) == Intensity {
			clear(q.layers[k])
		} else {
			fill(q.layers[k], float32(math.NaN()))
		}
	}
	return q
}

func fill(values []float32, x float32) {
	for k := range values {
		values[k] = x
	}
}
