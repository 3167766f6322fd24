package scenes

import (
	"math"
	"slices"
	"strings"
)

// Constants of the units. Symbols: G the constant of gravitation, c the
// speed of light.
const (
	// GMSun is the nominal solar mass parameter G·Msun, m³ s⁻², exact by
	// convention. Source: IAU 2015 Resolution B3.
	GMSun = 1.3271244e20
	// SpeedOfLight is c, m s⁻¹, exact. Source: SI.
	SpeedOfLight = 299792458.0
	// Planck is h, J s, exact. Source: SI (2019).
	Planck = 6.62607015e-34
	// ElementaryCharge is e, C, exact; 1 eV = e J. Source: SI (2019).
	ElementaryCharge = 1.602176634e-19
	// Boltzmann is k, J/K, exact. Source: SI (2019).
	Boltzmann = 1.380649e-23
	// Jansky is 10⁻²⁶ W m⁻² Hz⁻¹, by definition.
	Jansky = 1e-26
	// AstronomicalUnit is the au, m, exact. Source: IAU 2012 Resolution B2.
	AstronomicalUnit = 149597870700.0
	// Parsec is the pc, m, exactly 648000/π au. Source: IAU 2015 Resolution B2.
	Parsec = 648000 / math.Pi * AstronomicalUnit
	// MicroarcsecondsPerRadian is exactly 180/π · 3600 · 10⁶.
	MicroarcsecondsPerRadian = 648000e6 / math.Pi
	// microarcsecondsPerDegree is exact.
	microarcsecondsPerDegree = 3600e6
	// secondsPerDay is exact; the year is the Julian year of 365.25 d (IAU).
	secondsPerDay = 86400
)

// unit is a unit of the scene file: factor times the base unit. Units of
// one base convert into one another by their factors alone; between bases
// only what a scale allows is converted (see scale).
type unit struct {
	name   string
	base   string
	factor float64
}

// unitTable holds every unit of the scene file, the base unit of a base with
// factor 1, which makes numbers in it exact.
var unitTable = []unit{
	{"M", "M", 1},
	{"rg", "M", 1},
	{"rs", "M", 2},
	{"km", "m", 1000},
	{"s", "s", 1},
	{"d", "s", secondsPerDay},
	{"yr", "s", 365.25 * secondsPerDay},
	{"orbit", "orbit", 1},
	{"deg", "deg", 1},
	{"rad", "deg", 180 / math.Pi},
	{"uas", "uas", 1},
	{"mas", "uas", 1000},
	{"mm", "mm", 1},
	{"Msun", "Msun", 1},
	{"pc", "pc", 1},
	{"kpc", "pc", 1e3},
	{"Mpc", "pc", 1e6},
	{"Hz", "Hz", 1},
	{"kHz", "Hz", 1e3},
	{"MHz", "Hz", 1e6},
	{"GHz", "Hz", 1e9},
	{"THz", "Hz", 1e12},
	{"eV", "Hz", ElementaryCharge / Planck},
	{"keV", "Hz", 1e3 * ElementaryCharge / Planck},
	{"K", "K", 1},
	{"Jy", "Jy", 1},
	{"mJy", "Jy", 1e-3},
	{"Glambda", "Glambda", 1},
	{"erg/s", "erg/s", 1},
	{"Msun/yr", "Msun/yr", 1},
	{"Edd", "Edd", 1},
}

// Sets of units that keys accept.
var (
	lengthUnits      = []string{"M", "rg", "rs", "km", "s", "uas", "mas"}
	angleUnits       = []string{"deg", "rad"}
	fieldUnits       = slices.Concat(lengthUnits, angleUnits)
	timeUnits        = []string{"M", "rg", "rs", "s", "d", "yr"}
	frameUnits       = slices.Concat(timeUnits, []string{"orbit"})
	skyUnits         = []string{"uas", "mas"}
	beamUnits        = slices.Concat(skyUnits, angleUnits)
	massUnits        = []string{"Msun"}
	distanceUnits    = []string{"pc", "kpc", "Mpc"}
	frequencyUnits   = []string{"Hz", "kHz", "MHz", "GHz", "THz", "eV", "keV"}
	temperatureUnits = []string{"K", "eV", "keV"}
	fluxUnits        = []string{"Jy", "mJy"}
	luminosityUnits  = []string{"erg/s", "Edd"}
	accretionUnits   = []string{"Msun/yr", "Edd"}
)

// microSigns writes both Unicode micro signs, U+00B5 and U+03BC, as u.
var microSigns = strings.NewReplacer("µ", "u", "μ", "u")

// findUnit returns the unit of that name; case matters.
func findUnit(name string) (unit, bool) {
	name = microSigns.Replace(name)
	at := slices.IndexFunc(unitTable, func(u unit) bool { return u.name == name })
	if at < 0 {
		return unit{}, false
	}
	return unitTable[at], true
}
