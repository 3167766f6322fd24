package desk

import (
	"slices"

	"annulet/app/desk/graph"
	"annulet/app/desk/state"
)

// mostHeld is how many curves of earlier states a graph keeps.
const mostHeld = 8

// held is the first curve of a graph of an earlier state.
type held struct {
	of    state.Graph
	axes  [4]string // names and units
	scene []byte    // the text of its file
	curve graph.Curve
}

func axesOf(g *graph.Graph) [4]string { return [4]string{g.XName, g.XUnit, g.YName, g.YUnit} }

// holdCurve keeps the curve of the graph shown beside those to come; the
// oldest gives way.
func (c *commands) holdCurve() {
	g := c.bareGraph()
	if g == nil || len(g.Curves) == 0 || c.state.Look.Graph == state.GraphPath || !c.graphIsNew() {
		c.view.setPicked("no curve to hold")
		return
	}
	h := held{of: c.state.Look.Graph, axes: axesOf(g), scene: c.state.Text(), curve: g.Curves[0]}
	same := 0
	for _, old := range c.held {
		if old.of == h.of {
			same++
		}
	}
	if same == mostHeld {
		oldest := slices.IndexFunc(c.held, func(old held) bool { return old.of == h.of })
		c.held = slices.Delete(c.held, oldest, oldest+1)
	}
	c.held = append(c.held, h)
	c.showGraphNow()
	c.view.setPicked("curve held")
	c.log.line("held curves=%d", len(c.held))
}

// graphIsNew says whether the graph shown is of the scene as it is.
func (c *commands) graphIsNew() bool {
	return !c.state.Look.Graph.Measured() || c.measured != nil && c.measured.asked.order.Serial == c.state.Serial()
}

// dropCurves forgets the curves held by the graph shown.
func (c *commands) dropCurves() {
	c.held = slices.DeleteFunc(c.held, func(h held) bool { return h.of == c.state.Look.Graph })
	c.showGraphNow()
	c.log.line("held curves=%d", len(c.held))
}

// withHeld returns the graph with what is held beside it, named by the keys
// that differ from the scene as it is.
func (c *commands) withHeld(g *graph.Graph) *graph.Graph {
	if g == nil {
		return nil
	}
	all := *g
	styles := []graph.Style{graph.Dashed, graph.DashDotted, graph.Dotted, graph.Solid}
	n := 0
	for _, h := range c.held {
		if h.of != c.state.Look.Graph || h.axes != axesOf(g) {
			continue
		}
		name := state.Differing(h.scene, c.state.Text())
		if name == "" {
			continue // the scene is that one again
		}
		if n == 0 { // of the scene as it is, only the first curve beside them
			all.Curves = append([]graph.Curve{}, g.Curves[0])
			all.Curves[0].Name = "now"
		}
		curve := h.curve
		curve.Name, curve.Style = name, styles[n%len(styles)]
		all.Curves = append(all.Curves, curve)
		n++
	}
	return &all
}
