package verbs

import (
	"bufio"
	"bytes"
	"debug/elf"
	"encoding/csv"
	"image"
	"image/color"
	"image/png"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"slices"
	"strconv"
	"strings"
	"syscall"
	"testing"

	"annulet/app/files"
	"annulet/scenes"
)

func readPNG(t *testing.T, path string) (image.Image, []files.Text) {
	t.Helper()
	data, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	img, err := png.Decode(bytes.NewReader(data))
	if err != nil {
		t.Fatal(err)
	}
	const limit = 1 << 20
	texts, err := files.PNGTexts(bytes.NewReader(data), limit)
	if err != nil {
		t.Fatal(err)
	}
	return img, texts
}

func TestRender(t *testing.T) {
	dir := folder(t)
	got := do(t, "", "render", "small.toml", "--set", "observer.inclination=40deg", "-o", "a.png", "-o", "b.PNG", "--json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var r struct {
		Units       map[string]string
		Files       []string
		Pixels      [2]int
		Paths       int
		WorstBound  *float64 `json:"worst_bound"`
		Layer       string
		Order       *int
		Limits      [2]float64
		NotIncluded []string `json:"not_included"`
	}
	decode(t, got.out, &r)
	if !slices.Equal(r.Files, []string{"a.png", "b.PNG"}) || r.Pixels != [2]int{16, 12} || r.Paths <= 0 ||
		r.WorstBound == nil || r.Layer != "intensity" || r.Order != nil || !(r.Limits[0] < r.Limits[1]) || len(r.NotIncluded) == 0 {
		t.Errorf("%s", got.out)
	}
	if !strings.Contains(got.errors, notIncludedLine) {
		t.Errorf("stderr does not say what is not included: %q", got.errors)
	}
	img, texts := readPNG(t, "a.png")
	if img.Bounds() != image.Rect(0, 0, 16, 12) {
		t.Errorf("bounds %v", img.Bounds())
	}
	// The scene inside is the one that was traced, overrides and all.
	at := slices.IndexFunc(texts, func(x files.Text) bool { return x.Keyword == "Annulet scene" })
	if at < 0 {
		t.Fatal("the picture carries no scene")
	}
	inside, err := scenes.Parse("inside", []byte(texts[at].Value))
	if err != nil || inside.Scene().Observer.Inclination != 40 {
		t.Errorf("the scene inside has inclination %v (%v)", inside.Scene().Observer.Inclination, err)
	}
	if names := contents(t, dir); !slices.Equal(names, []string{"a.png", "b.PNG", "small.toml"}) {
		t.Errorf("directory holds %q", names)
	}

	// Same scene, same bytes, whatever the number of workers.
	do(t, "", "render", "small.toml", "--set", "observer.inclination=40deg", "-o", "c.png", "--workers", "3")
	a, errA := os.ReadFile("a.png")
	c, errC := os.ReadFile("c.png")
	if errA != nil || errC != nil || !bytes.Equal(a, c) {
		t.Errorf("the file depends on the number of workers (%v, %v)", errA, errC)
	}
}

func TestRenderLayers(t *testing.T) {
	folder(t)
	for _, args := range []string{
		"--depth 16", "--curve linear", "--curve logarithmic", "--limits 0:0.01", "--limits 1%:99%", "--map shift",
		"--layer g", "--layer r --order 1", "--layer phi", "--layer delay", "--layer mu --order 2",
		"--layer intensity --order 1", "--order total", "--layer g --curve logarithmic", "--layer g --limits 0.5:1.5",
	} {
		got := do(t, "", append([]string{"render", "small.toml", "-o", "x.png"}, strings.Fields(args)...)...)
		if got.code != exitDone || got.out != "x.png\n" {
			t.Errorf("%s: %+v", args, got)
			continue
		}
		img, _ := readPNG(t, "x.png")
		if deep := img.ColorModel() == color.RGBA64Model; deep != strings.Contains(args, "16") {
			t.Errorf("%s: %T", args, img)
		}
	}
}

