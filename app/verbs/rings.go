package verbs

import (
	"context"
	"errors"
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

func newRings(s streams) *cobra.Command {
	var m measuring
	var angles []string
	var which string
	var estimate bool
	cmd := &cobra.Command{
		Use:   "rings SCENE",
		Short: "measure the critical curve and the image orders of the disks",
		Long: "Prints, for every image order of every disk, diameters, width, area, flux and\n" +
			"flux-weighted delay; and for screen angles (degrees counter-clockwise from right)\n" +
			"where the images of the rims lie: rooted on traced paths, by closed form, and read\n" +
			"off the image with a bound. Lengths are in M; fluxes are integrals over the whole\n" +
			"image in M^2 (sr on an angular field), whatever the field shows. Width at 0 deg;\n" +
			"diameter_horizontal is 2 max|alpha|.",
		Example: "  " + programName() + " rings @first-light --json\n" +
			"  " + programName() + " rings scene.toml --at-angle 0 --at-angle 90 --table edges -o edges.ecsv",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return rings(cmd, s, m, angles, which, estimate, args[0])
		},
	}
	addMeasuring(cmd, &m)
	cmd.Flags().StringArrayVar(&angles, "at-angle", nil, "screen angle `DEG` of edges; repeatable (default 0, 90, 180, 270)")
	cmd.Flags().StringVar(&which, "table", "rings", "of CSV and ECSV: rings or edges; JSON holds both")
	cmd.Flags().BoolVar(&estimate, "estimate", false, "also read rings off the image, sharp and with telescope.beam, by every estimator (JSON)")
	return cmd
}

// estimates reads rings off the total intensity, sharp and blurred.
func estimates(ctx context.Context, of *measured, plate *raytrace.Plate) ([]ordered, error) {
	sharp, err := measure.NewImage(of.view.Field, plate.Total)
	if err != nil {
		return nil, err
	}
	images := map[string]*measure.Image{"sharp": sharp}
	if beam, ok := beamOf(of.scene); ok {
		if images["blurred"], err = sharp.Blurred(ctx, beam); err != nil {
			return nil, err
		}
	}
	theta, angular := of.scene.ThetaG()
	if !angular {
		theta = math.NaN()
	}
	found := []ordered{}
	for _, name := range []string{"sharp", "blurred"} {
		if images[name] == nil {
			continue
		}
		for _, e := range measure.Estimators() {
			r, err := images[name].Estimate(ctx, e)
			row := ordered{{"image", name}, {"estimator", string(e)}}
			switch {
			case errors.Is(err, measure.ErrCannot):
				found = append(found, append(row, field{"cannot", err.Error()}))
				continue
			case err != nil:
				return nil, err
			}
			found = append(found, append(row, ordered{
				{"diameter", number(r.Diameter)}, {"diameter_bound", number(r.Bound)}, {"diameter_uas", number(r.Diameter * theta)},
				{"width", number(r.Width)}, {"asymmetry", number(r.Asymmetry)},
				{"brightest_position_angle_deg", number(positionAngle(r.Brightest*180/math.Pi, of.scene))},
				{"central_depression", number(r.Depression)}, {"centre_alpha", number(r.Center[0])}, {"centre_beta", number(r.Center[1])},
			}...))
		}
	}
	return found, nil
}

