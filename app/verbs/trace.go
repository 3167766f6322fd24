package verbs

import (
	"bufio"
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"sync"

	"github.com/spf13/cobra"

	"annulet/geodesic"
)

// The tolerances that paths take.
const (
	minTolerance = geodesic.MinTolerance
	maxTolerance = geodesic.MaxTolerance
	// defaultTolerance is that of a scene: the scene key trace.tolerance.
	defaultTolerance = 1e-9
)

// tracing is what the flags of trace say.
type tracing struct {
	object, interior       string
	interiorGiven          bool
	objectRadius, charge   quantity
	observerRadius, impact quantity
	tolerance              quantity
	json                   bool
	table                  string // a file, - for stdin
	workers                int    // 0 means one a processor
}

func newTrace(s streams) *cobra.Command {
	o := tracing{
		objectRadius:   quantity{name: "M", parse: parseFinite},
		charge:         quantity{name: "M", parse: parseFinite},
		observerRadius: quantity{name: "M|infinity", parse: parseRadius},
		impact:         quantity{name: "M", parse: parseImpact},
		tolerance: quantity{
			name: "number", parse: parseTolerance,
			value: defaultTolerance, shown: number(defaultTolerance).csv(),
		},
	}
	cmd := &cobra.Command{
		Use:   "trace",
		Short: "follow one light path, or a table of them",
		Long: "Follows a light path backwards from an observer, first inward, until it is\n" +
			"back at the observer's radius (or at infinity) or at the horizon, and puts the\n" +
			"closed form beside it. Lengths and times are in M = GM/c^2, GM/c^3.\n\n" +
			"With --table it reads CSV with the columns object,object_radius,observer_radius,\n" +
			"impact (the first two may be left out) and writes the same columns plus\n" +
			"fate,swept_rad,closest_r,difference_rad.",
		Example: "  " + programName() + " trace --observer-radius 1000 --impact 5.3\n" +
			"  " + programName() + " trace --table paths.csv > fates.csv",
		Args: takes(0, ""),
		RunE: func(cmd *cobra.Command, _ []string) error {
			flags := cmd.Flags()
			o.interiorGiven = flags.Changed("interior")
			if flags.Changed("table") {
				for _, single := range []string{"observer-radius", "impact", "object", "object-radius", "interior", "charge"} {
					if flags.Changed(single) {
						return refuse("--%s and --table exclude each other: the table says it row by row", single)
					}
				}
				return traceTable(cmd.Context(), s, o)
			}
			return traceOne(s, o)
		},
	}
	f := cmd.Flags()
	f.Var(&o.observerRadius, "observer-radius", "circumferential radius of the observer, above 2 M, or infinity")
	f.Var(&o.impact, "impact", "impact parameter b = L/E, 0 or more")
	f.StringVar(&o.object, "object", "black-hole", "what is at the centre: black-hole")
	f.Var(&o.objectRadius, "object-radius", "radius of a star or shell (not in this version)")
	f.StringVar(&o.interior, "interior", "", "interior of a star (not in this version)")
	f.Var(&o.charge, "charge", "charge of the black hole (not in this version, other than 0)")
	f.Var(&o.tolerance, "tolerance", fmt.Sprintf("relative, %g to %g", minTolerance, maxTolerance))
	f.BoolVar(&o.json, "json", false, "print one JSON document on stdout")
	f.StringVar(&o.table, "table", "", "CSV `FILE` of paths, - for standard input")
	f.IntVar(&o.workers, "workers", 0, "paths followed at a time; 0 means one a processor")
	return cmd
}

// checkObject refuses what this version cannot trace. Radius is the text of
// the object's radius; a black hole has none, but 0 and 2 M do no harm.
func checkObject(kind, radius string) error {
	switch kind {
	case "black-hole", "":
	case "star", "shell":
		return fmt.Errorf("%s: not in this version; allowed: black-hole", kind)
	default:
		return fmt.Errorf("%q is no object; allowed: black-hole", kind)
	}
	if radius == "" {
		return nil
	}
	r, err := parseFinite(radius)
	if err != nil {
		return err
	}
	if r != 0 && r != 2 {
		return fmt.Errorf("a black hole has no object radius (its horizon is at 2 M), got %s M", number(r).csv())
	}
	return nil
}

// checkPath refuses a path on which no light reaches the observer.
func checkPath(p geodesic.Path) error {
	if math.IsInf(p.ObserverRadius, 1) {
		return nil
	}
	if most := p.ObserverRadius / geodesic.Lapse(p.ObserverRadius); p.Impact > most {
		return refuse("impact %s M: no light reaches an observer at %s M with it; allowed: 0 to %s M",
			number(p.Impact).csv(), number(p.ObserverRadius).csv(), number(most).csv())
	}
	return nil
}

