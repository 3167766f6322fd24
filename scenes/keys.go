package scenes

import (
	"slices"
	"strconv"
)

// Type is what a key's value must be.
type Type uint8

const (
	Text         Type = iota // any text
	Choice                   // one of Choices
	ChoiceList               // a list of Choices
	TextList                 // a list of any texts
	Number                   // a number without a unit
	NumberList               // a number, or a list of any length
	Integer                  // a whole number
	IntegerList              // a list of Count whole numbers
	Quantity                 // text with a unit, or a bare number in Unit
	QuantityList             // a list of Count quantities; Count 0: one, or a list of any length
	TableList                // a list of inline tables with the keys Fields
)

// Key is one key of the scene file. The table of keys drives the checks, the
// defaults, the reference and the desk's tooltips.
type Key struct {
	Section  string   // table it stands in; "" for the top level
	Name     string   // as written; case matters
	Type     Type     // what the value must be
	Count    int      // lists: how many items; 0 means any number up to 1000
	Unit     string   // unit of a bare number; "" without unit
	Units    []string // units that are accepted
	Words    []string // words that may stand instead of a quantity
	Choices  []string // Choice and ChoiceList: the words carried out
	OrNumber bool     // Choice: or a number in Range
	Fields   []Key    // TableList: the keys of each table; they have no Section
	Range    Range    // of the number, in M, deg, uas, Msun, pc, Hz or without unit
	Error    bool     // "+- error" may follow the number
	Kinds    []string // kinds of object or emitter that have the key; empty: all
	Profiles []string // profiles of a disk that have the key; empty: all
	Lights   []string // lights of an emitter that have the key; empty: all
	Required bool     // a file, or an inline table, without it is refused
	File     bool     // Text: the path of a file, from the scene file's folder
	Default  string   // as written in a file; "" when the key may stay away without one
	Text     string   // what it is, one line
	Why      string   // said when the value is out of Range; may be ""

	// What the scene file knows and this version does not carry out:
	Later        bool     // the key itself
	LaterChoices []string // further choices
}

// fieldNames returns the names of the keys of an inline table.
func (k Key) fieldNames() []string {
	var names []string
	for _, f := range k.Fields {
		names = append(names, f.Name)
	}
	return names
}

// Path returns the key as --set takes it, "observer.inclination".
func (k Key) Path() string { return address{section: k.Section, key: k.Name}.String() }

// section is one table of the scene file.
type section struct {
	name  string
	text  string
	many  bool // [[name]], from none to maxEmitters
	later bool
}

// maxItems bounds lists of any length. Taste: a plate is made for each
// frequency.
const maxItems = 1000

// maxEmitters bounds the number of emitters. Method: crossings number their
// surface in one byte, and 64 leaves room.
const maxEmitters = 64

// sections in the order of the reference and of Format.
var sections = []section{
	{name: "", text: "top of the file"},
	{name: "object", text: "the compact object at the centre"},
	{name: "observer", text: "where the picture is taken from"},
	{name: "field", text: "the part of the sky that is imaged"},
	{name: "emitter", text: "what shines; once for each emitter, at most " + strconv.Itoa(maxEmitters) + "; without any the image is empty", many: true},
	{name: "telescope", text: "the instrument that the image is compared with"},
	{name: "measured", text: "what was observed"},
	{name: "time", text: "times of a light curve or a movie"},
	{name: "trace", text: "the numerics"},
	{name: "figure", text: "figures for a paper", many: true},
}

// allEffects are the effects of trace.effects.
var allEffects = []string{bending, gravity, motion}

// The effects.
const bending, gravity, motion = "bending", "gravity", "motion"

// keyTable is the one table of keys, by section.
var keyTable = slices.Concat(topKeys, objectKeys, observerKeys, fieldKeys, emitterKeys, telescopeKeys, measuredKeys, timeKeys, traceKeys, figureKeys)

var topKeys = []Key{
	{Name: "schema", Type: Integer, Range: between(1, 1), Required: true, Text: "version of the scene file"},
	{Name: "title", Type: Text, Default: `""`, Text: "title of the scene"},
}

