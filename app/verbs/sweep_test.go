package verbs

import (
	"bytes"
	"encoding/csv"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"codeberg.org/sbinet/npyio/npz"

	"annulet/app/files"
	"annulet/app/files/foreign"
	"annulet/raytrace"
	"annulet/scenes"
)

func sweepOf(t *testing.T, args ...string) (outcome, summary) {
	t.Helper()
	got := do(t, "", append([]string{"sweep"}, append(args, "--json")...)...)
	var s summary
	if got.code != exitUsage {
		decode(t, got.out, &s)
	}
	return got, s
}

// A sweep's images are those of renders one by one, bit for bit, whatever
// the number of workers and whether orbits are shared.
func TestSweep(t *testing.T) {
	folder(t)
	args := []string{"small.toml", "--vary", "observer.inclination=20:60:20deg", "--vary", "emitter.index=2,3", "--product", "image", "--product", "layers"}
	got, s := sweepOf(t, append(args, "--out", "a", "--workers", "3")...)
	if got.code != exitDone || s.Cases != 6 || s.Done != 6 || s.Failed+s.Waiting+s.Running != 0 {
		t.Fatalf("%+v", got)
	}
	if got, _ = sweepOf(t, append(args, "--out", "b", "--workers", "1")...); got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	for _, name := range contents(t, "a") {
		a, err := os.ReadFile(filepath.Join("a", name))
		if err != nil {
			continue // a folder
		}
		b, err := os.ReadFile(filepath.Join("b", name))
		if err != nil || !bytes.Equal(a, b) {
			t.Errorf("%s differs with the number of workers (%v)", name, err)
		}
	}

	d, err := scenes.Load("small.toml")
	if err != nil {
		t.Fatal(err)
	}
	if err := d.SetAll(scenes.Assignment{Path: "observer.inclination", Value: "40 deg"}, scenes.Assignment{Path: "emitter.index", Value: "2"}); err != nil {
		t.Fatal(err)
	}
	view, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	plate, err := view.Render(t.Context(), raytrace.Options{})
	if err != nil {
		t.Fatal(err)
	}
	const name = "0002_inclination=40deg_index=2.npz"
	for _, c := range []struct {
		file, array string
		want        []float32
	}{
		{"image", "total", plate.Total},
		{"image", "intensity", slices.Concat(plate.Layer(raytrace.Intensity, 0), plate.Layer(raytrace.Intensity, 1), plate.Layer(raytrace.Intensity, 2))},
		{"layers", "g", slices.Concat(plate.Layer(raytrace.Redshift, 0), plate.Layer(raytrace.Redshift, 1), plate.Layer(raytrace.Redshift, 2))},
		{"layers", "phi", slices.Concat(plate.Layer(raytrace.Azimuth, 0), plate.Layer(raytrace.Azimuth, 1), plate.Layer(raytrace.Azimuth, 2))},
	} {
		file, err := npz.Open(filepath.Join("a", c.file, name))
		if err != nil {
			t.Fatal(err)
		}
		var got []float32
		if err := file.Read(c.array+".npy", &got); err != nil {
			t.Fatal(err)
		}
		if err := file.Close(); err != nil {
			t.Fatal(err)
		}
		if !slices.EqualFunc(got, c.want, func(a, b float32) bool { return math.Float32bits(a) == math.Float32bits(b) }) {
			t.Errorf("%s: %s is not what render makes", c.file, c.array)
		}
	}

	text, err := os.ReadFile("a/table.csv")
	if err != nil {
		t.Fatal(err)
	}
	in := csv.NewReader(bytes.NewReader(text))
	in.Comment = '#'
	rows, err := in.ReadAll()
	if err != nil || len(rows) != 7 || !slices.Equal(rows[3][:4], []string{"0002_inclination=40deg_index=2", "40 deg", "2", "done"}) {
		t.Errorf("table %v, %v", rows, err)
	}
}

