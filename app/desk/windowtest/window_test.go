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
	t.Run("refuses in words", func(t *testing.T) { refusesInWords(t, program) })
}

func followsTheHand(t *testing.T, program string) {
	s := newScreen(t)
	started := time.Now()
	log := s.run(program)

	places := map[string]line{}
	shown := log.wait(t, "the window", func(l line) bool {
		if l.word == "place" {
			places[l.fields["key"]] = l
		}
		return l.word == "window"
	})
	log.read = 0 // the first picture may have come before
	first := log.wait(t, "a first picture", picture)
	t.Logf("window shown %d ms after the start, first picture %d ms after the window",
		shown.at.Sub(started).Milliseconds(), first.at.Sub(shown.at).Milliseconds())
	settled := log.wait(t, "a settled picture", word("settled"))
	if settled.fields["inclination"] != "20" || settled.fields["scene"] != "@first-light" {
		t.Errorf("opened on %q", settled.text)
	}
	t.Logf("first settled: %s", settled.text)

	w := window{s, s.do("search", "--onlyvisible", "--name", "Annulet")}
	at := w.place()
	slider := rectangle(t, places["observer.inclination"].fields["slider"])
	entry := rectangle(t, places["observer.inclination"].fields["entry"])
	shownImage := rectangle(t, places[""].fields["picture"])
	onScreen := shownImage.Add(at)
	before := s.shot("1-opened")

	// Drag the inclination from 20 deg to about 66 deg.
	from := middle(slider)
	from.X = slider.Min.X + slider.Dx()*20/180
	w.move(from)
	s.do("mousedown", "1")
	last := ""
	for k := 1; k <= 5; k++ {
		log.now()
		moved := time.Now()
		w.move(from.Add(point(k*16, 0)))
		p := log.wait(t, "a picture while dragging", func(l line) bool { return picture(l) && l.fields["inclination"] != last })
		last = p.fields["inclination"]
		t.Logf("drag: %d ms to the picture: %s", p.at.Sub(moved).Milliseconds(), p.text)
	}
	s.do("mouseup", "1")
	dragged := log.wait(t, "the dragged scene settled", word("settled"))
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
