package imaging

import (
	"image"
	"math"

	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
)

// bins is how many a histogram has. Taste: two pixels each.
const bins = 160

// AllOrders stands for the sum of the orders' intensities, and in other
// layers for the lowest order that a pixel has.
const AllOrders = -1

// Values returns one layer of a plate, of one order or all.
func Values(p *raytrace.Plate, layer raytrace.Layer, order int) []float32 {
	switch {
	case layer == raytrace.Intensity && order == AllOrders:
		return p.Total
	case order != AllOrders:
		return p.Layer(layer, min(order, p.Orders-1))
	}
	lowest := append([]float32(nil), p.Layer(layer, 0)...)
	for n := 1; n < p.Orders; n++ {
		for k, v := range p.Layer(layer, n) {
			if lowest[k] != lowest[k] { // NaN
				lowest[k] = v
			}
		}
	}
	return lowest
}

// Develop colours values of a plate of columns × rows.
func Develop(values []float32, columns, rows int, t tone.Tone, colours *assets.Map) Developed {
	d := Developed{Image: image.NewRGBA(image.Rect(0, 0, columns, rows))}
	t = t.Fixed(values)
	d.Low, d.High = t.Limits(values)
	if err := t.Apply(d.Image, values, columns, rows, colours); err != nil {
		panic("imaging: " + err.Error()) // sizes fit by construction, limits were checked
	}
	d.Axis, d.Counts = histogram(values, t, d.Low, d.High)
	return d
}

// histogram counts values along an axis that holds them and the limits; of
// many it takes a sample.
func histogram(values []float32, t tone.Tone, low, high float64) (axis [2]float64, counts []int) {
	const sample = 200_000
	stride := max(1, len(values)/sample)
	axis = [2]float64{low, high}
	counted := func(v float64) bool { return v != 0 && !math.IsNaN(v) && !math.IsInf(v, 0) }
	for k := 0; k < len(values); k += stride {
		if v := float64(values[k]); counted(v) {
			axis[1] = max(axis[1], v)
			if v > 0 || t.Curve != tone.Logarithmic {
				axis[0] = min(axis[0], v)
			}
		}
	}
	if t.Curve == tone.Logarithmic { // a few faint pixels would take all of it
		const decadesBelow = 1e-3
		axis[0] = max(axis[0], low*decadesBelow)
	}
	counts = make([]int, bins)
	for k := 0; k < len(values); k += stride {
		if v := float64(values[k]); counted(v) && v >= axis[0] {
			counts[min(bins-1, int(t.Normalise(v, axis[0], axis[1])*bins))]++
		}
	}
	return axis, counts
}
