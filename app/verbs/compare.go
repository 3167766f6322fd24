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

// comparing is what the flags of compare say.
type comparing struct {
	measuring
	diameter, estimator string
	spread              bool
}

const (
	notATest = "not a test: rings are not the critical curve"
	assumed  = "Assumed: the scene's emission, inclination and beam as they are; only the angular scale GM/(c2 D) is set against the measurement, and nothing is fitted. The measured diameter must come from the same estimator at the same resolution."
)

func newCompare(s streams) *cobra.Command {
	var c comparing
	cmd := &cobra.Command{
		Use:   "compare SCENE",
		Short: "hold the diameter of a scene's ring against a measured one",
		Long: "Blurs the scene's image with telescope.beam, reads the ring off it with the same\n" +
			"estimator as the measurement, and reports the model's and the measured diameter,\n" +
			"the GM/(c2 D) that the measurement implies for this model, and how many sigma\n" +
			"they differ with the errors of the scale included. The scene needs mass and\n" +
			"distance, or theta_g. Estimators: ridge, flux-weighted, annulus-fit.\n" + assumed,
		Example: "  " + programName() + " compare @first-light --diameter \"40 +- 3 uas\" --estimator annulus-fit\n" +
			"  " + programName() + " compare scene.toml --spread --json",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return compare(cmd, s, c, args[0]) },
	}
	addMeasuring(cmd, &c.measuring)
	cmd.Flags().StringVar(&c.diameter, "diameter", "", "measured `DIAMETER`, \"42 +- 3 uas\" (default measured.ring_diameter)")
	cmd.Flags().StringVar(&c.estimator, "estimator", "", "of the measurement (default measured.estimator)")
	cmd.Flags().BoolVar(&c.spread, "spread", false, "also the range of the model's diameter over inner rims isco and horizon and index 1 to 5")
	return cmd
}

func compare(cmd *cobra.Command, s streams, c comparing, scenePath string) error {
	if c.diameter != "" {
		c.set = append(c.set, "measured.ring_diameter="+c.diameter)
	}
	if c.estimator != "" {
		c.set = append(c.set, "measured.estimator="+c.estimator)
	}
	of, err := c.open(s, scenePath)
	if err != nil {
		return err
	}
	given := of.scene.Measured
	switch {
	case !given.RingDiameter.Given:
		return refuse("compare needs a measured diameter: --diameter \"42 +- 3 uas\", or measured.ring_diameter in the scene")
	case given.Estimator == "":
		return refuse("compare needs the measurement's estimator: --estimator ridge, flux-weighted or annulus-fit, or measured.estimator in the scene")
	}
	estimator := measure.Estimator(given.Estimator)
	scale, ok := angularScale(of.scene)
	if !ok {
		return refuse("compare needs the angular scale: object.mass and object.distance, or object.theta_g")
	}
	estimate, err := ringOf(cmd.Context(), of.view, of.scene, c.workers, estimator)
	if err != nil {
		return err
	}
	object, err := raytrace.NewObject(of.scene.Object)
	if err != nil {
		return err
	}
	critical := math.NaN()
	if object.PhotonSphere() > object.Edge() {
		critical = 2 * object.CriticalImpact()
	}
	found := measure.Compare(estimate.Diameter, critical, scale, measure.Angle{Value: given.RingDiameter.Value, Sigma: given.RingDiameter.Sigma})
	t := output.Table{Columns: []output.Column{
		{Name: "row", Kind: output.Text}, {Name: "value"}, {Name: "sigma", Text: "error of the user's data"}, {Name: "unit", Kind: output.Text}, {Name: "note", Kind: output.Text},
	}}
	add := func(name string, value, sigma float64, unit, note string) {
		t.Rows = append(t.Rows, []any{name, value, sigma, unit, note})
	}
	blur := "sharp image: the scene has no beam"
	if of.scene.Telescope.GivenBeam {
		b := of.scene.Telescope.Beam
		blur = fmt.Sprintf("blurred with %g x %g uas at %g deg", b[0], b[1], b[2])
	}
	none := math.NaN()
	add("model_diameter", found.Model.Value, found.Model.Sigma, "uas", fmt.Sprintf("%s, %s", estimator, blur))
	add("model_diameter_M", estimate.Diameter, none, "M", "in GM/c2")
	add("model_diameter_bound", estimate.Bound*scale.Value, none, "uas", "numerical, from pixels twice as wide")
	add("measured_diameter", found.Measured.Value, found.Measured.Sigma, "uas", string(estimator)+", as given")
	add("difference", found.Sigmas, none, "sigma", "model - measured, errors combined")
	add("theta_g", scale.Value, scale.Sigma, "uas", "of the scene")
	add("implied_theta_g", found.Implied.Value, found.Implied.Sigma, "uas", "theta_g x measured/model")
	add("width", estimate.Width*scale.Value, estimate.Width*scale.Sigma, "uas", "FWHM of the model's ring")
	add("asymmetry", estimate.Asymmetry, none, "1", "")
	add("brightest_position_angle", positionAngle(estimate.Brightest*180/math.Pi, of.scene), none, "deg", "north through east")
	add("central_depression", estimate.Depression, none, "1", "brightness of the centre over the ring's")
	add("critical_diameter", found.Critical.Value, found.Critical.Sigma, "uas", notATest)
	add("model_over_critical", estimate.Diameter/critical, none, "1", notATest)
	if c.spread {
		lo, hi, n, err := c.overModels(cmd.Context(), s, of, scenePath, estimator)
		if err != nil {
			return err
		}
		note := fmt.Sprintf("of %d models, inner rim isco and horizon, index 1 to 5", n)
		add("spread_least", lo*scale.Value, none, "uas", note)
		add("spread_most", hi*scale.Value, none, "uas", note)
	}
	f := finding{table: t, fields: []field{{"scale", scaleOf(of.scene)}, {"estimator", string(estimator)}, {"assumed", assumed}, {"rows", rowsOf(t)}}}
	s.note("%s", assumed)
	return c.deliver(cmd, s, of, f)
}