var objectKeys = []Key{
	{Section: "object", Name: "kind", Type: Choice, Choices: []string{blackHole, star, shell},
		Default: `"black-hole"`, Text: "kind of object; shell: thin, heavy, flat inside"},
	{Section: "object", Name: "charge", Type: Quantity, Unit: "M", Units: lengthUnits, Range: Range{Min: 0, Max: 1, OpenMax: true}, Kinds: []string{blackHole},
		Default: `"0 M"`, Text: "size |Q| of the charge of a black hole", Why: "at 1 M and beyond it there is no horizon, and its sign does not matter to light"},
	{Section: "object", Name: "radius", Type: Quantity, Unit: "M", Units: lengthUnits, Range: above(2), Kinds: []string{star, shell},
		Text: "circumferential radius of a star (more than 9/4 M) or shell; they need one"},
	{Section: "object", Name: "interior", Type: Choice, Choices: []string{"opaque", "uniform"}, Kinds: []string{star},
		Default: `"opaque"`, Text: "interior of a star; uniform: of one density, and light passes through"},
	{Section: "object", Name: "mass", Type: Quantity, Unit: "Msun", Units: massUnits, Range: above(0), Error: true,
		Text: "mass; with it km and s may be used, with the distance also uas"},
	{Section: "object", Name: "distance", Type: Quantity, Unit: "kpc", Units: distanceUnits, Range: above(0), Error: true,
		Text: "angular-diameter distance"},
	{Section: "object", Name: "redshift", Type: Number, Range: atLeast(0),
		Default: `0`, Text: "cosmological redshift z of the host: observed energies are smaller by 1 + z, times longer; D_L = (1+z)^2 D"},
	{Section: "object", Name: "theta_g", Type: Quantity, Unit: "uas", Units: skyUnits, Range: above(0), Error: true,
		Text: "the angle GM/(c² D), instead of mass and distance"},
}

var observerKeys = []Key{
	{Section: "observer", Name: "radius", Type: Quantity, Unit: "M", Units: lengthUnits, Words: []string{"infinity"}, Range: atLeast(0),
		Default: `"infinity"`, Text: "circumferential radius of the observer; static: outside a horizon or star, infall: also inside the horizon, orbit: above 3 M (charged: the photon sphere), shell: also inside it"},
	{Section: "observer", Name: "inclination", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(0, 180),
		Default: `"60 deg"`, Text: "angle between the disk axis and the direction to the observer"},
	{Section: "observer", Name: "azimuth", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(-360, 360),
		Default: `"0 deg"`, Text: "azimuth of the observer in the disk plane"},
	{Section: "observer", Name: "motion", Type: Choice, Choices: []string{"static", "orbit", "infall"},
		Default: `"static"`, Text: "motion of the observer; orbit: a circular geodesic towards +alpha, infall: radially, from rest at infinity"},
	{Section: "observer", Name: "position_angle", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(-360, 360),
		Default: `"0 deg"`, Text: "position angle of the disk axis on the sky, from north through east"},
}

var fieldKeys = []Key{
	{Section: "field", Name: "projection", Type: Choice, Choices: []string{parallel, perspective, allSky},
		Default: `"parallel"`, Text: "parallel: impact parameters alpha, beta; perspective: angles at the observer; all-sky: every direction, equirectangular"},
	{Section: "field", Name: "width", Type: Quantity, Unit: "M", Units: fieldUnits, Words: []string{"auto"}, Range: atLeast(smallestWidth),
		Default: `"auto"`, Text: "width of the field; auto: everything that shines plus 5 %; perspective: an angle, bare numbers in deg, below 180 deg; all-sky: 360 deg"},
	{Section: "field", Name: "pixels", Type: IntegerList, Count: 2, Range: atLeast(1),
		Default: `[800, 800]`, Text: "columns and rows"},
	{Section: "field", Name: "center", Type: QuantityList, Count: 2, Unit: "M", Units: fieldUnits, Range: anyNumber,
		Default: `["0 M", "0 M"]`, Text: "centre of the field, right and up; perspective: angles, bare numbers in deg, within 90 deg; all-sky: 0"},
	{Section: "field", Name: "frequency", Type: QuantityList, Unit: "GHz", Units: frequencyUnits, Range: above(0),
		Text: "observed frequency or photon energy, one or a list"},
}

