package windowtest

import (
	"fmt"
	"image"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"testing"
	"time"
)

func TestWindow(t *testing.T) {
	need(t, "go", "gcc", "pkg-config", "Xvfb", "openbox", "xdotool", "import")
	program := build(t)
	t.Run("follows the hand", func(t *testing.T) { followsTheHand(t, program) })
	t.Run("opens every scene", func(t *testing.T) { opensEveryScene(t, program) })
	t.Run("is an instrument", func(t *testing.T) { isAnInstrument(t, program) })
	t.Run("keeps work", func(t *testing.T) { keepsWork(t, program) })
	t.Run("refuses in words", func(t *testing.T) { refusesInWords(t, program) })
}

func followsTheHand(t *testing.T, program string) {
	s := newScreen(t)
	started := time.Now()
	log := s.run(program)

	places, shown := log.places(t)
	log.read = 0 // the first picture may have come before, and be the settled one
	first := log.wait(t, "a first picture", picture)
	t.Logf("window shown %d ms after the start, first picture %d ms after the window",
		shown.at.Sub(started).Milliseconds(), first.at.Sub(shown.at).Milliseconds())
	log.read = 0
	settled := log.wait(t, "a settled picture", word("settled"))
	if settled.fields["inclination"] != "20" || settled.fields["scene"] != "@first-light" {
		t.Errorf("opened on %q", settled.text)
	}
	t.Logf("first settled: %s", settled.text)
	t.Logf("at rest: %s", log.wait(t, "pixels as areas", word("integrated")).text)

	w := window{s, s.do("search", "--onlyvisible", "--name", "Annulet")}
	at := w.place()
	slider := places.of(t, "key=observer.inclination slider")
	entry := places.of(t, "key=observer.inclination entry")
	shownImage := places.of(t, "picture")
	onScreen := shownImage.Add(at)
	before := s.shot("1-opened")

	// Drag the inclination from 20 deg to about 66 deg.
	from := middle(slider)
	from.X = slider.Min.X + slider.Dx()*20/180
	w.move(from)
	s.do("mousedown", "1")
	last := ""
	var dragged line
	for k := 1; k <= 5; k++ {
		log.now()
		moved := time.Now()
		w.move(from.Add(point(k*5, 0)))
		p := log.wait(t, "a picture while dragging", func(l line) bool { return picture(l) && l.fields["inclination"] != last })
		last, dragged = p.fields["inclination"], p
		t.Logf("drag: %d ms to the picture: %s", p.at.Sub(moved).Milliseconds(), p.text)
	}
	s.do("mouseup", "1")
	if dragged.word != "settled" {
		dragged = log.wait(t, "the dragged scene settled", word("settled"))
	}
	if dragged.number(t, "inclination") < 40 {
		t.Errorf("dragging by a quarter of the slider led to: %s", dragged.text)
	}
	t.Logf("dragged: %s", dragged.text)
	after := s.shot("2-dragged")
	if share := changed(before, after, onScreen); share < 0.05 {
		t.Errorf("dragging changed %.1f %% of the image", 100*share)
	}

	// A wrong quantity is refused in place, a right one is taken.
	w.click(middle(entry))
	log.now()
	s.do("type", "75 M")
	s.do("key", "Return")
	if l := log.wait(t, "a refusal", word("wrong")); l.fields["typed"] != "75 M" {
		t.Errorf("refused %q", l.text)
	}
	s.shot("3-wrong")
	log.now()
	s.do("key", "Escape")
	s.do("type", "75deg")
	s.do("key", "Return")
	log.wait(t, "75 deg settled", settledAt("75"))
	typed := s.shot("4-typed")
	if share := changed(after, typed, onScreen); share < 0.05 {
		t.Errorf("typing changed %.1f %% of the image", 100*share)
	}

	// Single steps of the slider, by the arrow key. A click on the thumb
	// only gives it the focus.
	thumb := middle(slider)
	thumb.X = slider.Min.X + slider.Dx()*75/180
	w.click(thumb)
	var toPreview, toSettled []int
	for k := range 8 {
		log.now()
		pressed := time.Now()
		s.do("key", "Right")
		want := strconv.Itoa(76 + k)
		p := log.wait(t, "a picture after a step", func(l line) bool { return picture(l) && l.fields["inclination"] == want })
		q := p
		if p.word != "settled" {
			q = log.wait(t, "a settled picture after a step", word("settled"))
		}
		toPreview = append(toPreview, int(p.at.Sub(pressed).Milliseconds()))
		toSettled = append(toSettled, int(q.at.Sub(pressed).Milliseconds()))
		if k == 0 {
			t.Logf("step: %s", p.text)
		}
	}
	slices.Sort(toPreview)
	slices.Sort(toSettled)
	t.Logf("step of the inclination, from before xdotool starts: picture after %v ms, settled after %v ms", toPreview, toSettled)

	// The readings of a pixel: screen coordinates that fit the pixel.
	log.now()
	target := middle(shownImage).Add(point(-shownImage.Dx()/6, shownImage.Dy()/40))
	w.move(target)
	column, row := target.X-shownImage.Min.X, shownImage.Max.Y-1-target.Y
	reading := log.wait(t, "the readings", func(l line) bool {
		return l.word == "reading" && l.fields["column"] == fmt.Sprint(column) && l.fields["row"] == fmt.Sprint(row)
	})
	if reading.number(t, "crossings") < 1 || reading.number(t, "alpha") >= 0 || reading.number(t, "beta") >= 0 {
		t.Errorf("left of and below the centre: %s", reading.text)
	}
	s.shot("5-reading")

	// A change of tone colours again and traces nothing.
	log.now()
	s.do("key", "ctrl+3")
	log.wait(t, "another tone", word("toned"))
	toned := s.shot("6-logarithmic")
	if share := changed(typed, toned, onScreen); share < 0.05 {
		t.Errorf("the tone changed %.1f %% of the image", 100*share)
	}

	// The image is saved with the scene inside, the scene with its comments.
	folder := t.TempDir()
	log.now()
	s.save("ctrl+e", filepath.Join(folder, "image.png"))
	if l := log.wait(t, "a saved image", word("saved")); l.fields["pixels"] != "800x800" {
		t.Errorf("the scene has 800x800 pixels: %s", l.text)
	}
	s.save("ctrl+shift+s", filepath.Join(folder, "scene.toml"))
	log.wait(t, "a saved scene", word("saved"))
	scene := readFile(t, filepath.Join(folder, "scene.toml"))
	for _, want := range []string{"# Annulet's default scene", `inclination = "83 deg"`} {
		if !strings.Contains(scene, want) {
			t.Errorf("the saved scene has no %q", want)
		}
	}
	if !strings.Contains(readFile(t, filepath.Join(folder, "image.png")), scene) {
		t.Error("the image does not hold the scene")
	}
	s.shot("7-saved")
}

