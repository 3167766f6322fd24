package scenes

import (
	"bytes"
	"errors"
	"math"
	"strconv"
	"testing"
)

// FuzzParse: a text is refused with an *Error, or its scene comes back from
// Format, and the document holds the text to the byte.
func FuzzParse(f *testing.F) {
	for _, info := range BuiltIn() {
		d, err := Load(info.Name)
		if err != nil {
			f.Fatal(err)
		}
		f.Add(d.Text())
		f.Add(Format(d.Scene()))
	}
	for _, c := range refusals {
		f.Add([]byte(top + c.text))
	}
	for _, c := range objectRefusals {
		text, _, _ := c.place()
		f.Add([]byte(text))
	}
	f.Add([]byte("schema = 1\nfield.frequency = [86, 230]\n[[figure]]\npanels = [\"image\", \"spectrum\"]\nvary = [\"\", \"observer.inclination = 3; trace.max_order = 1\"]\n" +
		"width = \"120 mm\"\nacross = 2\norder = [\"total\", \"1\"]\nfrequency = 2\nlimits = [0, 1e-3]\nlevels = 4\nimpact = [2, 5.2]\ncontours = \"r\"\n[[figure]]\ntheme = \"dark\""))
	f.Fuzz(func(t *testing.T, text []byte) {
		first, err := Parse("fuzz.toml", text)
		if err != nil {
			var e *Error
			if !errors.As(err, &e) || e.Error() == "" {
				t.Errorf("error %v of type %T", err, err)
			}
			return
		}
		if !bytes.Equal(first.Text(), text) {
			t.Error("the text has changed")
		}
		again, err := Parse("again.toml", Format(first.Scene()))
		if err != nil || !again.Scene().Equal(first.Scene()) {
			t.Errorf("round trip: %v\n%s", err, Format(first.Scene()))
		}
	})
}

// FuzzSet: a change is refused and leaves the document as it was, or the
// document's scene is the one of its new text.
func FuzzSet(f *testing.F) {
	for _, info := range BuiltIn() {
		d, err := Load(info.Name)
		if err != nil {
			f.Fatal(err)
		}
		for _, k := range Keys() {
			f.Add(d.Text(), k.Path(), k.Default)
		}
	}
	f.Add([]byte("schema = 1\nobserver = {}\nemitter = [{}, {outer = 9}]"), "emitter.2.inner", "horizon")
	f.Add([]byte("schema = 1\nobject = {kind = \"star\", radius = 6}\nemitter = [{kind = \"surface\"}]"), "emitter.caps",
		"[{colatitude = 3, size = 20, temperature = 1e6}]")
	f.Add([]byte("schema = 1\n[[emitter]]\nkind = \"sky\""), "emitter.image", "sky.png")
	f.Add([]byte("schema = 1\nobserver.radius = 4"), "object.charge", "0.6")
	f.Add([]byte("schema = 1\r\nobserver.radius = 50"), "observer.inclination", "75deg")
	f.Fuzz(func(t *testing.T, text []byte, path, value string) {
		d, err := Parse("fuzz.toml", text)
		if err != nil {
			return
		}
		before := d.Scene()
		if err := d.Set(path, value); err != nil {
			var e *Error
			if !errors.As(err, &e) || e.Setting != path {
				t.Errorf("error %v of type %T", err, err)
			}
			if !bytes.Equal(d.Text(), text) || !d.Scene().Equal(before) {
				t.Errorf("a refused change has changed the document: %v", err)
			}
			return
		}
		again, err := Parse("again.toml", d.Text())
		if err != nil || !again.Scene().Equal(d.Scene()) {
			t.Errorf("after the change: %v\n%s", err, d.Text())
		}
	})
}

// FuzzQuantity: a quantity is refused with a problem, or finite, with a unit
// and, printed with all its digits, the same again.
func FuzzQuantity(f *testing.F) {
	for _, text := range []string{"1 M", "1e6 +- 2e5 Msun", "1eV", "-3.5deg", "1e999 M", "nan M", "2 ± 1 uas", "1 µas", "1 μas", "+.5 rg", "1", "1 furlong", "1 +- -1 M", "1e M"} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		q, problem := scanQuantity(text)
		if problem != "" {
			return
		}
		if !(math.Abs(q.value) <= math.MaxFloat64 && q.sigma >= 0 && q.sigma <= math.MaxFloat64) || q.unit.name == "" {
			t.Fatalf("%q: %+v", text, q)
		}
		again := strconv.FormatFloat(q.value, 'g', -1, 64) + " " + q.unit.name
		if q.hasSigma {
			again = strconv.FormatFloat(q.value, 'g', -1, 64) + " +- " + strconv.FormatFloat(q.sigma, 'g', -1, 64) + q.unit.name
		}
		if p, problem := scanQuantity(again); problem != "" || p.value != q.value || p.sigma != q.sigma || p.unit.name != q.unit.name {
			t.Errorf("%q: %q gives %+v, %s", text, again, p, problem)
		}
	})
}