// smallestWidth of a field, in M or degrees: below it pixels fall together, as
// their places have sixteen digits. Method.
const smallestWidth = 1e-12

var emitterKeys = []Key{
	{Section: "emitter", Name: "kind", Type: Choice, Choices: []string{disk, spot, surface, sky},
		Default: `"disk"`, Text: "kind of emitter"},
	{Section: "emitter", Name: "inner", Type: Quantity, Unit: "M", Units: lengthUnits, Words: []string{"isco", "horizon"}, Range: above(0), Kinds: onlyDisk,
		Default: `"isco"`, Text: "inner rim of the disk; isco: the innermost stable circular orbit (6 M uncharged) or the object's radius, whichever is larger; horizon: 2 M uncharged"},
	{Section: "emitter", Name: "outer", Type: Quantity, Unit: "M", Units: lengthUnits, Range: above(0), Kinds: onlyDisk,
		Default: `"20 M"`, Text: "outer rim of the disk"},
	{Section: "emitter", Name: "sense", Type: Choice, Choices: []string{"counter-clockwise", "clockwise"}, Kinds: []string{disk, spot},
		Default: `"counter-clockwise"`, Text: "sense in which the gas turns about the disk axis; a spot on a disk has the disk's"},
	{Section: "emitter", Name: "gas", Type: Choice, Choices: []string{"circular", "static"}, Kinds: onlyDisk,
		Default: `"circular"`, Text: "motion of the gas; circular: plunging inside the isco of a black hole, not below 6 M around a star or shell; static: held at rest"},
	{Section: "emitter", Name: "profile", Type: Choice, Choices: []string{powerLaw, novikovThorne, tabulated}, Kinds: onlyDisk,
		Default: `"power"`, Text: "emissivity with radius in the gas frame; power: (r/M)^-index; novikov-thorne: an accretion disk without torque at the isco; table: read from a file"},
	{Section: "emitter", Name: "index", Type: NumberList, Range: between(-20, 20), Profiles: []string{powerLaw}, Kinds: onlyDisk,
		Default: `3`, Text: "index of a power profile, or a list of them with breaks between"},
	{Section: "emitter", Name: "breaks", Type: QuantityList, Unit: "M", Units: lengthUnits, Range: above(0), Profiles: []string{powerLaw}, Kinds: onlyDisk,
		Text: "radii between the indices of a broken power profile"},
	{Section: "emitter", Name: "table", Type: Text, File: true, Profiles: []string{tabulated}, Kinds: onlyDisk, Text: "CSV file of a table profile, from the scene file's folder: r [M] growing, value; of a blackbody the effective temperature, K"},
	{Section: "emitter", Name: "total_flux", Type: Quantity, Unit: "Jy", Units: fluxUnits, Range: above(0), Profiles: []string{powerLaw, tabulated}, Lights: []string{monochromatic}, Kinds: onlyDisk,
		Text: "flux at the first frequency to which a monochromatic power or table disk is scaled, that of its whole image"},
	{Section: "emitter", Name: "luminosity", Type: Quantity, Unit: "Edd", Units: luminosityUnits, Range: above(0), Profiles: []string{novikovThorne}, Lights: []string{bolometric, blackbody}, Kinds: onlyDisk,
		Text: "luminosity of a novikov-thorne disk, 0.0572 of the rest energy accreted; Edd: that of ionised hydrogen"},
	{Section: "emitter", Name: "accretion_rate", Type: Quantity, Unit: "Msun/yr", Units: accretionUnits, Range: above(0), Profiles: []string{novikovThorne}, Lights: []string{bolometric, blackbody}, Kinds: onlyDisk,
		Text: "accretion rate of a novikov-thorne disk, instead of its luminosity; Edd: the rate of that luminosity"},
	{Section: "emitter", Name: "colour_correction", Type: Number, Range: between(0.1, 10), Lights: []string{blackbody}, Kinds: []string{disk, surface},
		Text: "colour over effective temperature of a blackbody, f in B_nu(f T)/f^4; left out: 1"},
	{Section: "emitter", Name: "light", Type: Choice, Choices: []string{bolometric, monochromatic, lineLight, blackbody},
		Default: `"bolometric"`, Text: "what is added up: all frequencies (g^4), one (g^(3-s)), a narrow line (energy: g^4; photons: g^3), one of a blackbody"},
	{Section: "emitter", Name: "spectral_index", Type: Number, Range: between(-10, 10),
		Default: `0`, Text: "monochromatic: I_nu ~ nu^spectral_index"},
	{Section: "emitter", Name: "rest", Type: Quantity, Unit: "keV", Units: frequencyUnits, Range: above(0), Lights: []string{lineLight}, Kinds: []string{disk, spot},
		Text: "energy of a line in the gas frame; left out: profiles are in g"},
	{Section: "emitter", Name: "optical_depth", Type: Choice, Choices: []string{"thin", "thick"}, OrNumber: true, Range: above(0), Kinds: onlyDisk,
		Default: `"thin"`, Text: "thin: all crossings add up; thick: the first one ends the path; a number: that at normal incidence, tau, emits S (1 - exp(-tau/mu)) and lets exp(-tau/mu) through"},
	{Section: "emitter", Name: "emission_angle", Type: Choice, Choices: []string{"isotropic", "darkened", "brightened"}, Kinds: []string{disk, spot, surface},
		Default: `"isotropic"`, Text: "intensity with mu, the cosine to the normal in the gas frame; darkened: 1 + 2.06 mu, brightened: ln(1 + 1/mu)"},
	{Section: "emitter", Name: "radius", Type: Quantity, Unit: "M", Units: lengthUnits, Range: above(0), Kinds: onlySpot, Text: "radius of the spot's circular geodesic"},
	{Section: "emitter", Name: "azimuth", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(-360, 360), Kinds: onlySpot,
		Default: `"0 deg"`, Text: "azimuth of the spot's middle at t = 0"},
	{Section: "emitter", Name: "size", Type: Quantity, Unit: "M", Units: lengthUnits, Range: above(0), Kinds: onlySpot,
		Default: `"0.5 M"`, Text: "Gaussian sigma of the spot, a proper length in the frame of its middle"},
	{Section: "emitter", Name: "contrast", Type: Number, Range: above(0), Kinds: onlySpot,
		Default: `1`, Text: "peak of the spot, in units of the disk's emission at its radius; without a disk, its emitted intensity"},
	{Section: "emitter", Name: "temperature", Type: Quantity, Unit: "K", Units: temperatureUnits, Range: above(0), Kinds: []string{disk, surface},
		Text: "temperature of the surface; left out: of uniform brightness 1, or dark around its caps; disk: effective temperature at 1 M of a blackbody power profile, T = temperature (r/M)^(-index/4)"},
	{Section: "emitter", Name: "period", Type: Quantity, Unit: "s", Units: timeUnits, Range: above(0), Kinds: onlySurface,
		Text: "period of rotation seen from infinity; slow rotation only; left out: the star does not turn"},
	{Section: "emitter", Name: "caps", Type: TableList, Fields: capKeys, Kinds: onlySurface,
		Text: "hot caps fixed to the surface"},
	{Section: "emitter", Name: "image", Type: Text, File: true, Kinds: onlySky,
		Text: "path of an equirectangular image, from the scene file's folder"},
	{Section: "emitter", Name: "pattern", Type: Choice, Choices: []string{"stars", "grid"}, Kinds: onlySky,
		Default: `"grid"`, Text: "drawn sky, instead of an image"},
	{Section: "emitter", Name: "seed", Type: Integer, Range: between(0, largestSeed), Kinds: onlySky,
		Default: `1`, Text: "seed of the star field"},
}