// The gas on the left comes towards us: there the picture of an inclined
// disk is brighter.
func TestRenderLeftIsBright(t *testing.T) {
	folder(t)
	do(t, "", "render", "small.toml", "-o", "x.png", "--curve", "linear", "--depth", "16")
	img, _ := readPNG(t, "x.png")
	var left, right int64
	b := img.Bounds()
	for y := b.Min.Y; y < b.Max.Y; y++ {
		for x := b.Min.X; x < b.Max.X; x++ {
			lum := int64(color.Gray16Model.Convert(img.At(x, y)).(color.Gray16).Y)
			if x < b.Dx()/2 {
				left += lum
			} else {
				right += lum
			}
		}
	}
	if left <= right {
		t.Errorf("left %d, right %d", left, right)
	}
}

func TestProbe(t *testing.T) {
	folder(t)
	// Face-on, b = 8 and 12 M on either side; the last meets nothing in order 0.
	args := []string{"probe", "small.toml", "--set", "observer.inclination=0", "--at", "-8,0", "--at", "0,12", "--at", "100,0"}
	got := do(t, "", args...)
	if got.code != exitDone || !strings.Contains(got.errors, notIncludedLine) {
		t.Fatalf("%+v", got)
	}
	rows, err := csv.NewReader(strings.NewReader(got.out)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if header := strings.Join(rows[0], ","); header != "alpha,beta,order,r,phi_deg,ell,g,mu,delay,intensity" {
		t.Errorf("header %q", header)
	}
	if len(rows) != 3 || rows[1][0] != "-8" || rows[2][1] != "12" || rows[1][2] != "0" {
		t.Fatalf("rows %q", rows)
	}
	value := func(row, column int) float64 {
		x, err := strconv.ParseFloat(rows[row][column], 64)
		if err != nil {
			t.Errorf("row %d column %d: %v", row, column, err)
		}
		return x
	}
	// Face-on g is √(1-3/r), whatever the azimuth.
	const tol = 1e-12
	for row := 1; row <= 2; row++ {
		r, g := value(row, 3), value(row, 6)
		if want := math.Sqrt(1 - 3/r); !(math.Abs(g-want) <= tol) {
			t.Errorf("row %d: g = %v, want %v ± %v", row, g, want, tol)
		}
	}

	table := "beta,alpha\n0,-8\n12,0\n0,100\n"
	again := do(t, table, "probe", "small.toml", "--set", "observer.inclination=0", "--table", "-")
	if again.out != got.out {
		t.Errorf("--table says\n%s--at says\n%s", again.out, got.out)
	}
	var asJSON struct {
		Units map[string]string
		Rows  []map[string]float64
	}
	decode(t, do(t, "", append(args, "--json")...).out, &asJSON)
	if len(asJSON.Rows) != 2 || asJSON.Rows[0]["r"] != value(1, 3) || asJSON.Units["phi_deg"] != "deg" || asJSON.Units["alpha"] != "M" {
		t.Errorf("JSON %+v", asJSON)
	}
}

func TestProbePerspective(t *testing.T) {
	folder(t)
	got := do(t, "", "probe", "small.toml", "--set", "observer.radius=50M", "--set", "field.projection=perspective",
		"--at", "10,0.1", "--json")
	var r struct {
		Units map[string]string
		Rows  []map[string]float64
	}
	decode(t, got.out, &r)
	if r.Units["alpha"] != "deg" || len(r.Rows) == 0 || r.Rows[0]["alpha"] != 10 || r.Rows[0]["beta"] != 0.1 {
		t.Errorf("%+v", got)
	}
}

// build makes the static program; it takes a while, so not in short tests.
func build(t *testing.T) string {
	t.Helper()
	if testing.Short() {
		t.Skip("builds the program")
	}
	path := filepath.Join(t.TempDir(), "annulet-batch")
	cmd := exec.Command("go", "build", "-buildvcs=false", "-o", path, "annulet/app/annulet-batch")
	cmd.Env = append(os.Environ(), "CGO_ENABLED=0")
	if out, err := cmd.CombinedOutput(); err != nil {
		t.Fatalf("%v\n%s", err, out)
	}
	return path
}

func TestStaticBinary(t *testing.T) {
	if runtime.GOOS != "linux" {
		t.Skip("looks into an ELF file")
	}
	f, err := elf.Open(build(t))
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	if len(f.Progs) == 0 {
		t.Fatal("no program headers were read")
	}
	for _, p := range f.Progs {
		if p.Type == elf.PT_DYNAMIC || p.Type == elf.PT_INTERP {
			t.Errorf("not static: it has a %v", p.Type)
		}
	}
	if f.Section(".dynamic") != nil {
		t.Error("not static: it has a .dynamic section")
	}
}

func TestInterruptLeavesNothing(t *testing.T) {
	program := build(t)
	for _, sig := range []os.Signal{os.Interrupt, syscall.SIGTERM} {
		dir := t.TempDir()
		cmd := exec.Command(program, "render", "@first-light", "-o", filepath.Join(dir, "a.png"),
			"--set", "field.pixels=[3000,3000]", "--set", "trace.tolerance=1e-12")
		stderr, err := cmd.StderrPipe()
		if err != nil {
			t.Fatal(err)
		}
		if err := cmd.Start(); err != nil {
			t.Fatal(err)
		}
		lines := bufio.NewScanner(stderr)
		lines.Scan() // the render has begun
		if err := cmd.Process.Signal(sig); err != nil {
			t.Fatal(err)
		}
		var said []string
		for lines.Scan() {
			if !strings.HasPrefix(lines.Text(), "render: ") { // progress
				said = append(said, lines.Text())
			}
		}
		if err := cmd.Wait(); cmd.ProcessState.ExitCode() != exitCouldNot {
			t.Errorf("%v: %v, want exit %d", sig, err, exitCouldNot)
		}
		if len(said) != 1 || !strings.Contains(said[0], "interrupted") {
			t.Errorf("%v: it said %q", sig, said)
		}
		if left := contents(t, dir); len(left) != 0 {
			t.Errorf("%v: it left %q", sig, left)
		}
	}
}

// What pictures show of physics: the temperature of a blackbody disk, its
// intensity in units of observers, and what the scene leaves out.
func TestRenderPhysics(t *testing.T) {
	folder := t.TempDir()
	file := filepath.Join(folder, "x.png")
	small := []string{"--set", "field.pixels=[24,24]", "--json", "-o", file}
	for _, c := range []struct {
		args []string
		unit string
	}{
		{[]string{"@hot-disk"}, "W m-2 Hz-1 sr-1"},
		{[]string{"@hot-disk", "--layer", "temperature"}, "K"},
		{[]string{"@hot-disk", "--unit", "K-planck"}, "K-planck"},
		{[]string{"@hot-disk", "--unit", "mJy/pixel", "--order", "0"}, "mJy/pixel"},
		{[]string{"@broad-line"}, "energy of the line, emitted at r = 1 M"},
		{[]string{"@late-twin", "--set", "time.start=0.25 orbit"}, "emitted by a spot of contrast 1"},
	} {
		got := do(t, "", append(append([]string{"render"}, c.args...), small...)...)
		if got.code != exitDone || !strings.Contains(got.out, `"limits": "`+c.unit+`"`) {
			t.Errorf("%q: exit %d, %s\n%s", c.args, got.code, got.out, got.errors)
		}
	}
	got := do(t, "", append([]string{"render", "@first-light", "--set", `trace.effects=["motion"]`}, small...)...)
	if got.code != exitDone || !strings.Contains(got.out, "light bending (paths are straight)") || !strings.Contains(got.errors, "Left out on purpose") {
		t.Errorf("exit %d, %s\n%s", got.code, got.out, got.errors)
	}
	data, err := os.ReadFile(file)
	if err != nil || !strings.Contains(string(data), "gravitational redshift") {
		t.Errorf("the picture does not say what is left out, %v", err)
	}
	for says, args := range map[string][]string{
		"needs a disk with light":  {"@first-light", "--layer", "temperature"},
		"unit Jy/pixel needs":      {"@first-light", "--unit", "Jy/pixel"},
		`unit "Jy"`:                {"@hot-disk", "--unit", "Jy"},
		"only for --layer":         {"@hot-disk", "--unit", "Jy/pixel", "--layer", "g"},
		"needs telescope.beam":     {"@hot-disk", "--unit", "Jy/beam"},
		"no such file":             {"@first-light", "--set", "emitter.profile=table", "--set", "emitter.table=none.csv"},
		"needs the observer at in": {"@first-light", "--set", "observer.radius=50", "--set", "emitter.total_flux=1 Jy"},
	} {
		got := do(t, "", append(append([]string{"render"}, args...), small...)...)
		if got.code != exitUsage || !strings.Contains(got.errors, says) {
			t.Errorf("%q: exit %d, %s, want %q", args, got.code, got.errors, says)
		}
	}
}
