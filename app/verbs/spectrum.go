package verbs

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

func newSpectrum(s streams) *cobra.Command {
	var m measuring
	from, to := "", ""
	points := defaultPoints
	cmd := &cobra.Command{
		Use:   "spectrum SCENE --from NU --to NU",
		Short: "integrate the spectrum of a scene's disks",
		Long: "Prints nu [Hz], E [keV], F_nu, its bound and photon_flux over the whole image of the\n" +
			"disks, whatever the field, at frequencies even in their logarithm. Where the scene\n" +
			"has absolute units (light = \"blackbody\", or total_flux; and mass and distance or\n" +
			"theta_g) F_nu is in Jy and photon_flux in photons/cm^2/s/keV; else F_nu is in M^2 of\n" +
			"the intensity's unit and there is no photon_flux.",
		Example: "  " + programName() + " spectrum @hot-disk --from 0.1keV --to 20keV -o spectrum.ecsv",
		Args:    takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			if from == "" || to == "" {
				return refuse("spectrum needs --from and --to, as in --from 0.1keV --to 20keV")
			}
			const most = 10000
			if points < 2 || points > most {
				return refuse("--points %d: allowed: 2 to %d", points, most)
			}
			return spectrum(cmd, s, m, from, to, points, args[0])
		},
	}
	addMeasuring(cmd, &m)
	cmd.Flags().StringVar(&from, "from", "", "lowest observed frequency or photon energy, `NU` with a unit")
	cmd.Flags().StringVar(&to, "to", "", "highest one, `NU` with a unit")
	cmd.Flags().IntVar(&points, "points", points, "how many frequencies")
	return cmd
}

// defaultPoints is how many frequencies a spectrum has. Taste.
const defaultPoints = 100

// frequencyRange reads two frequencies in any unit of the scene file.
func frequencyRange(from, to string) (lo, hi float64, err error) {
	text := fmt.Sprintf("schema = 1\n[field]\nfrequency = [%q, %q]\n", from, to)
	d, err := scenes.Parse("--from, --to", []byte(text))
	if err != nil {
		return 0, 0, usage{err}
	}
	f := d.Scene().Field.Frequency
	if !(f[0] < f[1]) {
		return 0, 0, refuse("--from %s --to %s: allowed: a lower frequency first", from, to)
	}
	return f[0], f[1], nil
}

func spectrum(cmd *cobra.Command, s streams, m measuring, from, to string, points int, scenePath string) error {
	lo, hi, err := frequencyRange(from, to)
	if err != nil {
		return err
	}
	of, err := m.open(s, scenePath)
	if err != nil {
		return err
	}
	scene := of.scene
	if err := measure.CheckSpectrum(scene); err != nil {
		return err
	}
	// the scene's own first frequency is what fluxes are scaled at
	own := len(scene.Field.Frequency[:min(1, len(scene.Field.Frequency))])
	scene.Field.Frequency = scene.Field.Frequency[:own:own]
	for k := range points {
		scene.Field.Frequency = append(scene.Field.Frequency, lo*math.Pow(hi/lo, float64(k)/float64(points-1)))
	}
	view, err := raytrace.NewViewIn(scene, of.document.Dir())
	if err != nil {
		return usage{err}
	}
	found, err := measure.NewSpectrum(cmd.Context(), view, own, of.options)
	if err != nil {
		return err
	}
	perFlux, unit := janskys(view, scene)
	absolute := unit == "Jy"
	photons := ""
	if absolute {
		photons = "1 / (cm2 s keV)"
	}
	t := output.Table{Columns: []output.Column{
		{Name: "nu", Unit: "Hz"}, {Name: "E", Unit: "keV"}, {Name: "F_nu", Unit: unit}, {Name: "F_nu_bound", Unit: unit}, {Name: "photon_flux", Unit: photons},
	}}
	for n := range found.Orders {
		t.Columns = append(t.Columns, output.Column{Name: fmt.Sprintf("F_nu_%d", n), Unit: unit})
	}
	for k, nu := range found.Frequencies {
		flux := found.Flux[k] * perFlux
		photon := math.NaN()
		if absolute {
			photon = photonFlux(flux, nu)
		}
		row := []any{nu, nu * scenes.Planck / (1e3 * scenes.ElementaryCharge), flux, found.Bound[k] * perFlux, photon}
		for n := range found.Orders {
			row = append(row, found.Orders[n][k]*perFlux)
		}
		t.Rows = append(t.Rows, row)
	}
	return m.deliver(cmd, s, of, finding{table: t})
}

// janskys is what turns integrals over the image into Jy, where the scene
// tells; else 1, with the unit of areas.
func janskys(v *raytrace.View, scene scenes.Scene) (factor float64, unit string) {
	theta, ok := scene.ThetaG()
	switch {
	case scene.Radiance() != scenes.PerHertz:
	case !v.Field.IsParallel():
		return 1 / scenes.Jansky, "Jy"
	case ok && math.IsInf(v.Observer.Radius, 1):
		theta /= scenes.MicroarcsecondsPerRadian
		return theta * theta / scenes.Jansky, "Jy"
	}
	return 1, areaUnit(v)
}

// photonFlux turns Jy at nu, Hz, into photons/cm²/s/keV: F_ν/(hν) a Hz.
func photonFlux(jansky, nu float64) float64 {
	const perKeV = 1e3 * scenes.ElementaryCharge / scenes.Planck // Hz
	const cm2 = 1e4                                              // in a square metre
	return jansky * scenes.Jansky / (scenes.Planck * nu) * perKeV / cm2
}
