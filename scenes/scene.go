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
	Trace     Trace
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

// Emitter is one thing that shines.
type Emitter struct {
	Kind          string  // "disk", "surface" or "sky"
	Inner         Rim     // inner rim
	Outer         float64 // M
	Clockwise     bool    // sense = "clockwise"
	Gas           string  // "circular" or "static"
	Profile       string  // "power"
	Index         float64 // emissivity (r/M)^-Index in the gas frame
	Light         string  // "bolometric" or "monochromatic"
	SpectralIndex float64 // monochromatic: I_ν ∝ ν^SpectralIndex
	OpticalDepth  float64 // at normal incidence; 0 is "thin", +Inf "thick"
	EmissionAngle string  // "isotropic", "darkened" or "brightened"

	// surface
	Temperature float64 // K; 0 when not given
	Period      float64 // of rotation seen from infinity, M; 0 for none
	Caps        []Cap

	// sky
	Image   string // path of an equirectangular image, "" for a pattern
	Pattern string // "stars" or "grid"
	Seed    int64  // of the star field
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
}
