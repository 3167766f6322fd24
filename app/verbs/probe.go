package verbs

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"math"
	"strings"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace"
)

// probing is what the flags of probe say.
type probing struct {
	set   []string
	at    []string
	table string
	out   string
	json  bool
}

func newProbe(s streams) *cobra.Command {
	var o probing
	cmd := &cobra.Command{
		Use:   "probe SCENE",
		Short: "list what lines of sight meet",
		Long: "Follows lines of sight, given by their screen coordinates, and prints one row\n" +
			"a crossing with what shines, in the order of the path: alpha,beta,order,r,\n" +
			"phi_deg,ell,g,mu,delay,intensity. Alpha (to the right) and beta (up) are in M on\n" +
			"a parallel field; on a perspective one in degrees of the tangent plane, where a\n" +
			"direction at angle a from the centre lies at (180/pi) tan a. r and delay are in\n" +
			"M, ell = Lz/E in M. Every line of sight is traced for itself in float64, not read\n" +
			"from an image.",
		Example: "  " + programName() + " probe @first-light --at -8,0 --at 8,0\n" +
			"  " + programName() + " probe scene.toml --table points.csv --json",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return probe(cmd, s, o, args[0]) },
	}
	f := cmd.Flags()
	f.StringArrayVar(&o.at, "at", nil, "a line of sight, `ALPHA,BETA`; repeatable")
	f.StringVar(&o.table, "table", "", "CSV `FILE` with the columns alpha,beta, - for standard input")
	addSet(f, &o.set)
	f.StringVarP(&o.out, "output", "o", "", "CSV or ECSV `FILE` for the rows, with units and the scene")
	f.BoolVar(&o.json, "json", false, "print one JSON document on stdout")
	return cmd
}

// parsePair reads two numbers, such as ALPHA,BETA, of a flag.
func parsePair(flag, text string) (at [2]float64, err error) {
	alpha, beta, ok := strings.Cut(text, ",")
	if !ok {
		return at, refuse("%s %q: allowed: two numbers with a comma, as in -8,0.5", flag, text)
	}
	for k, part := range []string{alpha, beta} {
		if at[k], err = parseFinite(part); err != nil {
			return at, refuse("%s %q: %w", flag, text, err)
		}
	}
	return at, nil
}

// readAt reads the columns alpha,beta of a table.
func readAt(path string, stdin io.Reader) ([][2]float64, error) {
	names := []string{"alpha", "beta"}
	t, err := openTable(path, stdin, names, nil)
	if err != nil {
		return nil, err
	}
	defer t.close()
	var points [][2]float64
	for {
		fields, line, err := t.next()
		if errors.Is(err, io.EOF) {
			return points, nil
		}
		if err != nil {
			return nil, err
		}
		var at [2]float64
		for k, name := range names {
			if at[k], err = parseFinite(t.field(fields, name)); err != nil {
				return nil, t.wrong(line, name, err)
			}
		}
		points = append(points, at)
	}
}

// probeRow is one crossing as it is printed.
type probeRow struct {
	Alpha     number `json:"alpha"`
	Beta      number `json:"beta"`
	Order     int    `json:"order"`
	R         number `json:"r"`
	PhiDeg    number `json:"phi_deg"`
	Ell       number `json:"ell"`
	G         number `json:"g"`
	Mu        number `json:"mu"`
	Delay     number `json:"delay"`
	Intensity number `json:"intensity"`
}

const probeHeader = "alpha,beta,order,r,phi_deg,ell,g,mu,delay,intensity"

func (r probeRow) csv() string {
	return strings.Join([]string{
		r.Alpha.csv(), r.Beta.csv(), fmt.Sprint(r.Order), r.R.csv(), r.PhiDeg.csv(),
		r.Ell.csv(), r.G.csv(), r.Mu.csv(), r.Delay.csv(), r.Intensity.csv(),
	}, ",")
}

