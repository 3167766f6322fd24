package verbs

import (
	"fmt"
	"os"
	"strings"
	"testing"
)

// --memory holds: three images that together need more are made one after
// the other, and the process's highest resident memory (VmHWM, proc(5)) stays
// below. What wait tells would count that of the process that started it.
func TestSweepMemory(t *testing.T) {
	if testing.Short() {
		t.Skip("the race detector needs memory of its own")
	}
	folder(t)
	const limit = 260 // MiB
	args := []string{"sweep", "small.toml", "--set", "field.pixels=[1000, 1000]", "--vary", "observer.inclination=20:40:10",
		"--product", "layers", "--workers", "3"}
	peak := func(dir string, more ...string) int64 {
		cmd := program(t, append(append(args, "--out", dir), more...)...)
		cmd.Env = append(cmd.Env, statusEnv+"="+dir+".status")
		if out, err := cmd.CombinedOutput(); err != nil {
			t.Fatalf("%v: %s", err, out)
		}
		text, err := os.ReadFile(dir + ".status")
		if err != nil {
			t.Fatal(err)
		}
		_, rest, _ := strings.Cut(string(text), "VmHWM:")
		var kib int64
		if _, err := fmt.Sscan(rest, &kib); err != nil {
			t.Fatalf("%v in %s", err, text)
		}
		return kib / 1024
	}
	got := peak("a", "--memory", fmt.Sprintf("%dMiB", limit))
	t.Logf("%d MiB of %d", got, limit)
	if got > limit {
		t.Errorf("it took %d MiB, allowed were %d", got, limit)
	}
	if os.Getenv("ANNULET_SOAK") != "" { // that the limit is what kept it there
		free := peak("b")
		t.Logf("%d MiB without a limit", free)
		if free <= limit {
			t.Errorf("without a limit it took %d MiB: the scene is too small for this test", free)
		}
		sameTree(t, tree(t, "b"), tree(t, "a"))
	}
}
