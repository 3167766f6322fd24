//go:build unix

package files

import (
	"bufio"
	"context"
	"fmt"
	"io"
	"os"
	"os/exec"
	"os/signal"
	"strings"
	"syscall"
	"testing"
	"time"
)

// childEnv, when set, holds the path at which a copy of this test binary
// plays a program that is writing when the signal comes.
const childEnv = "ANNULET_FILES_TEST_CHILD"

func TestMain(m *testing.M) {
	if path := os.Getenv(childEnv); path != "" {
		child(path)
		return
	}
	os.Exit(m.Run())
}

// child writes without end, as slowly as a trace, until Ctrl-C.
func child(path string) {
	ctx, stop := signal.NotifyContext(context.Background(), os.Interrupt)
	defer stop()
	err := Write(ctx, path, mode, func(w io.Writer) error {
		for k := 0; ; k++ {
			if _, err := w.Write(make([]byte, bufferBytes)); err != nil {
				return err
			}
			if k == 2 {
				fmt.Println("half-way")
			}
			time.Sleep(time.Millisecond)
		}
	})
	fmt.Println(err)
}

// signalHalfWay starts the child, waits until part of the file is written and
// sends the signal.
func signalHalfWay(t *testing.T, path string, sig os.Signal) {
	t.Helper()
	self, err := os.Executable()
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.CommandContext(t.Context(), self)
	cmd.Env = append(os.Environ(), childEnv+"="+path)
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	if line, err := bufio.NewReader(out).ReadString('\n'); line != "half-way\n" {
		t.Errorf("the child says %q (%v)", line, err)
	}
	if err := cmd.Process.Signal(sig); err != nil {
		t.Error(err)
	}
	_ = cmd.Wait() // how a killed child ends is not the question
}

func TestInterruptedHalfWay(t *testing.T) {
	folder, path := withOld(t)
	signalHalfWay(t, path, os.Interrupt)
	holds(t, folder, map[string]string{"image.png": oldText})
}

func TestKilledHalfWay(t *testing.T) {
	folder, path := withOld(t)
	signalHalfWay(t, path, syscall.SIGKILL)
	if got, err := os.ReadFile(path); err != nil || string(got) != oldText {
		t.Errorf("the old file holds %.40q (%v)", got, err)
	}
	// Where files can be without a name nothing is left; elsewhere nobody could
	// remove the temporary file, which is hidden and named as ours.
	probe, unnamed := createUnnamed(path+"x", mode)
	if unnamed {
		if err := probe.Close(); err != nil {
			t.Error(err)
		}
	}
	entries, err := os.ReadDir(folder)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range entries {
		if n := e.Name(); n != "image.png" && (unnamed || !strings.HasPrefix(n, temporaryPrefix) || !strings.HasSuffix(n, temporarySuffix)) {
			t.Errorf("%s is left in the folder", n)
		}
	}
}