// traced follows a path.
func traced(p geodesic.Path) (geodesic.Story, error) {
	if err := checkPath(p); err != nil {
		return geodesic.Story{}, err
	}
	story, err := geodesic.Trace(p)
	for _, fault := range []error{geodesic.ErrInside, geodesic.ErrTooFar, geodesic.ErrTolerance, geodesic.ErrImpact} {
		if errors.Is(err, fault) {
			return story, usage{err}
		}
	}
	return story, err
}

// traceReport is the JSON of one path.
type traceReport struct {
	Units           map[string]string `json:"units"`
	Object          string            `json:"object"`
	ObserverRadius  number            `json:"observer_radius"`
	Impact          number            `json:"impact"`
	Tolerance       number            `json:"tolerance"`
	Fate            string            `json:"fate"`
	FateFrom        string            `json:"fate_from"` // what decided it
	SweptRad        number            `json:"swept_rad"`
	DeflectionRad   number            `json:"deflection_rad"`
	ClosestR        number            `json:"closest_r"`
	TravelTime      number            `json:"travel_time"`
	Steps           int               `json:"steps"`
	Evaluations     int               `json:"evaluations"`
	BoundRad        number            `json:"bound_rad"`
	ClosedFormSwept number            `json:"closed_form_swept_rad"`
	DifferenceRad   number            `json:"difference_rad"`
	NotIncluded     []string          `json:"not_included"`
}

var traceUnits = map[string]string{
	"observer_radius": "M", "impact": "M",
	"swept_rad": "rad", "deflection_rad": "rad", "closest_r": "M", "travel_time": "M",
	"bound_rad": "rad", "closed_form_swept_rad": "rad", "difference_rad": "rad",
}

// difference is integrated minus closed form; where both are infinite they
// agree.
func difference(story geodesic.Story) float64 {
	if math.IsInf(story.Swept, 1) && math.IsInf(story.ClosedFormSwept, 1) {
		return 0
	}
	return story.Swept - story.ClosedFormSwept
}

func traceOne(s streams, o tracing) error {
	if !o.observerRadius.given || !o.impact.given {
		return refuse("trace needs --observer-radius and --impact, or --table")
	}
	radius := ""
	if o.objectRadius.given {
		radius = number(o.objectRadius.value).csv()
	}
	if err := checkObject(o.object, radius); err != nil {
		return refuse("--object: %w", err)
	}
	if o.charge.given && o.charge.value != 0 {
		return refuse("--charge %s: not in this version; allowed: 0", number(o.charge.value).csv())
	}
	if o.interiorGiven {
		return refuse("--interior %s: a black hole has none, and stars are not in this version", o.interior)
	}
	if err := checkWorkers(o.workers); err != nil {
		return err
	}
	path := geodesic.Path{
		ObserverRadius: o.observerRadius.value,
		Impact:         o.impact.value,
		Tolerance:      o.tolerance.value,
	}
	story, err := traced(path)
	if err != nil {
		return err
	}
	report := traceReport{
		Units:  traceUnits,
		Object: "black-hole", ObserverRadius: number(path.ObserverRadius),
		Impact: number(path.Impact), Tolerance: number(path.Tolerance),
		Fate: story.Fate.String(), FateFrom: "integration",
		SweptRad: number(story.Swept), DeflectionRad: number(story.Deflection),
		ClosestR: number(story.Closest), TravelTime: number(story.TravelTime),
		Steps: story.Steps, Evaluations: story.Evaluations,
		BoundRad: number(story.Bound), ClosedFormSwept: number(story.ClosedFormSwept),
		DifferenceRad: number(difference(story)),
		NotIncluded:   notIncluded,
	}
	if story.FateByClosedForm {
		report.FateFrom = "closed form"
	}
	if o.json {
		return writeJSON(s.out, report)
	}
	defer s.note("%s", notIncludedLine)
	return traceLines(s.out, report)
}

// closedFormBound is how far the closed form is held to, in radians, by the
// tests of package geodesic.
const closedFormBound = 1e-12