// A case that is no right scene fails alone; status and exit code say so.
func TestSweepFailures(t *testing.T) {
	folder(t)
	write(t, "cases.csv", "observer.inclination,emitter.inner\n40deg,\n# two wrong ones\n400deg,\n30deg,1 M\n20deg,8 M\n")
	got, s := sweepOf(t, "small.toml", "--cases", "cases.csv", "--out", "a", "--product", "picture")
	if got.code != exitCouldNot || s.Done != 2 || s.Failed != 2 || len(s.Reasons) != 2 || s.Reasons[0].First != "0001_inclination=400deg" {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "sweep", "status", "a"); got.code != exitDone || !strings.Contains(got.out, "out of range") {
		t.Errorf("%+v", got)
	}
	img, texts := readPNG(t, "a/picture/0003_inclination=20deg_inner=8M.png")
	scene := slices.IndexFunc(texts, func(x files.Text) bool { return x.Keyword == "Annulet scene" })
	if img.Bounds().Dx() != 16 || scene < 0 || !strings.Contains(texts[scene].Value, `"8 M"`) {
		t.Errorf("%v, %v", img.Bounds(), texts)
	}
	// parts, then the whole: nothing is made twice
	if got := do(t, "", "sweep", "resume", "a", "--chunk", "0/2"); got.code != exitCouldNot || !strings.Contains(got.errors, "2 cases: 1 done (0 by this run), 1 failed") {
		t.Errorf("%+v", got)
	}
}

func TestSweepRefusals(t *testing.T) {
	folder(t)
	write(t, "twice.csv", "emitter.index,emitter.index\n1,2\n")
	write(t, "uneven.csv", "emitter.index\n1,2\n")
	for _, c := range []struct{ args, want string }{
		{"small.toml --out a", "--vary"},
		{"small.toml --vary emitter.index=1,2", "--out"},
		{"small.toml --vary emitter.index=1:2 --out a", "1:2"},
		{"small.toml --vary emitter.colour=1,2 --out a", "emitter.colour"},
		{"small.toml --vary emitter.index=1,2 --out a --product movie", "allowed: image"},
		{"small.toml --vary emitter.index=1,2 --out a --product image --product image", "twice"},
		{"small.toml --vary emitter.index=1,2 --out a --cluster other", "slurm"},
		{"small.toml --vary emitter.index=1,2 --out a --memory 1", "no size"},
		{"small.toml --vary emitter.index=1,2 --out a --memory 10MiB", "one case needs"},
		{"small.toml --cases twice.csv --out a", "twice.csv:1"},
		{"small.toml --cases uneven.csv --out a", "line 2"},
		{"small.toml --cases none.csv --out a", "none.csv"},
		{"status a", "no sweep here"},
		{"resume a --chunk 1/1", "no sweep here"},
	} {
		got := do(t, "", append([]string{"sweep"}, strings.Fields(c.args)...)...)
		if got.code != exitUsage || !strings.Contains(got.errors, c.want) || got.out != "" {
			t.Errorf("%s: %+v, want %q", c.args, got, c.want)
		}
		if _, err := os.Stat("a"); err == nil {
			t.Fatalf("%s: wrote something", c.args)
		}
	}
	if got := do(t, "", "sweep", "small.toml", "--vary", "emitter.index=1,2", "--out", "a", "--memory", "400MiB"); got.code != exitDone {
		t.Errorf("with enough memory: %+v", got)
	}
	if got := do(t, "", "sweep", "small.toml", "--vary", "emitter.index=1,3", "--out", "a"); got.code != exitUsage || !strings.Contains(got.errors, "another sweep") {
		t.Errorf("another sweep in its place: %+v", got)
	}
}

// A sweep's table has the rings of every case by default, a scene without
// disks none.
func TestSweepRings(t *testing.T) {
	folder(t)
	got, s := sweepOf(t, "small.toml", "--vary", "observer.inclination=20,60", "--out", "a")
	if got.code != exitDone || s.Done != 2 {
		t.Fatalf("%+v", got)
	}
	table, err := os.ReadFile(filepath.Join("a", "table.csv"))
	if err != nil {
		t.Fatal(err)
	}
	// physics reference: r = 6 M at 60 deg
	for _, part := range []string{"inner_diameter_horizontal_1", "14.341137829", "11.293862343"} {
		if !strings.Contains(string(table), part) {
			t.Errorf("no %s in\n%s", part, table)
		}
	}
	if got, s := sweepOf(t, "@slow-room", "--set", "field.pixels=[16,8]", "--vary", "observer.azimuth=0,10", "--out", "b"); got.code != exitDone || s.Done != 2 {
		t.Errorf("%+v", got)
	}
}

