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
	"annulet/geodesic/guard"
	"annulet/scenes"
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
	placing                // the object
	observerRadius, impact quantity
	tolerance              quantity
	table                  string // a file, - for stdin
	workers                int    // 0 means one a processor
}

func newTrace(s streams) *cobra.Command {
	o := tracing{
		placing: placing{
			objectRadius: quantity{name: "M", parse: parseLength},
			charge:       quantity{name: "M", parse: parseLength},
		},
		observerRadius: quantity{name: "M|infinity", parse: parseStation},
		impact:         quantity{name: "M", parse: parseImpact},
		tolerance: quantity{
			name: "number", parse: parseTolerance,
			value: defaultTolerance, shown: number(defaultTolerance).csv(),
		},
	}
	cmd := &cobra.Command{
		Use:   "trace",
		Short: "follow one light path, or a table of them",
		Long: "Follows a light path backwards from a static observer, first inward, until it is\n" +
			"back at the observer's radius (or at infinity), at the horizon or on an opaque\n" +
			"star, and puts the closed form beside it; for a charged hole there is none.\n" +
			"Shells and uniform stars let light through. An observer within a shell is\n" +
			"allowed; the path then goes to infinity, or is trapped within 3 M for ever.\n" +
			"Lengths and times are in M = GM/c^2, GM/c^3.\n\n" +
			"With --table it reads CSV with the columns object,object_radius,observer_radius,\n" +
			"impact and, if there, interior,charge (only observer_radius and impact must be)\n" +
			"and writes the same columns plus fate,swept_rad,closest_r,difference_rad.",
		Example: "  " + programName() + " trace --observer-radius 1000 --impact 5.3\n" +
			"  " + programName() + " trace --object shell --object-radius 4 --observer-radius infinity --impact 4\n" +
			"  " + programName() + " trace --table paths.csv > fates.csv",
		Args: takes(0, ""),
		RunE: func(cmd *cobra.Command, _ []string) error {
			flags := cmd.Flags()
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
	f.Var(&o.observerRadius, "observer-radius", "circumferential radius of the observer, outside the horizon or the star, or infinity")
	f.Var(&o.impact, "impact", "impact parameter b = L/E, 0 or more")
	f.StringVar(&o.object, "object", "black-hole", "what is at the centre: black-hole, star, shell")
	f.Var(&o.objectRadius, "object-radius", "radius of a star (above 9/4 M) or shell (above 2 M)")
	f.StringVar(&o.interior, "interior", "", "interior of a star: opaque (the default) or uniform")
	f.Var(&o.charge, "charge", "charge |Q| of a black hole, below 1 M")
	f.Var(&o.tolerance, "tolerance", fmt.Sprintf("relative, %g to %g", minTolerance, maxTolerance))
	f.BoolVar(&o.json, "json", false, "print one JSON document on stdout")
	f.StringVar(&o.table, "table", "", "CSV `FILE` of paths, - for standard input")
	f.IntVar(&o.workers, "workers", 0, "paths followed at a time; 0 means one a processor")
	return cmd
}

// body is an object as scenes describe it and as paths meet it.
type body struct {
	object    scenes.Object
	spacetime *geodesic.Round
}

// bodies holds every object that was asked for, once.
type bodies map[scenes.Object]*body

// of returns the object that flags describe.
func (known bodies) of(p placing) (*body, error) {
	object, err := flaggedObject(p)
	if err != nil {
		return nil, err
	}
	if b, ok := known[object]; ok {
		return b, nil
	}
	spacetime, err := spacetimeOf(object)
	if err != nil {
		return nil, refuse("%s", plain(err))
	}
	b := &body{object, spacetime}
	known[object] = b
	return b, nil
}

// plain is a message of package geodesic without the package's name.
func plain(err error) string { return strings.TrimPrefix(err.Error(), "geodesic: ") }

// notes are what is strange about the objects themselves, each said once.
func (known bodies) notes() []string {
	var notes []string
	for _, b := range known {
		// An emitter, so that nothing is said of a picture.
		notes = append(notes, scenes.Scene{Object: b.object, Emitters: make([]scenes.Emitter, 1)}.Notes()...)
	}
	slices.Sort(notes)
	return slices.Compact(notes)
}

// title names an object for people.
func (b *body) title() string {
	switch o := b.object; {
	case o.Kind == "star":
		return fmt.Sprintf("%s star of %s M", o.Interior, number(o.Radius).csv())
	case o.Kind == "shell":
		return fmt.Sprintf("shell of %s M", number(o.Radius).csv())
	case o.Charge != 0:
		return fmt.Sprintf("black hole of charge %s M", number(o.Charge).csv())
	}
	return "black hole"
}

// criticalDistance is b/b_c - 1.
func (b *body) criticalDistance(impact float64) float64 {
	if b.object.Charge == 0 {
		return geodesic.CriticalDistance(impact)
	}
	return impact/b.spacetime.CriticalImpact() - 1
}

// check refuses an observer that cannot be there, and a path on which no
// light reaches the observer.
func (b *body) check(p geodesic.Path) error {
	r := p.ObserverRadius
	if err := b.spacetime.Check(geodesic.Observer{Radius: r}); err != nil {
		if errors.Is(err, geodesic.ErrInside) {
			return refuse("%s; allowed: above %.6g M, or infinity", plain(err), b.spacetime.Edge())
		}
		return refuse("%s", plain(err))
	}
	if p.Impact > geodesic.MaxRadius {
		return refuse("impact %s M: nothing bends so far out; allowed: 0 to %g M", number(p.Impact).csv(), geodesic.MaxRadius)
	}
	if most := r / b.spacetime.Lapse(r); p.Impact > most {
		return refuse("impact %s M: no light reaches an observer at %s M with it; allowed: 0 to %s M",
			number(p.Impact).csv(), number(r).csv(), number(most).csv())
	}
	return nil
}

// objectFields is how JSON names an object; the radius is null for a hole,
// the interior but for a star, the charge but for a hole.
type objectFields struct {
	Object       string  `json:"object"`
	ObjectRadius number  `json:"object_radius"`
	Interior     *string `json:"interior"`
	Charge       number  `json:"charge"`
}

func (b *body) fields() objectFields {
	f := objectFields{Object: b.object.Kind, ObjectRadius: number(math.NaN()), Charge: number(math.NaN())}
	switch b.object.Kind {
	case "star":
		f.Interior = &b.object.Interior
		fallthrough
	case "shell":
		f.ObjectRadius = number(b.object.Radius)
	default:
		f.Charge = number(b.object.Charge)
	}
	return f
}

// traceReport is the JSON of one path.
type traceReport struct {
	Units map[string]string `json:"units"`
	objectFields
	ObserverRadius  number   `json:"observer_radius"`
	Impact          number   `json:"impact"`
	Tolerance       number   `json:"tolerance"`
	Fate            string   `json:"fate"`
	FateFrom        string   `json:"fate_from"` // what decided it
	SweptRad        number   `json:"swept_rad"`
	DeflectionRad   number   `json:"deflection_rad"`
	ClosestR        number   `json:"closest_r"`
	TravelTime      number   `json:"travel_time"`
	Steps           int      `json:"steps"`
	Evaluations     int      `json:"evaluations"`
	BoundRad        number   `json:"bound_rad"`
	ClosedFormSwept number   `json:"closed_form_swept_rad"`
	DifferenceRad   number   `json:"difference_rad"`
	NotIncluded     []string `json:"not_included"`
}

var traceUnits = map[string]string{
	"object_radius": "M", "charge": "M", "observer_radius": "M", "impact": "M",
	"swept_rad": "rad", "deflection_rad": "rad", "closest_r": "M", "travel_time": "M",
	"bound_rad": "rad", "closed_form_swept_rad": "rad", "difference_rad": "rad",
}

// difference is integrated minus closed form, NaN where there is none; where
// both are infinite they agree.
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
	if err := checkWorkers(o.workers); err != nil {
		return err
	}
	path := geodesic.Path{
		ObserverRadius: o.observerRadius.value,
		Impact:         o.impact.value,
		Tolerance:      o.tolerance.value,
	}
	known := bodies{}
	centre, err := known.of(o.placing)
	if err != nil {
		return err
	}
	if err := centre.check(path); err != nil {
		return err
	}
	story, err := centre.spacetime.Trace(path)
	if err != nil {
		return err
	}
	for _, n := range known.notes() {
		s.note("%s", n)
	}
	report := traceReport{
		Units: traceUnits, objectFields: centre.fields(),
		ObserverRadius: number(path.ObserverRadius),
		Impact:         number(path.Impact), Tolerance: number(path.Tolerance),
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
	return traceLines(s.out, centre, report)
}

// closedFormBound is how far the closed form is held to, in radians, by the
// tests of package geodesic.
const closedFormBound = 1e-12

// traceLines prints a report for people, with the digits that the bound
// supports.
func traceLines(w io.Writer, centre *body, r traceReport) error {
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
		const least = 1e-15 // M; less is the rounding of a path through the centre
		return honest(float64(x), max(relative*math.Abs(float64(x)), least)) + " M"
	}

	line("object", "%s", centre.title())
	switch observer := float64(r.ObserverRadius); {
	case math.IsInf(observer, 1):
		line("observer", "at infinity")
	case observer < centre.spacetime.Edge():
		line("observer", "static, r = %s M, within the shell", r.ObserverRadius.csv())
	default:
		line("observer", "static, r = %s M", r.ObserverRadius.csv())
	}
	impact := fmt.Sprintf("b = %s M", r.Impact.csv())
	if centre.spacetime.Edge() < centre.spacetime.PhotonSphere() {
		impact += fmt.Sprintf(", b/b_c - 1 = %.6g", centre.criticalDistance(float64(r.Impact)))
	}
	line("impact parameter", "%s", impact)
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
		fromInfinity := math.IsInf(float64(r.ObserverRadius), 1)
		within := float64(r.ObserverRadius) < centre.spacetime.Edge() // and so to infinity
		switch {
		case fromInfinity && r.Fate == geodesic.Escaped.String():
			text += " (less r* of both ends)"
		case fromInfinity || within:
			text += " (less r* of the end at infinity)"
		}
		line("travel time", "%s", text)
	}
	line("error bound", "%.1e rad on the swept angle", float64(r.BoundRad))
	if math.IsNaN(float64(r.ClosedFormSwept)) {
		line("closed form", "none for a charged hole")
	} else {
		line("closed form", "%s", angle(r.ClosedFormSwept, closedFormBound))
		line("difference", "%.1e rad, integrated less closed form", float64(r.DifferenceRad))
	}
	line("work", "%d steps, %d evaluations, tolerance %s", r.Steps, r.Evaluations, r.Tolerance.csv())
	_, err := io.WriteString(w, b.String())
	return err
}

