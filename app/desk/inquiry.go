package desk

import (
	"annulet/app/curves"
	"context"
	"math"

	"annulet/app/desk/graph"
	"annulet/app/desk/imaging"
	"annulet/app/desk/state"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// inquiry asks what lies along lines of sight of a picture.
type inquiry struct {
	order       imaging.Order
	look        state.Look
	pointer     *[2]float64 // nil when it is elsewhere
	column, row int         // of the pointer
}

// finding answers an inquiry.
type finding struct {
	inquiry inquiry
	pointer *state.Sight
	marker  *state.Sight
	rims    []curves.Rim // for the table Rings
	graph   *graph.Graph
	whole   raytrace.Field
	err     error
}

// inquire runs off the window's thread.
func (v *views) inquire(ctx context.Context, q inquiry) finding {
	f := finding{inquiry: q}
	view, err := v.of(q.order)
	if err != nil {
		f.err = err
		return f
	}
	f.whole = view.whole
	probe := func(at [2]float64) *state.Sight {
		s := state.Sight{Alpha: at[0], Beta: at[1], Impact: math.NaN()}
		s.Readings, err = view.Probe(ctx, [][2]float64{at})
		if err != nil && f.err == nil {
			f.err = err
		}
		switch {
		case view.Field.IsParallel():
			s.Impact = math.Hypot(at[0], at[1])
		case len(s.Readings) > 0:
			s.Impact = s.Readings[0].Impact
		}
		return &s
	}
	if q.pointer != nil {
		f.pointer = probe(*q.pointer)
	}
	if q.look.Marker.On {
		f.marker = probe(q.look.Marker.At)
	}
	if q.look.Tab == state.TabRings {
		f.rims = curves.Rims(q.order.Scene)
	}
	switch q.look.Graph {
	case state.GraphPath:
		if at := q.pathAt(); at != nil {
			f.graph = pathGraph(view.View, q.order.Scene, *at)
		}
	case state.GraphCut:
		if q.look.Cut.On {
			f.graph = cutGraph(ctx, view.View, q.order.Scene, q.look.Cut)
		}
	}
	return f
}

// pathAt is the line of sight whose path is drawn: the marker's, or else the
// pointer's.
func (q inquiry) pathAt() *[2]float64 {
	if q.look.Marker.On {
		return &q.look.Marker.At
	}
	return q.pointer
}

// pathSteps is how many points a half turn of a drawn path has. Taste.
const pathSteps = 120

// pathGraph draws a path in its plane, the observer to the right.
func pathGraph(view *raytrace.View, s scenes.Scene, at [2]float64) *graph.Graph {
	track, err := view.Walk(at[0], at[1], pathSteps)
	if err != nil || track.Impact == 0 {
		return nil
	}
	object, err := raytrace.NewObject(s.Object)
	if err != nil {
		return nil
	}
	// Wide enough for the object, the turn, and every crossing of a disk.
	reach := 2.5 * object.PhotonSphere()
	reach = math.Max(reach, 1.3*object.Edge())
	turn := math.Inf(1)
	for _, r := range track.R {
		turn = math.Min(turn, r)
	}
	if !math.IsInf(turn, 1) {
		reach = math.Max(reach, 1.6*math.Min(turn, 1e4))
	}
	radius := func(psi float64) float64 { return track.At(psi) }
	g := &graph.Graph{
		Title: "path in its plane, observer to the right", XName: "x", XUnit: "M", YName: "y", YUnit: "M", SameScale: true,
	}
	for n, psi := range track.Disk {
		r := radius(psi)
		if math.IsNaN(r) || math.IsInf(r, 0) {
			continue
		}
		for _, e := range s.Emitters {
			if e.Kind == "disk" && r >= e.Inner.Radius && r <= e.Outer {
				reach = math.Max(reach, math.Min(1.15*r, 60))
				g.Dots = append(g.Dots, graph.Dot{X: r * math.Cos(psi), Y: r * math.Sin(psi), Name: orderName(n)})
				break
			}
		}
	}
	var line graph.Curve
	start := math.Min(s.Observer.Radius, 1e3)
	if first := radius(track.First()); !math.IsNaN(first) {
		line.X, line.Y = append(line.X, start), append(line.Y, 0)
		if math.IsInf(s.Observer.Radius, 1) { // it comes in along y = b
			line.X[0], line.Y[0] = 10*reach, track.Impact
		}
	}
	for k, psi := range track.Psi {
		r := math.Min(track.R[k], 100*reach)
		line.X, line.Y = append(line.X, r*math.Cos(psi)), append(line.Y, r*math.Sin(psi))
	}
	g.Curves = append(g.Curves, line)
	circle := func(r float64, style graph.Style) {
		const points = 120
		c := graph.Curve{Style: style}
		for k := range points + 1 {
			sin, cos := math.Sincos(2 * math.Pi * float64(k) / points)
			c.X, c.Y = append(c.X, r*cos), append(c.Y, r*sin)
		}
		g.Curves = append(g.Curves, c)
	}
	circle(object.Edge(), graph.Faint)
	note := "circles: " + edgeName(s.Object.Kind)
	if object.PhotonSphere() > object.Edge() {
		circle(object.PhotonSphere(), graph.Dotted)
		note += ", photon sphere (dotted)"
	}
	g.Note = note
	g.X, g.Y = &[2]float64{-reach, reach}, &[2]float64{-reach, reach}
	return g
}

func orderName(n int) string { return "order " + string(rune('0'+n)) }

func edgeName(kind string) string {
	switch kind {
	case "star":
		return "surface"
	case "shell":
		return "shell"
	}
	return "horizon"
}

// cutSamples is how many lines of sight a cut has. Taste: as many as a wide
// graph has pixels.
const cutSamples = 600

// cutGraph draws intensity along a line of the screen.
func cutGraph(ctx context.Context, view *raytrace.View, s scenes.Scene, cut state.Cut) *graph.Graph {
	g := &graph.Graph{Title: "intensity along the cut", XName: "distance from its start", XUnit: "M", YName: "I", FromZero: true}
	unit := 1.
	switch {
	case view.Field.IsParallel():
		if theta, ok := s.ThetaG(); ok && math.IsInf(s.Observer.Radius, 1) {
			unit, g.XUnit = theta, "µas"
		}
	default:
		unit, g.XUnit = 180/math.Pi, "deg"
	}
	points, err := measure.Cut(ctx, view, cut.From, cut.To, cutSamples)
	if err != nil {
		return nil
	}
	total := graph.Curve{Name: "total"}
	orders := make([]graph.Curve, len(points[0].Orders))
	for _, p := range points {
		x := p.Distance * unit
		total.X, total.Y = append(total.X, x), append(total.Y, p.Intensity)
		for n, o := range p.Orders {
			orders[n].X, orders[n].Y = append(orders[n].X, x), append(orders[n].Y, o.Intensity)
		}
	}
	g.Curves = append(g.Curves, total)
	styles := []graph.Style{graph.Dashed, graph.Dotted, graph.DashDotted}
	for n := 1; n < len(orders) && n <= len(styles); n++ {
		orders[n].Name, orders[n].Style = orderName(n), styles[n-1]
		g.Curves = append(g.Curves, orders[n])
	}
	return g
}
