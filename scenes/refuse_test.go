package scenes

import (
	"errors"
	"strings"
	"testing"
)

// top is what every complete test scene begins with: lines 1 and 2.
const top = "schema = 1\n# a comment\n"

// refusals: text from line 3 on, unless it is the whole file. Column counts
// characters; 0:0 means that the text holds no place.
var refusals = []struct {
	name         string
	text         string // after top
	line, column int
	key          string
	says         []string // parts of the message
}{
	// unknown
	{"case of a key", "[[emitter]]\nInner = 3", 4, 1, "emitter.Inner", []string{"unknown key", "nearest known: inner"}},
	{"misspelt key", "[observer]\ninclnation = 3", 4, 1, "observer.inclnation", []string{"nearest known: inclination"}},
	{"key cut short", "[observer]\nincl = 3", 4, 1, "observer.incl", []string{"nearest known: inclination"}},
	{"key of another table", "[object]\ninclination = 3", 4, 1, "object.inclination", []string{"nearest known: observer.inclination"}},
	{"unknown table", "[objekt]\nmass = 3", 3, 2, "objekt", []string{"unknown table", "nearest known: object"}},
	{"case of a table", "  [Object]", 3, 4, "Object", []string{"unknown table", "nearest known: object"}},
	{"unknown top key", "titel = \"x\"", 3, 1, "titel", []string{"unknown key", "nearest known: title"}},
	{"unknown dotted", "object.colour = 1", 3, 8, "object.colour", []string{"unknown key"}},
	{"unknown inline", "object = { kind = \"black-hole\", hue = 1 }", 3, 33, "object.hue", []string{"unknown key"}},
	{"deeper table", "[observer.more]\nx = 1", 3, 11, "observer.more", []string{"unknown key"}},
	{"second emitter", "[[emitter]]\n[[emitter]]\noutr = 1", 5, 1, "emitter.2.outr", []string{"nearest known: outer"}},
	{"first in the text", "[observer]\nradius = true\n[objekt]", 4, 10, "observer.radius", []string{"wrong type"}},

	// tables
	{"single emitter", "[emitter]\nouter = 9", 3, 2, "emitter", []string{"[[emitter]]"}},
	{"several objects", "[[object]]", 3, 3, "object", []string{"[object]"}},
	{"table as value", "object = 3", 3, 10, "object", []string{"wrong type", "a table"}},
	{"value as table", "[title]", 3, 2, "title", []string{"wrong type, a table"}},
	{"too many emitters", strings.Repeat("[[emitter]]\n", 65), 67, 3, "emitter.65", []string{"too many emitters", "64"}},

	// types
	{"text for a number", "[trace]\ntolerance = \"small\"", 4, 13, "trace.tolerance", []string{"wrong type, text", `found "small"`, "1e-13 to 0.001"}},
	{"float for an integer", "[trace]\nmax_order = 2.0", 4, 13, "trace.max_order", []string{"wrong type, a number"}},
	{"number for text", "title = 3", 3, 9, "title", []string{"wrong type, a whole number"}},
	{"bool for a quantity", "[observer]\ninclination = true", 4, 15, "observer.inclination", []string{"wrong type, true or false"}},
	{"date", "[observer]\ninclination = 2020-01-01", 4, 15, "observer.inclination", []string{"wrong type, a date"}},
	{"list for a quantity", "[observer]\ninclination = [3]", 4, 15, "observer.inclination", []string{"wrong type, a list"}},
	{"table for a quantity", "[observer]\ninclination = {}", 4, 15, "observer.inclination", []string{"wrong type, a table"}},
	{"number for a list", "[field]\npixels = 800", 4, 10, "field.pixels", []string{"a list of 2 whole numbers"}},
	{"list too long", "[field]\npixels = [1, 2, 3]", 4, 10, "field.pixels", []string{"a list of 2 whole numbers"}},
	{"empty list", "[field]\nfrequency = []", 4, 13, "field.frequency", []string{"a list of 0 items"}},
	{"too many items", "[field]\nfrequency = [" + strings.Repeat("1,", 1001) + "]", 4, 13, "field.frequency", []string{"a list of 1001 items", "up to 1000"}},
	{"number in a list of tables", "emitter = [{}, 3]", 3, 16, "emitter", []string{"wrong type, a whole number", "a table"}},
	{"unknown nested", "[observer]\na.b.c = 1", 4, 1, "observer.a", []string{"unknown key"}},
	{"text for a list of words", "[trace]\neffects = \"motion\"", 4, 11, "trace.effects", []string{"wrong type, text"}},
	{"unknown word", "[trace]\neffects = [\"moton\"]", 4, 12, "trace.effects", []string{"unknown choice"}},
	{"overflowing error", "[object]\ndistance = \"1 +- 1e305 Mpc\"", 4, 12, "object.distance", []string{"not a finite error"}},
	{"beyond a whole number", "trace.max_order = 99999999999999999999", 3, 19, "", []string{"not TOML"}},
	{"item of a list", "[field]\npixels = [8, \"x\"]", 4, 14, "field.pixels", []string{"wrong type, text"}},
	{"item of words", "[trace]\neffects = [\"motion\", 3]", 4, 22, "trace.effects", []string{"wrong type"}},
	{"number for a choice", "[observer]\nmotion = 3", 4, 10, "observer.motion", []string{"wrong type"}},
	{"unknown choice", "[[emitter]]\nsense = \"left\"", 4, 9, "emitter.sense", []string{"counter-clockwise or clockwise"}},
	{"after µ", "title = \"µ\" # µ\n[field]\ncenter = [ \"1 M\", \"µ\" ]", 5, 19, "field.center", []string{"not a number with a unit"}},

	// units
	{"wrong unit", "[observer]\ninclination = \"60 km\"", 4, 15, "observer.inclination", []string{"the unit km does not fit", "units deg rad"}},
	{"unknown unit", "[observer]\ninclination = \"60 Deg\"", 4, 15, "observer.inclination", []string{`unknown unit "Deg"`}},
	{"no unit", "[observer]\ninclination = \"60\"", 4, 15, "observer.inclination", []string{"without a unit"}},
	{"empty", "[observer]\ninclination = \"\"", 4, 15, "observer.inclination", []string{"not a number with a unit"}},
	{"error not allowed", "[observer]\ninclination = \"60 +- 1 deg\"", 4, 15, "observer.inclination", []string{"an error is not allowed"}},
	{"negative error", "[object]\nmass = \"6 +- -1 Msun\"", 4, 8, "object.mass", []string{"no error after +-"}},
	{"km without mass", "[[emitter]]\nouter = \"60 km\"", 4, 9, "emitter.outer", []string{"km needs object.mass"}},
	{"s without mass", "[[emitter]]\nouter = \"60 s\"", 4, 9, "emitter.outer", []string{"s needs object.mass"}},
	{"uas without scale", "[field]\nwidth = \"60 µas\"", 4, 9, "field.width", []string{"object.mass and object.distance, or object.theta_g"}},
	{"uas without distance", "[object]\nmass = 1e9\n[field]\nwidth = \"60 μas\"", 6, 9, "field.width", []string{"object.distance is missing"}},
	{"uas without mass", "[object]\ndistance = 9\n[field]\nwidth = \"60 uas\"", 6, 9, "field.width", []string{"object.mass is missing"}},
	{"beam without scale", "[telescope]\nbeam = [20, 20, 0]", 4, 8, "telescope.beam", []string{"uas needs"}},
	{"ring without scale", "[measured]\nring_diameter = 40", 4, 17, "measured.ring_diameter", []string{"uas needs"}},
	{"uas from nearby", "[object]\ntheta_g = 3\n[observer]\nradius = 100\n[field]\nwidth = \"60 uas\"", 8, 9, "field.width", []string{"needs the observer at infinity"}},
	{"deg on a parallel field", "[field]\nwidth = \"60 deg\"", 4, 9, "field.width", []string{"needs a perspective or all-sky field"}},
	{"M on a perspective field", "[observer]\nradius = 10\n[field]\nprojection = \"perspective\"\nwidth = \"60 M\"", 7, 9, "field.width", []string{"needs a parallel field"}},
	{"beam angle", "[object]\ntheta_g = 3\n[telescope]\nbeam = [20, 20, \"3 uas\"]", 6, 17, "telescope.beam", []string{"does not fit"}},

	// not finite
	{"nan", "[observer]\nradius = nan", 4, 10, "observer.radius", []string{"not a finite number", "found nan"}},
	{"-inf", "[[emitter]]\nindex = -inf", 4, 9, "emitter.index", []string{"not a finite number"}},
	{"inf", "[observer]\nradius = inf", 4, 10, "observer.radius", []string{"not a finite number", `"infinity"`}},
	{"nan M", "[observer]\nradius = \"nan M\"", 4, 10, "observer.radius", []string{"not a finite number"}},
	{"+Inf M", "[[emitter]]\nouter = \"+Inf M\"", 4, 9, "emitter.outer", []string{"not a finite number"}},
	{"infinite rim", "[[emitter]]\nouter = \"infinity\"", 4, 9, "emitter.outer", []string{"not a finite number"}},
	{"nan error", "[object]\nmass = \"1 +- nan Msun\"", 4, 8, "object.mass", []string{"not a finite number"}},
	{"overflowing text", "[[emitter]]\nouter = \"1e999 M\"", 4, 9, "emitter.outer", []string{"not a finite number"}},
	{"overflowing unit", "[[emitter]]\nouter = \"1e308 rs\"", 4, 9, "emitter.outer", []string{"not a finite number of M"}},

	// ranges
	{"inside the horizon", "[observer]\nradius = \"1.9 M\"", 4, 10, "observer.radius", []string{"outside the horizon", `found "1.9 M"`, "more than 2 M"}},
	{"on the horizon", "[observer]\nradius = 2", 4, 10, "observer.radius", []string{"outside the horizon"}},
	{"on the photon sphere", "[observer]\nradius = \"1.5 rs\"", 4, 10, "observer.radius", []string{"more than 3 M"}},
	{"perspective from infinity", "[field]\nprojection = \"perspective\"", 4, 14, "field.projection", []string{"finite radius"}},
	{"inclination", "[observer]\ninclination = \"180.5 deg\"", 4, 15, "observer.inclination", []string{"0 to 180 deg"}},
	{"negative mass", "[object]\nmass = -1", 4, 8, "object.mass", []string{"more than 0"}},
	{"zero distance", "[object]\ndistance = 0", 4, 12, "object.distance", []string{"more than 0"}},
	{"no pixels", "[field]\npixels = [10, 0]", 4, 15, "field.pixels", []string{"1 or more"}},
	{"memory", "[field]\npixels = [1000000, 1000000]", 4, 10, "field.pixels", []string{"3.638 TiB", "4 bytes", "4 GiB"}},
	{"much memory", "[field]\npixels = [9223372036854775807, 9223372036854775807]", 4, 10, "field.pixels", []string{"TiB"}},
	{"width", "[field]\nwidth = 0", 4, 9, "field.width", []string{"1e-12 M"}},
	{"perspective width", "[observer]\nradius = 10\n[field]\nprojection = \"perspective\"\nwidth = 180", 7, 9, "field.width", []string{"between 0 and 180 deg"}},
	{"frequency", "[field]\nfrequency = [230, 0]", 4, 19, "field.frequency", []string{"more than 0"}},
	{"order of rims", "[[emitter]]\ninner = 20\nouter = 20", 4, 9, "emitter.inner", []string{"less than the outer radius of 20 M"}},
	{"outer inside the default", "[[emitter]]\nouter = 5", 4, 9, "emitter.outer", []string{"more than the inner radius of 6 M"}},
	{"rim inside the horizon", "[[emitter]]\ninner = \"1.9 M\"", 4, 9, "emitter.inner", []string{"2 M or more"}},
	{"minor beam", "[object]\ntheta_g = 3\n[telescope]\nbeam = [20, 21, 0]", 6, 13, "telescope.beam", []string{"minor"}},
	{"max_order", "[trace]\nmax_order = 10", 4, 13, "trace.max_order", []string{"0 to 9"}},
	{"tolerance", "[trace]\ntolerance = 1e-14", 4, 13, "trace.tolerance", []string{"1e-13 to 0.001"}},
	{"charge", "[object]\ncharge = 1", 4, 10, "object.charge", []string{"no horizon", "at least 0 and less than 1 M"}},
	{"theta_g and mass", "[object]\nmass = 1e9\ntheta_g = 3", 5, 11, "object.theta_g", []string{"together with mass or distance"}},
	{"theta_g and distance", "[object]\ntheta_g = 3\ndistance = 3", 4, 11, "object.theta_g", []string{"together with mass or distance"}},
	{"effect twice", "[trace]\neffects = [\"motion\", \"motion\", \"gravity\"]", 4, 11, "trace.effects", []string{"named twice: motion"}},

	// TOML
	{"syntax", "[observer]\nradius = ", 4, 9, "", []string{"not TOML"}},
	{"open text", "title = \"x", 3, 10, "", []string{"not TOML"}},
	{"duplicate key", "[observer]\nradius = 9\nradius = 8", 5, 1, "radius", []string{"already defined"}},
	{"duplicate table", "[observer]\n[observer]", 4, 2, "observer", []string{"already exists"}},
	{"invalid UTF-8", "title = \"µ\xff\"", 3, 11, "", []string{"not UTF-8"}},
	{"NUL", "title = \"a\x00\"", 3, 11, "", []string{"NUL"}},

	// not in this version
	{"redshift", "[object]\nredshift = -0.1", 4, 12, "object.redshift", []string{"0 or more"}},
	{"spot without radius", "[[emitter]]\nkind = \"spot\"", 4, 8, "emitter.kind", []string{"needs emitter.radius", "6 M or more"}},
	{"spot inside the isco", "[[emitter]]\nkind = \"spot\"\nradius = 5.9", 5, 10, "emitter.radius", []string{"stable circular geodesic", "6 M or more"}},
	{"spot off the disk", "[[emitter]]\nouter = 9\n[[emitter]]\nkind = \"spot\"\nradius = 9.5", 7, 10, "emitter.2.radius", []string{"the spot lies off the disk", "6 to 9 M"}},
	{"spot with a light of its own", "[[emitter]]\n[[emitter]]\nkind = \"spot\"\nradius = 9.5\nlight = \"line\"", 7, 9, "emitter.2.light", []string{"like the disk"}},
	{"spot on resting gas", "[[emitter]]\ngas = \"static\"\n[[emitter]]\nkind = \"spot\"\nradius = 9.5", 6, 8, "emitter.2.kind", []string{"at rest", "circular"}},
	{"spot of no size", "[[emitter]]\nkind = \"spot\"\nradius = 9\nsize = 0", 6, 8, "emitter.size", []string{"more than 0 M"}},
	{"disk inside the horizon", "[[emitter]]\ninner = 1\nouter = 1.5", 5, 9, "emitter.outer", []string{"outside the horizon"}},
	{"table without file", "[[emitter]]\nprofile = \"table\"", 4, 11, "emitter.profile", []string{"needs emitter.table"}},
	{"index list", "[[emitter]]\nindex = [6, 3]", 4, 9, "emitter.index", []string{"2 indices and 0 breaks", "one index more"}},
	{"breaks", "[[emitter]]\nbreaks = [\"10 M\"]", 4, 10, "emitter.breaks", []string{"1 indices and 1 breaks"}},
	{"breaks that shrink", "[[emitter]]\nindex = [6, 3, 1]\nbreaks = [\"10 M\", 9]", 5, 19, "emitter.breaks", []string{"must grow"}},
	{"charged novikov-thorne", "[object]\ncharge = 0.1\n[[emitter]]\nprofile = \"novikov-thorne\"", 6, 11, "emitter.profile", []string{"uncharged black hole"}},
	{"Jy without distance", "[object]\nmass = 4e6\n[field]\nfrequency = 230\n[[emitter]]\nlight = \"monochromatic\"\ntotal_flux = \"0.6 Jy\"", 9, 14, "emitter.total_flux", []string{"Jy needs", "object.distance is missing"}},
	{"Jy without frequency", "[object]\ntheta_g = 3\n[[emitter]]\nlight = \"monochromatic\"\ntotal_flux = \"0.6 Jy\"", 7, 14, "emitter.total_flux", []string{"needs field.frequency"}},
	{"Jy from nearby", "[object]\ntheta_g = 3\n[observer]\nradius = 50\n[field]\nfrequency = 230\n[[emitter]]\nlight = \"monochromatic\"\ntotal_flux = \"0.6 Jy\"", 11, 14, "emitter.total_flux", []string{"at infinity"}},
	{"luminosity without mass", "[[emitter]]\nprofile = \"novikov-thorne\"\nluminosity = \"0.1 Edd\"", 5, 14, "emitter.luminosity", []string{"needs object.mass"}},
	{"negative luminosity", "[object]\nmass = 10\n[[emitter]]\nprofile = \"novikov-thorne\"\nluminosity = \"-0.1 Edd\"", 7, 14, "emitter.luminosity", []string{"more than 0"}},
	{"negative rate", "[object]\nmass = 10\n[[emitter]]\nprofile = \"novikov-thorne\"\naccretion_rate = -1", 7, 18, "emitter.accretion_rate", []string{"more than 0"}},
	{"both rates", "[object]\nmass = 10\n[[emitter]]\nprofile = \"novikov-thorne\"\naccretion_rate = 1\nluminosity = 1", 7, 18, "emitter.accretion_rate", []string{"given together with luminosity"}},
	{"blackbody without frequency", "[[emitter]]\nlight = \"blackbody\"\ntemperature = 1e6", 4, 9, "emitter.light", []string{"a blackbody needs field.frequency"}},
	{"blackbody without temperature", "[field]\nfrequency = 1\n[[emitter]]\nlight = \"blackbody\"", 6, 9, "emitter.light", []string{"needs emitter.temperature"}},
	{"negative temperature", "[field]\nfrequency = 1\n[[emitter]]\nlight = \"blackbody\"\ntemperature = -5", 7, 15, "emitter.temperature", []string{"more than 0"}},
	{"blackbody disk without rate", "[field]\nfrequency = 1\n[[emitter]]\nlight = \"blackbody\"\nprofile = \"novikov-thorne\"", 6, 9, "emitter.light", []string{"needs emitter.luminosity"}},
	{"apples and pears", "[field]\nfrequency = 1\n[[emitter]]\n[[emitter]]\nlight = \"blackbody\"\ntemperature = 5", 7, 9, "emitter.2.light", []string{"cannot be added up"}},
	{"optical depth", "[[emitter]]\noptical_depth = 0", 4, 17, "emitter.optical_depth", []string{"out of range", "more than 0"}},
	{"unbent light to an orbit", "[observer]\nradius = 9\nmotion = \"orbit\"\n[field]\nprojection = \"all-sky\"\n[trace]\neffects = [\"motion\", \"gravity\"]", 9, 11, "trace.effects", []string{"must be at rest"}},
	{"time backwards", "[time]\nstart = 3\nend = 2\nstep = 1", 5, 7, "time.end", []string{"before the start", "3 M or more"}},
	{"too many frames", "[time]\nend = 1e9\nstep = 1", 5, 8, "time.step", []string{"too many frames", "1e4 M"}},
	{"orbit without spot", "[time]\nend = \"1 orbit\"\nstep = 1", 4, 7, "time.end", []string{"orbit needs a spot"}},
	{"uv without scale", "[telescope]\nuv = \"uv.csv\"", 4, 6, "telescope.uv", []string{"needs object.mass"}},
	{"resolution", "[telescope]\nresolution = \"-5 eV\"", 4, 14, "telescope.resolution", []string{"out of range"}},
	{"figure", "[[figure]]\nlayer = [\"heat\"]", 4, 10, "figure.layer", []string{"unknown choice", "intensity"}},
	{"figure vary", "[[figure]]\nvary = [\"observer.incline = 3\"]", 4, 8, "figure.vary", []string{"unknown key", "inclination"}},
	{"figure varies figures", "[[figure]]\nvary = [\"figure.unit = K\"]", 4, 8, "figure.vary", []string{"not a key that can vary"}},
	{"figure limits", "[[figure]]\nlimits = [2, 1]", 4, 10, "figure.limits", []string{"low below high"}},
}