func rings(cmd *cobra.Command, s streams, m measuring, texts []string, which string, estimate bool, scenePath string) error {
	if which != "rings" && which != "edges" {
		return refuse("--table %q: allowed: rings, edges", which)
	}
	if len(texts) == 0 {
		texts = []string{"0", "90", "180", "270"}
	}
	degrees := make([]float64, len(texts))
	angles := make([]float64, len(texts))
	for k, text := range texts {
		var err error
		if degrees[k], err = parseFinite(text); err != nil {
			return refuse("--at-angle %q: %w", text, err)
		}
		angles[k] = math.Remainder(degrees[k], 360) * math.Pi / 180
	}
	of, err := m.open(s, scenePath)
	if err != nil {
		return err
	}
	plate, err := of.view.Render(cmd.Context(), raytrace.Options{Workers: m.workers, Layers: []raytrace.Layer{raytrace.Radius}, Centres: true})
	if err != nil {
		return err
	}
	table, err := measure.NewRings(cmd.Context(), of.view, plate, of.options)
	if err != nil {
		return err
	}
	edges, err := measure.Edges(cmd.Context(), of.view, angles, plate)
	if err != nil {
		return err
	}
	ringTable := ringTable(table, of)
	edgeTable := edgeTable(edges, degrees, of.scene)
	f := finding{table: ringTable}
	if which == "edges" {
		f.table = edgeTable
	}
	f.fields = []field{
		{"units", ringUnits(ringTable, edgeTable)},
		{"scale", scaleOf(of.scene)},
		{"critical", ordered{
			{"b", number(table.Critical)}, {"closed_form", number(table.CriticalClosed)},
			{"difference", number(table.Critical - table.CriticalClosed)}, {"lyapunov", number(table.Lyapunov)},
		}},
		{"edges", rowsOf(edgeTable)},
		{"rings", ringObjects(ringTable)},
		{"inner_shadow", innerShadow(table, of.scene)},
		{"flux", number(table.Flux)}, {"flux_bound", number(table.Bound)}, {"flux_outside_field", number(table.Outside)},
		{"flux_outside_field_bound", number(table.OutsideBound)},
	}
	if estimate {
		found, err := estimates(cmd.Context(), of, plate)
		if err != nil {
			return err
		}
		f.fields = append(f.fields, field{"estimates", found})
	}
	return m.deliver(cmd, s, of, f)
}

// innerShadow is the outline of the direct image of the horizon, where a disk
// reaches it: Chael, Johnson & Lupsasca, ApJ 918, 6 (2021), from memory.
func innerShadow(t *measure.Rings, scene scenes.Scene) any {
	for _, r := range t.Rings {
		if e := scene.Emitters[r.Emitter]; r.Order == 0 && e.Inner.Name == "horizon" {
			return ordered{
				{"diameter_horizontal", number(r.Inner.Horizontal)}, {"diameter_vertical", number(r.Inner.Vertical)},
				{"mean_radius", number(r.Inner.MeanRadius)}, {"offset", number(r.Inner.Offset)},
			}
		}
	}
	return nil
}

// areaUnit is that of areas on the screen.
func areaUnit(v *raytrace.View) string {
	if v.Field.IsParallel() {
		return "M2"
	}
	return "sr"
}

// fluxUnit is that of integrals of the intensity over the screen.
func fluxUnit(v *raytrace.View) string {
	return fmt.Sprintf("%s x (%s)", areaUnit(v), v.Radiometry().Plate())
}

// ringTable has one row an order, the rims' outlines in columns.
func ringTable(t *measure.Rings, of *measured) output.Table {
	area := areaUnit(of.view)
	columns := []output.Column{
		{Name: "emitter", Kind: output.Int, Text: "number in the scene, from 1"}, {Name: "order", Kind: output.Int},
		{Name: "flux", Unit: area, Text: "integral of the intensity"}, {Name: "flux_bound", Unit: area}, {Name: "flux_fraction"}, {Name: "flux_outside_field", Unit: area}, {Name: "flux_outside_field_bound", Unit: area},
		{Name: "area", Unit: area}, {Name: "area_bound", Unit: area}, {Name: "int_g3", Unit: area}, {Name: "int_g3_bound", Unit: area}, {Name: "int_g4", Unit: area}, {Name: "int_g4_bound", Unit: area},
		{Name: "mean_delay", Unit: "M", Text: "flux-weighted"}, {Name: "mean_delay_bound", Unit: "M"}, {Name: "width", Unit: "M", Text: "at screen angle 0"}, {Name: "width_ratio"}, {Name: "flux_ratio"},
	}
	theta, angular := of.scene.ThetaG()
	angular = angular && of.view.Field.IsParallel() && math.IsInf(of.view.Observer.Radius, 1)
	for _, rim := range []string{"inner", "outer"} {
		for _, name := range outlineNames {
			columns = append(columns, output.Column{Name: rim + "_" + name, Unit: "M"})
		}
		if angular {
			columns = append(columns, output.Column{Name: rim + "_diameter_horizontal_uas", Unit: "uas"}, output.Column{Name: rim + "_diameter_vertical_uas", Unit: "uas"})
		}
	}
	table := output.Table{Columns: columns}
	for _, r := range t.Rings {
		row := []any{
			r.Emitter + 1, r.Order, r.Flux, r.FluxBound, r.Fraction, r.Outside, r.OutsideBound, r.Area, r.AreaBound, r.IntG3, r.IntG3Bound, r.IntG4, r.IntG4Bound,
			r.MeanDelay, r.DelayBound, r.Width, r.WidthRatio, r.FluxRatio,
		}
		for _, o := range []measure.Outline{r.Inner, r.Outer} {
			row = append(row, o.Horizontal, o.Vertical, o.MeanRadius, o.Offset,
				o.MeasuredHorizontal, o.MeasuredHorizontalBound, o.MeasuredVertical, o.MeasuredVerticalBound)
			if angular {
				row = append(row, o.Horizontal*theta, o.Vertical*theta)
			}
		}
		table.Rows = append(table.Rows, row)
	}
	return table
}

