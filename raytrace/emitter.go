package raytrace

import (
	"errors"
	"fmt"
	"math"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// Emitter turns a block of crossings into light. It must be safe for
// concurrent use. Pixels is filled only if the view's plan asks for the sky.
type Emitter interface {
	Reads() emit.Reads
	Shade(rays *geodesic.Rays, crossings *geodesic.Crossings, pixels *emit.Pixels, light *emit.Light)
}

// lighting makes a scene's emitters.
type lighting struct {
	scene   scenes.Scene
	object  *geodesic.Round
	folder  string // of the scene file
	without emit.Without
	disks   map[int]*emit.Disk // made so far, by emitter
}

func newLighting(s scenes.Scene, object *geodesic.Round, folder string) lighting {
	return lighting{scene: s, object: object, folder: folder, disks: map[int]*emit.Disk{}, without: emit.Without{
		Bending: s.Trace.NoBending, Gravity: s.Trace.NoGravity, ObserverLapse: observerLapse(s, object),
	}}
}

// observerLapse is √-g_tt at the observer, which only observers outside the
// horizon need.
func observerLapse(s scenes.Scene, object *geodesic.Round) float64 {
	if !s.Trace.NoBending && !s.Trace.NoGravity {
		return 0 // the zero Without
	}
	return object.Lapse(s.Observer.Radius)
}

// emitter is the one line a kind of emitter takes here.
func (l *lighting) emitter(k int) (Emitter, error) {
	switch e := l.scene.Emitters[k]; e.Kind {
	case "disk":
		return l.diskOf(k)
	case "spot":
		return l.spot(e)
	case "surface":
		return l.surface(e)
	case "sky":
		return l.sky(e)
	default:
		return nil, fmt.Errorf("kind %q cannot be traced in this version", e.Kind)
	}
}

// diskOf returns the disk of an emitter, made once: a spot on it needs it too.
func (l *lighting) diskOf(k int) (*emit.Disk, error) {
	if d := l.disks[k]; d != nil {
		return d, nil
	}
	d, err := l.disk(l.scene.Emitters[k])
	l.disks[k] = d
	return d, err
}

// gPower returns the power of g that the received intensity carries. That of
// a blackbody depends on more than a power.
func gPower(e scenes.Emitter) (float64, error) {
	switch e.Light {
	case "bolometric", "line": // the energy of a line
		return 4, nil
	case "monochromatic":
		return 3 - e.SpectralIndex, nil
	case "blackbody":
		return math.NaN(), nil
	}
	return 0, fmt.Errorf("light %q cannot be traced in this version", e.Light)
}

// dimming is the share of an intensity that a cosmological redshift leaves:
// it acts as one more factor 1/(1+z) in g.
func (l *lighting) dimming(power float64) float64 {
	return math.Pow(1+l.scene.Object.Redshift, -power)
}

// thermal returns how a blackbody shines at the first frequency; nil for
// other light.
func (l *lighting) thermal(e scenes.Emitter) (*emit.Thermal, error) {
	if e.Light != "blackbody" {
		return nil, nil
	}
	if len(l.scene.Field.Frequency) == 0 {
		return nil, errors.New("a blackbody needs a frequency")
	}
	h := &emit.Thermal{
		Colour:     1,
		Frequency:  l.scene.Field.Frequency[0] * (1 + l.scene.Object.Redshift),
		Brightness: l.dimming(3),
	}
	if e.ColourCorrection > 0 {
		h.Colour = e.ColourCorrection
	}
	return h, nil
}

// angleLaw returns the emission-angle law; "" is isotropic.
func angleLaw(name string) (emit.AngleLaw, error) {
	switch name {
	case "", "isotropic":
		return emit.Isotropic, nil
	case "darkened":
		return emit.Darkened, nil
	case "brightened":
		return emit.Brightened, nil
	}
	return 0, fmt.Errorf("emission_angle %q cannot be traced in this version", name)
}

// gas returns the motion of a disk's gas.
func (l *lighting) gas(name string) (geodesic.Gas, error) {
	switch {
	case name != "" && name != "circular" && name != "static":
		return geodesic.Gas{}, fmt.Errorf("gas %q cannot be traced in this version", name)
	case name == "static" || l.scene.Trace.NoMotion:
		return l.object.StaticGas(), nil
	}
	return l.object.CircularGas(), nil
}

// accretionFlux is Ṁc²/(GM/c²)², W m⁻², of which a Novikov-Thorne profile is
// the flux.
func (l *lighting) accretionFlux(e scenes.Emitter) (float64, bool) {
	watts, given := l.scene.AccretionPower(e)
	metres, scaled := l.scene.MetresPerM()
	return watts / (metres * metres), given && scaled
}

func (l *lighting) disk(e scenes.Emitter) (*emit.Disk, error) {
	d := &emit.Disk{
		Inner: e.Inner.Radius, Outer: e.Outer, Scale: 1,
		Clockwise: e.Clockwise, Depth: e.OpticalDepth, Without: l.without,
	}
	var err error
	if d.GPower, err = gPower(e); err != nil {
		return nil, err
	}
	if d.Angle, err = angleLaw(e.EmissionAngle); err != nil {
		return nil, err
	}
	if d.Gas, err = l.gas(e.Gas); err != nil {
		return nil, err
	}
	if d.Thermal, err = l.thermal(e); err != nil {
		return nil, err
	}
	if d.Thermal == nil {
		d.Scale = l.dimming(d.GPower)
	} else {
		d.Thermal.Scale = e.Temperature
	}
	switch e.Profile {
	case "", "power":
		switch len(e.Index) {
		case 0:
		case 1:
			d.Index = e.Index[0]
		default:
			d.Profile = emit.NewBrokenPower(e.Index, e.Breaks)
		}
	case "novikov-thorne":
		d.Profile = emit.NovikovThorne{}
		flux, absolute := l.accretionFlux(e)
		switch {
		case d.Thermal != nil:
			d.Thermal.Scale = math.Pow(flux/emit.StefanBoltzmann, 0.25)
		case absolute:
			d.Scale *= flux / math.Pi
		}
	case "table":
		table, err := emit.LoadTable(scenes.FilePath(l.folder, e.Table))
		if err == nil {
			err = table.Covers(d.Inner, d.Outer)
		}
		if err != nil {
			return nil, fmt.Errorf("table: %w", err)
		}
		d.Profile = table
		if d.Thermal != nil {
			d.Thermal.Kelvin = true
		}
	default:
		return nil, fmt.Errorf("profile %q cannot be traced in this version", e.Profile)
	}
	if e.TotalFlux > 0 {
		if err := l.scaleTo(d, e); err != nil {
			return nil, err
		}
	}
	return d, nil
}

func (l *lighting) spot(e scenes.Emitter) (*emit.Spot, error) {
	var on *emit.Disk
	var err error
	if k := l.scene.SpotDisk(e); k >= 0 {
		on, err = l.diskOf(k)
	} else { // the profile of a spot alone is 1 everywhere
		alone := e
		alone.Inner.Radius, alone.Outer = l.object.Edge(), math.Inf(1)
		on, err = l.disk(alone)
	}
	if err != nil {
		return nil, err
	}
	s := emit.NewSpot(*on, e.Radius, e.Azimuth*math.Pi/180, e.Size, e.Contrast, scenes.SpotReach)
	s.Time = l.scene.Time.Start
	return s, nil
}

func (l *lighting) surface(e scenes.Emitter) (*emit.Surface, error) {
	o := l.scene.Object
	if o.Kind != "star" || o.Interior == "uniform" {
		return nil, errors.New("a surface shines on an opaque star only")
	}
	if e.Light != "bolometric" && e.Light != "blackbody" && (e.Temperature > 0 || len(e.Caps) > 0) {
		return nil, fmt.Errorf("a surface with temperatures does not shine as light %q", e.Light)
	}
	law, err := angleLaw(e.EmissionAngle)
	if err != nil {
		return nil, err
	}
	power, err := gPower(e)
	if err != nil {
		return nil, err
	}
	s := &emit.Surface{
		Radius: o.Radius, Brightness: 1, Clockwise: e.Clockwise, Angle: law, GPower: power,
		Scale: l.dimming(power), Without: l.without, Time: l.scene.Time.Start,
	}
	if s.Thermal, err = l.thermal(e); err != nil {
		return nil, err
	}
	if e.Period > 0 && !l.scene.Trace.NoMotion {
		s.Spin = 2 * math.Pi / e.Period
	}
	reference := e.Temperature
	if reference == 0 && len(e.Caps) > 0 {
		s.Brightness = 0
		for _, c := range e.Caps {
			reference = max(reference, c.Temperature)
		}
	}
	// Brightness follows σT⁴, or a blackbody takes T itself
	brightness := func(t float64) float64 { return math.Pow(t/reference, 4) }
	if s.Thermal != nil {
		s.Brightness = e.Temperature
		brightness = func(t float64) float64 { return t }
	}
	for _, c := range e.Caps {
		s.Caps = append(s.Caps, emit.NewCap(c.Colatitude, c.Azimuth, c.Size, brightness(c.Temperature)))
	}
	return s, nil
}

func (l *lighting) sky(e scenes.Emitter) (*emit.Sky, error) {
	power, err := gPower(e)
	if err != nil {
		return nil, err
	}
	var pattern emit.Pattern
	switch {
	case e.Image != "":
		image, err := emit.LoadImage(scenes.FilePath(l.folder, e.Image))
		if err != nil {
			return nil, err
		}
		pattern = image
	case e.Pattern == "grid":
		pattern = emit.NewGrid()
	case e.Pattern == "stars":
		pattern = emit.RandomStars(e.Seed)
	default:
		return nil, fmt.Errorf("sky pattern %q cannot be traced in this version", e.Pattern)
	}
	sky := emit.NewSky(pattern, power)
	sky.Scale, sky.Without = l.dimming(power), l.without
	return sky, nil
}
