package sweep

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"math/rand/v2"
	"os"
	"os/exec"
	"os/signal"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"

	"annulet/app/files"
)

// The tests run this binary again as a worker of its own process, to be
// killed: common practice, no source.
func TestMain(m *testing.M) {
	if dir := os.Getenv("ANNULET_SWEEP_WORKER"); dir != "" {
		pause, err := time.ParseDuration(os.Getenv("ANNULET_SWEEP_PAUSE"))
		if err != nil {
			panic(err)
		}
		ctx, stop := signal.NotifyContext(context.Background(), syscall.SIGTERM)
		defer stop()
		if err := work(ctx, dir, pause); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.Exit(0)
	}
	os.Exit(m.Run())
}

// work does a whole sweep as the verb does, one case at a time.
func work(ctx context.Context, dir string, pause time.Duration) error {
	m, _, err := Begin(ctx, dir, trial())
	if err != nil {
		return err
	}
	if _, err := Run(ctx, dir, m, Options{Workers: 1}, produce(dir, pause)); err != nil {
		return err
	}
	_, _, err = Merge(ctx, dir, m)
	return err
}

// trial is a sweep of 24 cases.
func trial() *Manifest {
	axes := []Axis{must(ParseAxis("observer.inclination=10:80:10deg")), must(ParseAxis("emitter.index=1:3:1"))}
	cases, err := Outer(axes)
	if err != nil {
		panic(err)
	}
	m := &Manifest{Version: "test", Name: "@trial", Scene: "schema = 1\n[[emitter]]\nkind = \"disk\"\n", Axes: axes, Products: []string{"image"}}
	for _, c := range cases {
		m.Cases = append(m.Cases, Listing{Case: c})
	}
	return m
}

func must(a Axis, err error) Axis {
	if err != nil {
		panic(err)
	}
	return a
}

// produce writes some bytes in two halves with a pause between, and a line
// in a log beside the sweep for every case it begins.
func produce(dir string, pause time.Duration) Produce {
	return func(ctx context.Context, job *Job) error {
		if err := note(dir, beginsLog, job.Name); err != nil {
			return err
		}
		value := job.Document.Scene().Observer.Inclination
		job.Column("inclination", "deg", &value)
		err := job.Write(ctx, "image", ".bin", func(w io.Writer) error {
			half := bytes.Repeat(job.Document.Text(), 1000)
			if _, err := w.Write(half); err != nil {
				return err
			}
			if err := note(dir, writesLog, "half "+job.Name); err != nil {
				return err
			}
			time.Sleep(pause)
			_, err := w.Write(half)
			return err
		})
		return errors.Join(err, note(dir, writesLog, "whole "+job.Name))
	}
}

// Logs beside a sweep: cases begun, and files half and wholly written.
const beginsLog, writesLog = ".log", ".writes"

// note adds a line to a log, as one operation.
func note(dir, log, line string) error {
	f, err := os.OpenFile(dir+log, os.O_APPEND|os.O_CREATE|os.O_WRONLY, 0o666)
	if err != nil {
		return err
	}
	_, err = f.WriteString(line + "\n")
	return errors.Join(err, f.Close())
}

// halfWritten says whether the last line tells of a file begun and not
// finished.
func halfWritten(t *testing.T, dir string) bool {
	t.Helper()
	text, err := os.ReadFile(dir + writesLog)
	if err != nil && !errors.Is(err, fs.ErrNotExist) {
		t.Fatal(err)
	}
	lines := strings.Split(strings.TrimSpace(string(text)), "\n")
	return strings.HasPrefix(lines[len(lines)-1], "half ")
}

// contents reads a whole folder.
func contents(t *testing.T, dir string) map[string]string {
	t.Helper()
	all := map[string]string{}
	err := filepath.WalkDir(dir, func(path string, e fs.DirEntry, err error) error {
		if err != nil || e.IsDir() {
			return err
		}
		text, err := os.ReadFile(path)
		name, _ := filepath.Rel(dir, path)
		all[name] = string(text)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return all
}

func same(t *testing.T, got, want map[string]string) {
	t.Helper()
	for name := range got {
		if _, ok := want[name]; !ok {
			t.Errorf("litter: %s", name)
		}
	}
	for name := range want {
		if got[name] != want[name] {
			t.Errorf("%s differs or is missing", name)
		}
	}
}

// undisturbed is what a sweep that nobody kills leaves.
func undisturbed(t *testing.T) map[string]string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "sweep")
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	all := contents(t, dir)
	if len(all) != 24*2+4 {
		t.Fatalf("%d files", len(all))
	}
	return all
}

