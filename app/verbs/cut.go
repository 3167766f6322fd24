package verbs

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace/measure"
)

func newCut(s streams) *cobra.Command {
	var m measuring
	var from, to string
	points := 1001
	angle := quantity{shown: "0", name: "deg", parse: parseFinite}
	cmd := &cobra.Command{
		Use:   "cut SCENE",
		Short: "trace intensity, g and order along a line across the image",
		Long: "Traces lines of sight evenly along a line of the screen, each for itself in\n" +
			"float64: distance, alpha, beta, intensity, and for every order its intensity, g and\n" +
			"r. The line goes across the field through its centre at a screen angle (degrees\n" +
			"counter-clockwise from right), or from one place to another. Coordinates are in M on\n" +
			"a parallel field, in degrees of the tangent plane on a perspective one.",
		Example: "  " + programName() + " cut @first-light --angle 90 -o cut.ecsv\n" +
			"  " + programName() + " cut scene.toml --from 4.9,0 --to 5.5,0 --points 2001",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if (from == "") != (to == "") || from != "" && angle.given {
				return refuse("cut needs either --angle, or --from and --to")
			}
			if points < 2 {
				return refuse("--points %d: allowed: 2 or more", points)
			}
			of, err := m.open(s, args[0])
			if err != nil {
				return err
			}
			f := of.view.Field
			perUnit, unit := screenUnit(f)
			var ends [2][2]float64
			if from == "" {
				sin, cos := math.Sincos(angle.value * math.Pi / 180)
				half := f.Width / 2 // to the frame, or as far as the shorter side
				if f.Rows < f.Columns {
					half *= float64(f.Rows) / float64(f.Columns)
				}
				ends = [2][2]float64{{f.Center[0] - half*cos, f.Center[1] - half*sin}, {f.Center[0] + half*cos, f.Center[1] + half*sin}}
			} else {
				for k, text := range []string{from, to} {
					if ends[k], err = parsePair([...]string{"--from", "--to"}[k], text); err != nil {
						return err
					}
					ends[k][0] *= perUnit
					ends[k][1] *= perUnit
				}
			}
			found, err := measure.Cut(cmd.Context(), of.view, ends[0], ends[1], points)
			if err != nil {
				return err
			}
			return m.deliver(cmd, s, of, finding{table: cutTable(found, perUnit, unit, of.view.Radiometry().Plate())})
		},
	}
	addMeasuring(cmd, &m)
	cmd.Flags().Var(&angle, "angle", "screen angle of a line through the field's centre")
	cmd.Flags().StringVar(&from, "from", "", "first place, `ALPHA,BETA`")
	cmd.Flags().StringVar(&to, "to", "", "last place, `ALPHA,BETA`")
	cmd.Flags().IntVar(&points, "points", points, "how many")
	return cmd
}

func cutTable(points []measure.CutPoint, perUnit float64, unit, intensityUnit string) output.Table {
	t := output.Table{Columns: []output.Column{
		{Name: "distance", Unit: unit}, {Name: "alpha", Unit: unit}, {Name: "beta", Unit: unit}, {Name: "intensity", Text: intensityUnit},
	}}
	for n := range points[0].Orders {
		t.Columns = append(t.Columns,
			output.Column{Name: fmt.Sprintf("intensity_%d", n), Text: intensityUnit},
			output.Column{Name: fmt.Sprintf("g_%d", n)}, output.Column{Name: fmt.Sprintf("r_%d", n), Unit: "M"})
	}
	for _, p := range points {
		row := []any{p.Distance / perUnit, p.Alpha / perUnit, p.Beta / perUnit, p.Intensity}
		for _, o := range p.Orders {
			row = append(row, o.Intensity, o.G, o.R)
		}
		t.Rows = append(t.Rows, row)
	}
	return t
}
