//go:build unix

package verbs

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"syscall"
	"testing"
	"time"
)

// argsEnv, when set, makes a copy of this test binary play the program, with
// these arguments, one a line.
const argsEnv = "ANNULET_VERBS_TEST_ARGS"

// statusEnv names the file that such a copy leaves its proc status in.
const statusEnv = "ANNULET_VERBS_TEST_STATUS"

func TestMain(m *testing.M) {
	if args := os.Getenv(argsEnv); args != "" {
		code := Run(strings.Split(args, "\n"), os.Stdin, os.Stdout, os.Stderr)
		if path := os.Getenv(statusEnv); path != "" { // Linux: what the process came to
			text, err := os.ReadFile("/proc/self/status")
			if err := errors.Join(err, os.WriteFile(path, text, 0o666)); err != nil {
				panic(err)
			}
		}
		os.Exit(code)
	}
	os.Exit(m.Run())
}

// program is a process of its own.
func program(t *testing.T, args ...string) *exec.Cmd {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.CommandContext(t.Context(), self)
	cmd.Env = append(os.Environ(), argsEnv+"="+strings.Join(args, "\n"))
	return cmd
}

// tree reads all files of a folder.
func tree(t *testing.T, dir string) map[string]string {
	t.Helper()
	all := map[string]string{}
	for _, pattern := range []string{"*", "*/*"} {
		paths, err := filepath.Glob(filepath.Join(dir, pattern))
		if err != nil {
			t.Fatal(err)
		}
		for _, path := range paths {
			if text, err := os.ReadFile(path); err == nil { // else a folder
				name, _ := filepath.Rel(dir, path)
				all[name] = string(text)
			}
		}
	}
	return all
}

func sameTree(t *testing.T, got, want map[string]string) {
	t.Helper()
	for name := range want {
		if got[name] != want[name] {
			t.Errorf("%s differs or is missing", name)
		}
	}
	if len(got) != len(want) {
		t.Errorf("%d files, want %d", len(got), len(want))
	}
}

// A sweep of real images stopped by a termination signal says so by its exit
// code and goes on to the bytes of one that was left alone.
func TestSweepTerminated(t *testing.T) {
	folder(t)
	args := []string{"sweep", "small.toml", "--set", "field.pixels=[64, 64]", "--vary", "observer.inclination=10:80:5", "--workers", "1", "--product", "image"}
	if got := do(t, "", append(args, "--out", "alone")...); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	cmd := program(t, append(args, "--out", "stopped")...)
	var errs bytes.Buffer
	cmd.Stderr = &errs
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	for len(tree(t, "stopped")) < 5 {
		time.Sleep(time.Millisecond)
	}
	if err := cmd.Process.Signal(syscall.SIGTERM); err != nil {
		t.Fatal(err)
	}
	_ = cmd.Wait() // the exit code tells
	if code := cmd.ProcessState.ExitCode(); code != exitCouldNot || !strings.Contains(errs.String(), "interrupted") {
		t.Errorf("exit %d, %s", code, errs.String())
	}
	if _, err := os.Stat("stopped/table.csv"); err == nil {
		t.Error("a table of a sweep that was stopped")
	}
	if got := do(t, "", append(args, "--out", "stopped")...); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	sameTree(t, tree(t, "stopped"), tree(t, "alone"))
}