func TestRefusals(t *testing.T) {
	for _, c := range refusals {
		t.Run(c.name, func(t *testing.T) {
			checkRefusal(t, top+c.text, c.line, c.column, c.key, c.says)
		})
	}
}

func TestSchemaRefusals(t *testing.T) {
	for _, c := range []struct {
		name, text   string
		line, column int
		says         string
	}{
		{"empty file", "", 0, 0, "missing"},
		{"missing", "title = \"x\"\n", 0, 0, "missing"},
		{"in a table", "[object]\nschema = 1\n", 0, 0, "missing"},
		{"other version", "title = \"x\"\nschema = 2\n[novel]\n", 2, 10, "found 2"},
		{"text", "schema = \"1\"\n", 1, 10, `found "1"`},
		{"float", "schema = 1.0\n", 1, 10, "found 1.0"},
	} {
		t.Run(c.name, func(t *testing.T) {
			checkRefusal(t, c.text, c.line, c.column, "schema", []string{c.says, "schema = 1"})
		})
	}
}

// checkRefusal expects a text to be refused at a place for a reason.
func checkRefusal(t *testing.T, text string, line, column int, key string, says []string) {
	t.Helper()
	_, err := Parse("test.toml", []byte(text))
	var e *Error
	if !errors.As(err, &e) {
		t.Fatalf("error %v, want an *Error", err)
	}
	if e.Line != line || e.Column != column || e.Key != key {
		t.Errorf("refused at %d:%d for %q, want %d:%d for %q\n%v", e.Line, e.Column, e.Key, line, column, key, err)
	}
	for _, part := range says {
		if !strings.Contains(err.Error(), part) {
			t.Errorf("message lacks %q:\n%v", part, err)
		}
	}
	if later := strings.Contains(err.Error(), notInVersion); later != e.Later {
		t.Errorf("Later is %v:\n%v", e.Later, err)
	}
}

func TestErrorMessage(t *testing.T) {
	_, err := Parse("disk.toml", []byte("schema = 1\n[observer]\n\tradius = \"1.9 M\" # near\n"))
	const want = `disk.toml:3:11: observer.radius: out of range: a static observer must be outside the horizon; ` +
		`found "1.9 M"; allowed: "infinity" or more than 2 M
     radius = "1.9 M" # near
              ^`
	if err == nil || err.Error() != want {
		t.Errorf("message\n%v\nwant\n%s", err, want)
	}
}

func TestExcerptOfLongLine(t *testing.T) {
	text := top + "title = \"" + strings.Repeat("x", 5000) + "\x01" + strings.Repeat("y", 5000) + "\""
	_, err := Parse("long.toml", []byte(text))
	var e *Error
	if !errors.As(err, &e) {
		t.Fatalf("error %v, want an *Error", err)
	}
	line, caret, _ := strings.Cut(e.Excerpt, "\n")
	if at := []rune(line); len(at) > excerptWidth+4 || at[strings.Index(caret, "^")] != '·' {
		t.Errorf("excerpt\n%s", e.Excerpt)
	}
}