// A sweep's lines, spectra and visibilities are those of the verbs, to the
// byte; its FITS table is astropy's, number by number, and that of the ECSV.
func TestSweepTables(t *testing.T) {
	folder(t)
	scene := smallScene + "light = \"monochromatic\"\nspectral_index = -0.7\n[object]\ntheta_g = \"3.8 uas\"\n"
	scene += "[trace]\nmax_order = 1\n"
	scene = strings.Replace(scene, "[field]\n", "[field]\nfrequency = [\"86 GHz\", \"345 GHz\"]\n", 1)
	write(t, "s.toml", strings.Replace(scene, "[16, 12]", "[48, 40]", 1))
	got, s := sweepOf(t, "s.toml", "--vary", "observer.inclination=20,60", "--vary", "emitter.outer=15 M,horizon", "--out", "a",
		"--product", "spectrum", "--product", "visibility", "--product", "line", "--product", "rings")
	if got.code != exitCouldNot || s.Done != 2 || s.Failed != 2 { // no disk ends at the horizon
		t.Fatalf("%+v", got)
	}
	const set = "--set|observer.inclination=60|--set|emitter.outer=15 M|--workers|1"
	for product, args := range map[string]string{
		"line": "line|s.toml|-o|line.ecsv", "spectrum": "spectrum|s.toml|--from|86 GHz|--to|345 GHz|-o|spectrum.ecsv", "visibility": "visibility|s.toml|--orders|-o|visibility.ecsv",
	} {
		if got := do(t, "", strings.Split(args+"|"+set, "|")...); got.code != exitDone {
			t.Fatalf("%+v", got)
		}
		want, err := os.ReadFile(product + ".ecsv")
		if err != nil {
			t.Fatal(err)
		}
		paths, err := filepath.Glob("a/" + product + "/0002_*.ecsv")
		if err != nil || len(paths) != 1 {
			t.Fatalf("%s: %v, %v", product, paths, err)
		}
		if found, err := os.ReadFile(paths[0]); err != nil || !bytes.Equal(rowsBelow(found), rowsBelow(want)) || len(rowsBelow(want)) < 100 {
			t.Errorf("%s is not what the verb writes (%v)", product, err)
		}
	}
	if out := foreign.Run(t, "fitsverify", "-q", "a/table.fits"); !strings.Contains(out, "verification OK") {
		t.Error(out)
	}
	out := foreign.Python(t, "astropy", `
import re, sys
import numpy as np
from astropy.io import fits
from astropy.table import Table
with fits.open(sys.argv[1], checksum=True) as f:
    f.verify("exception")
    scene = bytes(f["SCENE"].data["TEXT"][0]).decode()
t, e = Table.read(sys.argv[1], hdu="TABLE"), Table.read(sys.argv[2])
assert [re.sub(r"\W", "_", c) for c in e.colnames] == t.colnames, (e.colnames, t.colnames)
for c, d in zip(e.colnames, t.colnames):
    if e[c].dtype.kind == "f":
        a, b = np.ma.filled(e[c].astype(float), np.nan), np.ma.filled(t[d].astype(float), np.nan)
        assert np.array_equal(a, b, equal_nan=True), c
    else:
        assert [str(x) for x in e[c]] == [x.decode() if isinstance(x, bytes) else str(x) for x in t[d]], (c, list(e[c]), list(t[d]))
print(len(t), sum(t["state"].astype(str) == "done"), t["inner_diameter_horizontal_0"][2], "theta_g" in scene)
`, "a/table.fits", "a/table.ecsv")
	// physics reference: r = 6 M at 60 deg
	if !strings.HasPrefix(out, "4 2 14.3411378") || !strings.HasSuffix(strings.TrimSpace(out), "True") {
		t.Errorf("astropy reads %s", out)
	}
	if got := do(t, "", "scene", "recover", "a/table.fits"); got.code != exitDone || !strings.Contains(got.out, "theta_g") {
		t.Errorf("%+v", got)
	}
}

// rowsBelow leaves out the head of comments, which tells the scene as it was
// set.
func rowsBelow(text []byte) []byte {
	at := bytes.Index(text, []byte("# schema: astropy-2.0"))
	return text[max(at, 0):]
}
