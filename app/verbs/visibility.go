package verbs

import (
	"errors"
	"fmt"
	"io"
	"math"
	"math/cmplx"
	"strings"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// looking is what the flags of visibility say.
type looking struct {
	measuring
	angle         quantity
	to            quantity
	steps         int
	uv, triangles string
	grid, orders  bool
	exact         bool
}

func newVisibility(s streams) *cobra.Command {
	o := looking{angle: quantity{shown: "0", name: "deg", parse: parseFinite}, to: quantity{shown: "five times 1/(the critical curve's diameter)", name: "Glambda", parse: parsePositive}, steps: defaultSteps}
	cmd := &cobra.Command{
		Use:   "visibility SCENE",
		Short: "Fourier transform a scene's image, as an interferometer sees it",
		Long: "Prints V = integral I exp(-2 pi i (u l + v m)), l east and m north, in Glambda:\n" +
			"u,v,re,im,amplitude,phase (deg). Along a position angle, at the places of a CSV, or\n" +
			"on a map; or closure phases of triangles, whose third side closes them. Sums are\n" +
			"over the field's pixels (the map's by Fourier transform), with the response of the\n" +
			"pixels divided out; the centre of phase is the object. V is in M^2 of the\n" +
			"intensity. JSON along a line lists the minima of the amplitude. The scene needs\n" +
			"mass and distance, or theta_g. Without a choice, its telescope.uv tells the places.",
		Example: "  " + programName() + " visibility @first-light --position-angle 90 --to 12 --orders\n" +
			"  " + programName() + " visibility scene.toml --uv uv.csv -o v.ecsv",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return visibility(cmd, s, o, args[0]) },
	}
	addMeasuring(cmd, &o.measuring)
	f := cmd.Flags()
	f.Var(&o.angle, "position-angle", "of the baselines, from north through east")
	f.Var(&o.to, "to", "longest baseline")
	f.IntVar(&o.steps, "steps", o.steps, "between 0 and the longest baseline")
	f.StringVar(&o.uv, "uv", "", "CSV `FILE` with the columns u,v [Glambda], - for standard input")
	f.StringVar(&o.triangles, "triangles", "", "CSV `FILE` with the columns u1,v1,u2,v2 [Glambda]: closure phases")
	f.BoolVar(&o.grid, "map", false, "a square grid up to the longest baseline")
	f.BoolVar(&o.orders, "orders", false, "also the amplitude of each image order")
	f.BoolVar(&o.exact, "exact", false, "integrate the disks' whole images instead of the field's pixels; baselines may be long")
	return cmd
}

// defaultSteps is how many lie between no baseline and the longest. Taste.
const defaultSteps = 200

// parsePositive reads a number above 0.
func parsePositive(text string) (float64, error) {
	x, err := parseFinite(text)
	if err == nil && !(x > 0) {
		err = fmt.Errorf("%s is out of range; allowed: above 0", number(x).csv())
	}
	return x, err
}

// sky turns baselines on the sky into frequencies of the screen.
type sky struct {
	perGlambda float64 // cycles per M
	sin, cos   float64 // of the position angle of up
}

func newSkyFrame(s scenes.Scene) (sky, bool) {
	theta, ok := s.ThetaG()
	sin, cos := math.Sincos(s.Observer.PositionAngle * math.Pi / 180)
	return sky{1e9 * theta / scenes.MicroarcsecondsPerRadian, sin, cos}, ok
}

// screen: l = -α cos p + β sin p east, m = α sin p + β cos p north.
func (k sky) screen(u, v float64) (alpha, beta float64) {
	return k.perGlambda * (v*k.sin - u*k.cos), k.perGlambda * (u*k.sin + v*k.cos)
}

func (k sky) baseline(alpha, beta float64) (u, v float64) {
	return (beta*k.sin - alpha*k.cos) / k.perGlambda, (alpha*k.sin + beta*k.cos) / k.perGlambda
}

