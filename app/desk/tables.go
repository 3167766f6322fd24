package desk

import (
	"context"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"

	"annulet/app/desk/graph"
	"annulet/app/desk/imaging"
	"annulet/app/desk/state"
	"annulet/app/files"
	"annulet/raytrace"
)

// table returns the table that is shown.
func (c *commands) table() state.Table {
	s := c.state.Scene()
	switch c.state.Look.Tab {
	case state.TabRings:
		if c.found != nil {
			return state.RingsTable(c.found.inquiry.order.Scene, c.found.rims)
		}
	case state.TabObserver:
		return state.ObserverTable(s)
	case state.TabStations:
		return state.StationsTable(s, c.state.Look.Stations)
	case state.TabNumerics:
		if f := c.frame; f != nil {
			flux, bound := f.Plate.WholeFlux()
			return state.NumericsTable(state.Numerics{
				Flux: flux, Bound: bound, FluxUnit: fluxUnit(f.Of),
				Scene: f.Order.Scene, Columns: f.Plate.Columns, Rows: f.Plate.Rows,
				Paths: f.Plate.Paths, Integrated: f.Plate.Integrated,
				WorstBound: f.Plate.WorstBound, WorstAngle: f.Plate.WorstAngle,
				Traced: f.Traced, Shown: c.frameShown, Workers: workers(), Coarsening: f.Coarsening,
			})
		}
	case state.TabText:
	default:
		return c.pixelTable()
	}
	return state.Table{}
}

// pixelTable lists the marker's line of sight, then the pointer's.
func (c *commands) pixelTable() state.Table {
	f := c.found
	if f == nil || f.err != nil && f.pointer == nil && f.marker == nil {
		t := state.Table{Remark: "Point at the image; a click marks a point whose readings stay."}
		if f != nil && f.err != nil {
			t.Remark = "No reading: " + f.err.Error()
		}
		return t
	}
	var t state.Table
	scene := f.inquiry.order.Scene
	circle := c.state.Look.Circle
	if circle.On {
		t.Sections = append(t.Sections, state.CircleSection(scene, circle))
	}
	if f.marker != nil {
		t.Append("Marker", state.Readings(scene, *f.marker))
	}
	if f.pointer != nil {
		title := "Line of sight"
		if f.marker != nil {
			title = "Pointer"
		}
		t.Append(title, state.Readings(scene, *f.pointer))
	}
	if len(t.Sections) == 0 {
		t.Remark = "Point at the image; a click marks a point whose readings stay."
	}
	return t
}

// showTable shows it, with lengths as the settings have them.
func (c *commands) showTable() { c.view.side.show(c.table().In(c.home.settings.Length)) }

func (c *commands) showTab(t state.Tab) {
	if c.state.Look.Tab == t {
		return
	}
	c.state.Look.Tab = t
	c.view.sync(c.state, c.tool)
	c.inquire(c.order())
	c.showTable()
	c.log.line("tab %d", int(t))
}

func (c *commands) setStations(text string) {
	radii, err := state.ParseStations(text)
	c.view.side.wrong.Text = ""
	if err != nil {
		c.view.side.wrong.Text = err.Error()
	} else {
		c.state.Look.Stations = radii
	}
	c.view.side.wrong.Refresh()
	c.showTable()
}

// editText takes the scene's text as it is typed.
func (c *commands) editText(text string) {
	changed := c.state.SetText(text)
	if c.state.TextWrong != "" {
		c.log.line("text error=%q", c.state.TextWrong)
	}
	if changed {
		c.sync()
		return
	}
	c.view.sync(c.state, c.tool)
}

func (c *commands) copyText() {
	if c.state.Look.Tab == state.TabText {
		c.copied(string(c.state.Text()))
		return
	}
	c.copied(c.table().In(c.home.settings.Length).Text())
}

func (c *commands) copyCSV() { c.copied(c.table().CSV()) }

func (c *commands) copied(text string) {
	c.app.Clipboard().SetContent(text)
	c.view.setPicked("copied")
	c.log.line("copied bytes=%d", len(text))
}

// graph returns the graph that is shown, with the curves held; nil for none.
func (c *commands) graph() *graph.Graph { return c.withHeld(c.bareGraph()) }

