package verbs

import (
	"bytes"
	"encoding/json"
	"os"
	"strconv"
	"strings"
	"testing"
)

const spotScene = `schema = 1
[observer]
inclination = "60 deg"
[field]
width  = "30 M"
pixels = [24, 20]
[[emitter]]
kind   = "spot" # goes round
radius = "9 M"
[time]
start = "10 M"
end   = "40 M"
step  = "10 M"
`

// Each frame is the picture of its own time: its scene, recovered and rendered,
// gives the same numbers and, with the movie's limits, the same picture.
func TestMovie(t *testing.T) {
	dir := folder(t)
	write(t, "spot.toml", spotScene)
	got := do(t, "", "render", "spot.toml", "-o", "f-%02d.png", "-o", "f-%02d.npz", "--json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var report struct {
		Files  []string
		Limits [2]float64
	}
	if err := json.Unmarshal([]byte(got.out), &report); err != nil {
		t.Fatal(err)
	}
	if len(report.Files) != 8 || report.Files[7] != "f-03.npz" {
		t.Fatalf("%v", report.Files)
	}
	scene := do(t, "", "scene", "recover", "f-02.png")
	if !strings.Contains(scene.out, `"30 M"`) || strings.Contains(scene.out, "step") || !strings.Contains(scene.out, "# goes round") {
		t.Errorf("%s", scene.out)
	}
	write(t, "again.toml", scene.out)
	if got := do(t, "", "render", "again.toml", "-o", "again.npz"); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	read := func(name string) []byte {
		b, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		return b
	}
	if !bytes.Equal(read("again.npz"), read("f-02.npz")) {
		t.Error("a frame rendered again differs")
	}
	limits := strconv.FormatFloat(report.Limits[0], 'g', -1, 64) + ":" + strconv.FormatFloat(report.Limits[1], 'g', -1, 64)
	if got := do(t, "", "render", "again.toml", "--limits", limits, "-o", "again.png"); got.code != exitDone || !bytes.Equal(read("again.png"), read("f-02.png")) {
		t.Errorf("the picture of a frame is not that of the limits %s: %s", limits, got.errors)
	}
	if bytes.Equal(read("f-01.npz"), read("f-02.npz")) {
		t.Error("nothing moves")
	}
	before := contents(t, dir)
	for _, c := range [][]string{
		{"small.toml", "-o", "x-%d.png"}, {"spot.toml", "-o", "x-%d.png", "-o", "x.npz"}, {"spot.toml", "-o", "x-%d-%d.png"},
		{"spot.toml", "-o", "x-%04d.gif"}, {"spot.toml", "-o", "none/x-%04d.png"},
	} {
		if got := do(t, "", append([]string{"render"}, c...)...); got.code != exitUsage {
			t.Errorf("%v: %+v", c, got)
		}
	}
	if after := contents(t, dir); strings.Join(after, "\n") != strings.Join(before, "\n") {
		t.Errorf("refusals left files: %v", after)
	}
}