// save drives the dialog that asks for a path.
func (s *screen) save(keys, path string) {
	s.t.Helper()
	s.do("key", keys)
	s.typePath(path)
}

// typePath fills in where to save.
func (s *screen) typePath(path string) {
	s.t.Helper()
	s.do("key", "ctrl+a")
	s.do("type", path)
	s.do("key", "Return")
}

func readFile(t *testing.T, path string) string {
	t.Helper()
	text, err := os.ReadFile(path)
	if err != nil {
		t.Fatal(err)
	}
	return string(text)
}

// opensEveryScene opens the built-in scenes: stars, shells, moving observers
// and skies have a picture, controls, readings and a strip.
func opensEveryScene(t *testing.T, program string) {
	s := newScreen(t)
	for k, name := range []string{"@two-caps", "@slow-room", "@last-look", "@behind-glass"} {
		log := s.run(program, name)
		places, _ := log.places(t)
		log.read = 0
		if l := log.wait(t, name+" settled", word("settled")); l.fields["scene"] != name {
			t.Errorf("%s opened as %s", name, l.text)
		}
		w := window{s, s.do("search", "--onlyvisible", "--name", name)}
		image := places.of(t, "picture")
		w.move(image.Min) // so that the next is a movement
		log.now()
		w.move( // off the middle, where a shadow may be
			image.Min.Add(point(image.Dx()*3/5, image.Dy()*2/3)))
		l := log.wait(t, "a reading of "+name, word("reading"))
		if l.number(t, "column") == 0 { // of the corner, late
			l = log.wait(t, "a second reading of "+name, word("reading"))
		}
		if l.number(t, "crossings") < 1 {
			t.Errorf("%s: %s", name, l.text)
		}
		s.shot(fmt.Sprintf("scene-%d%s", k, name))
		s.do("key", "ctrl+q")
		log.end(t)
	}
}