// request is one row of a table of paths.
type request struct {
	line   int
	centre *body
	path   geodesic.Path
	text   string // the row as it was, for the output
}

// The columns of trace --table.
var (
	traceRequired = []string{"observer_radius", "impact"}
	traceOptional = []string{"object", "object_radius", "interior", "charge"}
	traceAdded    = []string{"fate", "swept_rad", "closest_r", "difference_rad"}
)

// columnNames turns the flags that a message names into columns.
var columnNames = strings.NewReplacer("--object-radius", "object_radius", "--", "")

// placed reads what a row says of the object, in the terms of the flags.
func placed(t *table, fields []string) (p placing, err error) {
	p.object, p.interior = t.field(fields, "object"), t.field(fields, "interior")
	if p.object == "" {
		p.object = "black-hole"
	}
	read := func(column string, q *quantity) error {
		text := t.field(fields, column)
		if text == "" {
			return nil
		}
		if q.value, err = parseLength(text); err != nil {
			return fmt.Errorf("%s: %w", column, err)
		}
		q.given = true
		return nil
	}
	if err := read("object_radius", &p.objectRadius); err != nil {
		return p, err
	}
	return p, read("charge", &p.charge)
}

// readRequests reads the whole table before anything is traced, so that a
// bad row writes nothing.
func readRequests(t *table, tolerance float64, known bodies) ([]request, error) {
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
		object, err := placed(t, fields)
		if err == nil {
			q.centre, err = known.of(object)
		}
		if err != nil {
			return nil, refuse("%s:%d: %s", t.name, line, columnNames.Replace(err.Error()))
		}
		if q.path.ObserverRadius, err = parseStation(t.field(fields, "observer_radius")); err != nil {
			return nil, t.wrong(line, "observer_radius", err)
		}
		if q.path.Impact, err = parseImpact(t.field(fields, "impact")); err != nil {
			return nil, t.wrong(line, "impact", err)
		}
		if err := q.centre.check(q.path); err != nil {
			return nil, usage{fmt.Errorf("%s:%d: %w", t.name, line, err)}
		}
		requests = append(requests, q)
	}
}

