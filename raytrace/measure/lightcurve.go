package measure

import (
	"context"
	"math"

	"annulet/raytrace"
	"annulet/raytrace/emit"
)

// Instant is a scene's light at one time.
type Instant struct {
	T      float64 // t_obs - r*(r_obs), M
	Flux   float64 // ∫ I over the image, M² of the intensity's unit (sr on an angular field)
	Orders []float64
	Bound  float64 // on Flux
	// Centroid is the flux-weighted mean place on the screen, in the
	// field's coordinates, of a parallel field in M; NaN if dark.
	Centroid [2]float64
}

// LightCurve follows the light of spots and turning stars: light travel times
// are in it. Paths are traced once. Spots and disks are integrated over their
// whole images, whatever the field; where that cannot be done, as for a star,
// the field's pixels are summed.
func LightCurve(ctx context.Context, v *raytrace.View, times []float64, o Options) ([]Instant, error) {
	moves, flat := false, v.Field.IsParallel()
	size := math.Inf(1) // of the smallest spot, of its distance
	for _, e := range v.Emitters {
		switch e := e.(type) {
		case *emit.Disk:
		case *emit.Spot:
			moves = true
			size = min(size, (e.Outer()-e.Inner())/(e.Outer()+e.Inner()))
		case *emit.Surface:
			moves, flat = moves || e.Spin != 0, false
		default:
			flat = false
		}
	}
	if !moves {
		return nil, cannot("nothing in the scene changes with time: it has no spot and no turning star")
	}
	if len(times) == 0 {
		return nil, cannot("there are no times")
	}
	if _, err := newGeometry(v); flat && err == nil {
		return spotCurve(ctx, v, times, size, o)
	}
	return pixelCurve(ctx, v, times, o)
}

// Grids of light curves. Method: a spot of 5 sigmas to each side of its
// middle has some lines a sigma, where sums of Gaussians converge fast.
const (
	curveCells     = 80
	curveLines     = 960
	mostCurveLines = 6000
	linesPerSpot   = 160 // in a turn of 2π, over the spot's relative half width
)

func spotCurve(ctx context.Context, v *raytrace.View, times []float64, size float64, o Options) ([]Instant, error) {
	o = o.filled()
	o.Cells = curveCells
	o.Lines = min(mostCurveLines, max(curveLines, int(linesPerSpot/size)))
	views := make([]*raytrace.View, len(times))
	for k, t := range times {
		views[k] = v.AtTime(t)
	}
	fine, err := overViews(ctx, v, views, true, o)
	if err != nil {
		return nil, err
	}
	coarse, err := overViews(ctx, v, views, true, o.coarser())
	if err != nil {
		return nil, err
	}
	curve := make([]Instant, len(times))
	for k, t := range times {
		i := Instant{T: t, Centroid: [2]float64{math.NaN(), math.NaN()}}
		var alpha, beta float64
		for n := range fine {
			x := fine[n][k]
			i.Orders = append(i.Orders, x.flux)
			i.Flux += x.flux
			i.Bound += samplingBound(x.flux, coarse[n][k].flux)
			alpha += x.alpha
			beta += x.beta
		}
		if i.Flux > 0 {
			i.Centroid = [2]float64{alpha / i.Flux, beta / i.Flux}
		}
		curve[k] = i
	}
	return curve, nil
}

func pixelCurve(ctx context.Context, v *raytrace.View, times []float64, o Options) ([]Instant, error) {
	options := raytrace.Options{Workers: o.Workers, Layers: []raytrace.Layer{}}
	traced, err := v.Trace(ctx, options)
	if err != nil {
		return nil, err
	}
	curve := make([]Instant, len(times))
	for k, t := range times {
		plate, err := traced.Shade(ctx, v.AtTime(t), options)
		if err != nil {
			return nil, err
		}
		curve[k] = instant(v, plate, t)
		if o.Report != nil {
			o.Report(k+1, len(times))
		}
	}
	return curve, nil
}

// instant sums a plate.
func instant(v *raytrace.View, plate *raytrace.Plate, t float64) Instant {
	f := v.Field
	i := Instant{T: t, Orders: plate.Flux, Centroid: [2]float64{math.NaN(), math.NaN()}}
	i.Flux, i.Bound = plate.WholeFlux()
	var x, y float64
	for k := range plate.Total {
		column, row := k%plate.Columns, k/plate.Columns
		area := f.SolidAngle(column, row)
		light := float64(plate.Total[k]) * area
		alpha, beta := f.PixelCenter(column, row)
		x += light * alpha
		y += light * beta
	}
	if i.Flux > 0 {
		i.Centroid = [2]float64{x / i.Flux, y / i.Flux}
	}
	return i
}

// EchoDelay returns by how much b follows a, two series of one period sampled
// at equal steps: the lag, in [0, period), of the largest circular
// cross-correlation, between samples by a parabola. Series that do not vary
// have none.
func EchoDelay(a, b []float64, step float64) (float64, error) {
	if len(a) != len(b) || len(a) < 4 {
		return 0, cannot("an echo takes two series of the same four times or more")
	}
	n := len(a)
	meanA, meanB := sum(a)/float64(n), sum(b)/float64(n)
	correlation := make([]float64, n)
	var powerA, powerB float64
	for lag := range n {
		for k := range n {
			correlation[lag] += (a[k] - meanA) * (b[(k+lag)%n] - meanB)
		}
	}
	for k := range n {
		powerA += (a[k] - meanA) * (a[k] - meanA)
		powerB += (b[k] - meanB) * (b[k] - meanB)
	}
	const flat = 1e-12 // of the square of the mean
	if !(powerA > flat*meanA*meanA*float64(n)) || !(powerB > flat*meanB*meanB*float64(n)) {
		return 0, cannot("one of the orders does not vary")
	}
	best := 0
	for lag, c := range correlation {
		if c > correlation[best] {
			best = lag
		}
	}
	before, here, after := correlation[(best+n-1)%n], correlation[best], correlation[(best+1)%n]
	shift := 0.0
	if bend := before - 2*here + after; bend < 0 {
		shift = (before - after) / (2 * bend)
	}
	lag := (float64(best) + shift) * step
	if lag < 0 {
		lag += float64(n) * step
	}
	return lag, nil
}
