package scenes

import (
	"errors"
	"strings"
	"testing"
)

// kept is a text with comments and odd forms that no edit may touch.
const kept = `# head
schema = 1 # version
title = "a" # title

[observer] # who
  radius   = "50 M"   # near

# between
[[emitter]]
outer = 30 # wide

[[emitter]] # second
inner = 7 # last`

func TestSetKeepsEverythingElse(t *testing.T) {
	for _, c := range []struct{ path, value, old, new string }{
		{"observer.radius", "60", `"50 M"   # near`, `60   # near`},
		{"observer.radius", "60M", `"50 M"   # near`, `"60M"   # near`},
		{"observer.radius", ` "60 M" `, `"50 M"   # near`, `"60 M"   # near`},
		{"observer.radius", "infinity", `"50 M"   # near`, `"infinity"   # near`},
		{"observer.inclination", "75deg", "# near\n", "# near\n  inclination = \"75deg\"\n"},
		{"emitter.outer", "31", "outer = 30", "outer = 31"},
		{"emitter.1.outer", "31 M", "outer = 30", `outer = "31 M"`},
		{"emitter.inner", "horizon", "# wide\n", "# wide\ninner = \"horizon\"\n"},
		{"emitter.2.inner", "isco", "inner = 7", `inner = "isco"`},
		{"emitter.2.outer", "9", "# last", "# last\nouter = 9\n"},
		{"emitter.3.outer", "9", "# last", "# last\n\n[[emitter]]\nouter = 9\n"},
		{"trace.max_order", "3", "# last", "# last\n\n[trace]\nmax_order = 3\n"},
		{"title", "say \"b\"", `"a" # title`, `"say \"b\"" # title`},
		{"title", "17", `"a" # title`, `"17" # title`},
		{"title", `"quoted"`, `"a" # title`, `"quoted" # title`},
		{"title", "a\x01\tb\n", `"a" # title`, `"a\u0001\tb\n" # title`},
		{"field.pixels", "[80, 60]", "# last", "# last\n\n[field]\npixels = [80, 60]\n"},
		{"field.frequency", "230GHz", "# last", "# last\n\n[field]\nfrequency = \"230GHz\"\n"},
	} {
		t.Run(c.path+"="+c.value, func(t *testing.T) {
			d := parse(t, kept)
			if err := d.Set(c.path, c.value); err != nil {
				t.Fatal(err)
			}
			if want := strings.Replace(kept, c.old, c.new, 1); string(d.Text()) != want {
				t.Errorf("text\n%s\nwant\n%s", d.Text(), want)
			}
			if again := parse(t, string(d.Text())); !again.Scene().Equal(d.Scene()) {
				t.Error("the document's scene is not the one of its text")
			}
		})
	}
}

func TestSetInOtherForms(t *testing.T) {
	for _, c := range []struct{ name, text, path, value, want string }{
		{"inline", "schema = 1\nobserver = { radius = 50 } # x\n", "observer.inclination", "20",
			"schema = 1\nobserver = {inclination = 20,  radius = 50 } # x\n"},
		{"empty inline", "schema = 1\nobserver = {} # x\n", "observer.inclination", "20",
			"schema = 1\nobserver = {inclination = 20} # x\n"},
		{"inline value", "schema = 1\nobserver = { radius = 50 } # x\n", "observer.radius", "20",
			"schema = 1\nobserver = { radius = 20 } # x\n"},
		{"inline list", "schema = 1\nemitter = [{}, {outer = 9}]\n", "emitter.2.outer", "8",
			"schema = 1\nemitter = [{}, {outer = 8}]\n"},
		{"dotted", "schema = 1\nobserver.radius = 50\ntitle = \"x\"\n", "observer.inclination", "20",
			"schema = 1\nobserver.radius = 50\nobserver.inclination = 20\ntitle = \"x\"\n"},
		{"top", "schema = 1\n[observer]\n", "title", "x", "schema = 1\ntitle = \"x\"\n[observer]\n"},
		{"carriage returns", "schema = 1\r\n[observer]\r\n", "observer.radius", "9",
			"schema = 1\r\n[observer]\r\nradius = 9\r\n"},
		{"byte order mark", "\uFEFFschema = 1\n", "title", "x", "\uFEFFschema = 1\ntitle = \"x\"\n"},
		{"list over lines", "schema = 1\n[field]\npixels = [ # two\n 8,\n 6 ]\n", "field.width", "9",
			"schema = 1\n[field]\npixels = [ # two\n 8,\n 6 ]\nwidth = 9\n"},
		{"caps", "schema = 1\n[object]\nkind = \"star\"\nradius = 6\n[[emitter]]\nkind = \"surface\" # s\n", "emitter.caps",
			"[{colatitude = 3, size = 9, temperature = 1e6}]",
			"schema = 1\n[object]\nkind = \"star\"\nradius = 6\n[[emitter]]\nkind = \"surface\" # s\ncaps = [{colatitude = 3, size = 9, temperature = 1e6}]\n"},
		{"no caps", "schema = 1\n[object]\nkind = \"star\"\nradius = 6\n[[emitter]]\nkind = \"surface\"\ncaps = [ # hot\n {colatitude = 3, size = 9, temperature = 1e6}, # north\n] # x\n", "emitter.caps",
			"[]",
			"schema = 1\n[object]\nkind = \"star\"\nradius = 6\n[[emitter]]\nkind = \"surface\"\ncaps = [] # x\n"},
		{"image", "schema = 1\n[[emitter]]\nkind = \"sky\"\n", "emitter.image", "a b.png",
			"schema = 1\n[[emitter]]\nkind = \"sky\"\nimage = \"a b.png\"\n"},
		{"replace a list", "schema = 1\n[field]\npixels = [ 8,\n 6 ] # x\n", "field.pixels", "[1,1]",
			"schema = 1\n[field]\npixels = [1,1] # x\n"},
	} {
		t.Run(c.name, func(t *testing.T) {
			d := parse(t, c.text)
			if err := d.Set(c.path, c.value); err != nil {
				t.Fatal(err)
			}
			if string(d.Text()) != c.want {
				t.Errorf("text\n%q\nwant\n%q", d.Text(), c.want)
			}
		})
	}
}