// angularScale is theta_g with its error, or that of mass and distance.
func angularScale(s scenes.Scene) (measure.Angle, bool) {
	uas, ok := s.ThetaG()
	o := s.Object
	sigma := o.ThetaG.Sigma
	if ok && !o.ThetaG.Given {
		sigma = uas * math.Hypot(o.Mass.Sigma/o.Mass.Value, o.Distance.Sigma/o.Distance.Value)
	}
	return measure.Angle{Value: uas, Sigma: sigma}, ok
}

// beamOf is the scene's beam in M, on the screen.
func beamOf(s scenes.Scene) (measure.Beam, bool) {
	theta, ok := s.ThetaG()
	b := s.Telescope.Beam
	// up is the disk axis, at its position angle; angles turn the same way
	turn := (b[2] - s.Observer.PositionAngle + 90) * math.Pi / 180
	return measure.Beam{Major: b[0] / theta, Minor: b[1] / theta, Angle: turn}, ok && s.Telescope.GivenBeam
}

// ringOf reads the ring off a scene's image, blurred if there is a beam.
func ringOf(ctx context.Context, view *raytrace.View, scene scenes.Scene, workers int, e measure.Estimator) (measure.Estimate, error) {
	m, err := imageOf(ctx, view, workers)
	if err != nil {
		return measure.Estimate{}, err
	}
	if beam, ok := beamOf(scene); ok {
		if m, err = m.Blurred(ctx, beam); err != nil {
			return measure.Estimate{}, err
		}
	}
	return m.Estimate(ctx, e)
}

// imageOf renders the total intensity.
func imageOf(ctx context.Context, view *raytrace.View, workers int) (*measure.Image, error) {
	plate, err := view.Render(ctx, raytrace.Options{Workers: workers, Layers: []raytrace.Layer{}})
	if err != nil {
		return nil, err
	}
	return measure.NewImage(view.Field, plate.Total)
}

// overModels returns the range of the diameter, M, over other disks. The
// field stays that of the scene.
func (c comparing) overModels(ctx context.Context, s streams, of *measured, scenePath string, e measure.Estimator) (lo, hi float64, n int, err error) {
	lo, hi = math.Inf(1), math.Inf(-1)
	const most = 5 // index
	for _, inner := range []string{"isco", "horizon"} {
		for index := 1; index <= most; index++ {
			set := append(append([]string{}, c.set...), "emitter.inner="+inner, fmt.Sprintf("emitter.index=%d", index))
			d, err := s.loadScene(scenePath, set)
			if err != nil {
				s.note("spread: without inner = %s and index %d: %v", inner, index, err)
				continue
			}
			scene := d.Scene()
			view, err := raytrace.NewViewIn(scene, d.Dir())
			if err != nil {
				return 0, 0, 0, err
			}
			view.Follow(of.view)
			estimate, err := ringOf(ctx, view, scene, c.workers, e)
			if errors.Is(err, measure.ErrCannot) {
				s.note("spread: without inner = %s and index %d: %v", inner, index, err)
				continue
			}
			if err != nil {
				return 0, 0, 0, err
			}
			lo, hi, n = min(lo, estimate.Diameter), max(hi, estimate.Diameter), n+1
		}
	}
	if n == 0 {
		return 0, 0, 0, fmt.Errorf("%w because none of the models of the spread can be made", measure.ErrCannot)
	}
	return lo, hi, n, nil
}