// Which kinds of emitter have a key.
var (
	onlyDisk    = []string{disk}
	onlySpot    = []string{spot}
	onlySurface = []string{surface}
	onlySky     = []string{sky}
)

// largestSeed is the largest whole number that every float64 below it is
// exact to.
const largestSeed = 1<<53 - 1

// capKeys are the keys of each of emitter.caps.
var capKeys = []Key{
	{Name: "colatitude", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(0, 180), Required: true, Text: "angle from the axis N to the cap's middle"},
	{Name: "azimuth", Type: Quantity, Unit: "deg", Units: angleUnits, Range: between(-360, 360), Default: `"0 deg"`, Text: "azimuth of its middle at t = 0"},
	{Name: "size", Type: Quantity, Unit: "deg", Units: angleUnits, Range: Range{Min: 0, Max: 90, OpenMin: true}, Required: true, Text: "angular radius seen from the star's centre"},
	{Name: "temperature", Type: Quantity, Unit: "K", Units: temperatureUnits, Range: above(0), Required: true, Text: "temperature"},
}

var telescopeKeys = []Key{
	{Section: "telescope", Name: "beam", Type: QuantityList, Count: 3, Unit: "uas", Units: beamUnits, Range: anyNumber,
		Text: "beam: FWHM major and minor in uas, position angle in deg"},
	{Section: "telescope", Name: "uv", Type: Text, File: true, Text: "CSV file of baselines: u, v [Glambda], from the scene file's folder"},
	{Section: "telescope", Name: "resolution", Type: Quantity, Unit: "eV", Units: frequencyUnits, Range: above(0), Text: "spectral FWHM; with it a line profile needs emitter.rest"},
}