var outlineNames = []string{
	"diameter_horizontal", "diameter_vertical", "mean_radius", "offset",
	"measured_diameter_horizontal", "measured_diameter_horizontal_bound", "measured_diameter_vertical", "measured_diameter_vertical_bound",
}

// ringObjects gathers the columns of each rim into one object.
func ringObjects(t output.Table) []ordered {
	rows := rowsOf(t)
	for k, row := range rows {
		nested := ordered{}
		rims := map[string]*ordered{"inner_": {}, "outer_": {}}
		for _, f := range row {
			prefix := f.name[:min(len("inner_"), len(f.name))]
			if rim := rims[prefix]; rim != nil {
				*rim = append(*rim, field{f.name[len(prefix):], f.value})
				continue
			}
			nested = append(nested, f)
		}
		rows[k] = append(nested, field{"inner", *rims["inner_"]}, field{"outer", *rims["outer_"]})
	}
	return rows
}

func edgeTable(edges []measure.Edge, degrees []float64, scene scenes.Scene) output.Table {
	t := output.Table{Columns: []output.Column{
		{Name: "emitter", Kind: output.Int, Text: "number in the scene, from 1"}, {Name: "order", Kind: output.Int},
		{Name: "at_angle_deg", Unit: "deg", Text: "on the screen, counter-clockwise from right"},
		{Name: "position_angle_deg", Unit: "deg", Text: "from north through east"},
		{Name: "edge", Kind: output.Text, Text: "image of the inner or outer rim"},
		{Name: "b", Unit: "M", Text: "rooted on traced paths"}, {Name: "closed_form_b", Unit: "M"},
		{Name: "measured_b", Unit: "M", Text: "read off the image"}, {Name: "measured_b_bound", Unit: "M"},
	}}
	for k, e := range edges {
		name := "inner"
		if e.Outer {
			name = "outer"
		}
		at := degrees[k/2%len(degrees)]
		t.Rows = append(t.Rows, []any{
			e.Emitter + 1, e.Order, at, positionAngle(at, scene), name, e.Impact, e.Closed, e.Measured, e.MeasuredBound,
		})
	}
	return t
}

// positionAngle of a screen angle, degrees in [0, 360): up is the disk axis.
func positionAngle(screenDeg float64, scene scenes.Scene) float64 {
	angle := math.Mod(scene.Observer.PositionAngle+screenDeg-90, 360)
	if angle < 0 {
		angle += 360
	}
	return angle
}

// ringUnits are those of everything in the document.
func ringUnits(tables ...output.Table) map[string]string {
	units := map[string]string{"critical": "M", "lyapunov": "1", "inner_shadow": "M"}
	for _, t := range tables {
		for _, c := range t.Columns {
			switch {
			case c.Unit != "":
				units[c.Name] = c.Unit
			case c.Kind != output.Text:
				units[c.Name] = "1"
			}
		}
	}
	for _, name := range outlineNames {
		units[name] = "M"
	}
	for name, unit := range map[string]string{
		"diameter": "M", "diameter_bound": "M", "diameter_uas": "uas", "asymmetry": "1", "brightest_position_angle_deg": "deg",
		"central_depression": "1", "centre_alpha": "M", "centre_beta": "M",
	} {
		units[name] = unit
	}
	if _, ok := units["inner_diameter_horizontal_uas"]; ok {
		units["diameter_horizontal_uas"], units["diameter_vertical_uas"] = "uas", "uas"
	}
	return units
}
