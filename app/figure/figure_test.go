package figure

import (
	"bytes"
	"context"
	"image"
	"image/color"
	"image/png"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"testing"

	"annulet/app/curves"
	"annulet/app/files/foreign"
	"annulet/app/output"
	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
	"annulet/scenes"
)

// load returns a built-in scene with keys set.
func load(t *testing.T, name string, set ...string) *scenes.Document {
	t.Helper()
	d, err := scenes.Load(name)
	if err != nil {
		t.Fatal(err)
	}
	var all []scenes.Assignment
	for k := 0; k < len(set); k += 2 {
		all = append(all, scenes.Assignment{Path: set[k], Value: set[k+1]})
	}
	if err := d.SetAll(all...); err != nil {
		t.Fatal(err)
	}
	return d
}

// drawn makes the first figure of a scene.
func drawn(t *testing.T, d *scenes.Document) *Made {
	t.Helper()
	s := d.Scene()
	f := scenes.PlainFigure()
	if len(s.Figures) > 0 {
		f = s.Figures[0]
	}
	m, err := Make(context.Background(), Request{Document: d, Figure: f})
	if err != nil {
		t.Fatal(err)
	}
	return m
}

// file writes a figure and returns its path.
func file(t *testing.T, m *Made, d *scenes.Document, name string) string {
	t.Helper()
	var b bytes.Buffer
	if err := m.Write(&b, name, m.Provenance(d, "test")); err != nil {
		t.Fatal(err)
	}
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, b.Bytes(), 0o600); err != nil {
		t.Fatal(err)
	}
	return path
}

// A single column of an 800 x 800 image, as poppler reads it.
func TestColumnOfAPaper(t *testing.T) {
	d := load(t, "@first-light")
	m := drawn(t, d)
	path := file(t, m, d, "a.pdf")
	content, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	if most := 300_000; len(content) >= most {
		t.Errorf("%d bytes, want fewer than %d", len(content), most)
	}
	again, err := os.ReadFile(file(t, drawn(t, d), d, "a.pdf"))
	if err != nil || !bytes.Equal(content, again) {
		t.Error("another run gives other bytes")
	}
	if text := foreign.Run(t, "pdftotext", "-layout", path, "-"); !strings.Contains(text, "Δα (µas)") || !strings.Contains(text, "−100") {
		t.Errorf("the text is %q", text)
	}
	size := regexp.MustCompile(`Page size: +([\d.]+) x`).FindStringSubmatch(foreign.Run(t, "pdfinfo", path))
	if size == nil {
		t.Fatal("pdfinfo tells no size")
	}
	points, err := strconv.ParseFloat(size[1], 64)
	if err != nil || !(math.Abs(points*mmPerPoint-88) <= 0.1) {
		t.Errorf("%s points wide, want 88 mm", size[1])
	}
	fonts := strings.Split(strings.TrimSpace(foreign.Run(t, "pdffonts", path)), "\n")
	if len(fonts) != 3 || !regexp.MustCompile(`CID TrueType +Identity-H +yes (yes|no) +yes`).MatchString(fonts[2]) {
		t.Errorf("fonts: %q", fonts)
	}
	if !strings.Contains(foreign.Run(t, "pdfdetach", "-list", path), output.SceneFile) {
		t.Error("no scene attached")
	}
}

// Every file gives its scene back.
func TestScenesComeBack(t *testing.T) {
	d := load(t, "@first-light", "field.pixels", "[40, 40]")
	m := drawn(t, d)
	for _, name := range []string{"a.pdf", "a.svg", "a.png", "a.tif"} {
		path := file(t, m, d, name)
		scene, err := output.Recover(path)
		if err != nil || !bytes.Equal(scene, d.Text()) {
			t.Errorf("%s: %v, %d bytes of scene, want %d", name, err, len(scene), len(d.Text()))
		}
		whole, err := os.ReadFile(path)
		if err != nil {
			t.Fatal(err)
		}
		for _, part := range []int{2, 3, 10} { // cut short: an error, and no panic
			if err := os.WriteFile(path, whole[:len(whole)/part], 0o600); err != nil {
				t.Fatal(err)
			}
			if scene, err := output.Recover(path); err == nil && !bytes.Equal(scene, d.Text()) {
				t.Errorf("%s, a %dth of it, gives another scene", name, part)
			}
		}
	}
}

