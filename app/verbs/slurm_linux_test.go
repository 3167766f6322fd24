package verbs

import (
	"encoding/json"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"
	"testing"
	"time"
)

// TestSlurm does sweeps on a real cluster, by the program as it is built:
// the long form, make soak, starts one of one node. ANNULET_SLURM=1 says that
// a cluster is there.
func TestSlurm(t *testing.T) {
	if os.Getenv("ANNULET_SLURM") == "" {
		t.Skip("the long form: make soak")
	}
	dir := folder(t)
	batch := filepath.Join(dir, "annulet-batch")
	build := exec.Command("go", "build", "-o", batch, "annulet/app/annulet-batch")
	build.Dir, build.Env = sourceFolder, append(os.Environ(), "CGO_ENABLED=0")
	if out, err := build.CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	// run wants an exit code and returns what was printed.
	run := func(code int, args ...string) string {
		t.Helper()
		cmd := exec.Command(batch, args...)
		out, err := cmd.CombinedOutput()
		if cmd.ProcessState == nil || cmd.ProcessState.ExitCode() != code {
			t.Fatalf("%s: %v, want exit code %d: %s", strings.Join(args, " "), err, code, out)
		}
		return string(out)
	}
	status := func(dir string) (s summary) {
		t.Helper()
		if err := json.Unmarshal([]byte(run(exitDone, "sweep", "status", dir, "--json")), &s); err != nil {
			t.Fatal(err)
		}
		return s
	}
	const patience = 3 * time.Minute
	await := func(dir, what string, so func(summary) bool) summary {
		t.Helper()
		for until := time.Now().Add(patience); time.Now().Before(until); time.Sleep(300 * time.Millisecond) {
			if s := status(dir); so(s) {
				return s
			}
		}
		t.Fatalf("%s: not within %v: %+v", what, patience, status(dir))
		return summary{}
	}
	idle := func(s summary) bool { return len(s.Queue) == 0 }
	handedIn := regexp.MustCompile(`job (\d+), (\d+) of (\d+) parts; merge: job \d+`)
	whole := func(dir string) map[string]string {
		all := tree(t, dir)
		for name := range all {
			if strings.HasPrefix(name, "slurm/") {
				delete(all, name) // scripts and logs
			}
		}
		return all
	}

	// An array with its merge, as one sweep at home.
	grid := []string{"sweep", "small.toml", "--set", "field.pixels=[64, 64]", "--vary", "observer.inclination=10:80:2", "--product", "image", "--product", "rings"}
	run(exitDone, append(grid, "--out", "alone")...)
	cluster := []string{"--cluster", "slurm", "--tasks", "4"}
	out := run(exitDone, append(append(grid, "--out", "array"), cluster...)...)
	if m := handedIn.FindStringSubmatch(out); m == nil || m[2] != "4" {
		t.Fatalf("%s", out)
	}
	if s := status("array"); len(s.Queue) == 0 {
		t.Errorf("nothing in the queue: %+v", s)
	}
	if s := await("array", "the array", idle); s.Done != 36 || s.Failed != 0 {
		t.Errorf("%+v", s)
	}
	sameTree(t, whole("array"), whole("alone"))
	if out := run(exitDone, append(append(grid, "--out", "array"), cluster...)...); !strings.Contains(out, "nothing to hand in") {
		t.Errorf("given again: %s", out)
	}

	// A task that fails once: a file is missing, and then is there. Only its
	// part is handed in again.
	write(t, "cases.csv", "observer.inclination,emitter.profile,emitter.table\n20,,\n30,,\n40,,\n50,table,late.csv\n60,,\n70,,\n")
	late := []string{"sweep", "small.toml", "--cases", "cases.csv", "--product", "image"}
	run(exitDone, append(append(late, "--out", "late"), "--cluster", "slurm", "--tasks", "3")...)
	if s := await("late", "a part that fails", idle); s.Done != 5 || s.Failed != 1 || !strings.Contains(s.Reasons[0].Text, "late.csv") {
		t.Errorf("%+v", s)
	}
	write(t, "late.csv", "2,1\n30,1\n")
	out = run(exitDone, append(append(late, "--out", "late"), "--cluster", "slurm")...)
	if m := handedIn.FindStringSubmatch(out); m == nil || m[2] != "1" || m[3] != "3" {
		t.Errorf("handed in again: %s", out)
	}
	if s := await("late", "the part again", idle); s.Done != 6 || s.Failed != 0 {
		t.Errorf("%+v", s)
	}
	run(exitDone, append(late, "--out", "athome")...)
	sameTree(t, whole("late"), whole("athome"))

	// Cancelled in the middle and handed in again.
	long := []string{"sweep", "small.toml", "--set", "field.pixels=[300, 300]", "--vary", "observer.inclination=5:85:1", "--product", "image", "--product", "layers"}
	run(exitDone, append(long, "--out", "longalone")...)
	out = run(exitDone, append(append(long, "--out", "cancelled"), cluster...)...)
	m := handedIn.FindStringSubmatch(out)
	if m == nil {
		t.Fatal(out)
	}
	await("cancelled", "some cases", func(s summary) bool { return s.Done >= 5 })
	if out, err := exec.Command("scancel", m[1]).CombinedOutput(); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	s := await("cancelled", "the end of the cancelled job", idle)
	t.Logf("cancelled with %d of %d cases done", s.Done, s.Cases)
	if s.Done == s.Cases || s.Failed != 0 {
		t.Errorf("cancelled too late, or with failures: %+v", s)
	}
	if out := run(exitDone, append(append(long, "--out", "cancelled"), cluster...)...); handedIn.FindString(out) == "" {
		t.Errorf("handed in again: %s", out)
	}
	if s := await("cancelled", "the rest", idle); s.Done != s.Cases {
		t.Errorf("%+v", s)
	}
	sameTree(t, whole("cancelled"), whole("longalone"))
}

// sourceFolder is where the tests began: package verbs.
var sourceFolder = func() string {
	dir, err := os.Getwd()
	if err != nil {
		panic(err)
	}
	return dir
}()