// isAnInstrument drives layers, overlays, zoom, marks, tables, graphs and the
// history by mouse and keys.
func isAnInstrument(t *testing.T, program string) {
	s := newScreen(t)
	log := s.run(program)
	places, _ := log.places(t)
	log.read = 0
	log.wait(t, "a settled picture", word("settled"))
	w := window{s, s.do("search", "--onlyvisible", "--name", "Annulet")}
	image := places.of(t, "picture")
	screen := image.Add(w.place())
	last := s.shot("10-opened")
	differs := func(name string, least float64) {
		t.Helper()
		now := s.shot(name)
		if share := changed(last, now, screen); share < least {
			t.Errorf("%s changed %.2f %% of the image", name, 100*share)
		}
		last = now
	}
	settled := func(what string) line { t.Helper(); return log.wait(t, what, word("settled")) }
	press := func(label string) {
		t.Helper()
		log.now()
		w.click(middle(places.of(t, "say="+strconv.Quote(label)+" word")))
	}

	press("g")
	settled("the layer g")
	differs("11-layer-g", 0.2)
	press("g lines")
	settled("contours")
	differs("12-contours", 0.005)
	press("Intensity")
	settled("intensity")
	press("rims")
	log.wait(t, "rims", word("toned"))
	press("critical curve")
	log.wait(t, "the critical curve", word("toned"))
	differs("13-rims", 0.01)

	// The wheel zooms about the pointer, whose readings stay.
	at := middle(image).Add(point(image.Dx()/12, 0))
	w.move(at)
	before := log.wait(t, "a reading", word("reading")).number(t, "alpha")
	log.now()
	for range 6 {
		s.do("click", "4")
	}
	settled("a zoomed picture")
	log.now()
	w.move(at.Add(point(0, 1)))
	after := log.wait(t, "a reading of the zoomed picture", word("reading")).number(t, "alpha")
	if diff := after - before; diff > 0.2 || diff < -0.2 {
		t.Errorf("zooming moved what is under the pointer from alpha = %g to %g", before, after)
	}
	differs("14-zoomed", 0.05)

	// Dragging pans: the picture goes with the hand.
	log.now()
	s.drag(w, at, at.Add(point(-60, 20)))
	settled("a panned picture")
	log.now()
	w.move(at.Add(point(-60, 21)))
	panned := log.wait(t, "a reading of the panned picture", word("reading")).number(t, "alpha")
	if diff := panned - after; diff > 0.3 || diff < -0.3 {
		t.Errorf("the hand took alpha = %g along and holds %g", after, panned)
	}
	press("fit")
	settled("the whole field")

	// A click marks a point, keys move it; the brightest pixel is a key away.
	log.now()
	w.click(at)
	log.wait(t, "a marker", word("marker"))
	log.now()
	s.do("key", "Right")
	log.wait(t, "a marker moved", word("marker"))
	log.now()
	s.do("type", "m")
	moved := log.wait(t, "the marker on the brightest pixel", word("marker"))
	brightest := log.wait(t, "the brightest pixel's reading", func(l line) bool {
		return l.word == "marked" && l.fields["alpha"] == moved.fields["alpha"]
	})
	if brightest.number(t, "alpha") >= 0 || brightest.number(t, "crossings") < 1 {
		t.Errorf("the left side is not the bright one: %s", brightest.text)
	}
	s.shot("15-brightest")

	// A cut and a circle are drawn by hand.
	press("cut")
	log.now()
	left, right := point(image.Min.X+20, middle(image).Y), point(image.Max.X-20, middle(image).Y)
	s.drag(w, left, right)
	log.wait(t, "a cut", word("cut"))
	log.wait(t, "the cut's graph", func(l line) bool {
		return l.word == "graphed" && strings.Contains(l.fields["title"], "cut") && l.number(t, "curves") == 3
	})
	s.shot("16-cut")
	press("circle")
	log.now()
	s.drag(w, middle(image), middle(image).Add(point(image.Dx()/11, 0)))
	circle := log.wait(t, "a circle", word("circle"))
	if r := circle.number(t, "radius"); r < 3 || r > 10 {
		t.Errorf("a circle of the ring's size measures %g M", r)
	}
	s.shot("17-circle")

	// Tables are copied as text and CSV.
	for _, tab := range []string{"Rings", "Observer", "Stations", "Numerics", "Pixel"} {
		press(tab)
		log.wait(t, "the table "+tab, word("tab"))
		s.shot("18-" + strings.ToLower(tab))
	}

	// Graphs that take a while are measured, or say why they cannot be.
	for _, graph := range []string{"Line", "Visibility", "Light curve", "Spectrum"} {
		log.now()
		press(graph)
		measured := log.wait(t, "the graph "+graph, word("measured"))
		if wrong := measured.fields["error"]; (wrong != "") != (graph == "Light curve") {
			t.Errorf("%s: %q", graph, wrong)
		}
		s.shot("18-graph-" + strings.ToLower(strings.ReplaceAll(graph, " ", "-")))
	}
	// A curve is held beside that of another inclination.
	press("Line")
	log.wait(t, "the line again", word("measured"))
	press("hold")
	if n := log.wait(t, "a curve held", word("held")).number(t, "curves"); n != 1 {
		t.Errorf("%g curves are held", n)
	}
	log.now()
	s.do("key", "ctrl+k")
	s.do("type", "inclination observer")
	s.do("key", "Return")
	log.wait(t, "the key found", word("found"))
	s.do("type", "70deg")
	s.do("key", "Return")
	log.wait(t, "the line at 70 deg", word("measured"))
	s.shot("18-graph-held")

	// Figures of the graph and of the image go where a paper is written.
	folder := t.TempDir()
	for what, file := range map[string]string{"save figure graph": "line.pdf", "save figure image": "image.svg"} {
		log.now()
		s.do("key", "ctrl+k")
		s.do("type", what)
		s.do("key", "Return")
		s.typePath(filepath.Join(folder, file))
		log.wait(t, "a saved figure", word("saved"))
		if caption := readFile(t, filepath.Join(folder, strings.TrimSuffix(file, filepath.Ext(file))+".caption.txt")); !strings.Contains(caption, "inclination 70 deg") {
			t.Errorf("the caption of %s: %s", file, caption)
		}
	}
	if drawn := readFile(t, filepath.Join(folder, "line.pdf")); !strings.HasPrefix(drawn, "%PDF") {
		t.Errorf("the figure of the line is %.20q", drawn)
	}
	press("Path")

	// Everything is undone, one change after another, and done again.
	for range 4 {
		log.now()
		s.do("key", "ctrl+z")
		log.wait(t, "an undone change", word("undone"))
	}
	log.now()
	s.do("key", "ctrl+shift+z")
	log.wait(t, "a change done again", word("redone"))
	s.shot("19-undone")
}