// Pictures of one size come in one order, run for run.
func TestSeveralPicturesAreTheSameBytes(t *testing.T) {
	d := load(t, "@first-light", "field.pixels", "[40, 40]", "figure.order", `["total", "0", "1"]`, "figure.columns", "2")
	m := drawn(t, d)
	var first bytes.Buffer
	for run := range 10 {
		var b bytes.Buffer
		if err := m.WritePDF(&b, m.Provenance(d, "test")); err != nil {
			t.Fatal(err)
		}
		if run == 0 {
			first = b
		} else if !bytes.Equal(first.Bytes(), b.Bytes()) {
			t.Fatalf("run %d gives other bytes", run)
		}
	}
}

// boxed remembers where its panel was drawn.
type boxed struct {
	*imagePanel
	box rect
}

func (b *boxed) draw(sheet *Sheet, box rect, st style) {
	b.box = box
	b.imagePanel.draw(sheet, box, st)
}

// A plate with an annulus from 10 to 20 M, whose edges lie between pixels, and
// the critical curve over it: found where they belong, to a tenth of a
// millimetre, by poppler, by librsvg and by our own raster.
func TestEdgesWhereTheyBelong(t *testing.T) {
	const inner, outer, side, pixels = 10, 20, 50, 400
	d := load(t, "@first-light")
	field := raytrace.Field{Width: side, Columns: pixels, Rows: pixels}
	values := make([]float32, pixels*pixels)
	for k := range values {
		alpha, beta := field.PixelCenter(k%pixels, k/pixels)
		if r := math.Hypot(alpha, beta); r > inner && r < outer {
			values[k] = 1
		}
	}
	critical, _, err := curves.Critical(d.Scene(), field)
	if err != nil {
		t.Fatal(err)
	}
	ember, _ := assets.Lookup("ember")
	p := &boxed{imagePanel: &imagePanel{scene: d.Scene(), field: field, values: values, tone: tone.Tone{High: 1},
		colours: ember, name: "intensity", second: true, lines: []overLine{{points: closed(critical)}}}}
	sheet, err := arrange([]panel{p}, 1, 88, newStyle(false, 8))
	if err != nil {
		t.Fatal(err)
	}
	const dpi = 600
	m := &Made{Sheet: sheet, Dpi: dpi}
	at := strconv.Itoa(dpi)
	check := func(by string, img image.Image) {
		const perMM = dpi / 25.4
		middle := point{(p.box.Left + p.box.Right) / 2, (p.box.Top + p.box.Bottom) / 2}
		perM := p.box.width() / side
		bright := func(x, y float64) bool { // mm
			r, g, b, _ := img.At(int(x*perMM), int(y*perMM)).RGBA()
			return r+g+b > 3*0x8000
		}
		found := 0
		for _, axis := range []point{{1, 0}, {-1, 0}, {0, 1}, {0, -1}} {
			var places []float64 // where brightness changes, mm from the middle
			const step = 0.25 / perMM
			last := false
			for s := 0.0; s < 0.48*p.box.width(); s += step {
				if now := bright(middle.X+s*axis.X, middle.Y+s*axis.Y); now != last {
					places, last = append(places, s), now
				}
			}
			if len(places) != 4 {
				t.Errorf("%s, along %v: brightness changes at %v mm, want both sides of a line and two edges", by, axis, places)
				continue
			}
			for k, want := range map[int]float64{2: inner, 3: outer} {
				if off := places[k] - want*perM; !(math.Abs(off) <= 0.1) {
					t.Errorf("%s: the edge at %g M is off by %.3f mm", by, want, off)
				}
				found++
			}
			if off := (places[0]+places[1])/2 - math.Sqrt(27)*perM; !(math.Abs(off) <= 0.1) {
				t.Errorf("%s: the critical curve is off by %.3f mm", by, off)
			}
			found++
		}
		if found != 12 {
			t.Errorf("%s: %d places found, want 12", by, found)
		}
	}
	open := func(path string) image.Image {
		f, err := os.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		defer f.Close()
		img, err := png.Decode(f)
		if err != nil {
			t.Fatal(err)
		}
		return img
	}
	check("own raster", open(file(t, m, d, "a.png")))
	pdf := file(t, m, d, "a.pdf")
	foreign.Run(t, "pdftoppm", "-r", at, "-png", "-singlefile", pdf, pdf)
	check("poppler", open(pdf+".png"))
	svg := file(t, m, d, "a.svg")
	foreign.Run(t, "rsvg-convert", "-d", at, "-p", at, "-o", svg+".png", svg)
	check("librsvg", open(svg+".png"))
}

