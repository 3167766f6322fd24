package verbs

import (
	"errors"
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace/measure"
)

func newLightcurve(s streams) *cobra.Command {
	var m measuring
	cmd := &cobra.Command{
		Use:   "lightcurve SCENE",
		Short: "follow the flux of a spot or a turning star, with light travel times",
		Long: "Prints t, flux, the flux of each image order and the centroid, at the times of the\n" +
			"scene's [time]; without any, over one period of the first spot or of the star. t is\n" +
			"t_obs - r*(r_obs) in M. Spots and disks are integrated over their whole images; a\n" +
			"star's fluxes are those in the field. JSON tells the\n" +
			"period, each order's amplitude (max - min)/(max + min) and its delay behind the\n" +
			"direct image, by cross-correlation over whole periods.",
		Example: "  " + programName() + " lightcurve @late-twin --set time.end=\"1 orbit\" -o curve.ecsv",
		Args:    takes(1, "one SCENE"),
		RunE:    func(cmd *cobra.Command, args []string) error { return lightcurve(cmd, s, m, args[0]) },
	}
	addMeasuring(cmd, &m)
	return cmd
}

func lightcurve(cmd *cobra.Command, s streams, m measuring, scenePath string) error {
	of, err := m.open(s, scenePath)
	if err != nil {
		return err
	}
	period := of.scene.Period()
	const samples = 100 // of a period
	times := of.scene.Times(samples)
	curve, err := measure.LightCurve(cmd.Context(), of.view, times, of.options)
	if err != nil {
		return err
	}
	perFlux, unit := janskys(of.view, of.scene)
	seconds, timed := of.scene.SecondsPerM()
	place, perPlace := "M", 1.0
	if !of.view.Field.IsParallel() {
		place, perPlace = "deg", 180/math.Pi
	}
	t := output.Table{Columns: []output.Column{{Name: "t", Unit: "M", Text: "t_obs - r*(r_obs)"}}}
	if timed {
		t.Columns = append(t.Columns, output.Column{Name: "t_s", Unit: "s", Text: "as observed"})
	}
	t.Columns = append(t.Columns, output.Column{Name: "flux", Unit: unit})
	for n := range curve[0].Orders {
		t.Columns = append(t.Columns, output.Column{Name: fmt.Sprintf("flux_%d", n), Unit: unit})
	}
	t.Columns = append(t.Columns, output.Column{Name: "flux_bound", Unit: unit}, output.Column{Name: "centroid_alpha", Unit: place}, output.Column{Name: "centroid_beta", Unit: place})
	for _, i := range curve {
		row := []any{i.T}
		if timed {
			row = append(row, i.T*seconds*(1+of.scene.Object.Redshift))
		}
		row = append(row, i.Flux*perFlux)
		for _, x := range i.Orders {
			row = append(row, x*perFlux)
		}
		t.Rows = append(t.Rows, append(row, i.Bound*perFlux, i.Centroid[0]*perPlace, i.Centroid[1]*perPlace))
	}
	orders, err := orderFindings(s, curve, period)
	if err != nil {
		return err
	}
	f := finding{table: t, fields: []field{
		{"scale", scaleOf(of.scene)}, {"period", number(orNaN(period))}, {"orders", orders}, {"rows", rowsOf(t)},
	}}
	return m.deliver(cmd, s, of, f)
}

func orNaN(x float64) float64 {
	if x == 0 {
		return math.NaN()
	}
	return x
}

// orderFindings are amplitude and echo of every order; an echo needs whole
// periods at even steps.
func orderFindings(s streams, curve []measure.Instant, period float64) ([]ordered, error) {
	series := make([][]float64, len(curve[0].Orders))
	for _, i := range curve {
		for n, x := range i.Orders {
			series[n] = append(series[n], x)
		}
	}
	whole := 0 // samples of the whole periods
	step := math.NaN()
	if len(curve) > 1 && period > 0 {
		step = curve[1].T - curve[0].T
		turns := math.Floor((curve[len(curve)-1].T-curve[0].T)/period*(1+1e-9) + 1e-9)
		if samples := turns * period / step; turns > 0 && math.Abs(samples-math.Round(samples)) < 1e-6*samples {
			whole = int(math.Round(period / step))
			if turns > 1 && math.Abs(period/step-float64(whole)) > 1e-6 {
				whole = int(math.Round(samples))
			}
		}
	}
	found := []ordered{}
	for n, x := range series {
		lo, hi := math.Inf(1), math.Inf(-1)
		for _, v := range x {
			lo, hi = min(lo, v), max(hi, v)
		}
		amplitude, delay := math.NaN(), math.NaN()
		if hi > 0 {
			amplitude = (hi - lo) / (hi + lo)
		}
		if n > 0 {
			var err error
			if whole == 0 {
				err = fmt.Errorf("%w because the times are not whole periods in even steps", measure.ErrCannot)
			} else {
				delay, err = measure.EchoDelay(series[0][:whole], x[:whole], step)
			}
			switch {
			case errors.Is(err, measure.ErrCannot):
				delay = math.NaN()
				s.note("delay of order %d: %v", n, err)
			case err != nil:
				return nil, err
			}
		}
		found = append(found, ordered{{"order", n}, {"amplitude", number(amplitude)}, {"delay", number(delay)}, {"delay_step", number(step)}})
	}
	return found, nil
}