// keepsWork kills the program while the scene is changed and finds the
// change again; text, finder and settings are driven by keys alone.
func keepsWork(t *testing.T, program string) {
	s := newScreen(t)
	log := s.run(program)
	log.places(t)
	log.read = 0
	log.wait(t, "a settled picture", word("settled"))
	s.do("search", "--onlyvisible", "--name", "Annulet", "windowfocus")

	// The finder goes to a key by its name.
	log.now()
	s.do("key", "ctrl+k")
	s.do("type", "inclination observer")
	s.do("key", "Return")
	log.wait(t, "the key found", word("found"))
	s.do("type", "66deg")
	s.do("key", "Return")
	log.wait(t, "66 deg settled", settledAt("66"))
	s.shot("30-found")
	log.wait(t, "unsaved work kept", word("kept"))
	s.kill(log)

	again := s.run(program)
	places, _ := again.places(t)
	again.read = 0
	if l := again.wait(t, "the work back", word("recovered")); l.fields["scene"] != "@first-light" {
		t.Errorf("recovered %s", l.text)
	}
	again.wait(t, "66 deg settled again", settledAt("66"))
	s.shot("31-recovered")
	again.now()
	s.do("search", "--onlyvisible", "--name", "Annulet", "windowfocus")
	s.do("key", "ctrl+z")
	again.wait(t, "20 deg settled after undo", settledAt("20"))

	// The file's text is edited beside its keys; what is wrong is said.
	w := window{s, s.do("search", "--onlyvisible", "--name", "Annulet")}
	again.now()
	w.click(middle(places.of(t, `say="Text" word`)))
	again.wait(t, "the text", word("tab"))
	tables := middle(places.of(t, `say="Observer" word`)).Add(point(0, 60))
	w.click(tables)
	s.do("key", "ctrl+a")
	s.do("type", "schema = 1")
	s.do("key", "Return")
	again.now()
	s.do("type", "observer.inclination = 181")
	again.wait(t, "a fault of the text", func(l line) bool { return l.word == "text" && strings.Contains(l.fields["error"], "0 to 180") })
	s.shot("32-fault")
	again.now()
	for range 2 {
		s.do("key", "BackSpace")
	}
	s.do("type", "2")
	again.wait(t, "12 deg settled", settledAt("12"))
	s.shot("33-text")

	// Settings: the light theme.
	again.now()
	s.do("key", "ctrl+comma")
	s.do("key", "Tab")
	s.do("key", "Return")
	if l := again.wait(t, "a setting", word("setting")); l.fields["value"] != "light" {
		t.Errorf("the next theme is %s", l.text)
	}
	s.do("key", "Escape")
	s.shot("34-light")
}