func worker(dir string, pause time.Duration) *exec.Cmd {
	cmd := exec.Command(os.Args[0])
	cmd.Stderr = os.Stderr
	cmd.Env = append(os.Environ(), "ANNULET_SWEEP_WORKER="+dir, "ANNULET_SWEEP_PAUSE="+pause.String())
	return cmd
}

// kills is how often a worker is killed: ANNULET_KILLS, for the long form.
func kills(t *testing.T) int {
	n, err := strconv.Atoi(os.Getenv("ANNULET_KILLS"))
	if err != nil || n < 1 {
		return 5
	}
	t.Logf("%d kills", n)
	return n
}

// Killed at random moments and started again, a sweep ends with the same
// bytes as one that was left alone.
func TestKilledSweepGoesOn(t *testing.T) {
	want := undisturbed(t)
	random := rand.New(rand.NewPCG(1, 2))
	left, midWrite := kills(t), 0
	wantMidWrite := left * 2 / 5 // of all kills, at least, in the middle of a file
	for left > 0 || midWrite < wantMidWrite {
		dir := filepath.Join(t.TempDir(), "sweep")
		for range 20 {
			cmd := worker(dir, 10*time.Millisecond)
			if err := cmd.Start(); err != nil {
				t.Fatal(err)
			}
			ended := make(chan error, 1)
			go func() { ended <- cmd.Wait() }()
			select {
			case err := <-ended: // the sweep is complete
				if err != nil {
					t.Fatal(err)
				}
			case <-time.After(time.Duration(20+random.IntN(150)) * time.Millisecond):
				if left == 0 && midWrite >= wantMidWrite {
					if err := <-ended; err != nil {
						t.Fatal(err)
					}
					break
				}
				_ = cmd.Process.Kill() // it may have ended just now
				if <-ended != nil {
					left = max(0, left-1)
					if halfWritten(t, dir) {
						midWrite++
					}
				}
				continue
			}
			break
		}
		if err := work(t.Context(), dir, 0); err != nil {
			t.Fatal(err)
		}
		same(t, contents(t, dir), want)
	}
	t.Logf("%d kills found a file half written", midWrite)
}

// Three processes on one folder share the cases: none is made twice, and the
// result is that of one.
func TestProcessesShare(t *testing.T) {
	want := undisturbed(t)
	dir := filepath.Join(t.TempDir(), "sweep")
	var all []*exec.Cmd
	for range 3 {
		cmd := worker(dir, 5*time.Millisecond)
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		all = append(all, cmd)
	}
	for _, cmd := range all {
		if err := cmd.Wait(); err != nil {
			t.Fatal(err)
		}
	}
	same(t, contents(t, dir), want)
	log, err := os.ReadFile(dir + ".log")
	if err != nil {
		t.Fatal(err)
	}
	begun := map[string]int{}
	for _, line := range strings.Fields(string(log)) {
		begun[line]++
	}
	for name, n := range begun {
		if n != 1 {
			t.Errorf("%s was made %d times", name, n)
		}
	}
	if len(begun) != 24 {
		t.Errorf("%d cases made", len(begun))
	}
}

