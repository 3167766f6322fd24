package verbs

import (
	"bytes"
	"os"
	"slices"
	"strings"
	"testing"

	"annulet/raytrace"
	"annulet/scenes"
)

// Rendered, recovered, rendered again: the same bytes, in every format, whole
// and in strips.
func TestFormatsRoundTrip(t *testing.T) {
	folder(t)
	names := []string{"a.png", "a.tiff", "a.fits", "a.npz"}
	args := []string{"render", "small.toml", "--set", "observer.inclination=40deg", "--set", "object.mass=4e6 Msun", "--set", "object.distance=8 kpc"}
	for _, name := range names {
		args = append(args, "-o", name)
	}
	if got := do(t, "", args...); got.code != exitDone || strings.Fields(got.out)[3] != "a.npz" {
		t.Fatalf("%+v", got)
	}
	for _, name := range names {
		got := do(t, "", "scene", "recover", name)
		if got.code != exitDone || !strings.Contains(got.out, `"8 kpc"`) {
			t.Errorf("%s: %+v", name, got)
			continue
		}
		write(t, "again.toml", got.out)
		again := "b" + name[1:]
		if got := do(t, "", "render", "again.toml", "-o", again, "--workers", "3"); got.code != exitDone {
			t.Fatalf("%+v", got)
		}
		a, errA := os.ReadFile(name)
		b, errB := os.ReadFile(again)
		if errA != nil || errB != nil || !bytes.Equal(a, b) {
			t.Errorf("%s: rendered again it differs (%v, %v)", name, errA, errB)
		}
	}
	if got := do(t, "", "render", "small.toml", "--keep", "g,intensity", "-o", "few.npz"); got.code != exitDone {
		t.Errorf("%+v", got)
	}
	for _, c := range [][2]string{{"small.toml", "no file that Annulet writes"}, {"missing.png", "missing.png"}, {".", "no file that Annulet writes"}} {
		if got := do(t, "", "scene", "recover", c[0]); got.code != exitUsage || !strings.Contains(got.errors, c[1]) {
			t.Errorf("recover %s: %+v", c[0], got)
		}
	}
	for _, c := range [][2]string{{"--keep colour", "intensity, g"}, {"--keep g,g", "twice"}} {
		if got := do(t, "", append([]string{"render", "small.toml", "-o", "x.npz"}, strings.Fields(c[0])...)...); got.code != exitUsage || !strings.Contains(got.errors, c[1]) {
			t.Errorf("%s: %+v", c[0], got)
		}
	}
}

// Strips of a FITS file are the whole, bit for bit; PNG and FITS come from
// one pass; what cannot be written in strips is refused before any work.
func TestFITSInStrips(t *testing.T) {
	dir := folder(t)
	d, err := scenes.Load("small.toml")
	if err != nil {
		t.Fatal(err)
	}
	view, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	p, err := rendering{layer: "intensity", depth: 8}.choose()
	if err != nil {
		t.Fatal(err)
	}
	for k, hold := range []int64{holdBytes, 0} {
		j := renderJob{
			s: streams{err: new(bytes.Buffer)}, view: view, picture: p, document: d, hold: hold,
			data: []raytrace.Layer{raytrace.Intensity, raytrace.Radius}, options: raytrace.Options{TileSide: 4},
		}
		names := [][]string{{"whole.fits", "whole.png"}, {"strips.fits", "strips.png"}}[k]
		if _, err := j.write(t.Context(), names); err != nil {
			t.Fatal(err)
		}
	}
	a, errA := os.ReadFile("whole.fits")
	b, errB := os.ReadFile("strips.fits")
	if errA != nil || errB != nil || !bytes.Equal(a, b) {
		t.Errorf("strips differ from the whole (%v, %v)", errA, errB)
	}
	_, texts := readPNG(t, "strips.png")
	if len(texts) != 5 {
		t.Errorf("texts %v", texts)
	}
	before := contents(t, dir)
	got := do(t, "", "render", "small.toml", "--set", "field.pixels=[16384, 16384]", "-o", "x.npz", "-o", "x.png")
	if got.code != exitUsage || !strings.Contains(got.errors, "MiB") || !slices.Equal(contents(t, dir), before) {
		t.Errorf("%+v", got)
	}
}

// A table goes to a file with its scene; stdout keeps the bare rows.
func TestProbeToFile(t *testing.T) {
	folder(t)
	plain := do(t, "", "probe", "small.toml", "--at", "-8,0", "--at", "0,5")
	for _, name := range []string{"a.csv", "a.ecsv"} {
		if got := do(t, "", "probe", "small.toml", "--at", "-8,0", "--at", "0,5", "-o", name); got.code != exitDone || got.out != name+"\n" {
			t.Fatalf("%+v", got)
		}
		file, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		var rows []string
		for line := range strings.Lines(string(file)) {
			if !strings.HasPrefix(line, "#") {
				rows = append(rows, line)
			}
		}
		if strings.Join(rows, "") != plain.out {
			t.Errorf("%s: rows %q, want %q", name, rows, plain.out)
		}
		small, err := os.ReadFile("small.toml")
		if got := do(t, "", "scene", "recover", name); err != nil || got.out != string(small) {
			t.Errorf("%s: recovered %q (%v)", name, got.out, err)
		}
	}
	if got := do(t, "", "probe", "small.toml", "--at", "0,5", "-o", "a.fits"); got.code != exitUsage {
		t.Errorf("%+v", got)
	}
}