// The words of the scene's keys are those of the packages that carry them out.
func TestWordsOfKeys(t *testing.T) {
	var units []string
	for _, u := range raytrace.Units {
		units = append(units, string(u))
	}
	var shownLayers []string
	for _, l := range layers {
		shownLayers = append(shownLayers, l.word)
	}
	want := map[string][]string{"unit": units, "layer": shownLayers, "contours": shownLayers[:6], "map": assets.Names(), "curve": tone.CurveWords()}
	found := 0
	for _, k := range scenes.Keys() {
		if words, some := want[k.Name]; some && k.Section == "figure" {
			found++
			a, b := slices.Clone(k.Choices), slices.Clone(words)
			slices.Sort(a)
			slices.Sort(b)
			if !slices.Equal(a, b) {
				t.Errorf("figure.%s allows %q, want %q", k.Name, a, b)
			}
		}
	}
	if found != len(want) {
		t.Errorf("%d keys compared, want %d", found, len(want))
	}
	for _, journal := range []string{"aa", "aas", "mnras"} {
		if w := journals[journal]; !(w[0] > 80 && w[1] > 2*w[0]) {
			t.Errorf("%s has widths %v", journal, w)
		}
	}
}

func TestTicks(t *testing.T) {
	for _, c := range []struct {
		axis  axis
		n     int
		want  string
		power int
	}{
		{axis{Lo: 100, Hi: -100}, 5, "−100 −50 0 50 100", 0},
		{axis{Lo: 0, Hi: 0.0065}, 4, "0 2 4 6", -3},
		{axis{Lo: 0, Hi: 1.2}, 5, "0 0.5 1.0", 0},
		{axis{Lo: 0, Hi: 3e7}, 4, "0 1 2 3", 7},
		{axis{Lo: 1e-5, Hi: 2, Log: true}, 6, "10⁻⁵ 10⁻⁴ 10⁻³ 10⁻² 10⁻¹ 10⁰", 0},
		{axis{Lo: 0.02, Hi: 1, Log: true}, 6, "0.02 0.05 0.1 0.2 0.5 1", 0},
		{axis{Lo: -180, Hi: 180, Step: 90}, 3, "−180 −90 0 90 180", 0},
	} {
		major, _, power := c.axis.ticks(c.n)
		var labels []string
		for _, m := range major {
			labels = append(labels, m.label)
		}
		if got := strings.Join(labels, " "); got != c.want || power != c.power {
			t.Errorf("%+v: %q and 10^%d, want %q and 10^%d", c.axis, got, power, c.want, c.power)
		}
	}
}

