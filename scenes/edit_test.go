package scenes

import (
	"strings"
	"testing"
)

func TestWritten(t *testing.T) {
	d := parse(t, kept)
	for _, c := range []struct {
		path, want string
		given      bool
	}{
		{"observer.radius", "50 M", true},
		{"emitter.outer", "30", true},
		{"emitter.2.inner", "7", true},
		{"emitter.2.outer", "", false},
		{"observer.inclination", "", false},
		{"nowhere.at", "", false},
	} {
		if got, given := d.Written(c.path); got != c.want || given != c.given {
			t.Errorf("%s: %q, %v; want %q, %v", c.path, got, given, c.want, c.given)
		}
	}
}

func TestUnset(t *testing.T) {
	for _, c := range []struct{ text, path, want string }{
		{kept, "observer.radius", strings.Replace(kept, "  radius   = \"50 M\"   # near\n", "", 1)},
		{kept, "emitter.2.inner", strings.Replace(kept, "inner = 7 # last", "", 1)},
		{kept, "emitter.2.outer", kept},
		{"schema = 1\nobserver = { radius = 50, azimuth = 3 }\n", "observer.radius", "schema = 1\nobserver = { azimuth = 3 }\n"},
		{"schema = 1\nobserver = { radius = 50, azimuth = 3 }\n", "observer.azimuth", "schema = 1\nobserver = { radius = 50 }\n"},
		{"schema = 1\nobserver.radius = 50\nobserver.azimuth = 3\n", "observer.radius", "schema = 1\nobserver.azimuth = 3\n"},
	} {
		d := parse(t, c.text)
		if err := d.Unset(c.path); err != nil {
			t.Errorf("%s: %v", c.path, err)
		}
		if got := string(d.Text()); got != c.want {
			t.Errorf("without %s the text is\n%s\nwant\n%s", c.path, got, c.want)
		}
	}
	d := parse(t, "schema = 1\n[object]\nkind = \"shell\"\nradius = 4\n")
	if err := d.Unset("object.radius"); err == nil || !strings.Contains(string(d.Text()), "radius") {
		t.Errorf("a shell without radius: %v\n%s", err, d.Text())
	}
}

const twoEmitters = `schema = 1

# the first
[[emitter]]
outer = 30 # wide

[[emitter]]
kind = "sky"

# numerics
[trace]
max_order = 1
`

func TestArrangeEmitters(t *testing.T) {
	kinds := func(d *Document) (all string) {
		for _, e := range d.Scene().Emitters {
			all += e.Kind + " "
		}
		return all
	}
	for _, c := range []struct {
		name string
		do   func(*Document) error
		want string
	}{
		{"add", func(d *Document) error { return d.AddEmitter("disk") }, "disk sky disk "},
		{"duplicate", func(d *Document) error { return d.DuplicateEmitter(0) }, "disk disk sky "},
		{"swap", func(d *Document) error { return d.SwapEmitters(0) }, "sky disk "},
		{"remove", func(d *Document) error { return d.RemoveEmitter(0) }, "sky "},
		{"remove both", func(d *Document) error { d.RemoveEmitter(1); return d.RemoveEmitter(0) }, ""},
	} {
		d := parse(t, twoEmitters)
		if err := c.do(d); err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		if got := kinds(d); got != c.want {
			t.Errorf("%s: %q, want %q\n%s", c.name, got, c.want, d.Text())
		}
		text := string(d.Text())
		if !strings.Contains(text, "# numerics\n[trace]\nmax_order = 1") {
			t.Errorf("%s: the rest has changed:\n%s", c.name, text)
		}
		if again := parse(t, text); !again.Scene().Equal(d.Scene()) {
			t.Errorf("%s: the scene is not that of its text:\n%s", c.name, text)
		}
	}
	d := parse(t, twoEmitters)
	if d.RemoveEmitter(2) == nil || d.SwapEmitters(1) == nil || string(d.Text()) != twoEmitters {
		t.Errorf("emitters that do not exist are arranged:\n%s", d.Text())
	}
	if d = parse(t, "schema = 1\nemitter = [{ kind = \"disk\" }]\n"); d.DuplicateEmitter(0) == nil {
		t.Error("an emitter in braces is duplicated")
	}
}

func TestNumber(t *testing.T) {
	d := parse(t, `schema = 1
[object]
kind = "star"
mass = "1.4 Msun"
radius = "12 km"
[observer]
inclination = "0.5 rad"
[[emitter]]
kind = "surface"
temperature = "0.6e6 K"
period = "0.3 s"
`)
	// GM/c² of the Sun is 1.47662504 km and GM/c³ 4.92549095 µs (IAU 2015 B3).
	for _, c := range []struct {
		path string
		want float64
		unit string
	}{
		{"object.radius", 12 / (1.4 * 1.47662504), "M"},
		{"observer.inclination", 28.64788976, "deg"},
		{"observer.azimuth", 0, "deg"},
		{"emitter.temperature", 6e5, "K"},
		{"emitter.period", 0.3 / (1.4 * 4.92549095e-6), "M"},
		{"trace.tolerance", 1e-9, ""},
	} {
		if got, unit, ok := d.Number(c.path); !ok || unit != c.unit || !(got >= c.want*(1-1e-8) && got <= c.want*(1+1e-8)) {
			t.Errorf("%s is %.10g %q (%v), want %.10g %q", c.path, got, unit, ok, c.want, c.unit)
		}
	}
	for _, path := range []string{"observer.radius", "object.distance", "field.pixels", "object.kind"} {
		if x, _, ok := d.Number(path); ok {
			t.Errorf("%s is the number %g", path, x)
		}
	}
}