func (c *commands) bareGraph() *graph.Graph {
	switch c.state.Look.Graph {
	case state.GraphOrders:
		if c.frame != nil && c.frame.Coarsening == 1 {
			return ordersGraph(*c.frame)
		}
		return nil
	case state.GraphLine, state.GraphSpectrum, state.GraphVisibility, state.GraphLightCurve:
		// the last one stays until the next is measured
		if m := c.measured; m != nil && m.asked.graph == c.state.Look.Graph {
			return m.graph
		}
		return nil
	}
	if c.found == nil {
		return nil
	}
	return c.found.graph
}

func (c *commands) showGraphNow() {
	c.view.side.graph.show(c.graph())
	c.view.side.tell("")
}

func (c *commands) showGraph(g state.Graph) {
	if c.state.Look.Graph == g {
		return
	}
	c.state.Look.Graph = g
	c.state.Looked("graph", "graph", g == state.GraphOrders)
	c.sync()
	c.inquire(c.order())
	c.showGraphNow()
	c.measure()
	c.log.line("graph %d", int(g))
}

// fluxUnit is that of the plate's fluxes.
func fluxUnit(f raytrace.Field) string {
	if f.IsParallel() {
		return "intensity × M²"
	}
	return "intensity × sr"
}

// ordersGraph shows how the field's flux is shared among the orders; nil if
// the plate does not hold the orders.
func ordersGraph(f imaging.Frame) *graph.Graph {
	g := &graph.Graph{Title: "share of the flux in the picture, by order", XName: "order", YName: "share", LogY: true}
	shares := f.Plate.Flux // none where pixels are their middles
	for n := len(shares); n < f.Plate.Orders; n++ {
		values := f.Plate.Layer(raytrace.Intensity, n)
		if values == nil {
			return nil
		}
		flux := 0.
		for k, v := range values {
			flux += float64(v) * f.Of.SolidAngle(k%f.Plate.Columns, k/f.Plate.Columns)
		}
		shares = append(shares, flux)
	}
	sum := 0.
	for _, flux := range shares {
		sum += flux
	}
	if !(sum > 0) {
		return nil
	}
	c := graph.Curve{Step: true}
	for n := range shares {
		c.X = append(c.X, float64(n)-0.5)
		share := shares[n] / sum
		if share <= 0 {
			share = math.NaN()
		}
		c.Y = append(c.Y, share)
		g.Dots = append(g.Dots, graph.Dot{X: float64(n), Y: share, Name: fmt.Sprintf("%.3g", share)})
	}
	c.X = append(c.X, float64(len(shares))-0.5)
	g.Curves = []graph.Curve{c}
	g.X = &[2]float64{-0.5, float64(len(shares)) - 0.5}
	return g
}

func (c *commands) saveGraphCSV() {
	g := c.graph()
	if g == nil {
		c.view.setPicked("no graph to save")
		return
	}
	c.askPath("Save the graph's values", c.state.Suggested("-graph.csv"), func(path string) {
		c.written(path, func(w io.Writer) error {
			_, err := io.WriteString(w, g.CSV())
			return err
		})
	})
}

// Size of a saved graph: a column of a journal at 300 dpi. Taste.
const (
	savedGraphWidth  = 1040
	savedGraphHeight = 780
	savedGraphScale  = 3
)

func (c *commands) saveGraphPNG() {
	g := c.graph()
	if g == nil {
		c.view.setPicked("no graph to save")
		return
	}
	paint := graphPaint(savedGraphScale)
	paint.Ground, paint.Words, paint.Quiet, paint.Edge = color.NRGBA{0xff, 0xff, 0xff, 0xff}, light.words, light.words, light.words
	paint.Lines = light.lines
	c.askPath("Save the graph", c.state.Suggested("-graph.png"), func(path string) {
		plot, err := graph.Draw(*g, savedGraphWidth, savedGraphHeight, paint)
		if err == nil && plot != nil {
			c.written(path, func(w io.Writer) error { return png.Encode(w, image.Image(plot.Image)) })
		}
	})
}

// written writes a file and tells what has become of it.
func (c *commands) written(path string, write func(io.Writer) error) {
	if err := files.Write(context.Background(), path, newFileMode, write); err != nil {
		c.tell(err)
		return
	}
	c.view.setPicked("saved " + base(path))
	c.log.line("saved graph=%q", path)
}
