package state

import (
	"errors"
	"math"
	"strings"
	"testing"
	"time"

	"annulet/raytrace"
	"annulet/scenes"
)

const commented = `# about this scene
schema = 1
[observer]
inclination = "20 deg" # nearly face-on
[field]
pixels = [400, 300]
[[emitter]]
inner = "isco"
outer = "30 M"
`

func open(t *testing.T, text string) *State {
	t.Helper()
	doc, err := scenes.Parse("test.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return New(doc, "test.toml")
}

func (s *State) control(t *testing.T, key string) *Control {
	t.Helper()
	c := s.Control(key)
	if c == nil {
		t.Fatalf("no control for %s", key)
	}
	return c
}

// Keys that the tests turn.
const (
	Radius      = "observer.radius"
	Inclination = "observer.inclination"
	Width       = "field.width"
	Inner       = "emitter.inner"
	Outer       = "emitter.outer"
	Index       = "emitter.index"
	MaxOrder    = "trace.max_order"
)

func TestControlsShowTheScene(t *testing.T) {
	s := open(t, commented)
	want := map[string]string{
		Radius: "infinity", Inclination: "20 deg", Width: "auto", Inner: "isco",
		Outer: "30 M", Index: "3", MaxOrder: "2",
	}
	given := map[string]bool{Inclination: true, Inner: true, Outer: true}
	for key, text := range want {
		if c := s.control(t, key); c.Text != text || c.Wrong != "" || c.Help == "" || c.Range == "" || len(c.Axis) < 2 || c.Given != given[key] {
			t.Errorf("%s shows %q (wrong %q, help %q, range %q, given %v), want %q", key, c.Text, c.Wrong, c.Help, c.Range, c.Given, text)
		}
	}
}

func TestSlidingKeepsComments(t *testing.T) {
	s := open(t, commented)
	c := s.control(t, Inclination)
	serial := s.Serial()
	if !s.Slide(c, 75.2) {
		t.Fatal("sliding changed nothing")
	}
	if got := s.Scene().Observer.Inclination; got != 75 {
		t.Errorf("inclination %g deg, want 75", got)
	}
	if s.Serial() == serial || !s.Modified() {
		t.Error("the picture is not asked for again, or the scene not marked as changed")
	}
	text := string(s.Text())
	if want := strings.Replace(commented, "20 deg", "75 deg", 1); text != want {
		t.Errorf("text is\n%s\nwant\n%s", text, want)
	}
	if serial = s.Serial(); s.Slide(c, 75.4) || s.Serial() != serial {
		t.Error("sliding to the same stop traces again")
	}
}

func TestTypedQuantities(t *testing.T) {
	cases := []struct {
		key, typed string
		want       float64 // as read back; NaN when refused
		shown      string
	}{
		{Inclination, "75deg", 75, "75deg"},
		{Inclination, " 75 deg ", 75, "75 deg"},
		{Inclination, "75", 75, "75 deg"},
		{Inclination, "75°", 75, "75 deg"},
		{Inclination, "0.5 rad", 0.5 * 180 / math.Pi, "0.5 rad"},
		{Inclination, "181 deg", math.NaN(), "181 deg"},
		{Inclination, "75 M", math.NaN(), "75 M"},
		{Inclination, "steep", math.NaN(), "steep"},
		{Inclination, "", 60, "60 deg"}, // the default
		{Radius, "1000 M", 1000, "1000 M"},
		{Radius, "inf", math.Inf(1), "infinity"},
		{Radius, "∞", math.Inf(1), "infinity"},
		{Radius, "1.9 M", math.NaN(), "1.9 M"},
		{Inner, "horizon", 2, "horizon"},
		{Inner, "40 M", math.NaN(), "40 M"}, // beyond the outer rim
		{Outer, "15.5", 15.5, "15.5 M"},
		{Index, "2.25", 2.25, "2.25"},
		{MaxOrder, "0", 0, "0"},
		{MaxOrder, "1.5", math.NaN(), "1.5"},
		{Width, "30 M", 30, "30 M"},
	}
	for _, k := range cases {
		s := open(t, commented)
		c := s.control(t, k.key)
		before := c.stop(s)
		s.Type(c, k.typed)
		if c.Wrong != "" {
			t.Errorf("%s %q is judged while it is typed", k.key, k.typed)
		}
		took := s.Submit(c, k.typed)
		got := c.stop(s).Value
		if math.IsNaN(k.want) {
			if took || c.Wrong == "" || strings.Contains(c.Wrong, "\n") || got != before.Value {
				t.Errorf("%s %q: taken %v, wrong %q, value %g", k.key, k.typed, took, c.Wrong, got)
			}
		} else if c.Wrong != "" || !(math.Abs(got-k.want) <= 1e-12*math.Abs(k.want) || got == k.want) {
			t.Errorf("%s %q: value %.17g, wrong %q, want %g", k.key, k.typed, got, c.Wrong, k.want)
		}
		if c.Text != k.shown {
			t.Errorf("%s %q: shows %q, want %q", k.key, k.typed, c.Text, k.shown)
		}
		t.Logf("%-20s %-10q %s", k.key, k.typed, c.Wrong)
	}
}

func TestWrongTextSurvivesOtherEdits(t *testing.T) {
	s := open(t, commented)
	c := s.control(t, Inclination)
	s.Submit(c, "181 deg")
	s.Slide(s.control(t, Outer), 60)
	if c.Text != "181 deg" || c.Wrong == "" {
		t.Errorf("shows %q, wrong %q", c.Text, c.Wrong)
	}
	s.Restore(c)
	if c.Text != "20 deg" || c.Wrong != "" {
		t.Errorf("after restoring shows %q, wrong %q", c.Text, c.Wrong)
	}
	s.Submit(c, "181 deg")
	if !s.Step(c, 1) || c.Text != "21 deg" || c.Wrong != "" {
		t.Errorf("a step from 20 deg shows %q, wrong %q", c.Text, c.Wrong)
	}
}

func TestLeavingAnEntryUnchangedIsNoEdit(t *testing.T) {
	s := open(t, strings.Replace(commented, "20 deg", "0.3490658503988659 rad", 1))
	c := s.control(t, Inclination)
	if s.Submit(c, c.Text) || s.Modified() {
		t.Errorf("leaving %q rewrote the scene:\n%s", c.Text, s.Text())
	}
}

func (c *Control) chosen() string {
	for _, o := range c.Options {
		if o.Chosen {
			return o.Label
		}
	}
	return ""
}

// choose takes an option by its word.
func (s *State) choose(t *testing.T, key, word string) {
	t.Helper()
	c := s.control(t, key)
	for k, o := range c.Options {
		if o.Label == word {
			s.Choose(c, k)
			if c := s.Control(key); c == nil || c.chosen() != word || c.Wrong != "" {
				t.Fatalf("%s = %s does not stick: %+v", key, word, c)
			}
			return
		}
	}
	t.Fatalf("%s has no option %s", key, word)
}

func TestChoices(t *testing.T) {
	s := open(t, commented)
	for _, c := range s.Controls {
		if !c.IsChoice() || c.Many {
			continue
		}
		if c.chosen() == "" && c.Default() != "" {
			t.Errorf("%s: nothing is chosen of %v", c.Key, c.Options)
		}
	}
	s.choose(t, "emitter.sense", "clockwise")
	s.choose(t, "emitter.optical_depth", "thick")
	if e := s.Scene().Emitters[0]; !e.Clockwise || !math.IsInf(e.OpticalDepth, 1) {
		t.Errorf("clockwise %v, optical depth %v", e.Clockwise, e.OpticalDepth)
	}
}

// One click leads from one right scene to another; what had to change besides
// is told, and one undo takes all of it back.
func TestChoicesBringWhatTheyNeed(t *testing.T) {
	horizon := strings.Replace(commented, `"isco"`, `"horizon"`, 1)
	for _, k := range []struct{ key, word string }{
		{"object.kind", "star"}, {"object.kind", "shell"},
		{"observer.motion", "orbit"}, {"observer.motion", "infall"},
		{"field.projection", "perspective"}, {"field.projection", "all-sky"},
		{"emitter.kind", "sky"},
	} {
		s := open(t, horizon)
		s.choose(t, k.key, k.word)
		if s.Notice != "" {
			t.Errorf("%s = %s: %s", k.key, k.word, s.Notice)
		}
		if strings.Count(string(s.Text()), "=") > strings.Count(horizon, "=")+1 && s.Remark == "" {
			t.Errorf("%s = %s: nobody is told what else changed:\n%s", k.key, k.word, s.Text())
		}
		if !s.Undo() || string(s.Text()) != horizon {
			t.Errorf("%s = %s: one undo leaves\n%s", k.key, k.word, s.Text())
		}
	}
	// And back again.
	s := open(t, horizon)
	for _, word := range []string{"star", "shell", "black-hole"} {
		s.choose(t, "object.kind", word)
	}
	for _, word := range []string{"all-sky", "perspective", "parallel"} {
		s.choose(t, "field.projection", word)
	}
	for _, word := range []string{"orbit", "infall", "static"} {
		s.choose(t, "observer.motion", word)
	}
}

func TestEveryEmitterHasItsControls(t *testing.T) {
	s := open(t, commented)
	if !s.AddEmitter("sky") || s.Control("emitter.2.pattern") == nil || s.Control("emitter.2.inner") != nil {
		t.Fatalf("a second emitter has no controls of its kind: %s", s.Notice)
	}
	structure := s.Structure
	if !s.Arrange(0, Duplicate) || s.Structure == structure || s.Control("emitter.3.pattern") == nil {
		t.Error("a duplicate does not move the emitters behind it")
	}
	s.Slide(s.control(t, "emitter.2.outer"), 60)
	if e := s.Scene().Emitters; e[0].Outer != 30 || e[1].Outer == 30 {
		t.Errorf("the second disk's rim moves %g and %g M", e[0].Outer, e[1].Outer)
	}
	if !s.Arrange(2, Up) || s.Scene().Emitters[1].Kind != "sky" || !s.Arrange(0, Remove) || s.Emitters() != 2 {
		t.Errorf("emitters are not arranged: %s", s.Text())
	}
	if s.Arrange(5, Remove) || s.Notice == "" {
		t.Error("an emitter that is not there is removed")
	}
}

// Every built-in scene opens, and every slider's stops that lie next to the
// scene's value are values that the scene can have.
func TestBuiltInScenesHaveControls(t *testing.T) {
	for _, info := range scenes.BuiltIn() {
		doc, err := scenes.Load(info.Name)
		if err != nil {
			t.Fatal(err)
		}
		s := New(doc, info.Name)
		moved := 0
		for _, c := range s.Controls {
			if c.Wrong != "" {
				t.Errorf("%s: %s is wrong: %s", info.Name, c.Key, c.Wrong)
			}
			for _, n := range []int{1, -1} {
				if s.Step(c, n) {
					moved++
					s.Undo()
				}
				if c.Wrong != "" {
					t.Errorf("%s: a step of %s by %d: %q: %s", info.Name, c.Key, n, c.Text, c.Wrong)
					s.Restore(c)
				}
			}
		}
		if moved < 8 {
			t.Errorf("%s: only %d steps are possible", info.Name, moved)
		}
		if s.Modified() {
			t.Errorf("%s: undone steps leave\n%s", info.Name, s.Text())
		}
	}
}

func TestAxesFollowTheObject(t *testing.T) {
	s := open(t, strings.Replace(commented, "[observer]", "[object]\ncharge = \"0.6 M\"\n[observer]", 1))
	inner := s.control(t, Inner).Axis
	// r_+ = 1 + √(1-0.36) = 1.8 M.
	if inner[0].Text != "horizon" || !(math.Abs(inner[0].Value-1.8) < 1e-12) {
		t.Errorf("the inner rim begins at %+v", inner[0])
	}
	s.choose(t, "object.kind", "star")
	for _, c := range []string{Radius, Inner, Outer} {
		for _, at := range s.control(t, c).Axis {
			if at.Value < s.Scene().Object.Radius {
				t.Errorf("%s offers %s inside the star", c, at.Text)
			}
			if at.Text == "horizon" {
				t.Errorf("%s offers a star's horizon", c)
			}
		}
	}
}

func TestPictureHasTheFieldsShape(t *testing.T) {
	s := open(t, commented) // 4 : 3
	for _, k := range []struct{ spaceColumns, spaceRows, columns, rows int }{
		{700, 700, 700, 525}, {700, 300, 400, 300}, {0, 0, 400, 300},
	} {
		s.Resize(k.spaceColumns, k.spaceRows)
		if columns, rows := s.Picture(); columns != k.columns || rows != k.rows {
			t.Errorf("in %d × %d the picture has %d × %d, want %d × %d", k.spaceColumns, k.spaceRows, columns, rows, k.columns, k.rows)
		}
	}
	serial := s.Serial()
	if s.Resize(400, 300) || s.Serial() != serial {
		t.Error("the same size traces again")
	}
}

func TestTitleAndNames(t *testing.T) {
	doc, err := scenes.Load("@first-light")
	if err != nil {
		t.Fatal(err)
	}
	s := New(doc, "@first-light")
	if s.Path() != "" || s.Suggested(".png") != "first-light.png" || s.Title() != "@first-light — Annulet" {
		t.Errorf("path %q, suggested %q, title %q", s.Path(), s.Suggested(".png"), s.Title())
	}
	s.Slide(s.control(t, Inclination), 50)
	if !strings.Contains(s.Title(), "changed") {
		t.Errorf("title %q", s.Title())
	}
	s.Saved("/tmp/mine.toml")
	if s.Modified() || s.Path() != "/tmp/mine.toml" || s.Suggested(".png") != "mine.png" {
		t.Errorf("modified %v, path %q, suggested %q", s.Modified(), s.Path(), s.Suggested(".png"))
	}
}

func TestBrief(t *testing.T) {
	if got := brief(errors.New("one\ntwo")); got != "one" {
		t.Errorf("brief is %q", got)
	}
}

func TestUndoAndRedo(t *testing.T) {
	s := open(t, commented)
	now := time.Unix(0, 0)
	s.now = func() time.Time { return now }
	c := s.control(t, Inclination)
	for k := range 5 { // one drag
		s.Slide(c, float64(30+k))
		now = now.Add(50 * time.Millisecond)
	}
	now = now.Add(2 * time.Second)
	s.Slide(c, 80)
	s.Look.Layer = raytrace.Redshift
	s.Looked("layer", "", true)
	if s.UndoName() != "layer" || !s.Undo() || s.Look.Layer != raytrace.Intensity {
		t.Errorf("the layer is not undone: %q", s.UndoName())
	}
	for _, want := range []float64{34, 20} {
		if !s.Undo() || s.Scene().Observer.Inclination != want {
			t.Errorf("undone to %g deg, want %g", s.Scene().Observer.Inclination, want)
		}
	}
	if s.Undo() || string(s.Text()) != commented || s.Modified() {
		t.Errorf("undone beyond the beginning, or not to it:\n%s", s.Text())
	}
	for s.Redo() {
	}
	if s.Scene().Observer.Inclination != 80 || s.Look.Layer != raytrace.Redshift || s.RedoName() != "" {
		t.Errorf("redone to %g deg, layer %d", s.Scene().Observer.Inclination, s.Look.Layer)
	}
	s.Undo()
	s.Slide(s.control(t, Outer), 60)
	if s.Redo() {
		t.Error("a new change leaves something to redo")
	}
}

func TestTextIsEditedAsAWhole(t *testing.T) {
	s := open(t, commented)
	if !s.SetText("schema = 1\n[observer]\ninclination = 17\n") || s.TextWrong != "" {
		t.Fatal(s.TextWrong)
	}
	if s.Scene().Observer.Inclination != 17 || s.Control(Outer) != nil {
		t.Error("the controls do not follow the text")
	}
	if s.SetText("schema = 1\ninner = 3\n") || !strings.Contains(s.TextWrong, "test.toml:2:1") || s.Scene().Observer.Inclination != 17 {
		t.Errorf("a wrong text is taken: %q", s.TextWrong)
	}
	if !s.Undo() || string(s.Text()) != commented {
		t.Error("the text is not undone")
	}
}

func TestZoomKeepsThePoint(t *testing.T) {
	w := Window{Alpha: 1, Beta: -2, Width: 40}
	about := [2]float64{5, 3}
	z := w.Zoom(4, about)
	before := (about[0] - w.Alpha) / w.Width
	if after := (about[0] - z.Alpha) / z.Width; !(math.Abs(after-before) < 1e-12) || z.Width != 10 {
		t.Errorf("zoomed to %+v", z)
	}
	s := open(t, commented)
	whole := Window{Width: 60}
	if !s.SetWindow(z, whole, "") || s.Look.Window != z {
		t.Error("the window is not taken")
	}
	if !s.SetWindow(Window{Width: 60.001}, whole, "") || s.Look.Window != (Window{}) {
		t.Error("nearly the whole field is not the whole field")
	}
	s.SetWindow(z, whole, "")
	s.choose(t, "field.projection", "perspective")
	if s.Look.Window != (Window{}) {
		t.Error("a window in M is kept on a field in angles")
	}
}