// A truncated file and a damaged record make their cases be made again; a
// damaged manifest is written anew by the command that began it.
func TestDamageIsMended(t *testing.T) {
	want := undisturbed(t)
	dir := filepath.Join(t.TempDir(), "sweep")
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	m, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.Truncate(filepath.Join(dir, "image", m.Cases[3].Name+".bin"), 100); err != nil {
		t.Fatal(err)
	}
	if err := os.WriteFile(recordPath(dir, m.Cases[5].Name), []byte(`{"case":`), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, count := Survey(dir, m, false); count[Done] != 22 || count[Waiting] != 2 {
		t.Errorf("surveyed %v", count)
	}
	if err := os.Truncate(filepath.Join(dir, manifestName), 700); err != nil {
		t.Fatal(err)
	}
	if _, err := Load(dir); !errors.Is(err, ErrDamaged) {
		t.Errorf("a damaged manifest: %v", err)
	}
	before := linesOf(t, dir)
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	same(t, contents(t, dir), want)
	if made := linesOf(t, dir) - before; made != 2 {
		t.Errorf("%d cases made again, want 2", made)
	}
}

func linesOf(t *testing.T, dir string) int {
	t.Helper()
	log, err := os.ReadFile(dir + ".log")
	if err != nil {
		t.Fatal(err)
	}
	return bytes.Count(log, []byte("\n"))
}

// A case that fails or panics is recorded with its reason and the rest goes
// on; the next run tries it once more.
func TestFailuresAreRecorded(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "sweep")
	m, _, err := Begin(t.Context(), dir, trial())
	if err != nil {
		t.Fatal(err)
	}
	broken := true
	good := produce(dir, 0)
	faulty := func(ctx context.Context, job *Job) error {
		switch {
		case broken && strings.HasPrefix(job.Name, "0004"):
			return errors.New("no light")
		case broken && strings.HasPrefix(job.Name, "0007"):
			panic("index out of range")
		}
		return good(ctx, job)
	}
	tally, err := Run(t.Context(), dir, m, Options{Workers: 2}, faulty)
	if err != nil || tally.Done != 22 || tally.Failed != 2 || tally.Waiting != 0 {
		t.Fatalf("%+v, %v", tally, err)
	}
	records, count := Survey(dir, m, false)
	reasons := Reasons(records)
	if count[Failed] != 2 || len(reasons) != 2 || reasons[0].Text != "no light" || !strings.Contains(reasons[1].Text, "index out of range") {
		t.Errorf("%v, %v", count, reasons)
	}
	broken = false
	if tally, err = Run(t.Context(), dir, m, Options{Workers: 2}, faulty); err != nil || tally.Made != 2 || tally.Failed != 0 {
		t.Errorf("second run: %+v, %v", tally, err)
	}
	if _, _, err := Merge(t.Context(), dir, m); err != nil {
		t.Fatal(err)
	}
	same(t, contents(t, dir), undisturbed(t))
}

// A full disk ends the sweep, and records nothing of the case.
func TestFullDiskEndsTheSweep(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "sweep")
	m, _, err := Begin(t.Context(), dir, trial())
	if err != nil {
		t.Fatal(err)
	}
	_, err = Run(t.Context(), dir, m, Options{Workers: 1}, func(context.Context, *Job) error {
		return fmt.Errorf("image: %w", files.ErrDiskFull)
	})
	if !errors.Is(err, files.ErrDiskFull) {
		t.Errorf("%v", err)
	}
	if _, count := Survey(dir, m, false); count[Waiting] != 24 {
		t.Errorf("%v", count)
	}
}

func TestOtherSweepIsRefused(t *testing.T) {
	dir := filepath.Join(t.TempDir(), "sweep")
	if _, _, err := Begin(t.Context(), dir, trial()); err != nil {
		t.Fatal(err)
	}
	other := trial()
	other.Scene += "inner = \"7 M\"\n"
	if _, _, err := Begin(t.Context(), dir, other); !errors.Is(err, ErrOther) {
		t.Errorf("another scene: %v", err)
	}
	full := t.TempDir()
	if err := os.WriteFile(filepath.Join(full, "thesis.tex"), []byte("x"), 0o666); err != nil {
		t.Fatal(err)
	}
	if _, _, err := Begin(t.Context(), full, trial()); err == nil {
		t.Error("a folder full of other files was taken")
	}
}

// Chunks cut the cases into disjoint parts that together are all.
func TestChunks(t *testing.T) {
	for n := range 50 {
		for chunks := 1; chunks < 12; chunks++ {
			end := 0
			for k := range chunks {
				from, to := ChunkBounds(n, k, chunks)
				if from != end || to < from {
					t.Fatalf("chunk %d of %d of %d: %d to %d", k, chunks, n, from, to)
				}
				end = to
			}
			if end != n {
				t.Fatalf("%d chunks of %d end at %d", chunks, n, end)
			}
		}
	}
}
