package desk

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"

	"annulet/app/desk/graph"
	"annulet/app/desk/imaging"
	"annulet/app/desk/state"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// measuring asks for a graph that takes a while, of a whole scene.
type measuring struct {
	order imaging.Order
	graph state.Graph
}

// of says whether both ask for the same.
func (q measuring) of(other measuring) bool {
	return q.order.Serial == other.order.Serial && q.graph == other.graph
}

// measured answers it.
type measured struct {
	asked measuring
	graph *graph.Graph
	err   error
}

// measurers are the graphs that take a while. All run off the window's thread.
var measurers = map[state.Graph]func(context.Context, *raytrace.View, scenes.Scene) (*graph.Graph, error){
	state.GraphLine:       lineGraph,
	state.GraphSpectrum:   spectrumGraph,
	state.GraphVisibility: visibilityGraph,
	state.GraphLightCurve: lightGraph,
}

// measure runs off the window's thread.
func (v *views) measure(ctx context.Context, q measuring) measured {
	m := measured{asked: q}
	scene := q.order.Scene
	if q.graph == state.GraphSpectrum {
		scene.Field.Frequency = spectrumFrequencies(scene)
	}
	if q.graph == state.GraphLightCurve { // pixels are areas, so that few will do
		most := max(scene.Field.Pixels[0], scene.Field.Pixels[1])
		for k, n := range scene.Field.Pixels {
			scene.Field.Pixels[k] = max(1, n*min(most, lightPixels)/most)
		}
	}
	view, err := raytrace.NewViewIn(scene, q.order.Folder)
	if err == nil {
		view.Follow(v.last())
		m.graph, err = measurers[q.graph](ctx, view, scene)
	}
	m.err = err
	return m
}

// measureWorkers leaves one core to the window and its pictures.
func measureWorkers() measure.Options { return measure.Options{Workers: max(1, workers()-1)} }

// lineBin is the width of a line profile's bins in g. Taste: the design's.
const lineBin = 0.02

func lineGraph(ctx context.Context, v *raytrace.View, _ scenes.Scene) (*graph.Graph, error) {
	l, err := measure.NewLine(ctx, v, lineBin, measureWorkers())
	if err != nil {
		return nil, err
	}
	energy, _ := l.Totals()
	g := &graph.Graph{
		Title: "line profile, energy flux", XName: "g", YName: "flux in a bin", FromZero: true,
		Note: fmt.Sprintf("g from %.6f to %.6f, bins of %g", l.Edge.Min, l.Edge.Max, lineBin),
	}
	edges := make([]float64, len(l.Energy)+1)
	for k := range edges {
		edges[k] = float64(l.First+k) * lineBin
	}
	g.Curves = orderCurves(edges, l.Energy, l.Orders, 1/energy)
	for k := range g.Curves {
		g.Curves[k].Step = true
	}
	return g, nil
}

// orderCurves are a total and what lensed orders add to it.
func orderCurves(x, total []float64, orders [][]float64, scale float64) []graph.Curve {
	scaled := func(y []float64) []float64 {
		z := make([]float64, len(y))
		for k := range z {
			z[k] = y[k] * scale
		}
		return z
	}
	curves := []graph.Curve{{Name: "total", X: x, Y: scaled(total)}}
	styles := []graph.Style{graph.Dashed, graph.Dotted, graph.DashDotted}
	for n := 1; n < len(orders) && n <= len(styles); n++ {
		curves = append(curves, graph.Curve{Name: orderName(n), Style: styles[n-1], X: x, Y: scaled(orders[n])})
	}
	return curves
}

// spectrumPoints and spectrumDecades are how many frequencies a spectrum has,
// and how far it reaches to either side of the scene's first one. Taste.
const spectrumPoints, spectrumDecades = 81, 2

// spectrumFrequencies begins with the scene's own, at which it is scaled.
func spectrumFrequencies(s scenes.Scene) []float64 {
	if len(s.Field.Frequency) == 0 {
		return nil
	}
	own := s.Field.Frequency[0]
	all := []float64{own}
	for k := range spectrumPoints {
		all = append(all, own*math.Pow(10, spectrumDecades*(2*float64(k)/(spectrumPoints-1)-1)))
	}
	return all
}

