package scenes

import (
	"strings"
	"testing"
	"unicode/utf8"
)

// placed is a text whose mark ¦ stands before what must be refused.
type placed struct {
	name string
	text string // after top
	key  string
	says []string // parts of the message
}

// place returns the whole text without its mark, and where the mark was.
func (p placed) place() (text string, line, column int) {
	before, after, _ := strings.Cut(top+p.text, "¦")
	line = 1 + strings.Count(before, "\n")
	column = 1 + utf8.RuneCountInString(before[strings.LastIndexByte(before, '\n')+1:])
	return before + after, line, column
}

// Beginnings of the scenes below.
const (
	opaqueStar  = "[object]\nkind = \"star\"\nradius = 4\n"
	largeStar   = "[object]\nkind = \"star\"\nradius = 10\n"
	uniformStar = "[object]\nkind = \"star\"\nradius = 4\ninterior = \"uniform\"\n"
	thinShell   = "[object]\nkind = \"shell\"\nradius = 4\n"
	charged     = "[object]\ncharge = 0.6\n"
	lit         = opaqueStar + "[[emitter]]\nkind = \"surface\"\n"
	skyEmitter  = "[[emitter]]\nkind = \"sky\"\n"
	wholeSky    = "[field]\nprojection = \"all-sky\"\n"
	view        = "[field]\nprojection = \"perspective\"\n"
)

