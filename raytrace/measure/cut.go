package measure

import (
	"context"
	"math"

	"annulet/raytrace"
)

// CutPoint is one place of a cut, traced for itself.
type CutPoint struct {
	Distance    float64 // from the first place, in screen coordinates
	Alpha, Beta float64
	Intensity   float64 // of all orders
	Orders      []CutOrder
}

// CutOrder is what one image order shows there: G and R of its first
// crossing with something that shines, NaN if there is none.
type CutOrder struct{ Intensity, G, R float64 }

// mostPoints bounds a cut. Taste.
const mostPoints = 1_000_000

// Cut traces n >= 2 lines of sight, evenly from one place of the screen to
// another; screen coordinates are those of the view's field.
func Cut(ctx context.Context, v *raytrace.View, from, to [2]float64, n int) ([]CutPoint, error) {
	if n < 2 || n > mostPoints {
		return nil, cannot("a cut has 2 to %d points, not %d", mostPoints, n)
	}
	if from == to {
		return nil, cannot("the cut begins where it ends")
	}
	at := make([][2]float64, n)
	points := make([]CutPoint, n)
	length := math.Hypot(to[0]-from[0], to[1]-from[1])
	for k := range at {
		x := float64(k) / float64(n-1)
		at[k] = [2]float64{from[0] + x*(to[0]-from[0]), from[1] + x*(to[1]-from[1])}
		points[k] = CutPoint{Distance: x * length, Alpha: at[k][0], Beta: at[k][1], Orders: make([]CutOrder, v.Plan.MaxOrder+1)}
		for o := range points[k].Orders {
			points[k].Orders[o] = CutOrder{0, math.NaN(), math.NaN()}
		}
	}
	readings, err := v.Probe(ctx, at)
	if err != nil {
		return nil, err
	}
	k := 0
	for _, r := range readings {
		for at[k] != [2]float64{r.Alpha, r.Beta} {
			k++
		}
		points[k].Intensity += r.Intensity
		o := &points[k].Orders[r.Order]
		o.Intensity += r.Intensity
		if math.IsNaN(o.G) {
			o.G, o.R = r.G, r.R
		}
	}
	return points, nil
}