func spectrumGraph(ctx context.Context, v *raytrace.View, s scenes.Scene) (*graph.Graph, error) {
	if len(s.Field.Frequency) == 0 {
		return nil, fmt.Errorf("%w because the scene has no frequency (field.frequency)", measure.ErrCannot)
	}
	if err := measure.CheckSpectrum(s); err != nil {
		return nil, err
	}
	found, err := measure.NewSpectrum(ctx, v, 1, measureWorkers())
	if err != nil {
		return nil, err
	}
	g := &graph.Graph{Title: "spectrum", XName: "ν", XUnit: "Hz", YName: "Fν", LogX: true, LogY: true}
	scale := fluxScale(v, g)
	g.Curves = orderCurves(found.Frequencies, found.Flux, found.Orders, scale)
	return g, nil
}

// fluxScale turns fluxes of the view into what the y axis shows.
func fluxScale(v *raytrace.View, g *graph.Graph) float64 {
	if one, ok := v.Jansky(1); ok {
		g.YUnit = "Jy"
		return one
	}
	g.YUnit = fluxUnit(v.Field)
	return 1
}

// visibilitySteps is how many baselines a graph has, and visibilityReach the
// longest in units of 1/(the critical curve's diameter). Taste.
const visibilitySteps, visibilityReach = 300, 5

func visibilityGraph(ctx context.Context, v *raytrace.View, s scenes.Scene) (*graph.Graph, error) {
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		return nil, err
	}
	plate, err := v.Render(ctx, raytrace.Options{Workers: measureWorkers().Workers, Layers: []raytrace.Layer{}})
	if err != nil {
		return nil, err
	}
	m, err := measure.NewImage(v.Field, plate.Total)
	if err == nil {
		err = m.Check()
	}
	if err != nil {
		return nil, err
	}
	g := &graph.Graph{Title: "visibility amplitude", XName: "baseline", XUnit: "1/M", YName: "|V| / flux", LogY: true}
	perM := 1.0 // of what is shown, in 1/M
	if theta, ok := s.ThetaG(); ok && v.Field.IsParallel() && math.IsInf(v.Observer.Radius, 1) {
		g.XUnit = "Gλ"
		perM = scenes.MicroarcsecondsPerRadian / theta / 1e9
	}
	most := min(visibilityReach/(2*object.CriticalImpact()), m.Nyquist())
	whole := real(m.Visibility(0, 0))
	for axis, name := range []string{"across the disk's axis", "along it"} {
		c := graph.Curve{Name: name, Style: []graph.Style{graph.Solid, graph.Dashed}[axis]}
		at := make([][2]float64, visibilitySteps)
		for k := range at {
			at[k][axis] = most * float64(k) / visibilitySteps
		}
		found, err := m.Visibilities(ctx, at)
		if err != nil {
			return nil, err
		}
		for k, one := range found {
			c.X = append(c.X, at[k][axis]*perM)
			c.Y = append(c.Y, cmplx.Abs(one.Value)/whole)
		}
		g.Curves = append(g.Curves, c)
	}
	return g, nil
}

// lightPixels is the longer side of a turning star's images. Taste.
const lightPixels = 160

// lightTimes is how many times of a period a light curve has. Taste.
const lightTimes = 60

func lightGraph(ctx context.Context, v *raytrace.View, s scenes.Scene) (*graph.Graph, error) {
	times := s.Times(lightTimes)
	if len(times) == 1 {
		return nil, fmt.Errorf("%w because nothing moves: there is neither a spot nor a turning star", measure.ErrCannot)
	}
	curve, err := measure.LightCurve(ctx, v, times, measureWorkers())
	if err != nil {
		return nil, err
	}
	g := &graph.Graph{Title: "light curve", XName: "t − r*", XUnit: "M", YName: "flux", FromZero: true}
	perTime := 1.0
	if seconds, ok := s.SecondsPerM(); ok {
		perTime, g.XName, g.XUnit = seconds*(1+s.Object.Redshift), "t − r*/c", "s"
	}
	scale := fluxScale(v, g)
	x, total := make([]float64, len(curve)), make([]float64, len(curve))
	orders := make([][]float64, len(curve[0].Orders))
	for k, i := range curve {
		x[k], total[k] = i.T*perTime, i.Flux
		for n, flux := range i.Orders {
			orders[n] = append(orders[n], flux)
		}
	}
	g.Curves = orderCurves(x, total, orders, scale)
	return g, nil
}
