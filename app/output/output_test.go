package output

import (
	"bytes"
	"context"
	"encoding/json"
	"fmt"
	"image"
	"io"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	"annulet/app/files"
	"annulet/app/files/foreign"
	"annulet/raytrace"
	"annulet/scenes"
)

// trial is a scene whose text has all that is hard to carry.
const trial = `schema = 1
title  = "µ, 'quoted' \"twice\" and a long line: ........................................................................................."

[object]
mass     = "4e6 Msun"   # Größe
distance = "8 kpc"

[observer]
inclination    = "60 deg"
position_angle = "30 deg"

[field]
width  = "30 M"
pixels = [40, 30]
center = ["1 M", "-0.5 M"]

[[emitter]]
kind = "disk"
`

func load(t testing.TB, text string) (*scenes.Document, *raytrace.View) {
	t.Helper()
	d, err := scenes.Parse("trial.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	v, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	return d, v
}

// writeAll writes the scene as every format and returns the paths and the
// plate.
func writeAll(t testing.TB, dir string) (map[string]string, *raytrace.Plate) {
	t.Helper()
	d, v := load(t, trial)
	plate, err := v.Render(context.Background(), raytrace.Options{})
	if err != nil {
		t.Fatal(err)
	}
	p := NewProvenance(d, "0.0", plate)
	layers, err := ParseLayers("")
	if err != nil {
		t.Fatal(err)
	}
	img := image.NewRGBA64(image.Rect(0, 0, 7, 5))
	for k := range img.Pix {
		img.Pix[k] = byte(37 * k)
		if k%8 >= 6 {
			img.Pix[k] = 0xff
		}
	}
	table := Table{
		Columns: []Column{{"r", "M", Float, "radius"}, {"angle", "deg", Float, ""}, {"order", "", Int, ""}, {"name", "", Text, "it's a name"}},
		Rows:    [][]any{{6.1, 0.1, 0, "a, b"}, {math.NaN(), -3e-9, nil, "c"}, {2.5, 3.25, 2, "d"}},
	}
	paths := map[string]string{}
	put := func(ext string, fill func(io.Writer) error) {
		paths[ext] = filepath.Join(dir, "a."+ext)
		if err := files.Write(context.Background(), paths[ext], 0o666, fill); err != nil {
			t.Fatal(err)
		}
	}
	put("npz", func(w io.Writer) error { return WriteNPZ(w, plate, v, nil, layers, p) })
	put("png", func(w io.Writer) error { return files.EncodePNG(w, img, p.PNGTexts()) })
	put("tiff", func(w io.Writer) error { return WriteTIFF(w, img, p) })
	put("csv", func(w io.Writer) error { return table.WriteCSV(w, p) })
	put("ecsv", func(w io.Writer) error { return table.WriteECSV(w, p) })
	paths["fits"] = filepath.Join(dir, "a.fits")
	writeFITS(t, paths["fits"], d, v, plate, layers)
	return paths, plate
}

func writeFITS(t testing.TB, path string, d *scenes.Document, v *raytrace.View, plate *raytrace.Plate, layers []raytrace.Layer) {
	t.Helper()
	err := files.WriteAt(context.Background(), path, 0o666, func(w io.WriterAt) error {
		f, err := NewFITS(w, v, d.Scene(), layers, NewProvenance(d, "0.0", nil)) // bounds come with Close
		if err != nil {
			return err
		}
		if err := f.Put(plate, 0); err != nil {
			return err
		}
		return f.Close(NewProvenance(d, "0.0", plate))
	})
	if err != nil {
		t.Fatal(err)
	}
}

// Every file brings its scene back, to the byte.
func TestRecover(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	for ext, path := range paths {
		scene, err := Recover(path)
		if err != nil || string(scene) != trial {
			t.Errorf("%s: %v, %q", ext, err, scene)
		}
		if !Recoverable(path) {
			t.Errorf("%s is not recoverable by its name", ext)
		}
	}
}

// A file cut short at any place is refused, or its scene is whole.
func TestRecoverTruncated(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	for ext, path := range paths {
		whole, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		for k := range 60 {
			part := whole[:len(whole)*k/60]
			scene, err := recoverFrom(bytes.NewReader(part), int64(len(part)))
			if err == nil && string(scene) != trial {
				t.Errorf("%s cut to %d of %d bytes gives %q", ext, len(part), len(whole), scene)
			}
		}
	}
}

func FuzzRecover(f *testing.F) {
	paths, _ := writeAll(f, f.TempDir())
	for _, path := range paths {
		whole, err := os.ReadFile(path)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(whole)
	}
	f.Add([]byte("PK\x03\x04"))
	f.Add([]byte(`{"scene": "schema = 1"}`))
	f.Add([]byte("# no scene\n1,2\n"))
	f.Fuzz(func(t *testing.T, file []byte) {
		scene, err := recoverFrom(bytes.NewReader(file), int64(len(file)))
		if err == nil && len(scene) > 5*maxScene {
			t.Errorf("%d bytes", len(scene))
		}
	})
}

// A zip that unpacks to a gigabyte, sizes beyond the file, endless headers.
func TestRecoverHostile(t *testing.T) {
	for name, file := range hostile(t) {
		scene, err := recoverFrom(bytes.NewReader(file), int64(len(file)))
		if err == nil {
			t.Errorf("%s: recovered %d bytes", name, len(scene))
		}
	}
}

func TestFITSIsSound(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	if out := foreign.Run(t, "fitsverify", "-q", paths["fits"]); !strings.Contains(out, "verification OK") {
		t.Error(out)
	}
}

// astropy: values equal to the bit, the sky where it should be. The field's
// middle is at alpha 1, beta -0.5 M. With N at 30 deg east of north, beta
// points to (east sin 30, north cos 30) and alpha to (-cos 30, sin 30).
func TestFITSInAstropy(t *testing.T) {
	paths, plate := writeAll(t, t.TempDir())
	out := foreign.Python(t, "astropy", `
import json, sys
from astropy.io import fits
from astropy.wcs import WCS
with fits.open(sys.argv[1], checksum=True) as f:
    f.verify("exception")
    sky = WCS(f[0].header)
    screen = WCS(f[0].header, key="A")
    offsets = WCS(f[0].header, key="B")
    ra, dec = sky.pixel_to_world_values(10.0, 20.0)
    e, n = sky.pixel_to_world_values(19.0, 20.0)
    print(json.dumps({"total": f[0].data.tobytes().hex(), "delay": f["DELAY", 2].data.tobytes().hex(),
        "names": [x.name for x in f], "ra": (float(ra) + 180) % 360 - 180, "dec": float(dec), "screen": [float(x) for x in screen.pixel_to_world_values(10.0, 20.0)],
        "offsets": [float(x) for x in offsets.pixel_to_world_values(10.0, 20.0)],
        "bound": f[0].header["RBOUND"], "uas": f[0].header["UASM"], "unit": f["PHI", 1].header["BUNIT"]}))
`, paths["fits"])
	var got struct {
		Total, Delay, Unit string
		Names              []string
		RA, Dec, Bound     float64
		UAS                float64
		Screen, Offsets    []float64
	}
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	if got.Total != bigEndian(plate.Total) || got.Delay != bigEndian(plate.Layer(raytrace.Delay, 1)) {
		t.Error("values differ from the plate")
	}
	if len(got.Names) != 1+6*3+1 || got.Bound != plate.WorstBound || got.Unit != "rad" {
		t.Errorf("%+v", got)
	}
	pitch := 30. / 40
	alpha, beta := 1+(10+0.5-20)*pitch, -0.5+(20+0.5-15)*pitch
	near(t, "alpha", got.Screen[0], alpha, 1e-12)
	near(t, "beta", got.Screen[1], beta, 1e-12)
	// GM/(c² D) of 4e6 Msun at 8 kpc, uas: scaled from 5.1243315 for
	// 4.297e6 Msun at 8277 pc (physics note, section 14)
	theta := 5.1243315 * (4e6 / 4.297e6) * (8277. / 8000)
	near(t, "GM/(c² D)", got.UAS, theta, 1e-6)
	sin, cos := math.Sincos(math.Pi / 6)
	near(t, "east, uas", got.Offsets[0], got.UAS*(beta*sin-alpha*cos), 1e-10)
	near(t, "north, uas", got.Offsets[1], got.UAS*(beta*cos+alpha*sin), 1e-10)
	const uas = 3600e6
	near(t, "east, uas", got.RA*uas, theta*(beta*sin-alpha*cos), 1e-3) // a float64 next to 360 deg tells no less
	near(t, "north, uas", got.Dec*uas, theta*(beta*cos+alpha*sin), 1e-5)
}

// The approaching side is left, and east when N is north.
func TestBlueSideIsEast(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	out := foreign.Python(t, "astropy", `
import sys, numpy
from astropy.io import fits
from astropy.wcs import WCS
with fits.open(sys.argv[1]) as f:
    g = f["G", 1].data
    y, x = numpy.unravel_index(numpy.nanargmax(g), g.shape)
    h = f[0].header.copy()
    h["PC1_1"], h["PC1_2"], h["PC2_1"], h["PC2_2"] = 1, 0, 0, 1
    ra = float(WCS(h).pixel_to_world_values(x, y)[0])
    print(x < g.shape[1] / 2, 0 < ra < 180, g[y, x] > 1)
`, paths["fits"])
	if strings.TrimSpace(out) != "True True True" {
		t.Errorf("blue pixel left, east, blue: %s", out)
	}
}

func bigEndian(values []float32) string {
	var b strings.Builder
	for _, v := range values {
		fmt.Fprintf(&b, "%08x", math.Float32bits(v))
	}
	return b.String()
}

func near(t *testing.T, what string, got, want, within float64) {
	t.Helper()
	if !(math.Abs(got-want) <= within) {
		t.Errorf("%s is %.15g, want %.15g within %g", what, got, want, within)
	}
}

func TestNPZInNumPy(t *testing.T) {
	paths, plate := writeAll(t, t.TempDir())
	out := foreign.Python(t, "numpy", `
import sys, json, numpy
f = numpy.load(sys.argv[1])
print(json.dumps({"shape": f["g"].shape, "total": f["total"].astype(">f4").tobytes().hex(), "alpha": float(f["alpha"][0]), "beta": float(f["beta"][-1]),
    "tolerance": json.loads(bytes(f["numerics"]))["tolerance"]}))
`, paths["npz"])
	var got struct {
		Shape                  []int
		Total                  string
		Alpha, Beta, Tolerance float64
	}
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	if fmt.Sprint(got.Shape) != "[3 30 40]" || got.Total != bigEndian(plate.Total) || got.Tolerance != 1e-9 {
		t.Errorf("shape %v, tolerance %g", got.Shape, got.Tolerance)
	}
	near(t, "alpha", got.Alpha, 1-19.5*0.75, 1e-12)
	near(t, "beta", got.Beta, -0.5+14.5*0.75, 1e-12)
}

func TestTIFFInTifffile(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	out := foreign.Python(t, "tifffile", `
import sys, tifffile
with tifffile.TiffFile(sys.argv[1]) as f:
    page = f.pages[0]
    a = page.asarray()
    print(a.shape, a.dtype, int(a[1, 2, 0]), page.tags[270].value.startswith("schema = 1"), page.software.startswith("Annulet 0.0"))
`, paths["tiff"])
	at := 8 * (7 + 2) // of pixel (2, 1)
	want := fmt.Sprintf("(5, 7, 4) uint16 %d True True", int(byte(37*at))<<8|int(byte(37*(at+1))))
	if got := strings.TrimSpace(out); got != want {
		t.Errorf("%s, want %s", got, want)
	}
	if out := foreign.Run(t, "exiftool", "-s3", "-BitsPerSample", paths["tiff"]); !strings.HasPrefix(out, "16 16 16") {
		t.Errorf("exiftool: %s", out)
	}
}

// The README's snippets run as they stand and find what they promise.
func TestReadmeSnippets(t *testing.T) {
	dir := t.TempDir()
	paths, plate := writeAll(t, dir)
	for _, ext := range []string{"fits", "npz"} {
		if err := os.Rename(paths[ext], filepath.Join(dir, "scene."+ext)); err != nil {
			t.Fatal(err)
		}
	}
	readme, err := os.ReadFile("../../README.md")
	if err != nil {
		t.Fatal(err)
	}
	blocks := strings.Split(string(readme), "```python\n")[1:]
	if len(blocks) != 2 {
		t.Fatalf("%d snippets", len(blocks))
	}
	for k, block := range blocks {
		code, _, _ := strings.Cut(block, "```")
		module := []string{"astropy", "numpy"}[k]
		program := "import os\nos.chdir(" + fmt.Sprintf("%q", dir) + ")\n" + code + `
print(total.shape, g.shape[-2:], "%.9g" % total.max(), scene.startswith("schema = 1"))
`
		want := fmt.Sprintf("(30, 40) (30, 40) %.9g True", float64(slices.Max(plate.Total)))
		if got := strings.TrimSpace(foreign.Python(t, module, program)); got != want {
			t.Errorf("snippet %d: %s, want %s", k+1, got, want)
		}
	}
}

func TestECSVInAstropy(t *testing.T) {
	paths, _ := writeAll(t, t.TempDir())
	out := foreign.Python(t, "astropy", `
import sys, json
from astropy.table import Table
t = Table.read(sys.argv[1], format="ascii.ecsv")
print(json.dumps([t.colnames, str(t["angle"].unit), str(t["order"].dtype), t["name"][0], float(t["angle"][1]), bool(t["r"].mask[1]), bool(t["order"].mask[1]), t["r"].description, t.meta["scene"]]))
`, paths["ecsv"])
	var got []any
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	want := []any{[]any{"r", "angle", "order", "name"}, "deg", "int64", "a, b", -3e-9, true, true, "radius [GM/c2 or GM/c3]", trial}
	if fmt.Sprint(got) != fmt.Sprint(want) {
		t.Errorf("%q\nwant %q", got, want)
	}
	out = foreign.Python(t, "astropy", `
import sys
from astropy.table import Table
t = Table.read(sys.argv[1], format="ascii.csv", comment="#")
print(t.colnames, t["name"][2])
`, paths["csv"])
	if got := strings.TrimSpace(out); got != "['r', 'angle', 'order', 'name'] d" {
		t.Errorf("CSV: %s", got)
	}
}

// Absolute intensities have a unit that astropy knows, and the flux density in
// the file is that of the scene: 0.6 Jy over the whole image, at 230 GHz.
func TestFITSBrightness(t *testing.T) {
	text := strings.Replace(trial, "kind = \"disk\"", `kind = "disk"
light = "monochromatic"
total_flux = "0.6 Jy"`, 1)
	text = strings.Replace(text, `center = ["1 M", "-0.5 M"]`, `frequency = ["230 GHz"]`, 1)
	text = strings.Replace(text, `width  = "30 M"`, `width  = "60 M"`, 1)
	text = strings.Replace(text, "pixels = [40, 30]", "pixels = [240, 240]", 1)
	d, v := load(t, text)
	plate, err := v.Render(context.Background(), raytrace.Options{})
	if err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), "a.fits")
	writeFITS(t, path, d, v, plate, []raytrace.Layer{raytrace.Intensity})
	if out := foreign.Run(t, "fitsverify", "-q", path); !strings.Contains(out, "verification OK") {
		t.Error(out)
	}
	out := foreign.Python(t, "astropy", `
import sys, json, numpy
from astropy.io import fits
import astropy.units as u
with fits.open(sys.argv[1]) as f:
    h = f[0].header
    unit = u.Unit(h["BUNIT"], format="fits")
    side = (h["UASPIX"] * u.uas) ** 2
    sum = f[0].data.astype("f8").sum() * unit * side
    print(json.dumps([sum.to(u.Jy).value, float(f[0].data.astype("f8").sum() * h["JYPERPIX"]), h["FREQ"], f["INTENSITY", 1].header["BUNIT"] == h["BUNIT"]]))
`, path)
	var got []any
	if err := json.Unmarshal([]byte(out), &got); err != nil || len(got) != 4 {
		t.Fatalf("%v: %s", err, out)
	}
	near(t, "flux by BUNIT, Jy", got[0].(float64), 0.6, 0.006) // a sum over pixels of 1/4 M
	near(t, "flux by JYPERPIX, Jy", got[1].(float64), got[0].(float64), 1e-9)
	if got[2] != 230e9 || got[3] != true {
		t.Errorf("%v", got)
	}
}
