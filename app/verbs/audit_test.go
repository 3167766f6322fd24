package verbs

import (
	"os"
	"strings"
	"testing"
)

func TestAudit(t *testing.T) {
	folder(t)
	got := do(t, "", "audit", "small.toml", "--samples", "300", "--seed", "7", "--json", "-o", "check.json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	type part struct {
		Worst, Median *float64
		Compared      int
	}
	var n struct {
		Samples, Crossings int
		Seed               uint64
		R, G, Delay, Flux  part
		Angle              part
		Text               string
		Units              map[string]string
	}
	decode(t, got.out, &n)
	if n.Samples != 300 || n.Seed != 7 || n.Crossings < 50 || n.R.Compared < 50 || n.Flux.Compared != 300 || n.Angle.Compared != 0 || n.Angle.Worst != nil {
		t.Errorf("%s", got.out)
	}
	if n.R.Worst == nil || !(*n.R.Worst < 1e-6) || !(*n.R.Median <= *n.R.Worst) || !(*n.Delay.Worst < 1e-3) {
		t.Errorf("%s", got.out)
	}
	if !strings.HasSuffix(n.Text, "This tests the light paths in the stated metric, not the emission model.") {
		t.Errorf("text %q", n.Text)
	}
	if file, err := os.ReadFile("check.json"); err != nil || string(file) != got.out {
		t.Errorf("the file differs from stdout (%v)", err)
	}
	small, err := os.ReadFile("small.toml")
	if scene := do(t, "", "scene", "recover", "check.json"); err != nil || scene.out != string(small) {
		t.Errorf("recovered %q (%v)", scene.out, err)
	}
	if again := do(t, "", "audit", "small.toml", "--samples", "300", "--seed", "7", "--json"); again.out != got.out {
		t.Error("the same seed gives another note")
	}
	if got := do(t, "", "audit", "@slow-room"); got.code != exitUsage || !strings.Contains(got.errors, "no closed form") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "audit", "small.toml", "--samples", "0"); got.code != exitUsage {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "render", "small.toml", "--audit", "-o", "a.fits"); got.code != exitDone || !strings.Contains(got.errors, "audit: 2000 paths") {
		t.Errorf("%+v", got)
	}
	if file, err := os.ReadFile("a.fits"); err != nil || !strings.Contains(string(file), "HISTORY Audit: 2000 paths") {
		t.Errorf("the file does not tell the audit (%v)", err)
	}
}
