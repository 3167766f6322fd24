package sweep

import (
	"context"
	"errors"
	"fmt"
	"io"
	"os"
	"path"
	"path/filepath"
	"runtime"
	"strconv"
	"sync"
	"time"

	"annulet/app/files"
	"annulet/geodesic/guard"
	"annulet/scenes"

	"golang.org/x/sync/errgroup"
)

// Produce makes all files of one case. It must depend on nothing but the job
// and stop soon when ctx ends. What it returns is recorded as the case's
// failure, except that files.ErrDiskFull and files.ErrReadOnly end the sweep.
type Produce func(ctx context.Context, job *Job) error

// Options is what Run needs, and no more.
type Options struct {
	Workers int // cases at a time; 0 means GOMAXPROCS
	// Chunk and Chunks take one of that many equal parts of the cases,
	// Chunk counted from 0; Chunks 0 means all.
	Chunk, Chunks int
	Report        func(Tally) // called one at a time; nil for none
}

// Tally counts the cases of a run.
type Tally struct {
	Cases   int // asked for
	Done    int // whole by now
	Failed  int
	Made    int // done by this run
	Waiting int // neither, when the run ended
}

// Job is one case to make.
type Job struct {
	Case
	Document *scenes.Document // of the case
	Dir      string           // of the sweep

	files   []FileSummary
	columns []Column
}

// Write writes PRODUCT/NAME.EXTENSION.
func (j *Job) Write(ctx context.Context, product, extension string, fill func(io.Writer) error) error {
	name := path.Join(product, j.Name+extension)
	full := filepath.Join(j.Dir, filepath.FromSlash(name))
	if err := os.MkdirAll(filepath.Dir(full), 0o777); err != nil {
		return err
	}
	if err := files.Write(ctx, full, 0o666, fill); err != nil {
		return err
	}
	summary, err := summarise(j.Dir, name)
	j.files = append(j.files, summary)
	return err
}

// Column adds one entry to the case's row of the merged table.
func (j *Job) Column(name, unit string, value *float64) {
	j.columns = append(j.columns, Column{name, unit, value})
}

// Run makes the cases that are not done yet, and those that failed before
// once more. It works beside other processes on the same folder and returns
// when no case is left to anybody. The error is not nil if the run could not
// go on; failed cases are told by the tally and their records.
func Run(ctx context.Context, dir string, m *Manifest, o Options, produce Produce) (Tally, error) {
	r, err := newRunner(dir, m, o, produce)
	if err != nil {
		return Tally{}, err
	}
	defer r.claims.close()
	left := r.part(o)
	r.tally.Cases = len(left)
	for {
		busy, err := r.pass(ctx, left, o.workers())
		if err != nil {
			return r.tally, err
		}
		if len(busy) == 0 {
			return r.tally, nil
		}
		left = busy
		select { // others are at work on them, or have died
		case <-ctx.Done():
			return r.tally, ctx.Err()
		case <-time.After(pollEvery):
		}
	}
}

// pollEvery is how often a run looks whether others have finished.
const pollEvery = 500 * time.Millisecond

func (o Options) workers() int {
	if o.Workers > 0 {
		return o.Workers
	}
	return runtime.GOMAXPROCS(0)
}

// runner is one Run.
type runner struct {
	dir     string
	m       *Manifest
	of      []string // digest of each case; "" until it is worked out
	failed  []bool   // before this run began
	claims  *claims
	produce Produce
	report  func(Tally)

	mu    sync.Mutex
	tally Tally
}

func newRunner(dir string, m *Manifest, o Options, produce Produce) (*runner, error) {
	if o.Chunks < 0 || o.Chunk < 0 || o.Chunks > 0 && o.Chunk >= o.Chunks {
		return nil, fmt.Errorf("chunk %d of %d: want 0 to one less than their number", o.Chunk, o.Chunks)
	}
	if err := os.MkdirAll(filepath.Join(dir, recordsFolder), 0o777); err != nil {
		return nil, err
	}
	return &runner{
		dir: dir, m: m, claims: openClaims(dir), produce: produce, report: o.Report,
		of: make([]string, len(m.Cases)), failed: make([]bool, len(m.Cases)),
	}, nil
}

// part lists the cases of the chunk.
func (r *runner) part(o Options) []int {
	n := len(r.m.Cases)
	from, to := 0, n
	if o.Chunks > 0 {
		from, to = ChunkBounds(n, o.Chunk, o.Chunks)
	}
	var part []int
	for k := from; k < to; k++ {
		part = append(part, k)
	}
	return part
}