// traceLines prints a report for people, with the digits that the bound
// supports.
func traceLines(w io.Writer, r traceReport) error {
	var b strings.Builder
	line := func(what, format string, args ...any) {
		fmt.Fprintf(&b, "%-17s %s\n", what, fmt.Sprintf(format, args...))
	}
	angle := func(x number, bound float64) string {
		if math.IsInf(float64(x), 0) {
			return "infinity"
		}
		const deg = 180 / math.Pi
		return fmt.Sprintf("%s rad = %s deg", honest(float64(x), bound), honest(float64(x)*deg, bound*deg))
	}
	// Radius and time follow u, whose relative error is that of the path.
	relative := float64(r.Tolerance)
	if swept := float64(r.SweptRad); swept > 0 && !math.IsInf(swept, 0) {
		relative = max(relative, float64(r.BoundRad)/swept)
	}
	length := func(x number) string {
		return honest(float64(x), relative*math.Abs(float64(x))) + " M"
	}

	if math.IsInf(float64(r.ObserverRadius), 1) {
		line("observer", "at infinity")
	} else {
		line("observer", "static, r = %s M", r.ObserverRadius.csv())
	}
	line("impact parameter", "b = %s M, b/b_c - 1 = %.6g", r.Impact.csv(), geodesic.CriticalDistance(float64(r.Impact)))
	if r.FateFrom == "integration" {
		line("fate", "%s", r.Fate)
	} else {
		line("fate", "%s (decided by the closed form)", r.Fate)
	}
	line("swept angle", "%s", angle(r.SweptRad, float64(r.BoundRad)))
	if !math.IsNaN(float64(r.DeflectionRad)) {
		line("deflection", "%s", angle(r.DeflectionRad, float64(r.BoundRad)))
	}
	line("closest approach", "r = %s", length(r.ClosestR))
	if t := r.TravelTime; !math.IsNaN(float64(t)) {
		text := length(t)
		if math.IsInf(float64(r.ObserverRadius), 1) {
			text += " (less r* of both ends)"
		}
		line("travel time", "%s", text)
	}
	line("error bound", "%.1e rad on the swept angle", float64(r.BoundRad))
	line("closed form", "%s", angle(r.ClosedFormSwept, closedFormBound))
	line("difference", "%.1e rad, integrated less closed form", float64(r.DifferenceRad))
	line("work", "%d steps, %d evaluations, tolerance %s", r.Steps, r.Evaluations, r.Tolerance.csv())
	_, err := io.WriteString(w, b.String())
	return err
}

// request is one row of a table of paths.
type request struct {
	line int
	path geodesic.Path
	text string // the row as it was, for the output
}

// The columns of trace --table.
var (
	traceRequired = []string{"observer_radius", "impact"}
	traceOptional = []string{"object", "object_radius"}
	traceAdded    = []string{"fate", "swept_rad", "closest_r", "difference_rad"}
)

// readRequests reads the whole table before anything is traced, so that a
// bad row writes nothing.
func readRequests(t *table, tolerance float64) ([]request, error) {
	var requests []request
	for {
		fields, line, err := t.next()
		if errors.Is(err, io.EOF) {
			return requests, nil
		}
		if err != nil {
			return nil, err
		}
		q := request{line: line, path: geodesic.Path{Tolerance: tolerance}, text: csvLine(fields)}
		if err := checkObject(t.field(fields, "object"), t.field(fields, "object_radius")); err != nil {
			return nil, t.wrong(line, "object", err)
		}
		if q.path.ObserverRadius, err = parseRadius(t.field(fields, "observer_radius")); err != nil {
			return nil, t.wrong(line, "observer_radius", err)
		}
		if q.path.Impact, err = parseImpact(t.field(fields, "impact")); err != nil {
			return nil, t.wrong(line, "impact", err)
		}
		if err := checkPath(q.path); err != nil {
			return nil, usage{fmt.Errorf("%s:%d: %w", t.name, line, err)}
		}
		requests = append(requests, q)
	}
}

// csvLine joins fields, quoting those that need it.
func csvLine(fields []string) string {
	quoted := slices.Clone(fields)
	for k, f := range quoted {
		if strings.ContainsAny(f, ",\"\r\n") {
			quoted[k] = `"` + strings.ReplaceAll(f, `"`, `""`) + `"`
		}
	}
	return strings.Join(quoted, ",")
}

// chunk is how many rows a worker takes at a time. Taste: large enough that
// handing out costs nothing, small enough that a cancel answers at once.
const chunk = 256