func visibility(cmd *cobra.Command, s streams, o looking, scenePath string) error {
	ways := 0
	for _, way := range []bool{o.angle.given, o.uv != "", o.triangles != "", o.grid} {
		if way {
			ways++
		}
	}
	switch {
	case ways > 1:
		return refuse("visibility needs one of --position-angle, --uv, --triangles, --map")
	case o.exact && (o.grid || o.triangles != ""):
		return refuse("--exact goes with --position-angle or --uv, not with --map or --triangles")
	case o.steps < 2 || o.steps > 1_000_000:
		return refuse("--steps %d: allowed: 2 to 1000000", o.steps)
	}
	of, err := o.open(s, scenePath)
	if err != nil {
		return err
	}
	frame, ok := newSkyFrame(of.scene)
	if !ok {
		return refuse("visibility needs the angular scale: object.mass and object.distance, or object.theta_g")
	}
	if uv := of.scene.Telescope.UV; uv != "" && ways == 0 && !o.to.given {
		o.uv = scenes.FilePath(of.document.Dir(), uv)
	}
	var places [][2]float64 // Glambda
	if o.uv != "" {
		if places, err = readColumns(o.uv, s.in, "u", "v"); err != nil {
			return err
		}
	}
	var corners [][2]float64
	if o.triangles != "" {
		if corners, err = readColumns(o.triangles, s.in, "u1", "v1", "u2", "v2"); err != nil {
			return err
		}
	}
	object, err := raytrace.NewObject(of.scene.Object)
	if err != nil {
		return err
	}
	most := 5 / (2 * object.CriticalImpact() * frame.perGlambda)
	if o.to.given {
		most = o.to.value
	}
	line := o.uv == "" && !o.grid && o.triangles == ""
	if line {
		sin, cos := math.Sincos(o.angle.value * math.Pi / 180)
		for k := range o.steps + 1 {
			x := most * float64(k) / float64(o.steps)
			places = append(places, [2]float64{x * sin, x * cos})
		}
	}
	if o.exact {
		return o.wholeDisks(cmd, s, of, frame, places)
	}
	layers := []raytrace.Layer{}
	if o.orders {
		layers = append(layers, raytrace.Intensity)
	}
	plate, err := of.view.Render(cmd.Context(), raytrace.Options{Workers: o.workers, Layers: layers})
	if err != nil {
		return err
	}
	images, err := o.images(of.view, plate)
	if err != nil {
		return err
	}
	if corners != nil {
		return o.closures(cmd, s, of, images[0], frame, corners)
	}
	var rows [][]measure.Visibility
	for _, m := range images {
		var found []measure.Visibility
		if o.grid {
			found, err = gridOf(cmd, m, most*frame.perGlambda)
		} else {
			found, err = at(cmd, m, frame, places)
		}
		if err != nil {
			return err
		}
		rows = append(rows, found)
	}
	if o.grid {
		places = places[:0]
		for _, v := range rows[0] {
			u, w := frame.baseline(v.U, v.V)
			places = append(places, [2]float64{u, w})
		}
	}
	t := visibilityTable(places, rows)
	f := finding{table: t, fields: []field{{"scale", scaleOf(of.scene)}, {"flux", number(real(images[0].Visibility(0, 0)))}}}
	if line {
		alpha, beta := frame.screen(math.Sin(o.angle.value*math.Pi/180), math.Cos(o.angle.value*math.Pi/180))
		nulls, err := images[0].Nulls(cmd.Context(), math.Atan2(beta, alpha), most*frame.perGlambda, o.steps)
		if err != nil {
			return err
		}
		listed := []ordered{}
		for _, n := range nulls {
			listed = append(listed, ordered{{"baseline", number(n.Baseline / frame.perGlambda)}, {"amplitude_fraction", number(n.Amplitude)}})
		}
		f.fields = append(f.fields, field{"minima", listed})
	}
	f.fields = append(f.fields, field{"rows", rowsOf(t)})
	return o.deliver(cmd, s, of, f)
}

// wholeDisks sums over no pixels.
func (o looking) wholeDisks(cmd *cobra.Command, s streams, of *measured, frame sky, places [][2]float64) error {
	screen := make([][2]float64, len(places))
	for k, p := range places {
		screen[k][0], screen[k][1] = frame.screen(p[0], p[1])
	}
	orders, err := measure.DiskVisibilities(cmd.Context(), of.view, screen, of.options)
	if err != nil {
		return err
	}
	total := make([]measure.Visibility, len(places))
	for _, order := range orders {
		for k, v := range order {
			total[k].Value += v.Value
		}
	}
	rows := [][]measure.Visibility{total}
	if o.orders {
		rows = append(rows, orders...)
	}
	t := visibilityTable(places, rows)
	return o.deliver(cmd, s, of, finding{table: t, fields: []field{{"scale", scaleOf(of.scene)}, {"rows", rowsOf(t)}}})
}

// images are the total and, if asked for, every order.
func (o looking) images(view *raytrace.View, plate *raytrace.Plate) ([]*measure.Image, error) {
	total, err := measure.NewImage(view.Field, plate.Total)
	if err == nil {
		err = total.Check()
	}
	if err != nil {
		return nil, err
	}
	all := []*measure.Image{total}
	for n := 0; o.orders && n < plate.Orders; n++ {
		m, err := measure.NewImage(view.Field, plate.Layer(raytrace.Intensity, n))
		if err != nil {
			return nil, err
		}
		all = append(all, m)
	}
	return all, nil
}