func probe(cmd *cobra.Command, s streams, o probing, scenePath string) error {
	given := cmd.Flags().Changed("table")
	if given == (len(o.at) > 0) {
		return refuse("probe needs lines of sight: either --at or --table")
	}
	var points [][2]float64
	var err error
	if given {
		points, err = readAt(o.table, s.in)
	}
	for _, text := range o.at {
		var at [2]float64
		if at, err = parsePair("--at", text); err != nil {
			break
		}
		points = append(points, at)
	}
	if err != nil {
		return err
	}
	document, err := s.loadScene(scenePath, o.set)
	if err != nil {
		return err
	}
	if o.out != "" {
		if err := checkTable(o.out); err != nil {
			return err
		}
	}
	view, err := raytrace.NewViewIn(document.Scene(), document.Dir())
	if err != nil {
		return usage{err}
	}

	perUnit, unit := screenUnit(view.Field)
	var rows []probeRow
	err = inOrder(cmd.Context(), points, 0, func(some [][2]float64) ([]probeRow, error) {
		inside := make([][2]float64, len(some))
		for k, at := range some {
			inside[k] = [2]float64{at[0] * perUnit, at[1] * perUnit}
		}
		readings, err := view.Probe(cmd.Context(), inside)
		return probeRows(readings, some, inside), err
	}, func(some []probeRow) error {
		rows = append(rows, some...)
		return nil
	})
	if err != nil {
		return err
	}
	if len(rows) == 0 {
		s.note("no line of sight meets anything that shines")
	}
	if o.out != "" {
		if err := writeTable(cmd.Context(), o.out, probeTable(rows, unit), output.NewProvenance(document, Version, nil)); err != nil {
			return err
		}
		s.note("%s", output.NotIncludedLine(output.NotIncludedIn(document.Scene())))
		_, err := fmt.Fprintln(s.out, o.out)
		return err
	}
	if o.json {
		if rows == nil {
			rows = []probeRow{}
		}
		return writeJSON(s.out, struct {
			Units       map[string]string `json:"units"`
			Rows        []probeRow        `json:"rows"`
			NotIncluded []string          `json:"not_included"`
		}{map[string]string{
			"alpha": unit, "beta": unit, "r": "M", "phi_deg": "deg", "ell": "M",
			"g": "1", "mu": "1", "delay": "M", "intensity": view.Radiometry().Plate(),
		}, rows, output.NotIncludedIn(document.Scene())})
	}
	out := bufio.NewWriter(s.out)
	fmt.Fprintln(out, probeHeader)
	for _, r := range rows {
		fmt.Fprintln(out, r.csv())
	}
	if err := out.Flush(); err != nil {
		return err
	}
	s.note("%s", output.NotIncludedLine(output.NotIncludedIn(document.Scene())))
	return nil
}

// probeRows puts readings into the units of the output. The coordinates are
// given back as they came, not converted there and back.
func probeRows(readings []raytrace.Reading, points, inside [][2]float64) []probeRow {
	rows := make([]probeRow, 0, len(readings))
	k := 0
	for _, r := range readings {
		for k < len(inside)-1 && inside[k] != [2]float64{r.Alpha, r.Beta} {
			k++
		}
		rows = append(rows, probeRow{
			Alpha: number(points[k][0]), Beta: number(points[k][1]), Order: r.Order,
			R: number(r.R), PhiDeg: number(r.Phi * 180 / math.Pi), Ell: number(r.Ell),
			G: number(r.G), Mu: number(r.Mu), Delay: number(r.Delay), Intensity: number(r.Intensity),
		})
	}
	return rows
}

// probeTable is the same for a file; screen is the unit of alpha and beta.
func probeTable(rows []probeRow, screen string) output.Table {
	t := output.Table{Columns: []output.Column{
		{Name: "alpha", Unit: screen, Text: "screen coordinate, to the right"}, {Name: "beta", Unit: screen, Text: "screen coordinate, up"},
		{Name: "order", Kind: output.Int, Text: "image order"}, {Name: "r", Unit: "M", Text: "circumferential radius"},
		{Name: "phi_deg", Unit: "deg", Text: "azimuth about the disk axis"}, {Name: "ell", Unit: "M", Text: "Lz/E of the light"},
		{Name: "g", Text: "redshift factor nu_obs/nu_em"}, {Name: "mu", Text: "cosine of the emission angle in the gas frame"},
		{Name: "delay", Unit: "M", Text: "t_obs - t_em - r*(r_obs)"}, {Name: "intensity", Text: "received, relative to the emitter's own unit"},
	}}
	for _, r := range rows {
		t.Rows = append(t.Rows, []any{
			float64(r.Alpha), float64(r.Beta), r.Order, float64(r.R), float64(r.PhiDeg), float64(r.Ell),
			float64(r.G), float64(r.Mu), float64(r.Delay), float64(r.Intensity),
		})
	}
	return t
}