var objectRefusals = []placed{
	// object
	{"star without radius", "[object]\nkind = ¦\"star\"", "object.kind", []string{"a star needs object.radius", "more than 2.25 M"}},
	{"shell without radius", "[object]\nkind = ¦\"shell\"", "object.kind", []string{"a shell needs object.radius", "more than 2 M"}},
	{"star at the Buchdahl limit", "[object]\nkind = \"star\"\nradius = ¦2.25", "object.radius", []string{"Buchdahl", "more than 2.25 M"}},
	{"star of km without mass", "[object]\nkind = \"star\"\nradius = ¦\"12 km\"", "object.radius", []string{"km needs object.mass"}},
	{"star of km too small", "[object]\nkind = \"star\"\nradius = ¦\"3.3 km\"\nmass = 1", "object.radius", []string{"Buchdahl"}},
	{"shell at its horizon", "[object]\nkind = \"shell\"\nradius = ¦\"1 rs\"", "object.radius", []string{"outside its horizon", "more than 2 M"}},
	{"radius of a hole", "[object]\n¦radius = 4", "object.radius", []string{"radius does not apply to a black hole", "a star or a shell"}},
	{"charge of a star", opaqueStar + "¦charge = 0", "object.charge", []string{"charge does not apply to a star"}},
	{"charge of a shell", thinShell + "¦charge = \"0.5 M\"", "object.charge", []string{"charge does not apply to a shell"}},
	{"interior of a shell", thinShell + "¦interior = \"uniform\"", "object.interior", []string{"interior does not apply to a shell"}},
	{"interior of a hole", "[object]\n¦interior = \"opaque\"", "object.interior", []string{"interior does not apply to a black hole"}},
	{"interior of another kind", opaqueStar + "interior = ¦\"clear\"", "object.interior", []string{"opaque or uniform"}},
	{"negative charge", "[object]\ncharge = ¦-0.5", "object.charge", []string{"sign does not matter", "at least 0 and less than 1 M"}},
	{"first foreign key", "[object]\n¦interior = \"opaque\"\nradius = 3", "object.interior", []string{"does not apply"}},

	// observer
	{"static in a charged hole", charged + "[observer]\nradius = ¦1.8", "observer.radius", []string{"outside the horizon", "more than 1.8 M"}},
	{"static on a star", opaqueStar + "[observer]\nradius = ¦4", "observer.radius", []string{"outside the star", "more than 4 M"}},
	{"static on a shell", thinShell + "[observer]\nradius = ¦4\n" + view, "observer.radius", []string{"on the shell itself"}},
	{"below the centre", thinShell + "[observer]\nradius = ¦-1\n" + view, "observer.radius", []string{"out of range"}},
	{"orbit at infinity", "[observer]\nmotion = ¦\"orbit\"", "observer.motion", []string{"at infinity does not move"}},
	{"infall at infinity", "[observer]\nradius = \"infinity\"\nmotion = ¦\"infall\"", "observer.motion", []string{"at infinity does not move"}},
	{"orbit at 3 M", "[observer]\nmotion = \"orbit\"\nradius = ¦3\n" + view, "observer.radius", []string{"photon sphere", "allowed: more than 3 M"}},
	{"orbit at the photon sphere", charged + "[observer]\nmotion = \"orbit\"\nradius = ¦2.7369\n" + view, "observer.radius", []string{"photon sphere", "more than 2.7369"}},
	{"orbit in a star", opaqueStar + "[observer]\nmotion = \"orbit\"\nradius = ¦4\n" + view, "observer.radius", []string{"outside the star"}},
	{"orbit near a small star", "[object]\nkind = \"star\"\nradius = 2.5\n[observer]\nmotion = \"orbit\"\nradius = ¦2.9\n" + view, "observer.radius", []string{"photon sphere"}},
	{"orbit in a shell", thinShell + "[observer]\nmotion = \"orbit\"\nradius = ¦1\n" + view, "observer.radius", []string{"outside the shell"}},
	{"fall to the centre", "[observer]\nmotion = \"infall\"\nradius = ¦0\n" + view, "observer.radius", []string{"ends at the centre"}},
	{"fall in a charged hole", charged + "[observer]\nmotion = \"infall\"\nradius = ¦1.7\n" + view, "observer.radius", []string{"charged hole"}},
	{"fall in a star", opaqueStar + "[observer]\nmotion = \"infall\"\nradius = ¦4\n" + view, "observer.radius", []string{"ends at the star"}},
	{"fall in a shell", thinShell + "[observer]\nmotion = \"infall\"\nradius = ¦1\n" + view, "observer.radius", []string{"ends at the shell"}},
	{"nan of a moving observer", "[observer]\nmotion = \"infall\"\nradius = ¦nan", "observer.radius", []string{"not a finite number"}},

	// field
	{"orbit on a parallel field", "[observer]\nradius = 9\nmotion = ¦\"orbit\"", "observer.motion", []string{"parallel field needs a static observer"}},
	{"fall on a parallel field", "[observer]\nradius = 9\nmotion = \"infall\"\n[field]\nprojection = ¦\"parallel\"", "field.projection", []string{"parallel field needs a static observer"}},
	{"all-sky from infinity", "[field]\nprojection = ¦\"all-sky\"", "field.projection", []string{"all-sky", "finite radius"}},
	{"parallel in a shell", thinShell + "[observer]\nradius = ¦3.5", "observer.radius", []string{"inside the shell", "more than 4 M"}},
	{"parallel near a charged hole", charged + "[observer]\nradius = ¦2.7", "observer.radius", []string{"too close", "more than 2.7369"}},
	{"parallel near a small star", "[object]\nkind = \"star\"\nradius = 2.5\n[observer]\nradius = ¦3", "observer.radius", []string{"too close", "more than 3 M"}},
	{"part of the sky", "[observer]\nradius = 9\n" + wholeSky + "width = ¦\"180 deg\"", "field.width", []string{`"auto" or 360 deg`}},
	{"sky off centre", "[observer]\nradius = 9\n" + wholeSky + "center = [0, ¦\"1 deg\"]", "field.center", []string{"0 deg"}},
	{"length on the sky", "[observer]\nradius = 9\n" + wholeSky + "width = ¦\"360 M\"", "field.width", []string{"needs a parallel field"}},

	// disk
	{"horizon of a star", opaqueStar + "[[emitter]]\ninner = ¦\"horizon\"", "emitter.inner", []string{"a star has no horizon"}},
	{"horizon of a shell", thinShell + "[[emitter]]\ninner = ¦\"horizon\"", "emitter.inner", []string{"a shell has no horizon"}},
	{"disk in a star", opaqueStar + "[[emitter]]\ngas = \"static\"\ninner = ¦3.9", "emitter.inner", []string{"outside the star", "4 M or more"}},
	{"outer rim in a star", opaqueStar + "[[emitter]]\nouter = ¦3.9", "emitter.outer", []string{"outside the star", "more than 4 M"}},
	{"outer rim in a hole", charged + "[[emitter]]\nouter = ¦1.7", "emitter.outer", []string{"outside the horizon", "more than 1.8 M"}},
	{"rim in a charged hole", charged + "[[emitter]]\ninner = ¦1.7", "emitter.inner", []string{"outside the horizon", "1.8 M or more"}},
	{"unstable around a star", opaqueStar + "[[emitter]]\ninner = ¦4", "emitter.inner", []string{"unstable inside 6 M", "6 M or more", "static"}},
	{"unstable around a shell", thinShell + "[[emitter]]\ninner = ¦5.9", "emitter.inner", []string{"unstable inside 6 M"}},
	{"impossible around a star", "[object]\nkind = \"star\"\nradius = 2.5\n[[emitter]]\ninner = ¦3", "emitter.inner", []string{"impossible at and inside 3 M"}},
	{"circles in a shell", thinShell + "[[emitter]]\ninner = ¦1\nouter = 4", "emitter.inner", []string{"feels no pull", "static"}},
	{"straddling a shell", thinShell + "[[emitter]]\ninner = ¦1", "emitter.inner", []string{"straddles the shell of 4 M"}},
	{"centre of a shell", thinShell + "[[emitter]]\ngas = \"static\"\ninner = ¦0\nouter = 3", "emitter.inner", []string{"more than 0 M"}},
	{"static at the horizon", "[[emitter]]\ngas = \"static\"\ninner = ¦\"horizon\"", "emitter.inner", []string{"static gas must be outside", "more than 2 M"}},
	{"static at 2 M", "[[emitter]]\ngas = \"static\"\ninner = ¦2", "emitter.inner", []string{"static gas must be outside"}},
	{"outer rim on a star", largeStar + "[[emitter]]\nouter = 10.5\n[[emitter]]\nouter = ¦10", "emitter.2.outer", []string{"outside the star", "more than 10 M"}},
	{"outer rim inside the isco", opaqueStar + "[[emitter]]\nouter = ¦5", "emitter.outer", []string{"more than the inner radius of 6 M"}},
	{"isco past the outer rim", charged + "[[emitter]]\ninner = ¦\"isco\"\nouter = 5", "emitter.inner", []string{"less than the outer radius of 5 M"}},
	{"star past the default rim", "[object]\nkind = \"star\"\nradius = ¦20\n[[emitter]]", "object.radius", []string{"emitter.outer of more than 20 M"}},

	// keys of another kind
	{"rim of a sky", skyEmitter + "¦inner = 9", "emitter.inner", []string{"inner does not apply to a sky", "only for a disk"}},
	{"gas of a surface", lit + "¦gas = \"static\"", "emitter.gas", []string{"gas does not apply to a surface"}},
	{"emission angle of a sky", skyEmitter + "¦emission_angle = \"darkened\"", "emitter.emission_angle", []string{"does not apply to a sky", "a disk or a spot or a surface"}},
	{"depth of a sky", "[[emitter]]\n" + skyEmitter + "¦optical_depth = \"thick\"", "emitter.2.optical_depth", []string{"optical_depth does not apply to a sky"}},
	{"image of a disk", "[[emitter]]\n¦image = \"x.png\"", "emitter.image", []string{"image does not apply to a disk", "only for a sky"}},
	{"seed of a surface", lit + "¦seed = 3", "emitter.seed", []string{"seed does not apply to a surface"}},
	{"caps of a disk", "[[emitter]]\n¦caps = []", "emitter.caps", []string{"caps does not apply to a disk"}},
	{"period of a sky", skyEmitter + "¦period = 3", "emitter.period", []string{"period does not apply to a sky"}},
	{"kind after its keys", "[[emitter]]\n¦outer = 9\nkind = \"sky\"", "emitter.outer", []string{"outer does not apply to a sky"}},

	// sky
	{"image and pattern", skyEmitter + "image = \"x.png\"\npattern = ¦\"grid\"", "emitter.pattern", []string{"together with image"}},
	{"empty image", skyEmitter + "image = ¦\"\"", "emitter.image", []string{"empty path"}},
	{"another pattern", skyEmitter + "pattern = ¦\"dots\"", "emitter.pattern", []string{"stars or grid"}},
	{"negative seed", skyEmitter + "seed = ¦-1", "emitter.seed", []string{"0 to "}},
	{"large seed", skyEmitter + "seed = ¦9007199254740992", "emitter.seed", []string{"out of range"}},
	{"seed with a point", skyEmitter + "seed = ¦1.0", "emitter.seed", []string{"wrong type"}},
	{"two skies", skyEmitter + "[[emitter]]\nkind = ¦\"sky\"", "emitter.2.kind", []string{"a second sky"}},

	// surface
	{"surface of a hole", "[[emitter]]\nkind = ¦\"surface\"", "emitter.kind", []string{"opaque star only"}},
	{"surface of a shell", thinShell + "[[emitter]]\nkind = ¦\"surface\"", "emitter.kind", []string{"opaque star only"}},
	{"surface of a clear star", uniformStar + "[[emitter]]\nkind = ¦\"surface\"", "emitter.kind", []string{"opaque star only"}},
	{"two surfaces", lit + "[[emitter]]\nkind = ¦\"surface\"", "emitter.2.kind", []string{"a second surface"}},
	{"cold", lit + "temperature = ¦0", "emitter.temperature", []string{"more than 0 K"}},
	{"endless heat", lit + "temperature = ¦\"1e308 keV\"", "emitter.temperature", []string{"not a finite number of K"}},
	{"temperature in Hz", lit + "temperature = ¦\"1 Hz\"", "emitter.temperature", []string{"does not fit"}},
	{"seconds without mass", lit + "period = ¦0.3", "emitter.period", []string{"s needs object.mass"}},
	{"no period", lit + "period = ¦\"0 M\"", "emitter.period", []string{"more than 0 M"}},
	{"fast", lit + "period = ¦\"118 M\"", "emitter.period", []string{"slow rotation", "0.3012 c", "at most 0.3 c", "118.5 M or more"}},
	{"fast in s", "[object]\nkind = \"star\"\nradius = \"12 km\"\nmass = 1.4\n[[emitter]]\nkind = \"surface\"\nperiod = ¦0.001", "emitter.period", []string{"slow rotation", "0.001035 s"}},
	{"one frequency of heat", lit + "temperature = 1e6\nlight = ¦\"monochromatic\"", "emitter.light", []string{"is a blackbody", "bolometric or blackbody"}},
	{"one frequency of caps", lit + "caps = [{colatitude = 3, size = 3, temperature = 9}]\nlight = ¦\"monochromatic\"", "emitter.light", []string{"is a blackbody"}},

	// caps
	{"cap as text", lit + "caps = ¦\"hot\"", "emitter.caps", []string{"wrong type, text", "{colatitude, azimuth, size, temperature}"}},
	{"cap without a list", lit + "caps = ¦{size = 3}", "emitter.caps", []string{"wrong type, a table"}},
	{"caps with a header", lit + "[[¦emitter.caps]]\nsize = 3", "emitter.caps", []string{"wrong type, a table"}},
	{"number for a cap", lit + "caps = [¦3]", "emitter.caps", []string{"wrong type, a whole number"}},
	{"too many caps", lit + "caps = ¦[" + strings.Repeat("{},", 1001) + "]", "emitter.caps", []string{"a list of 1001 items", "up to 1000"}},
	{"unknown key of a cap", lit + "caps = [{colatitude = 3, ¦colour = 3}]", "emitter.caps", []string{"cap 1: unknown key", "found colour", "nearest known: colatitude"}},
	{"dotted key of a cap", lit + "caps = [{size.x = ¦3}]", "emitter.caps", []string{"cap 1, size: wrong type, a table"}},
	{"cap without size", lit + "caps = [¦{colatitude = 3, temperature = 9}]", "emitter.caps", []string{"cap 1 needs size", "more than 0 and at most 90 deg"}},
	{"cap without temperature", lit + "temperature = 9\ncaps = [{colatitude = 3, size = 3, temperature = 9}, ¦{colatitude = 3, size = 3}]", "emitter.caps", []string{"cap 2 needs temperature"}},
	{"empty cap", lit + "caps = [\n  # µ\n  ¦{},\n]", "emitter.caps", []string{"cap 1 needs colatitude"}},
	{"type in a cap", lit + "caps = [{colatitude = ¦true, size = 3, temperature = 9}]", "emitter.caps", []string{"cap 1, colatitude: wrong type, true or false", "found true"}},
	{"date in a cap", lit + "caps = [{colatitude = ¦2020-01-01, size = 3, temperature = 9}]", "emitter.caps", []string{"cap 1, colatitude: wrong type, a date", "found 2020-01-01"}},
	{"unit in a cap", lit + "caps = [{colatitude = ¦\"3 M\", size = 3, temperature = 9}]", "emitter.caps", []string{"cap 1, colatitude: the unit M does not fit", "units deg rad"}},
	{"colatitude", lit + "caps = [{colatitude = ¦181, size = 3, temperature = 9}]", "emitter.caps", []string{"cap 1, colatitude: out of range", "0 to 180 deg"}},
	{"azimuth of a cap", lit + "caps = [{colatitude = 3, azimuth = ¦-361, size = 3, temperature = 9}]", "emitter.caps", []string{"cap 1, azimuth: out of range", "-360 to 360 deg"}},
	{"size of a cap", lit + "caps = [\n  {colatitude = 3, size = 90, temperature = 9}, # µ\n  {colatitude = 3, size = ¦\"90.1 deg\", temperature = 9},\n]", "emitter.caps", []string{"cap 2, size: out of range", "more than 0 and at most 90 deg"}},
	{"no size", lit + "caps = [{colatitude = 3, size = ¦0, temperature = 9}]", "emitter.caps", []string{"cap 1, size: out of range"}},
	{"cold cap", lit + "caps = [{colatitude = 3, size = 3, temperature = ¦0}]", "emitter.caps", []string{"cap 1, temperature: out of range", "more than 0 K"}},
	{"inline", "object = {kind = \"star\", radius = 4}\nemitter = [{kind = \"surface\", caps = [{size = ¦nan}]}]", "emitter.caps", []string{"cap 1, size: not a finite number"}},
}

func TestObjectRefusals(t *testing.T) {
	for _, c := range objectRefusals {
		t.Run(c.name, func(t *testing.T) {
			text, line, column := c.place()
			checkRefusal(t, text, line, column, c.key, c.says)
		})
	}
}