// trace follows the row's path.
func (q request) trace(t *table) (geodesic.Story, error) {
	story, err := q.centre.spacetime.Trace(q.path)
	if err != nil {
		return story, fmt.Errorf("%s:%d: %s", t.name, q.line, plain(err))
	}
	return story, nil
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
	known := bodies{}
	requests, err := readRequests(t, o.tolerance.value, known)
	if err != nil {
		return err
	}
	for _, n := range known.notes() {
		s.note("%s", n)
	}
	out := bufio.NewWriterSize(s.out, 1<<16)
	if o.json {
		err = traceTableJSON(ctx, out, t, requests, o.workers)
	} else {
		fmt.Fprintln(out, strings.Join(slices.Concat(t.columns, traceAdded), ","))
		err = inOrder(ctx, requests, o.workers, func(rows []request) ([]byte, error) {
			var text []byte
			for _, q := range rows {
				story, err := q.trace(t)
				if err != nil {
					return nil, err
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

// traceTableJSON prints the table as {"units":…, "rows":[…], "not_included":…}.
func traceTableJSON(ctx context.Context, out io.Writer, t *table, requests []request, workers int) error {
	type row struct {
		objectFields
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
			story, err := q.trace(t)
			if err != nil {
				return nil, err
			}
			made = append(made, row{
				objectFields:   q.centre.fields(),
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
	units := map[string]string{}
	for _, column := range slices.Concat(traceOptional, traceRequired, traceAdded) {
		if u, ok := traceUnits[column]; ok {
			units[column] = u
		}
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
				var r result
				r.err = guard.Work(func() (err error) {
					r.out, err = work(j.in)
					return err
				})()
				j.result <- r
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