func traceTable(ctx context.Context, s streams, o tracing) error {
	if err := checkWorkers(o.workers); err != nil {
		return err
	}
	t, err := openTable(o.table, s.in, traceRequired, traceOptional)
	if err != nil {
		return err
	}
	defer t.close()
	requests, err := readRequests(t, o.tolerance.value)
	if err != nil {
		return err
	}
	columns := slices.Concat(t.columns, traceAdded)
	var units map[string]string
	if o.json {
		units = map[string]string{}
		for _, c := range columns {
			if u, ok := traceUnits[c]; ok {
				units[c] = u
			}
		}
		units["object_radius"] = "M"
	}

	out := bufio.NewWriterSize(s.out, 1<<16)
	if o.json {
		err = traceTableJSON(ctx, out, t, requests, o.workers, units)
	} else {
		fmt.Fprintln(out, strings.Join(columns, ","))
		err = inOrder(ctx, requests, o.workers, func(rows []request) ([]byte, error) {
			var text []byte
			for _, q := range rows {
				story, err := traced(q.path)
				if err != nil {
					return nil, rowError(t, q, err)
				}
				text = append(text, q.text...)
				text = append(text, ',')
				text = append(text, story.Fate.String()...)
				for _, x := range []float64{story.Swept, story.Closest, difference(story)} {
					text = append(text, ',')
					text = append(text, number(x).csv()...)
				}
				text = append(text, '\n')
			}
			return text, nil
		}, func(text []byte) error {
			_, err := out.Write(text)
			return err
		})
	}
	if err != nil {
		return err
	}
	if err := out.Flush(); err != nil {
		return err
	}
	if !o.json {
		s.note("%s", notIncludedLine)
	}
	return nil
}

// rowError says in which row of a table a path failed.
func rowError(t *table, q request, err error) error {
	wrapped := fmt.Errorf("%s:%d: %w", t.name, q.line, err)
	if errors.As(err, new(usage)) {
		return usage{wrapped}
	}
	return wrapped
}

// traceTableJSON prints the table as {"units":…, "rows":[…], "not_included":…}.
func traceTableJSON(ctx context.Context, out io.Writer, t *table, requests []request, workers int, units map[string]string) error {
	type row struct {
		Object         string `json:"object"`
		ObjectRadius   number `json:"object_radius"`
		ObserverRadius number `json:"observer_radius"`
		Impact         number `json:"impact"`
		Fate           string `json:"fate"`
		SweptRad       number `json:"swept_rad"`
		ClosestR       number `json:"closest_r"`
		DifferenceRad  number `json:"difference_rad"`
	}
	rows := make([]row, 0, len(requests))
	err := inOrder(ctx, requests, workers, func(some []request) ([]row, error) {
		made := make([]row, 0, len(some))
		for _, q := range some {
			story, err := traced(q.path)
			if err != nil {
				return nil, rowError(t, q, err)
			}
			made = append(made, row{
				Object: "black-hole", ObjectRadius: number(math.NaN()),
				ObserverRadius: number(q.path.ObserverRadius), Impact: number(q.path.Impact),
				Fate: story.Fate.String(), SweptRad: number(story.Swept),
				ClosestR: number(story.Closest), DifferenceRad: number(difference(story)),
			})
		}
		return made, nil
	}, func(made []row) error {
		rows = append(rows, made...)
		return nil
	})
	if err != nil {
		return err
	}
	return writeJSON(out, struct {
		Units       map[string]string `json:"units"`
		Rows        []row             `json:"rows"`
		NotIncluded []string          `json:"not_included"`
	}{units, rows, notIncluded})
}

// inOrder works chunk by chunk on several goroutines and hands the results
// on in the order of the input, at most a few chunks behind. It stops within
// a chunk when ctx ends or work or done fails.
func inOrder[In, Out any](ctx context.Context, in []In, workers int, work func([]In) (Out, error), done func(Out) error) error {
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	ctx, cancel := context.WithCancel(ctx)
	var wg sync.WaitGroup
	defer wg.Wait()
	defer cancel()

	type result struct {
		out Out
		err error
	}
	type job struct {
		in     []In
		result chan result // holds one, so a worker never waits
	}
	jobs := make(chan job)
	queue := make(chan job, 4*workers) // jobs in order: what bounds the memory

	wg.Go(func() {
		defer close(queue)
		defer close(jobs)
		for some := range slices.Chunk(in, chunk) {
			j := job{some, make(chan result, 1)}
			select {
			case queue <- j:
			case <-ctx.Done():
				return
			}
			select {
			case jobs <- j:
			case <-ctx.Done():
				return
			}
		}
	})
	for range workers {
		wg.Go(func() {
			for j := range jobs {
				out, err := work(j.in)
				j.result <- result{out, err}
			}
		})
	}
	for j := range queue {
		select {
		case r := <-j.result:
			if r.err != nil {
				return r.err
			}
			if err := done(r.out); err != nil {
				return err
			}
		case <-ctx.Done():
			return ctx.Err()
		}
	}
	return ctx.Err()
}

// mostWorkers is far more than any machine has. Taste: it catches a slip.
const mostWorkers = 4096

func checkWorkers(n int) error {
	if n < 0 || n > mostWorkers {
		return refuse("--workers %s: allowed: 0 (one a processor) to %d", strconv.Itoa(n), mostWorkers)
	}
	return nil
}