var measuredKeys = []Key{
	{Section: "measured", Name: "ring_diameter", Type: Quantity, Unit: "uas", Units: skyUnits, Range: above(0), Error: true,
		Text: "diameter of the observed ring"},
	{Section: "measured", Name: "estimator", Type: Choice, Choices: []string{"ridge", "flux-weighted", "annulus-fit"},
		Text: "how the ring diameter was read off the data"},
}

var timeKeys = []Key{
	{Section: "time", Name: "start", Type: Quantity, Unit: "M", Units: frameUnits, Range: anyNumber,
		Default: `"0 M"`, Text: "first time, t_obs - r*(r_obs); orbit: the period of the first spot"},
	{Section: "time", Name: "end", Type: Quantity, Unit: "M", Units: frameUnits, Range: anyNumber,
		Text: "last time; left out: the first one"},
	{Section: "time", Name: "step", Type: Quantity, Unit: "M", Units: frameUnits, Range: above(0),
		Text: "time step; left out: a hundredth of the time from start to end"},
}

var traceKeys = []Key{
	{Section: "trace", Name: "tolerance", Type: Number, Range: between(1e-13, 1e-3), Default: `1e-9`, Text: "relative tolerance of each path"},
	{Section: "trace", Name: "max_order", Type: Integer, Range: between(0, 9), Default: `2`, Text: "highest image order"},
	{Section: "trace", Name: "flux_tolerance", Type: Number, Range: between(1e-9, 0.1), Default: `1e-4`, Text: "relative tolerance of the flux of an image; ten times more for each further order"},
	{Section: "trace", Name: "effects", Type: ChoiceList, Choices: allEffects,
		Default: `["bending", "gravity", "motion"]`, Text: "what light and gas are subject to; without bending: straight paths; gravity: no gravitational shift; motion: gas at rest"},
}

// Keys returns every key of the scene file, in the order of the reference.
func Keys() []Key { return slices.Clone(keyTable) }

// findKey returns the key of that section and name; case matters.
func findKey(section, name string) (Key, bool) {
	at := slices.IndexFunc(keyTable, func(k Key) bool { return k.Section == section && k.Name == name })
	if at < 0 {
		return Key{}, false
	}
	return keyTable[at], true
}

// findSection returns the section of that name.
func findSection(name string) (section, bool) {
	at := slices.IndexFunc(sections, func(s section) bool { return s.name == name })
	if at < 0 {
		return section{}, false
	}
	return sections[at], true
}