// Every kind of panel is drawn with all its words on the sheet, and no two of
// them touch.
func TestEveryPanelHasItsRoom(t *testing.T) {
	for name, d := range map[string]*scenes.Document{
		"grid": load(t, "@first-light", "field.pixels", "[60, 60]", "figure.panels", `["image", "blurred", "line", "visibility", "cut", "path"]`,
			"figure.columns", "2", "figure.draw", `["critical", "edges", "beam", "scale", "north", "ring"]`, "figure.contours", "r"),
		"layers": load(t, "@broad-line", "field.pixels", "[60, 60]", "figure.layer", `["g", "r", "phi", "delay", "mu", "intensity"]`,
			"figure.order", `["0"]`, "figure.columns", "2", "figure.theme", "dark"),
		"column": load(t, "@first-light", "field.pixels", "[60, 60]", "observer.position_angle", "30 deg", "figure.unit", "plate"),
		"scenes": load(t, "@first-light", "field.pixels", "[60, 60]", "figure.columns", "2", "figure.scale", "shared",
			"figure.vary", `["", "observer.inclination = 60 deg", "observer.inclination=80deg; trace.max_order=1"]`),
		"light curve": load(t, "@late-twin", "figure.panels", `["light-curve"]`, "time.end", "0.5 orbit", "time.step", "0.05 orbit"),
		"spectrum":    load(t, "@first-light", "field.frequency", `["86 GHz", "230 GHz", "345 GHz"]`, "figure.panels", `["spectrum"]`),
	} {
		m := drawn(t, d)
		c := &extents{sheet: m.Sheet}
		m.play(c)
		if len(c.all) < 8 {
			t.Errorf("%s: only %d words", name, len(c.all))
		}
		for k, a := range c.all {
			if a.r.Left < 0 || a.r.Right > m.Width || a.r.Top < 0 || a.r.Bottom > m.Height {
				t.Errorf("%s: %q reaches beyond the sheet: %+v of %g x %g mm", name, a.text, a.r, m.Width, m.Height)
			}
			for _, b := range c.all[:k] {
				if a.r.Left < b.r.Right && b.r.Left < a.r.Right && a.r.Top < b.r.Bottom && b.r.Top < a.r.Bottom {
					t.Errorf("%s: %q at %+v and %q at %+v overlap", name, a.text, a.r, b.text, b.r)
				}
			}
		}
		if !strings.Contains(m.Caption, "Not included") || !strings.Contains(m.Caption, "Object: ") {
			t.Errorf("%s: caption %q", name, m.Caption)
		}
	}
}

// extents is a canvas that tells where words stand.
type extents struct {
	sheet *Sheet
	all   []struct {
		text string
		r    rect
	}
}

func (e *extents) write(w words) {
	width := textWidth(w.Text, w.Size)
	from := -map[align]float64{left: 0, centre: 0.5, right: 1}[w.Align] * width
	r := rect{w.At.X + from, w.At.Y - capHeight*w.Size, w.At.X + from + width, w.At.Y}
	if w.Upright {
		r = rect{w.At.X - capHeight*w.Size, w.At.Y - from - width, w.At.X, w.At.Y - from}
	}
	e.all = append(e.all, struct {
		text string
		r    rect
	}{w.Text, r})
}

func (e *extents) stroke(pen, []point)           {}
func (e *extents) fill(color.RGBA, []point)      {}
func (e *extents) picture(*image.Paletted, rect) {}
func (e *extents) clip(rect)                     {}
func (e *extents) unclip()                       {}

// TestNothingShines: a graph of zeros is drawn, with numbers.
func TestNothingShines(t *testing.T) {
	m := drawn(t, load(t, "@late-twin", "figure.panels", `["cut"]`, "field.pixels", "[40, 40]"))
	var pdf bytes.Buffer
	if err := m.Write(&pdf, "cut.pdf", output.Provenance{}); err != nil {
		t.Fatal(err)
	}
	var svg bytes.Buffer
	if err := m.Write(&svg, "cut.svg", output.Provenance{}); err != nil {
		t.Fatal(err)
	}
	if strings.Contains(svg.String(), "NaN") {
		t.Error("the drawing has places that are no numbers")
	}
}