// kill ends the program that writes the log as a crash would.
func (s *screen) kill(log *logbook) {
	s.t.Helper()
	log.process.Kill()
	log.end(s.t)
}

// drag holds the left button from one point to another, in steps that a hand
// would make.
func (s *screen) drag(w window, from, to image.Point) {
	s.t.Helper()
	w.move(from)
	s.do("mousedown", "1")
	const steps = 5
	for k := 1; k <= steps; k++ {
		w.move(from.Add(to.Sub(from).Mul(k).Div(steps)))
	}
	s.do("mouseup", "1")
}

func refusesInWords(t *testing.T, program string) {
	bad := filepath.Join(t.TempDir(), "bad.toml")
	if err := os.WriteFile(bad, []byte("schema = 1\n[observer]\nradius = \"1.9 M\"\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	for _, k := range []struct {
		args []string
		env  string
		code int
		says string
	}{
		{nil, "DISPLAY=", 1, "no display"},
		{[]string{"@first-light"}, "DISPLAY=:4095", 1, "no display"},
		{[]string{bad}, "DISPLAY=", 2, "bad.toml:3:10"},
		{[]string{"nowhere.toml"}, "DISPLAY=", 2, "nowhere.toml"},
		{[]string{"version"}, "DISPLAY=", 0, ""},
	} {
		cmd := exec.Command(program, k.args...)
		cmd.Env = []string{k.env, "HOME=" + t.TempDir()}
		var stderr strings.Builder
		cmd.Stderr = &stderr
		err := cmd.Run()
		said := strings.TrimSpace(stderr.String())
		if cmd.ProcessState == nil || cmd.ProcessState.ExitCode() != k.code || !strings.Contains(said, k.says) {
			t.Errorf("annulet %v with %s: %v\n%s", k.args, k.env, err, said)
		}
		if k.code == 1 && strings.Contains(said, "\n") {
			t.Errorf("annulet %v with %s says more than a line:\n%s", k.args, k.env, said)
		}
	}
}

// window is the program's window; its points count from its top left corner.
type window struct {
	screen *screen
	id     string
}

// place returns where the window's content stands on the screen.
func (w window) place() image.Point {
	w.screen.t.Helper()
	values := map[string]int{}
	for _, l := range strings.Split(w.screen.do("getwindowgeometry", "--shell", w.id), "\n") {
		name, value, _ := strings.Cut(l, "=")
		values[name], _ = strconv.Atoi(value)
	}
	return point(values["X"], values["Y"])
}

func (w window) move(p image.Point) {
	w.screen.t.Helper()
	w.screen.do("mousemove", "--window", w.id, strconv.Itoa(p.X), strconv.Itoa(p.Y))
}

func (w window) click(p image.Point) {
	w.screen.t.Helper()
	w.move(p)
	w.screen.do("click", "1")
}

func point(x, y int) image.Point { return image.Pt(x, y) }

func middle(r image.Rectangle) image.Point { return r.Min.Add(r.Max).Div(2) }

// rectangle reads "left,top,width,height".
func rectangle(t *testing.T, text string) image.Rectangle {
	t.Helper()
	var x, y, w, h int
	if _, err := fmt.Sscanf(text, "%d,%d,%d,%d", &x, &y, &w, &h); err != nil {
		t.Fatalf("place %q: %v", text, err)
	}
	return image.Rect(x, y, x+w, y+h)
}
