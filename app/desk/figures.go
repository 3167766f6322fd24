package desk

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"slices"
	"strconv"
	"strings"

	"fyne.io/fyne/v2"
	"fyne.io/fyne/v2/dialog"
	"fyne.io/fyne/v2/widget"

	"annulet/app/desk/state"
	"annulet/app/figure"
	"annulet/app/files"
	"annulet/app/output"
	"annulet/raytrace"
	"annulet/scenes"
)

// graphPanels are the panels of figures that show what graphs do.
var graphPanels = map[state.Graph]string{
	state.GraphPath: "path", state.GraphCut: "cut", state.GraphLine: "line", state.GraphSpectrum: "spectrum",
	state.GraphVisibility: "visibility", state.GraphLightCurve: "light-curve",
}

// layerWords are the figures' names of layers.
var layerWords = map[raytrace.Layer]string{
	raytrace.Intensity: "intensity", raytrace.Redshift: "g", raytrace.Radius: "r",
	raytrace.Azimuth: "phi", raytrace.Delay: "delay", raytrace.Mu: "mu",
}

// saveImageFigure asks where to save a figure: the scene's first, or else the
// image as it is shown.
func (c *commands) saveImageFigure() {
	scene := c.state.Scene()
	f := scenes.PlainFigure()
	if len(scene.Figures) > 0 {
		f = scene.Figures[0]
	} else {
		look := c.state.Look
		f.Layers = []string{layerWords[look.Layer]}
		if look.Order != state.AllOrders {
			f.Orders = []string{strconv.Itoa(look.Order)}
		}
		for _, over := range []struct {
			on   bool
			word string
		}{
			{look.Overlays.Critical, "critical"}, {look.Overlays.Rims, "edges"}, {look.Overlays.Beam, "beam"},
			{look.Overlays.Scale, "scale"}, {look.Overlays.North, "north"},
		} {
			if over.on {
				f.Draw = append(f.Draw, over.word)
			}
		}
	}
	c.askPath("Save a figure of the image", c.state.Suggested(".pdf"), func(path string) { c.saveFigureTo(path, f) })
}

// saveGraphFigure asks where to save a figure of the graph.
func (c *commands) saveGraphFigure() {
	word, known := graphPanels[c.state.Look.Graph]
	if !known {
		c.view.setPicked("there is no figure of this graph")
		return
	}
	f := scenes.PlainFigure()
	f.Panels = []string{word}
	c.askPath("Save a figure of the graph", c.state.Suggested("-"+word+".pdf"), func(path string) { c.saveFigureTo(path, f) })
}

// saveFigureTo draws a figure and writes it with its caption beside it; the
// extension chooses the format.
func (c *commands) saveFigureTo(path string, f scenes.Figure) {
	if extension := strings.ToLower(filepath.Ext(path)); !slices.Contains(figure.Formats, extension) {
		c.tell(fmt.Errorf("%s: extension %q is not that of a figure; allowed: %s", path, extension, strings.Join(figure.Formats, ", ")))
		return
	}
	caption := figure.CaptionPath(path)
	document, err := scenes.Parse(filepath.Join(c.state.Folder(), c.state.Label()), c.state.Text())
	if err == nil {
		err = errors.Join(files.CheckWritable(path), files.CheckWritable(caption))
	}
	if err != nil {
		c.tell(err)
		return
	}
	ctx, cancel := context.WithCancel(context.Background())
	waiting := dialog.NewCustom("Drawing "+filepath.Base(path), "Stop", widget.NewProgressBarInfinite(), c.window)
	waiting.SetOnClosed(cancel)
	waiting.Show()
	request := figure.Request{Document: document, Figure: f, Workers: measureWorkers().Workers}
	go func() {
		made, err := figure.Make(ctx, request)
		if err == nil {
			err = files.Write(ctx, path, newFileMode, func(w io.Writer) error {
				return made.Write(w, path, made.Provenance(document, output.Version))
			})
		}
		if err == nil {
			err = files.Write(ctx, caption, newFileMode, func(w io.Writer) error {
				_, err := io.WriteString(w, made.Caption)
				return err
			})
		}
		fyne.Do(func() { // once a save: no need of the funnel
			waiting.Hide()
			switch {
			case errors.Is(err, context.Canceled):
			case err != nil:
				c.tell(err)
			default:
				c.view.setPicked(fmt.Sprintf("saved %s, %.0f × %.0f mm, and a draft of its caption", filepath.Base(path), made.Width, made.Height))
				c.log.line("saved figure=%q", path)
			}
		})
	}()
}