// ChunkBounds returns the cases from (inclusive) and to (exclusive) of chunk
// k of n cases cut into that many chunks.
func ChunkBounds(n, k, chunks int) (from, to int) { return n * k / chunks, n * (k + 1) / chunks }

// pass goes through the cases once and returns those others are at work on.
func (r *runner) pass(ctx context.Context, cases []int, workers int) (busy []int, err error) {
	group, ctx := errgroup.WithContext(ctx)
	next := make(chan int)
	group.Go(func() error {
		defer close(next)
		for _, k := range cases {
			select {
			case next <- k:
			case <-ctx.Done():
				return ctx.Err()
			}
		}
		return nil
	})
	var mu sync.Mutex
	for range workers {
		group.Go(func() error {
			for k := range next {
				taken, err := r.one(ctx, k)
				if err != nil {
					return err
				}
				if !taken {
					mu.Lock()
					busy = append(busy, k)
					mu.Unlock()
				}
			}
			return nil
		})
	}
	return busy, group.Wait()
}

// one brings a case to its end, unless somebody else is at work on it.
func (r *runner) one(ctx context.Context, k int) (finished bool, err error) {
	name := r.m.Cases[k].Name
	document, documentErr := r.m.Document(k)
	first := r.of[k] == ""
	r.of[k] = r.m.digest(k, document)
	old, valid := readRecord(r.dir, name, r.of[k])
	if first {
		r.failed[k] = valid && old.State == Failed
	}
	if r.settled(k, old, valid) {
		return true, nil
	}
	l, err := r.claims.take(name)
	if l == nil || err != nil {
		return false, err
	}
	defer r.claims.release(name)
	// it may have been finished between the look and the claim
	if now, valid := readRecord(r.dir, name, r.of[k]); r.settled(k, now, valid) {
		return true, nil
	}
	job := &Job{Case: r.m.Cases[k].Case, Document: document, Dir: r.dir}
	err = documentErr
	if err == nil {
		err = guard.Work(func() error { return r.produce(ctx, job) })()
	}
	if err := endsSweep(ctx, err); err != nil {
		return false, fmt.Errorf("case %s: %w", name, err)
	}
	if !r.claims.ours(l) {
		return false, nil // this process slept; another is at work on it
	}
	record := Record{Case: name, Of: r.of[k], State: Done, Files: job.files, Columns: job.columns}
	if err != nil {
		record = Record{Case: name, Of: r.of[k], State: Failed, Reason: err.Error()}
	}
	if err := record.write(ctx, r.dir); err != nil {
		return false, err
	}
	r.count(record.State, true)
	return true, nil
}

// settled counts a case that needs no more work: done, or failed since this
// run began.
func (r *runner) settled(k int, record Record, valid bool) bool {
	if !valid || record.State == Failed && r.failed[k] {
		return false
	}
	r.count(record.State, false)
	return true
}

// endsSweep returns the error of a case if it concerns all of them.
func endsSweep(ctx context.Context, err error) error {
	if ctx.Err() != nil {
		return ctx.Err()
	}
	if errors.Is(err, files.ErrDiskFull) || errors.Is(err, files.ErrReadOnly) {
		return err
	}
	return nil
}

func (r *runner) count(s State, made bool) {
	r.mu.Lock()
	defer r.mu.Unlock()
	switch {
	case s == Done && made:
		r.tally.Done++
		r.tally.Made++
	case s == Done:
		r.tally.Done++
	default:
		r.tally.Failed++
	}
	r.tally.Waiting = r.tally.Cases - r.tally.Done - r.tally.Failed
	if r.report != nil {
		r.report(r.tally)
	}
}

// Document returns the scene of a case.
func (m *Manifest) Document(k int) (*scenes.Document, error) {
	d, err := scenes.Parse(m.Name, []byte(m.Scene))
	if err != nil {
		return nil, err
	}
	set := make([]scenes.Assignment, 0, len(m.Cases[k].Set))
	for _, s := range m.Cases[k].Set {
		set = append(set, scenes.Assignment{Path: s.Key, Value: s.Value})
	}
	return d, d.SetAll(set...)
}

// digest is that of what the bytes of case k depend on. The files that a
// scene names, a sky or a table, do not count: keep them as they are while a
// sweep runs.
func (m *Manifest) digest(k int, d *scenes.Document) string {
	text := ""
	if d != nil {
		text = string(d.Text())
	}
	parts := append([]string{strconv.Itoa(manifestFormat), m.Version, text}, m.Products...)
	return digest(parts...)
}