func TestSetRefusalsChangeNothing(t *testing.T) {
	for _, c := range []struct{ path, value, says string }{
		{"observer.radius", "1.9 M", "--set observer.radius: out of range"},
		{"object.kind", "star", "--set object.kind: a star needs object.radius"},
		{"observer.motion", "infall", "a parallel field needs a static observer"},
		{"emitter.2.kind", "sky", "--set emitter.2.kind: emitter.2.inner: inner does not apply to a sky"},
		{"emitter.caps", "[{size = 3}]", "--set emitter.caps: cap 1 needs colatitude"},
		{"emitter.caps", "[{size = 3]", "--set emitter.caps: wrong type, text"},
		{"emitter.caps", "[]\nouter = 3", "--set emitter.caps: wrong type, text"},
		{"emitter.caps", "3", "--set emitter.caps: wrong type, a whole number"},
		{"observer.radius", "nan", "--set observer.radius: not a finite number"},
		{"observer.radius", "75 # x", "--set observer.radius: unknown unit"},
		{"observer.radius", "50\nmotion = \"static\"", "--set observer.radius: unknown unit"},
		{"observer.Radius", "50", "nearest known: observer.radius"},
		{"inclination", "50", "nearest known: observer.inclination"},
		{"objekt.mass", "1", `--set objekt.mass: unknown table "objekt"; nearest known: object`},
		{"field.projection.x", "1", "not the path of a key"},
		{"emitter.0.outer", "9", "1 to 64"},
		{"emitter.x.outer", "9", "1 to 64"},
		{"emitter.4.outer", "9", "the scene has 2"},
		{"emitter.2.outer", "6.5", "--set emitter.2.outer: emitter.2.inner: the inner rim"},
		{"emitter.1.outer", "1", "--set emitter.1.outer: out of range"},
		{"emitter.index", "[6, 3]", "2 indices and 0 breaks"},
		{"emitter.optical_depth", "-0.5", "more than 0"},
		{"emitter.kind", "spot", "does not apply to a spot"},
		{"time.end", "-9", "before the start"},
		{"figure.kind", "x", "unknown key"},
		{"schema", "2", "--set schema: not a version"},
		{"title", "\xff", "not UTF-8"},
		{"title", strings.Repeat("x", maxBytes), "too large"},
		{"", "x", "unknown key"},
		{"emitter", "x", "unknown key"},
		{".", "x", "unknown table"},
	} {
		t.Run(c.path, func(t *testing.T) {
			d := parse(t, kept)
			before := d.Scene()
			err := d.Set(c.path, c.value)
			var e *Error
			if !errors.As(err, &e) {
				t.Fatalf("error %v, want an *Error", err)
			}
			if e.Line != 0 || e.Setting != c.path || !strings.Contains(err.Error(), c.says) {
				t.Errorf("message lacks %q: %v", c.says, err)
			}
			if string(d.Text()) != kept || !d.Scene().Equal(before) {
				t.Error("the document has changed")
			}
		})
	}
}

func TestSetAllIsOneChange(t *testing.T) {
	d := parse(t, "schema = 1\n")
	perspective := Assignment{Path: "field.projection", Value: "perspective"}
	if err := d.SetAll(perspective); err == nil {
		t.Fatal("perspective from infinity is accepted")
	}
	if err := d.SetAll(perspective, Assignment{Path: "observer.radius", Value: "10"}); err != nil {
		t.Fatal(err)
	}
	if s := d.Scene(); s.Field.Projection != "perspective" || s.Observer.Radius != 10 {
		t.Errorf("scene %+v", s)
	}
	err := d.SetAll(Assignment{Path: "observer.radius", Value: "20"}, Assignment{Path: "emitter.inner", Value: "30"})
	if err == nil || !strings.HasPrefix(err.Error(), "--set emitter.inner: the inner rim") {
		t.Errorf("error %v", err)
	}
}

// parse returns the document of a text that must be right.
func parse(t testing.TB, text string) *Document {
	t.Helper()
	d, err := Parse("test.toml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	return d
}
