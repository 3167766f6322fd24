package verbs

import (
	"context"
	"fmt"
	"image"
	"io"
	"math"
	"runtime"
	"slices"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"annulet/app/tone"
	"annulet/assets"
	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// benchReport is the JSON of bench; a part that was not asked for is null.
type benchReport struct {
	Units       map[string]string `json:"units"`
	SinglePaths []singlePaths     `json:"single_paths"`
	Crossings   []crossingsRow    `json:"crossings"`
	Frame       []frameRow        `json:"frame"`
}

type singlePaths struct {
	Tolerance    number `json:"tolerance"`
	RaysPerCPUS  number `json:"rays_per_cpu_s"`
	MedianError  number `json:"median_error"`
	WorstError   number `json:"worst_error"`
	FatesMissed  int    `json:"fates_missed"`
	PathsChecked int    `json:"paths"`
}

type crossingsRow struct {
	Pixels             int    `json:"pixels"`
	InclinationDeg     number `json:"inclination_deg"`
	Orders             int    `json:"orders"`
	Workers            int    `json:"workers"`
	NSPerPixel         number `json:"ns_per_pixel"`
	WorstRelativeError number `json:"worst_relative_error"`
	Compared           int    `json:"crossings"`
}

type frameRow struct {
	Pixels       int    `json:"pixels"`
	Workers      int    `json:"workers"`
	TraceShadeMS number `json:"trace_shade_ms"`
	ShadeMS      number `json:"shade_ms"`
}

var benchUnits = map[string]string{
	"tolerance": "relative", "rays_per_cpu_s": "1/s of processor time of one thread",
	"median_error": "rad, of the swept angle, against the closed form", "worst_error": "rad",
	"pixels": "count", "inclination_deg": "deg", "orders": "count, from 0", "workers": "count",
	"ns_per_pixel": "ns of wall time, median; orbits are made before", "worst_relative_error": "of r below 50 M, against the closed form",
	"trace_shade_ms": "ms of wall time, median: inclination changed, traced, shaded and coloured",
	"shade_ms":       "ms of wall time, median: shaded and coloured again",
}

// benchParts are the parts of bench, by their JSON keys.
var benchParts = []string{"single_paths", "crossings", "frame"}

// mostRounds bounds the repetitions. Taste.
const mostRounds = 1000

func newBench(s streams) *cobra.Command {
	var only string
	var rounds int
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "bench",
		Short: "time this machine, and check what was timed against closed forms",
		Long: "Times single light paths, crossings of the disk plane and whole frames, with the\n" +
			"functions that render and the window use, and compares the very numbers that were\n" +
			"timed with closed forms. Other work on the machine shows in the times.",
		Args: takes(0, ""),
		RunE: func(cmd *cobra.Command, _ []string) error {
			if only != "" && !slices.Contains(benchParts, only) {
				return refuse("--only %s: allowed: %s", only, strings.Join(benchParts, ", "))
			}
			if rounds < 1 || rounds > mostRounds {
				return refuse("--rounds %d: allowed: 1 to %d", rounds, mostRounds)
			}
			report, err := runBench(cmd.Context(), s, only, rounds)
			if err != nil {
				return err
			}
			if asJSON {
				return writeJSON(s.out, report)
			}
			return report.print(s.out)
		},
	}
	cmd.Flags().StringVar(&only, "only", "", "run one `KEY`: "+strings.Join(benchParts, ", "))
	cmd.Flags().IntVar(&rounds, "rounds", benchRounds, "repetitions, `N` of which the median counts")
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

func runBench(ctx context.Context, s streams, only string, rounds int) (*benchReport, error) {
	report := &benchReport{Units: benchUnits}
	for _, part := range []struct {
		key string
		run func(context.Context, int, *benchReport) error
	}{{"single_paths", benchSinglePaths}, {"crossings", benchCrossings}, {"frame", benchFrame}} {
		if only != "" && only != part.key {
			continue
		}
		s.note("bench: %s", part.key)
		if err := part.run(ctx, rounds, report); err != nil {
			return nil, err
		}
	}
	return report, nil
}

// The single paths: impact parameters spread evenly over a disk of 15 M,
// from 1000 M to 2.0001 M or back.
const (
	benchPaths  = 4000
	benchWide   = 15.0   // M
	benchFrom   = 1000.0 // M
	benchTo     = 2.0001 // M
	benchRounds = 21     // repetitions by default, of which the median counts
)

func benchSinglePaths(ctx context.Context, rounds int, report *benchReport) error {
	b := make([]float64, benchPaths)
	for k := range b {
		_, part := math.Modf((float64(k) + 0.5) / math.Phi)
		b[k] = benchWide * math.Sqrt(part)
	}
	swept, captured := make([]float64, benchPaths), make([]bool, benchPaths)
	runtime.LockOSThread()
	defer runtime.UnlockOSThread()
	for _, tolerance := range []float64{1e-6, 1e-9, 1e-12} {
		times := make([]time.Duration, rounds)
		for k := range times {
			if err := ctx.Err(); err != nil {
				return err
			}
			begun := threadTime()
			geodesic.SweepAll(1/benchFrom, 1/benchTo, tolerance, b, swept, captured)
			times[k] = threadTime() - begun
		}
		row := singlePaths{Tolerance: number(tolerance), PathsChecked: benchPaths}
		row.RaysPerCPUS = number(benchPaths / median(times).Seconds())
		off := make([]float64, benchPaths)
		for k := range b {
			o := geodesic.NewClosedOrbit(b[k])
			escapes := geodesic.CriticalDistance(b[k]) > 0
			if captured[k] == escapes {
				row.FatesMissed++
			}
			want := o.Sweep(1/benchFrom, 1/benchTo)
			if escapes {
				turn := 1 / geodesic.Periapsis(b[k])
				want = 2 * o.Sweep(1/benchFrom, turn)
			}
			off[k] = math.Abs(swept[k] - want)
		}
		slices.Sort(off)
		row.MedianError, row.WorstError = number(off[benchPaths/2]), number(off[benchPaths-1])
		report.SinglePaths = append(report.SinglePaths, row)
	}
	return nil
}

func median(times []time.Duration) time.Duration {
	slices.Sort(times)
	return times[len(times)/2]
}

// The crossings: 800 x 800 pixels, 30 M wide, from 1000 M, orders 0 to 2.
const (
	benchSide  = 800
	benchField = "30 M"
	benchReach = 50.0 // M: radii below are compared
)

var benchWorkers = [...]int{1, 2}

func benchCrossings(ctx context.Context, rounds int, report *benchReport) error {
	for _, inclination := range []float64{20, 50, 75, 85, 89} {
		view, err := benchView(benchSide, inclination, benchField, "60 M")
		if err != nil {
			return err
		}
		// in turn, so that other work on the machine falls on both alike
		var radii [len(benchWorkers)]raytrace.Radii
		var times [len(benchWorkers)][]time.Duration
		for round := range rounds + 1 { // the first makes orbits and room
			for k, workers := range benchWorkers {
				begun := time.Now()
				if err := view.Radii(ctx, raytrace.Options{Workers: workers}, &radii[k]); err != nil {
					return err
				}
				if round > 0 {
					times[k] = append(times[k], time.Since(begun))
				}
			}
		}
		var worst float64
		var compared int
		for k, workers := range benchWorkers {
			if k == 0 || !radii[k].Equal(&radii[0]) {
				if worst, compared, err = radii[k].WorstError(ctx, view, benchReach, 0); err != nil {
					return err
				}
			}
			report.Crossings = append(report.Crossings, crossingsRow{
				Pixels: benchSide * benchSide, InclinationDeg: number(inclination), Orders: view.Plan.MaxOrder + 1, Workers: workers,
				NSPerPixel:         number(float64(median(times[k]).Nanoseconds()) / (benchSide * benchSide)),
				WorstRelativeError: number(worst), Compared: compared,
			})
		}
	}
	return nil
}

// benchView is a disk around a hole, at the default tolerance.
func benchView(side int, inclination float64, width, outer string) (*raytrace.View, error) {
	text := fmt.Sprintf("schema = 1\n[observer]\nradius = \"%g M\"\ninclination = %g\n[field]\nwidth = %q\npixels = [%d, %d]\n[[emitter]]\nkind = \"disk\"\nouter = %q\n",
		benchFrom, inclination, width, side, side, outer)
	d, err := scenes.Parse("bench", []byte(text))
	if err != nil {
		return nil, err
	}
	return raytrace.NewView(d.Scene())
}

// The frame: 1000 x 1000 at 75 deg.
const frameSide = 1000

func benchFrame(ctx context.Context, rounds int, report *benchReport) error {
	workers := runtime.GOMAXPROCS(0)
	o := raytrace.Options{Workers: workers, Layers: []raytrace.Layer{}, Centres: true} // as the desk's while a hand drags
	view, err := benchView(frameSide, 75, "44 M", "20 M")
	if err != nil {
		return err
	}
	colours, _ := assets.Lookup("ember")
	out := image.NewRGBA(image.Rect(0, 0, frameSide, frameSide))
	colour := func(p *raytrace.Plate) error {
		return tone.Tone{Curve: tone.SquareRoot, FromZero: true}.Apply(out, p.Total, p.Columns, p.Rows, colours)
	}
	frames := make([]time.Duration, rounds)
	for k := range len(frames) + 1 {
		view.Observer.InclinationDeg = 75 + 0.01*float64(k)
		begun := time.Now()
		plate, err := view.Render(ctx, o)
		if err == nil {
			err = colour(plate)
		}
		if err != nil {
			return err
		}
		if k > 0 {
			frames[k-1] = time.Since(begun)
		}
	}
	traced, err := view.Trace(ctx, o)
	if err != nil {
		return err
	}
	shades := make([]time.Duration, rounds)
	for k := range shades {
		begun := time.Now()
		plate, err := traced.Shade(ctx, view, o)
		if err == nil {
			err = colour(plate)
		}
		if err != nil {
			return err
		}
		shades[k] = time.Since(begun)
	}
	report.Frame = append(report.Frame, frameRow{
		Pixels: frameSide * frameSide, Workers: workers,
		TraceShadeMS: number(median(frames).Seconds() * 1e3), ShadeMS: number(median(shades).Seconds() * 1e3),
	})
	return nil
}

func (r *benchReport) print(w io.Writer) error {
	var b strings.Builder
	for _, p := range r.SinglePaths {
		fmt.Fprintf(&b, "single paths, tolerance %.0e: %.3g /s of processor time; swept angle off by %.1e rad in the median, %.1e at worst; %d of %d fates wrong\n",
			float64(p.Tolerance), float64(p.RaysPerCPUS), float64(p.MedianError), float64(p.WorstError), p.FatesMissed, p.PathsChecked)
	}
	for _, c := range r.Crossings {
		fmt.Fprintf(&b, "crossings, %g deg, %d pixels, %d workers: %.1f ns a pixel; r off by %.1e at worst of %d\n",
			float64(c.InclinationDeg), c.Pixels, c.Workers, float64(c.NSPerPixel), float64(c.WorstRelativeError), c.Compared)
	}
	for _, f := range r.Frame {
		fmt.Fprintf(&b, "frame, %d pixels, %d workers: %.1f ms traced, shaded and coloured; %.1f ms shaded and coloured again\n",
			f.Pixels, f.Workers, float64(f.TraceShadeMS), float64(f.ShadeMS))
	}
	_, err := io.WriteString(w, b.String())
	return err
}