// at sums directly; places are in Glambda.
func at(cmd *cobra.Command, m *measure.Image, frame sky, places [][2]float64) ([]measure.Visibility, error) {
	screen := make([][2]float64, len(places))
	for k, p := range places {
		screen[k][0], screen[k][1] = frame.screen(p[0], p[1])
		if max(math.Abs(screen[k][0]), math.Abs(screen[k][1])) > m.Nyquist() {
			return nil, fmt.Errorf("%w because at u = %.4g, v = %.4g Glambda the fringes are finer than the pixels tell, %.4g Glambda; take more pixels or a narrower field",
				measure.ErrCannot, p[0], p[1], m.Nyquist()/frame.perGlambda)
		}
	}
	return m.Visibilities(cmd.Context(), screen)
}

// gridOf transforms.
func gridOf(cmd *cobra.Command, m *measure.Image, most float64) ([]measure.Visibility, error) {
	grid, err := m.VisibilityMap(cmd.Context(), most, 1)
	if err != nil {
		return nil, err
	}
	found := make([]measure.Visibility, len(grid.Values))
	for k, v := range grid.Values {
		found[k] = measure.Visibility{
			U: float64(k%grid.Columns-grid.Columns/2) * grid.Step, V: float64(k/grid.Columns-grid.Rows/2) * grid.Step, Value: v,
		}
	}
	return found, nil
}

func visibilityTable(places [][2]float64, rows [][]measure.Visibility) output.Table {
	const unit = "M2"
	t := output.Table{Columns: []output.Column{
		{Name: "u", Unit: "Glambda", Text: "east, 1e9 wavelengths"}, {Name: "v", Unit: "Glambda", Text: "north, 1e9 wavelengths"},
		{Name: "re", Unit: unit}, {Name: "im", Unit: unit}, {Name: "amplitude", Unit: unit}, {Name: "phase", Unit: "deg"},
	}}
	for n := range rows[1:] {
		t.Columns = append(t.Columns, output.Column{Name: fmt.Sprintf("amplitude_%d", n), Unit: unit})
	}
	for k, p := range places {
		v := rows[0][k].Value
		row := []any{p[0], p[1], real(v), imag(v), cmplx.Abs(v), cmplx.Phase(v) * 180 / math.Pi}
		for _, order := range rows[1:] {
			row = append(row, cmplx.Abs(order[k].Value))
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}

// closures prints the closure phases of triangles: corners holds two sides
// of each.
func (o looking) closures(cmd *cobra.Command, s streams, of *measured, m *measure.Image, frame sky, corners [][2]float64) error {
	var places [][2]float64
	for k := 0; k < len(corners); k += 2 {
		a, b := corners[k], corners[k+1]
		places = append(places, a, b, [2]float64{-a[0] - b[0], -a[1] - b[1]})
	}
	found, err := at(cmd, m, frame, places)
	if err != nil {
		return err
	}
	t := output.Table{Columns: []output.Column{
		{Name: "u1", Unit: "Glambda"}, {Name: "v1", Unit: "Glambda"}, {Name: "u2", Unit: "Glambda"}, {Name: "v2", Unit: "Glambda"},
		{Name: "closure_phase", Unit: "deg"},
	}}
	for k := 0; k < len(found); k += 3 {
		phase := measure.ClosurePhase(found[k].Value, found[k+1].Value, found[k+2].Value)
		t.Rows = append(t.Rows, []any{places[k][0], places[k][1], places[k+1][0], places[k+1][1], phase * 180 / math.Pi})
	}
	return o.deliver(cmd, s, of, finding{table: t})
}

// readColumns reads pairs of columns of a table, row by row.
func readColumns(path string, stdin io.Reader, names ...string) ([][2]float64, error) {
	t, err := openTable(path, stdin, names, nil)
	if err != nil {
		return nil, err
	}
	defer t.close()
	var pairs [][2]float64
	for {
		fields, line, err := t.next()
		if errors.Is(err, io.EOF) {
			if pairs == nil {
				return nil, refuse("%s has no rows under %s", t.name, strings.Join(names, ","))
			}
			return pairs, nil
		}
		if err != nil {
			return nil, err
		}
		for k := 0; k < len(names); k += 2 {
			var pair [2]float64
			for i := range pair {
				if pair[i], err = parseFinite(t.field(fields, names[k+i])); err != nil {
					return nil, t.wrong(line, names[k+i], err)
				}
			}
			pairs = append(pairs, pair)
		}
	}
}
