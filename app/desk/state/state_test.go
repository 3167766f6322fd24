package state

import (
	"errors"
	"math"
	"strings"
	"testing"

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
	for _, c := range s.Controls {
		if c.Key == key {
			return c
		}
	}
	t.Fatalf("no control for %s", key)
	return nil
}

func TestControlsShowTheScene(t *testing.T) {
	s := open(t, commented)
	want := map[string]string{
		Radius: "infinity", Inclination: "20 deg", Width: "auto", Inner: "isco",
		Outer: "30 M", Index: "3", MaxOrder: "2",
	}
	for key, text := range want {
		if c := s.control(t, key); c.Text != text || c.Wrong != "" || c.Help == "" || c.Range == "" {
			t.Errorf("%s shows %q (wrong %q, help %q, range %q), want %q", key, c.Text, c.Wrong, c.Help, c.Range, text)
		}
	}
	if len(s.Controls) != len(want) {
		t.Errorf("%d controls, %d checked", len(s.Controls), len(want))
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
		{Inclination, "75deg", 75, "75 deg"},
		{Inclination, " 75 deg ", 75, "75 deg"},
		{Inclination, "75", 75, "75 deg"},
		{Inclination, "75°", 75, "75 deg"},
		{Inclination, "0.5 rad", 0.5 * 180 / math.Pi, "28.64789 deg"},
		{Inclination, "181 deg", math.NaN(), "181 deg"},
		{Inclination, "75 M", math.NaN(), "75 M"},
		{Inclination, "steep", math.NaN(), "steep"},
		{Inclination, "", math.NaN(), ""},
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
		before := c.read(s.Scene())
		s.Type(c, k.typed)
		if c.Wrong != "" {
			t.Errorf("%s %q is judged while it is typed", k.key, k.typed)
		}
		took := s.Submit(c, k.typed)
		got := c.read(s.Scene()).Value
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
	s.Slide(s.control(t, Outer), 3)
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

func TestChoices(t *testing.T) {
	s := open(t, commented)
	for _, c := range s.Choices {
		if c.Chosen != 0 || !s.Choose(c, 1) || c.Chosen != 1 || s.Choose(c, 1) {
			t.Errorf("%s: choosing does not stick", c.Key)
		}
	}
	if e := s.Scene().Emitters[0]; !e.Clockwise || !e.Thick {
		t.Errorf("clockwise %v, thick %v", e.Clockwise, e.Thick)
	}
}

func TestControlsEditTheFirstDisk(t *testing.T) {
	var s scenes.Scene
	s.Emitters = []scenes.Emitter{{Kind: "spot"}, {Kind: "disk", Outer: 12}}
	if disk(s).Outer != 12 || address(Outer, s) != "emitter.2.outer" || address(Radius, s) != Radius {
		t.Errorf("edits %q of %+v", address(Outer, s), disk(s))
	}
	s.Emitters = s.Emitters[1:]
	if got := address(Outer, s); got != Outer {
		t.Errorf("edits %q of a lone disk", got)
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
