package verbs

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

func newLine(s streams) *cobra.Command {
	var m measuring
	var o lineOptions
	bin := quantity{value: defaultBin, shown: number(defaultBin).csv(), name: "width", parse: parseBin}
	cmd := &cobra.Command{
		Use:   "line SCENE",
		Short: "integrate the profile of a line that is narrow in the gas frame",
		Long: "Prints the energy and photon fluxes of a line in bins of g = nu_obs/nu_em, over\n" +
			"the whole image of the disks whatever the field: g_lo,g_hi,flux,photon_flux and the\n" +
			"energy flux of each image order. Bin edges are multiples of the bin. Both totals are\n" +
			"1, or with --raw in M^2 (sr on an angular field) of the emissivity's unit. The edges\n" +
			"g_min and g_max are found by optimisation, not from the bins. Where the scene has\n" +
			"telescope.resolution and emitter.rest, bins are as that instrument sees them.",
		Example: "  " + programName() + " line @broad-line --bin 0.01 -o line.ecsv\n" +
			"  " + programName() + " line scene.toml --set observer.inclination=30deg --json",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { o.bin = bin.value; return line(cmd, s, m, o, args[0]) },
	}
	addMeasuring(cmd, &m)
	cmd.Flags().Var(&bin, "bin", "of g")
	cmd.Flags().BoolVar(&o.raw, "raw", false, "do not normalise")
	cmd.Flags().BoolVar(&o.energies, "energies", false, "also the bins' edges in observed keV: E_lo, E_hi; needs emitter.rest")
	cmd.Flags().StringVar(&o.continuum, "continuum", "", "`LEVEL,INDEX` of a continuum: photons per keV at the rest energy over the line's photons, and photon index; JSON tells the equivalent width")
	return cmd
}

// defaultBin is the width of bins of g. Taste.
const defaultBin = 0.02

// parseBin reads the width of a bin.
func parseBin(text string) (float64, error) {
	x, err := parseFinite(text)
	if err == nil && !(x >= 1e-5 && x <= 1) {
		err = fmt.Errorf("%s is out of range; allowed: 1e-5 to 1", number(x).csv())
	}
	return x, err
}

// lineOptions is what the flags of line say.
type lineOptions struct {
	bin           float64
	raw, energies bool
	continuum     string
}

// restOf is the energy of the scene's line in the gas frame as the observer
// would receive it at g = 1, keV; 0 if it is not given.
func restOf(scene scenes.Scene) float64 {
	for _, e := range scene.Emitters {
		if e.Rest > 0 {
			return e.Rest * scenes.Planck / (1e3 * scenes.ElementaryCharge) / (1 + scene.Object.Redshift)
		}
	}
	return 0
}

func line(cmd *cobra.Command, s streams, m measuring, o lineOptions, scenePath string) error {
	of, err := m.open(s, scenePath)
	if err != nil {
		return err
	}
	bin := o.bin
	rest := restOf(of.scene)
	if o.energies && rest == 0 {
		return refuse("--energies needs the line's energy: emitter.light = \"line\" and emitter.rest")
	}
	width := math.NaN()
	var level, index float64
	if o.continuum != "" {
		at, err := parsePair("--continuum", o.continuum)
		if err != nil || !(at[0] > 0) {
			return refuse("--continuum %q: allowed: a level above 0 and a photon index, as in 2.5,1.9", o.continuum)
		}
		if rest == 0 {
			return refuse("--continuum needs the line's energy: emitter.light = \"line\" and emitter.rest")
		}
		level, index = at[0], at[1]
	}
	l, err := measure.NewLine(cmd.Context(), of.view, bin, of.options)
	if err != nil {
		return err
	}
	if level > 0 {
		width = l.EquivalentWidth(level, index)
	}
	if resolution := of.scene.Telescope.Resolution; resolution > 0 {
		if rest == 0 {
			return refuse("telescope.resolution needs the line's energy: emitter.light = \"line\" and emitter.rest")
		}
		keV := resolution * scenes.Planck / (1e3 * scenes.ElementaryCharge)
		if l, err = l.Smoothed(keV / rest); err != nil {
			return err
		}
	}
	energy, photon := l.Totals()
	perEnergy, perPhoton, unit := energy, photon, ""
	if o.raw {
		perEnergy, perPhoton, unit = 1, 1, areaUnit(of.view)
	}
	t := output.Table{Columns: []output.Column{
		{Name: "g_lo"}, {Name: "g_hi"}, {Name: "flux", Unit: unit, Text: "energy flux"}, {Name: "photon_flux", Unit: unit},
	}}
	for n := range l.Orders {
		t.Columns = append(t.Columns, output.Column{Name: fmt.Sprintf("flux_%d", n), Unit: unit, Text: "energy flux of the order"})
	}
	if o.energies {
		t.Columns = append(t.Columns, output.Column{Name: "E_lo", Unit: "keV"}, output.Column{Name: "E_hi", Unit: "keV"})
	}
	for k := range l.Energy {
		row := []any{binEdge(l.First+k, bin), binEdge(l.First+k+1, bin), l.Energy[k] / perEnergy, l.Photon[k] / perPhoton}
		for n := range l.Orders {
			row = append(row, l.Orders[n][k]/perEnergy)
		}
		if o.energies {
			row = append(row, binEdge(l.First+k, bin)*rest, binEdge(l.First+k+1, bin)*rest)
		}
		t.Rows = append(t.Rows, row)
	}
	var orders []ordered
	for n, e := range l.Edges {
		orders = append(orders, ordered{{"order", n}, {"g_min", number(e.Min)}, {"g_max", number(e.Max)}})
	}
	f := finding{table: t, fields: []field{
		{"scale", scaleOf(of.scene)},
		{"g_min", number(l.Edge.Min)}, {"g_max", number(l.Edge.Max)}, {"edges", orders},
		{"rest_keV", number(orNaN(rest))}, {"E_min_keV", number(orNaN(rest * l.Edge.Min))}, {"E_max_keV", number(orNaN(rest * l.Edge.Max))}, {"equivalent_width_keV", number(width)},
		{"total_flux", number(energy)}, {"total_photon_flux", number(photon)}, {"flux_bound", number(l.Bound / perEnergy)},
		{"rows", rowsOf(t)},
	}}
	s.note("g from %s to %s; no bin is off by more than %.1e of the total", honest(l.Edge.Min, 1e-9), honest(l.Edge.Max, 1e-9), l.Bound/energy)
	return m.deliver(cmd, s, of, f)
}

// binEdge is a multiple of the bin, printed as the decimal that it means.
func binEdge(k int, bin float64) float64 {
	const digits = 1e12
	return math.Round(float64(k)*bin*digits) / digits
}
