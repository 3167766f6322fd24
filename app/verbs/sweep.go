package verbs

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"runtime"
	"runtime/debug"
	"slices"
	"strconv"
	"strings"
	"text/tabwriter"
	"time"

	"github.com/spf13/cobra"

	"annulet/app/sweep"
)

func newSweep(s streams) *cobra.Command {
	var o sweepOptions
	cmd := &cobra.Command{
		Use:   "sweep SCENE --vary KEY=FROM:TO:STEP --out DIR",
		Short: "make many scenes of one, on all cores or on a cluster, and go on where it was",
		Long: "Makes a case of every combination of the keys that vary, or of every row of a\n" +
			"table, and writes what is asked for of each into one folder, with a manifest and\n" +
			"one merged table. Killed at any moment and started again by the same command, it\n" +
			"goes on; any number of processes, also on several hosts, may share the folder. A\n" +
			"case that fails is recorded with its reason and the rest goes on.\n\n" +
			"With --cluster slurm the same command writes a job array for Slurm and hands it in;\n" +
			"given again, it hands in what is not finished. Under any other scheduler, or GNU\n" +
			"parallel, let each task run  sweep resume DIR --chunk K/N  with K from 0 to N-1,\n" +
			"and  sweep merge DIR  after them.",
		Example: "  annulet-batch sweep @first-light --vary observer.inclination=10:80:10deg --out grid\n" +
			"  annulet-batch sweep @first-light --vary observer.inclination=10:80:5deg --vary emitter.index=1,2,3 --product image --out grid\n" +
			"  annulet-batch sweep scene.toml --cases cases.csv --out grid --cluster slurm --task-time 30 --dry-run\n" +
			"  annulet-batch sweep status grid",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error {
			return o.begin(cmd.Context(), s, args[0])
		},
	}
	f := cmd.Flags()
	f.StringArrayVar(&o.vary, "vary", nil, "`KEY=FROM:TO:STEP` or KEY=VALUE,VALUE,…; repeatable: all combinations")
	f.StringVar(&o.cases, "cases", "", "CSV `FILE` whose header names keys, with one row a case")
	f.StringVar(&o.dir, "out", "", "`DIR` of the sweep; made if it is not there")
	f.StringArrayVar(&o.products, "product", nil, "what to make of each case: "+strings.Join(productNames(), ", ")+"; repeatable (default "+strings.Join(defaultProducts, ", ")+")")
	f.StringVar(&o.cluster, "cluster", "", "hand the cases in as a job array: slurm")
	f.StringVar(&o.slurm.Account, "task-account", "", "Slurm: `ACCOUNT` to charge")
	f.StringVar(&o.slurm.Partition, "task-partition", "", "Slurm: `PARTITION`")
	f.StringVar(&o.slurm.Time, "task-time", "", "Slurm: `TIME` limit of a task")
	f.StringVar(&o.slurm.Memory, "task-memory", "", "Slurm: `MEMORY` of a task (default: what the cases need)")
	f.IntVar(&o.slurm.Cores, "task-cores", 1, "Slurm: cores of a task")
	f.IntVar(&o.slurm.AtOnce, "tasks-at-once", 0, "Slurm: tasks that may run at a time; 0 for no limit")
	f.IntVar(&o.slurm.Chunks, "tasks", 0, "Slurm: how many tasks the cases are cut into (default: some minutes each, by the time the first case takes)")
	f.BoolVar(&o.dryRun, "dry-run", false, "show the cases and the job script, write and hand in nothing")
	addSet(f, &o.set)
	o.addRunning(cmd)
	cmd.AddCommand(newSweepStatus(s), newSweepResume(s), newSweepMerge(s))
	return cmd
}

// sweepOptions is what sweep and sweep resume are asked for.
type sweepOptions struct {
	vary, products, set []string
	cases, dir, cluster string
	slurm               sweep.Slurm
	dryRun              bool

	chunk   string
	workers int
	memory  string
	asJSON  bool
}

// addRunning adds the flags that begin and resume share.
func (o *sweepOptions) addRunning(cmd *cobra.Command) {
	cmd.Flags().IntVar(&o.workers, "workers", 0, "cases at a time; 0 means SLURM_CPUS_PER_TASK, or one a processor")
	cmd.Flags().StringVar(&o.memory, "memory", "", "stay below `SIZE`, as in 2GiB, with fewer cases at a time if need be")
	cmd.Flags().BoolVar(&o.asJSON, "json", false, "print a summary as one JSON document on stdout")
}

