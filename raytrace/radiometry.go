package raytrace

import (
	"fmt"
	"math"
	"strings"

	"annulet/raytrace/emit"
	"annulet/scenes"
)

// Unit is what an intensity is given in.
type Unit string

// The units. Those of flux are of what a pixel, a beam or a square
// microarcsecond sends.
const (
	PlateUnit           Unit = "plate"            // as the plate has it, see Radiometry.Plate
	RadianceUnit        Unit = "W/m2/Hz/sr"       // specific intensity
	BolometricUnit      Unit = "W/m2/sr"          // over all frequencies
	PlanckKelvin        Unit = "K-planck"         // brightness temperature
	RayleighJeansKelvin Unit = "K-rayleigh-jeans" // the same of the Rayleigh-Jeans law
	JyPerPixel          Unit = "Jy/pixel"
	MJyPerPixel         Unit = "mJy/pixel"
	JyPerBeam           Unit = "Jy/beam"
	JyPerSquareUas      Unit = "Jy/uas2"
)

// Units are all of them, in the order of messages.
var Units = []Unit{PlateUnit, RadianceUnit, BolometricUnit, PlanckKelvin, RayleighJeansKelvin, JyPerPixel, MJyPerPixel, JyPerBeam, JyPerSquareUas}

// Radiometry turns the intensities of a plate into units of observers.
type Radiometry struct {
	Radiance  scenes.Radiance
	Frequency float64 // observed, Hz; 0 if the scene has none
	PixelSr   float64 // solid angle of a pixel at the middle of the field; 0 if not known
	BeamSr    float64 // solid angle of the scene's Gaussian beam; 0 if it has none
	unit      string  // of relative intensities, in words
}

// Radiometry returns that of the view's plates.
func (v *View) Radiometry() Radiometry {
	r := Radiometry{Radiance: v.scene.Radiance(), PixelSr: v.PixelSolidAngle()}
	if all := v.Frequencies(); len(all) > 0 {
		r.Frequency = all[v.frequency]
	}
	if t := v.scene.Telescope; t.GivenBeam {
		r.BeamSr = BeamSolidAngle(t.Beam[0], t.Beam[1])
	}
	if len(v.scene.Emitters) > 0 {
		r.unit = relativeUnit(v.scene.Emitters[0])
	}
	return r
}

// Jansky returns a flux of the view's plates, an integral over its field, in
// Jy; false where the scene does not say how bright it is at a frequency, or
// how large.
func (v *View) Jansky(flux float64) (jansky float64, ok bool) {
	r := v.Radiometry()
	convert, err := r.In(JyPerPixel)
	if err != nil {
		return 0, false
	}
	across, up := v.Field.Pitches()
	area := across * up
	if !v.Field.IsParallel() {
		area = r.PixelSr
	}
	return convert(flux / area), true
}

// relativeUnit says in words what an emitter's intensities are relative to.
func relativeUnit(e scenes.Emitter) string {
	unit := "emitted at r = 1 M"
	switch {
	case e.Profile == "novikov-thorne":
		unit = "flux of one face, Mdot c2/(GM/c2)2"
	case e.Profile == "table":
		unit = "value of the table"
	case e.Kind == "spot" && e.Light != "":
		unit = "emitted by a spot of contrast 1"
	}
	if e.Light == "line" {
		unit = "energy of the line, " + unit
	}
	return unit
}

// PixelSolidAngle returns that of a pixel at the middle of the field, sr; 0
// where it has none: a parallel field whose observer is not at infinity, or
// whose scene has no angular scale.
func (v *View) PixelSolidAngle() float64 {
	side := v.Field.Width / float64(v.Field.Columns)
	if !v.Field.IsParallel() {
		if v.Field.Projection == AllSky {
			return side * side // on the equator
		}
		c := v.Field.Center
		return side * side / math.Pow(1+c[0]*c[0]+c[1]*c[1], 1.5) // gnomonic
	}
	theta, ok := v.scene.ThetaG()
	if !ok || !math.IsInf(v.Observer.Radius, 1) {
		return 0
	}
	side *= theta / scenes.MicroarcsecondsPerRadian
	return side * side
}

// BeamSolidAngle returns that of a Gaussian beam, sr, from its FWHM in
// microarcseconds: π/(4 ln 2) times their product.
func BeamSolidAngle(major, minor float64) float64 {
	const uas = 1 / scenes.MicroarcsecondsPerRadian
	return math.Pi / (4 * math.Ln2) * major * uas * minor * uas
}

// Plate describes the unit of the plate in words.
func (r Radiometry) Plate() string {
	switch r.Radiance {
	case scenes.PerHertz:
		return "W m-2 Hz-1 sr-1"
	case scenes.Bolometric:
		return "W m-2 sr-1"
	}
	if r.unit != "" {
		return r.unit
	}
	return "emitted at r = 1 M"
}

// In returns the conversion from the plate's intensities to a unit. An error
// says what the scene lacks for it.
func (r Radiometry) In(u Unit) (func(float64) float64, error) {
	const uas = 1 / scenes.MicroarcsecondsPerRadian
	times := func(x float64) (func(float64) float64, error) {
		return func(i float64) float64 { return i * x }, nil
	}
	if u == PlateUnit || u == RadianceUnit && r.Radiance == scenes.PerHertz || u == BolometricUnit && r.Radiance == scenes.Bolometric {
		return times(1)
	}
	known := false
	for _, other := range Units {
		known = known || u == other
	}
	lack := func(needs string) (func(float64) float64, error) {
		return nil, fmt.Errorf("unit %s needs %s", u, needs)
	}
	switch {
	case !known:
		return nil, fmt.Errorf("unit %q: allowed: %s", u, UnitWords())
	case u == BolometricUnit:
		return lack(`a disk with a luminosity or accretion rate and light = "bolometric"`)
	case r.Radiance != scenes.PerHertz:
		return lack(`intensities per Hz: light = "blackbody", or a total_flux`)
	case u == PlanckKelvin:
		return func(i float64) float64 { return emit.BrightnessTemperature(i, r.Frequency) }, nil
	case u == RayleighJeansKelvin:
		return func(i float64) float64 { return emit.RayleighJeansTemperature(i, r.Frequency) }, nil
	case u == JyPerSquareUas:
		return times(uas * uas / scenes.Jansky)
	case u == JyPerBeam && r.BeamSr == 0:
		return lack("telescope.beam")
	case u == JyPerBeam:
		return times(r.BeamSr / scenes.Jansky)
	case r.PixelSr == 0:
		return lack("object.mass and object.distance, or object.theta_g, and on a parallel field the observer at infinity")
	case u == MJyPerPixel:
		return times(1e3 * r.PixelSr / scenes.Jansky)
	}
	return times(r.PixelSr / scenes.Jansky)
}

// UnitWords lists the units.
func UnitWords() string {
	var words []string
	for _, u := range Units {
		words = append(words, string(u))
	}
	return strings.Join(words, ", ")
}
