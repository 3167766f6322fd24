package scenes

// Scene is one scene file, checked and with its defaults filled in.
type Scene struct {
	Title     string
	Object    Object
	Observer  Observer
	Field     Field
	Emitters  []Emitter
	Telescope Telescope
	Measured  Measured
	Time      Time
	Trace     Trace
	Figures   []Figure
	// Idle says, a sentence each, which keys of the text mean nothing with
	// the others. Equal does not look at it.
	Idle []string
}

// Measure is a quantity that may carry the user's one-sigma error.
// The zero Measure means that the scene does not give it.
type Measure struct {
	Value, Sigma float64 // in the key's unit
	Given        bool
}

// Object is the compact object at the centre.
type Object struct {
	Kind     string  // "black-hole", "star" or "shell"
	Charge   float64 // |Q| of a black hole, M, in [0, 1)
	Radius   float64 // of a star or shell, M; 0 for a hole
	Interior string  // star: "opaque" or "uniform"; "" otherwise
	Mass     Measure // solar masses
	Distance Measure // angular-diameter distance, parsec
	ThetaG   Measure // GM/(c² D), microarcseconds; instead of mass and distance
	Redshift float64 // cosmological
}

// Observer says where the picture is taken from.
type Observer struct {
	Radius        float64 // M; +Inf for an observer at infinity; 0 only inside a shell
	Inclination   float64 // deg, [0, 180], from the disk axis N
	Azimuth       float64 // deg
	Motion        string  // "static", "orbit" or "infall"
	PositionAngle float64 // deg, of N on the sky, from north through east
}

// Field is the part of the sky that is imaged.
type Field struct {
	Projection string     // "parallel", "perspective" or "all-sky"
	AutoWidth  bool       // width = "auto": everything that shines plus 5 %
	Width      float64    // M (parallel) or deg (perspective, all-sky 360); 0 when AutoWidth
	Pixels     [2]int     // columns, rows
	Center     [2]float64 // M (parallel) or deg (perspective)
	Frequency  []float64  // observed, Hz; empty when not given
}

// Emitter is one thing that shines. Keys that its kind does not have are
// zero.
type Emitter struct {
	Kind          string  // "disk", "spot", "surface" or "sky"
	Light         string  // "bolometric", "monochromatic", "line" or "blackbody"
	SpectralIndex float64 // monochromatic: I_ν ∝ ν^SpectralIndex
	Rest          float64 // line: frequency in the gas frame, Hz; 0 when not given
	EmissionAngle string  // "isotropic", "darkened" or "brightened"
	Clockwise     bool    // sense = "clockwise"

	// disk
	Inner         Rim       // inner rim
	Outer         float64   // M
	Gas           string    // "circular" or "static"
	Profile       string    // "power", "novikov-thorne" or "table"
	Index         []float64 // power: emissivity (r/M)^-Index in the gas frame, from the inside out
	Breaks        []float64 // M, between the indices
	Table         string    // path of a CSV file
	TotalFlux     float64   // Jy at the first frequency; 0 when not given
	Luminosity    Rate      // novikov-thorne: in "Edd" or "erg/s"
	AccretionRate Rate      // novikov-thorne: in "Edd" or "Msun/yr", instead
	OpticalDepth  float64   // at normal incidence; 0 is "thin", +Inf "thick"

	// disk and surface
	Temperature      float64 // K: of the surface, or effective at 1 M; 0 when not given
	ColourCorrection float64 // 0 when not given, for 1

	// spot
	Radius   float64 // of its middle, M
	Azimuth  float64 // of its middle at t = 0, deg
	Size     float64 // proper Gaussian sigma, M
	Contrast float64 // see SpotDisk

	// surface
	Period float64 // of rotation, M of the object's own time seen from infinity; 0 for none
	Caps   []Cap

	// sky
	Image   string // path of an equirectangular image, "" for a pattern
	Pattern string // "stars" or "grid"
	Seed    int64  // of the star field
}

// Rate is a power or an accretion rate; the zero Rate is not given.
type Rate struct {
	Value float64
	Unit  string
}

// Given says whether the scene gives it.
func (r Rate) Given() bool { return r.Unit != "" }

// Time is when the frames of a movie or light curve are taken: M of the
// object's own time, as t_obs - r*(r_obs).
type Time struct {
	Start, End, Step float64 // Step is 0 where there is one frame only
}

// Cap is a hot spot on a star's surface, fixed to it.
type Cap struct {
	Colatitude  float64 // deg from N, of its middle
	Azimuth     float64 // deg, at t = 0
	Size        float64 // deg, angular radius seen from the star's centre
	Temperature float64 // K
}

// Rim is an inner rim: a radius, or one that the object defines.
type Rim struct {
	Name   string  // "", "isco" or "horizon"
	Radius float64 // M; resolved also when Name is set
}

// Telescope describes the instrument that the image is compared with.
type Telescope struct {
	Beam      [3]float64 // FWHM major and minor in microarcseconds, position angle in deg
	GivenBeam bool

	UV         string  // path of a CSV file of baselines; "" when not given
	Resolution float64 // spectral FWHM, Hz; 0 when not given
}

// Measured holds what was observed.
type Measured struct {
	RingDiameter Measure // microarcseconds
	Estimator    string  // "ridge", "flux-weighted" or "annulus-fit"; "" when not given
}

// Trace sets the numerics.
type Trace struct {
	Tolerance     float64 // per path, relative
	MaxOrder      int     // highest image order n
	FluxTolerance float64

	// Effects that are left out: light goes straight, nothing is shifted by
	// gravity, gas is at rest.
	NoBending, NoGravity, NoMotion bool
}