func newSweepStatus(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "status DIR",
		Short: "how far a sweep is, what failed and why, what waits in the queue",
		Args:  takes(1, "one DIR"),
		RunE: func(cmd *cobra.Command, args []string) error {
			m, err := loadSweep(args[0])
			if err != nil {
				return err
			}
			records, count := sweep.Survey(args[0], m, true)
			tasks, err := sweep.Queue(cmd.Context(), args[0])
			if err != nil {
				s.note("the queue cannot be read: %v", err)
			}
			if asJSON {
				return writeJSON(s.out, sweepSummary(args[0], m, records, count, tasks))
			}
			return printStatus(s.out, m, records, count, tasks)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print one JSON document on stdout")
	return cmd
}

func newSweepResume(s streams) *cobra.Command {
	var o sweepOptions
	cmd := &cobra.Command{
		Use:   "resume DIR",
		Short: "go on with a sweep, or do one part of it",
		Args:  takes(1, "one DIR"),
		RunE: func(cmd *cobra.Command, args []string) error {
			m, err := loadSweep(args[0])
			if err != nil {
				return err
			}
			if m.Version != Version {
				return refuse("%s was begun by version %s, this is %s: its cases would not be alike", args[0], m.Version, Version)
			}
			o.dir = args[0]
			r, err := o.running(m)
			if err != nil {
				return err
			}
			return o.work(cmd.Context(), s, m, r)
		},
	}
	cmd.Flags().StringVar(&o.chunk, "chunk", "", "only part `K/N` of the cases, K from 0 to N-1, and do not merge")
	o.addRunning(cmd)
	return cmd
}

func newSweepMerge(s streams) *cobra.Command {
	var asJSON bool
	cmd := &cobra.Command{
		Use:   "merge DIR",
		Short: "write the states of all cases into the manifest, and the merged table",
		Args:  takes(1, "one DIR"),
		RunE: func(cmd *cobra.Command, args []string) error {
			m, err := loadSweep(args[0])
			if err != nil {
				return err
			}
			return finishSweep(cmd.Context(), s, args[0], m, asJSON)
		},
	}
	cmd.Flags().BoolVar(&asJSON, "json", false, "print a summary as one JSON document on stdout")
	return cmd
}

// loadSweep reads a manifest; that there is none, or a damaged one, is the
// request's fault.
func loadSweep(dir string) (*sweep.Manifest, error) {
	m, err := sweep.Load(dir)
	if err != nil {
		return nil, usage{err}
	}
	return m, checkProducts(m.Products)
}

// begin starts a sweep or goes on with it.
func (o *sweepOptions) begin(ctx context.Context, s streams, scene string) error {
	m, err := o.manifest(s, scene)
	if err != nil {
		return err
	}
	switch {
	case o.dir == "" && !o.dryRun:
		return refuse("where shall it go? Give --out DIR")
	case o.cluster != "" && o.cluster != "slurm":
		return refuse("--cluster %s: allowed: slurm", o.cluster)
	case o.slurm.Cores < 1 || o.slurm.AtOnce < 0 || o.slurm.Chunks < 0 || o.slurm.Chunks > len(m.Cases):
		return refuse("--task-cores %d --tasks-at-once %d --tasks %d: allowed: 1 or more, 0 or more, 0 to the number of cases, %d",
			o.slurm.Cores, o.slurm.AtOnce, o.slurm.Chunks, len(m.Cases))
	}
	r, err := o.running(m)
	if err != nil {
		return err
	}
	if o.dryRun {
		return o.rehearse(ctx, s, m)
	}
	m, there, err := sweep.Begin(ctx, o.dir, m)
	if err != nil {
		if errors.Is(err, sweep.ErrOther) {
			return usage{err}
		}
		return err
	}
	if there {
		s.note("%s: going on", o.dir)
	}
	if o.cluster != "" {
		return o.submit(ctx, s, m)
	}
	return o.work(ctx, s, m, r)
}

// manifest works out the cases. The scene and the first case must be right;
// a later case that is not fails when its turn comes.
func (o *sweepOptions) manifest(s streams, scene string) (*sweep.Manifest, error) {
	d, err := s.loadScene(scene, o.set)
	if err != nil {
		return nil, err
	}
	m := &sweep.Manifest{Version: Version, Name: d.Name(), Scene: string(d.Text()), Products: o.products}
	if !strings.HasPrefix(m.Name, "@") {
		if m.Name, err = filepath.Abs(m.Name); err != nil {
			return nil, err
		}
	}
	if len(m.Products) == 0 {
		m.Products = defaultProducts
	}
	if err := checkProducts(m.Products); err != nil {
		return nil, err
	}
	cases, axes, err := o.listCases()
	if err != nil {
		return nil, err
	}
	m.Axes = axes
	for _, c := range cases {
		m.Cases = append(m.Cases, sweep.Listing{Case: c})
	}
	first, err := m.Document(0)
	if err == nil {
		err = s.confine(first)
	}
	if err != nil {
		return nil, refuse("case %s: %w", m.Cases[0].Name, err)
	}
	return m, nil
}

func (o *sweepOptions) listCases() (cases []sweep.Case, axes []sweep.Axis, err error) {
	switch {
	case (len(o.vary) == 0) == (o.cases == ""):
		return nil, nil, refuse("what shall vary? Give --vary KEY=FROM:TO:STEP, or --cases FILE")
	case o.cases != "":
		f, err := os.Open(o.cases)
		if err != nil {
			return nil, nil, usage{err}
		}
		defer f.Close()
		sets, err := sweep.ReadCases(o.cases, f)
		if err != nil {
			return nil, nil, usage{err}
		}
		return sweep.Named(sets), nil, nil
	}
	for _, text := range o.vary {
		axis, err := sweep.ParseAxis(text)
		if err != nil {
			return nil, nil, refuse("--vary %w", err)
		}
		axes = append(axes, axis)
	}
	cases, err = sweep.Outer(axes)
	if err != nil {
		return nil, nil, refuse("--vary: %w", err)
	}
	return cases, axes, nil
}

// work makes the cases here and, unless it is only a part, merges.
func (o *sweepOptions) work(ctx context.Context, s streams, m *sweep.Manifest, r running) error {
	r.Report = newSweepProgress(s.err).report
	kitchen := newKitchen(m.Products, max(1, r.cores/r.Workers), s)
	tally, err := sweep.Run(ctx, o.dir, m, r.Options, kitchen.make)
	if err != nil {
		return err
	}
	if o.chunk == "" {
		return finishSweep(ctx, s, o.dir, m, o.asJSON)
	}
	s.note("%d cases: %d done (%d by this run), %d failed", tally.Cases, tally.Done, tally.Made, tally.Failed)
	if tally.Failed > 0 {
		return fmt.Errorf("%d cases failed; sweep status %s tells why", tally.Failed, o.dir)
	}
	return nil
}

// running is how many cases to make at a time, which, and on how many cores.
type running struct {
	sweep.Options
	cores int
}

// running works it out.
func (o *sweepOptions) running(m *sweep.Manifest) (r running, err error) {
	if err := checkWorkers(o.workers); err != nil {
		return r, err
	}
	r.Workers = o.workers
	if r.Workers == 0 {
		r.Workers = allottedCores()
	}
	if o.chunk != "" {
		k, n, ok := strings.Cut(o.chunk, "/")
		var err2 error
		r.Chunk, err = strconv.Atoi(k)
		r.Chunks, err2 = strconv.Atoi(n)
		if !ok || err != nil || err2 != nil || r.Chunks < 1 || r.Chunk < 0 || r.Chunk >= r.Chunks {
			return r, refuse("--chunk %q: allowed: K/N with K from 0 to N-1, as in 3/20", o.chunk)
		}
	}
	r.cores = r.Workers
	return r, o.fitMemory(m, &r.Options)
}

// allottedCores is how many processors Slurm gave the task, or those of the
// machine.
func allottedCores() int {
	if n, err := strconv.Atoi(os.Getenv("SLURM_CPUS_PER_TASK")); err == nil && n > 0 {
		return n
	}
	return runtime.GOMAXPROCS(0)
}

// fitMemory lowers the number of cases at a time to what fits.
func (o *sweepOptions) fitMemory(m *sweep.Manifest, options *sweep.Options) error {
	options.Workers = min(options.Workers, len(m.Cases))
	if o.memory == "" {
		return nil
	}
	limit, err := parseBytes(o.memory)
	if err != nil {
		return refuse("--memory %w", err)
	}
	need := largestCase(m)
	room := (limit - programBytes) / need
	if room < 1 {
		return refuse("--memory %s: one case needs %s, and the program itself %s", o.memory, showBytes(need), showBytes(programBytes))
	}
	options.Workers = int(min(int64(options.Workers), room))
	debug.SetMemoryLimit(limit - programBytes/4) // code and stacks of threads are not counted there
	return nil
}

// programBytes is what the program needs besides the cases: code, tables,
// shared orbits of some observers. Measured, rounded up.
const programBytes = 128 << 20

// largestCase is the memory of the case with the most pixels, in bytes: the
// layers that its products read, and as much again while files are written.
func largestCase(m *sweep.Manifest) int64 {
	const copies, bytesPerValue = 2, 4
	var most int64
	for k := range m.Cases {
		if d, err := m.Document(k); err == nil {
			s := d.Scene()
			values := int64(s.Field.Pixels[0]) * int64(s.Field.Pixels[1]) * int64(1+len(layersOf(m.Products))*(s.Trace.MaxOrder+1))
			most = max(most, copies*bytesPerValue*values)
		}
	}
	return max(most, 1<<20)
}

// finishSweep merges and says how it went.
func finishSweep(ctx context.Context, s streams, dir string, m *sweep.Manifest, asJSON bool) error {
	records, count, err := sweep.Merge(ctx, dir, m)
	if err != nil {
		return err
	}
	if asJSON {
		err = writeJSON(s.out, sweepSummary(dir, m, records, count, nil))
	} else {
		err = printStatus(s.out, m, records, count, nil)
	}
	if err == nil && count[sweep.Done] != len(m.Cases) {
		err = fmt.Errorf("%d of %d cases are done", count[sweep.Done], len(m.Cases))
	}
	return err
}

// summary is the JSON of a sweep.
type summary struct {
	Dir     string         `json:"dir"`
	Cases   int            `json:"cases"`
	Done    int            `json:"done"`
	Failed  int            `json:"failed"`
	Running int            `json:"running"`
	Waiting int            `json:"waiting"`
	Reasons []sweep.Reason `json:"reasons"`
	Queue   []sweep.Task   `json:"queue"`
}

func sweepSummary(dir string, m *sweep.Manifest, records []sweep.Record, count sweep.Count, tasks []sweep.Task) summary {
	return summary{
		Dir: dir, Cases: len(m.Cases),
		Done: count[sweep.Done], Failed: count[sweep.Failed], Running: count[sweep.Running], Waiting: count[sweep.Waiting],
		Reasons: append([]sweep.Reason{}, sweep.Reasons(records)...), Queue: append([]sweep.Task{}, tasks...),
	}
}

func printStatus(w io.Writer, m *sweep.Manifest, records []sweep.Record, count sweep.Count, tasks []sweep.Task) error {
	t := tabwriter.NewWriter(w, 0, 0, 2, ' ', 0)
	fmt.Fprintf(t, "cases\t%d\n", len(m.Cases))
	for _, state := range []sweep.State{sweep.Done, sweep.Failed, sweep.Running, sweep.Waiting} {
		fmt.Fprintf(t, "%s\t%d\n", state, count[state])
	}
	if err := t.Flush(); err != nil {
		return err
	}
	for _, r := range sweep.Reasons(records) {
		fmt.Fprintf(w, "failed: %d, the first %s: %s\n", r.Cases, r.First, r.Text)
	}
	for _, task := range tasks {
		what := fmt.Sprintf("part %d of %d", task.Chunk, task.Of)
		if task.Chunk < 0 {
			what = "merge"
		}
		fmt.Fprintf(w, "queue: job %s, %s, %s\n", task.Job, what, strings.ToLower(task.State))
	}
	return nil
}

// taskTime is how long a task of a cluster should take: much longer than
// Slurm needs to start it, short enough to fit between other jobs. Taste.
const taskTime = 5 * time.Minute

// submit hands in what is not finished and not in the queue.
func (o *sweepOptions) submit(ctx context.Context, s streams, m *sweep.Manifest) error {
	if err := o.completeSlurm(ctx, s, m); err != nil {
		return err
	}
	records, _ := sweep.Survey(o.dir, m, false)
	chunks := o.slurm.Unfinished(records)
	tasks, err := sweep.Queue(ctx, o.dir)
	if err != nil {
		return err
	}
	for _, t := range tasks {
		if t.Chunk >= 0 && t.Of == o.slurm.Chunks {
			chunks = slices.DeleteFunc(chunks, func(k int) bool { return k == t.Chunk })
		} else if t.Chunk >= 0 {
			return refuse("job %s of this sweep, cut into %d parts, is still in the queue: give --tasks %d", t.Job, t.Of, t.Of)
		}
	}
	if len(chunks) == 0 {
		s.note("nothing to hand in: every part is finished or in the queue")
		return printStatus(s.out, m, records, countOf(records), tasks)
	}
	sub, err := o.slurm.Submit(ctx, o.dir, chunks)
	if err != nil {
		return err
	}
	_, err = fmt.Fprintf(s.out, "handed in: job %s, %d of %d parts; merge: job %s\n", sub.Job, len(chunks), sub.Chunks, sub.Merge)
	return err
}

func countOf(records []sweep.Record) sweep.Count {
	count := sweep.Count{}
	for _, r := range records {
		count[r.State]++
	}
	return count
}

// completeSlurm fills in what was left open: the paths, the memory, and the
// number of tasks by making the first case that is not done here. An array
// handed in before keeps its number of tasks.
func (o *sweepOptions) completeSlurm(ctx context.Context, s streams, m *sweep.Manifest) error {
	program, err := os.Executable()
	if err != nil {
		return err
	}
	o.slurm.Program = program
	if *s.onlyBelow != "" {
		if o.slurm.OnlyBelow, err = filepath.Abs(*s.onlyBelow); err != nil {
			return err
		}
	}
	if o.dir, err = filepath.Abs(o.dir); err != nil {
		return err
	}
	if o.slurm.Memory == "" {
		need := programBytes + int64(o.slurm.Cores)*largestCase(m)
		o.slurm.Memory = fmt.Sprintf("%dM", need>>20+1)
	}
	if o.slurm.Chunks > 0 {
		return nil
	}
	earlier, err := sweep.Submissions(o.dir)
	if err != nil {
		return err
	}
	if len(earlier) > 0 {
		o.slurm.Chunks = earlier[len(earlier)-1].Chunks
		return nil
	}
	began := time.Now()
	if o.dryRun {
		err = timeCase(ctx, m, o.slurm.Cores, s)
	} else {
		_, err = sweep.Run(ctx, o.dir, m, sweep.Options{Workers: 1, Chunks: len(m.Cases)}, newKitchen(m.Products, o.slurm.Cores, s).make)
	}
	if err != nil {
		return err
	}
	took := time.Since(began)
	all := time.Duration(len(m.Cases)) * took / time.Duration(o.slurm.Cores)
	o.slurm.Chunks = min(len(m.Cases), int(all/taskTime)+1)
	s.note("the first case took %v: %d tasks of about %v each", took.Round(time.Millisecond), o.slurm.Chunks, (all / time.Duration(o.slurm.Chunks)).Round(time.Second))
	return nil
}

// timeCase makes the first case and throws it away.
func timeCase(ctx context.Context, m *sweep.Manifest, cores int, s streams) error {
	dir, err := os.MkdirTemp("", "annulet-sweep-")
	if err != nil {
		return err
	}
	_, err = sweep.Run(ctx, dir, m, sweep.Options{Workers: 1, Chunks: len(m.Cases)}, newKitchen(m.Products, cores, s).make)
	return errors.Join(err, os.RemoveAll(dir))
}

// rehearse shows what would be done.
func (o *sweepOptions) rehearse(ctx context.Context, s streams, m *sweep.Manifest) error {
	const shown = 5
	for k, c := range m.Cases {
		if k == shown {
			fmt.Fprintf(s.out, "… %d cases in all\n", len(m.Cases))
			break
		}
		fmt.Fprintln(s.out, c.Name)
	}
	if o.cluster == "" {
		return nil
	}
	if o.dir == "" {
		o.dir = "DIR"
	}
	if err := o.completeSlurm(ctx, s, m); err != nil {
		return err
	}
	chunks := make([]int, o.slurm.Chunks)
	for k := range chunks {
		chunks[k] = k
	}
	_, err := fmt.Fprintf(s.out, "\n%s\n%s", o.slurm.ArrayScript(o.dir, chunks), o.slurm.MergeScript(o.dir))
	return err
}

// parseBytes reads a size such as 2GiB or 500 MB.
func parseBytes(text string) (int64, error) {
	units := []struct {
		name  string
		bytes float64
	}{{"KiB", 1 << 10}, {"MiB", 1 << 20}, {"GiB", 1 << 30}, {"TiB", 1 << 40}, {"kB", 1e3}, {"MB", 1e6}, {"GB", 1e9}, {"TB", 1e12}}
	for _, u := range units {
		number, ok := strings.CutSuffix(strings.TrimSpace(text), u.name)
		if !ok {
			continue
		}
		x, err := parseFinite(number)
		if err != nil || x <= 0 || x*u.bytes > 1e15 {
			break
		}
		return int64(x * u.bytes), nil
	}
	return 0, fmt.Errorf("%q is no size; allowed: a number with KiB, MiB, GiB, TiB, kB, MB, GB or TB", text)
}

func showBytes(n int64) string { return fmt.Sprintf("%.4g MiB", float64(n)/(1<<20)) }
