package verbs

import (
	"fmt"
	"math"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/raytrace/measure"
)

func newLine(s streams) *cobra.Command {
	var m measuring
	var raw bool
	bin := quantity{value: 0.02, shown: "0.02", name: "width", parse: parseBin}
	cmd := &cobra.Command{
		Use:   "line SCENE",
		Short: "integrate the profile of a line that is narrow in the gas frame",
		Long: "Prints the energy and photon fluxes of a line in bins of g = nu_obs/nu_em, over\n" +
			"the whole image of the disks whatever the field: g_lo,g_hi,flux,photon_flux and the\n" +
			"energy flux of each image order. Bin edges are multiples of the bin. Both totals are\n" +
			"1, or with --raw in M^2 (sr on an angular field) of the emissivity's unit. The edges\n" +
			"g_min and g_max are found by optimisation, not from the bins.",
		Example: "  " + programName() + " line @broad-line --bin 0.01 -o line.ecsv\n" +
			"  " + programName() + " line scene.toml --set observer.inclination=30deg --json",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return line(cmd, s, m, bin.value, raw, args[0]) },
	}
	addMeasuring(cmd, &m)
	cmd.Flags().Var(&bin, "bin", "of g")
	cmd.Flags().BoolVar(&raw, "raw", false, "do not normalise")
	return cmd
}

// parseBin reads the width of a bin.
func parseBin(text string) (float64, error) {
	x, err := parseFinite(text)
	if err == nil && !(x >= 1e-5 && x <= 1) {
		err = fmt.Errorf("%s is out of range; allowed: 1e-5 to 1", number(x).csv())
	}
	return x, err
}

func line(cmd *cobra.Command, s streams, m measuring, bin float64, raw bool, scenePath string) error {
	of, err := m.open(s, scenePath)
	if err != nil {
		return err
	}
	l, err := measure.NewLine(cmd.Context(), of.view, bin, of.options)
	if err != nil {
		return err
	}
	energy, photon := l.Totals()
	perEnergy, perPhoton, unit := energy, photon, ""
	if raw {
		perEnergy, perPhoton, unit = 1, 1, areaUnit(of.view)
	}
	t := output.Table{Columns: []output.Column{
		{Name: "g_lo"}, {Name: "g_hi"}, {Name: "flux", Unit: unit, Text: "energy flux"}, {Name: "photon_flux", Unit: unit},
	}}
	for n := range l.Orders {
		t.Columns = append(t.Columns, output.Column{Name: fmt.Sprintf("flux_%d", n), Unit: unit, Text: "energy flux of the order"})
	}
	for k := range l.Energy {
		row := []any{binEdge(l.First+k, bin), binEdge(l.First+k+1, bin), l.Energy[k] / perEnergy, l.Photon[k] / perPhoton}
		for n := range l.Orders {
			row = append(row, l.Orders[n][k]/perEnergy)
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
