package raytrace

import (
	"errors"
	"fmt"
	"math"
	"path/filepath"

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

// newEmitter is the one line a kind of emitter takes here; folder is that of
// the scene file.
func newEmitter(e scenes.Emitter, o scenes.Object, object *geodesic.Round, folder string) (Emitter, error) {
	power, err := gPower(e)
	if err != nil {
		return nil, err
	}
	switch e.Kind {
	case "disk":
		return newDisk(e, object, power)
	case "surface":
		return newSurface(e, o, power)
	case "sky":
		return newSky(e, folder, power)
	}
	return nil, fmt.Errorf("kind %q cannot be traced in this version", e.Kind)
}

// gPower returns the power of g that the received intensity carries.
func gPower(e scenes.Emitter) (float64, error) {
	switch e.Light {
	case "bolometric":
		return 4, nil
	case "monochromatic":
		return 3 - e.SpectralIndex, nil
	}
	return 0, fmt.Errorf("light %q cannot be traced in this version", e.Light)
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

func newDisk(e scenes.Emitter, object *geodesic.Round, power float64) (*emit.Disk, error) {
	law, err := angleLaw(e.EmissionAngle)
	if err != nil {
		return nil, err
	}
	d := &emit.Disk{
		Inner: e.Inner.Radius, Outer: e.Outer,
		Index: e.Index, Clockwise: e.Clockwise, Depth: e.OpticalDepth,
		Angle: law, GPower: power,
	}
	switch e.Gas {
	case "", "circular":
		d.Gas = object.CircularGas()
	case "static":
		d.Gas = object.StaticGas()
	default:
		return nil, fmt.Errorf("gas %q cannot be traced in this version", e.Gas)
	}
	return d, nil
}

func newSurface(e scenes.Emitter, o scenes.Object, power float64) (*emit.Surface, error) {
	if o.Kind != "star" || o.Interior == "uniform" {
		return nil, errors.New("a surface shines on an opaque star only")
	}
	if e.Light != "bolometric" && (e.Temperature > 0 || len(e.Caps) > 0) {
		return nil, fmt.Errorf("light %q of a surface with temperatures cannot be traced in this version", e.Light)
	}
	law, err := angleLaw(e.EmissionAngle)
	if err != nil {
		return nil, err
	}
	s := &emit.Surface{Radius: o.Radius, Brightness: 1, Clockwise: e.Clockwise, Angle: law, GPower: power}
	if e.Period > 0 {
		s.Spin = 2 * math.Pi / e.Period
	}
	reference := e.Temperature
	if reference == 0 && len(e.Caps) > 0 {
		s.Brightness = 0
		for _, c := range e.Caps {
			reference = max(reference, c.Temperature)
		}
	}
	for _, c := range e.Caps {
		ratio := c.Temperature / reference
		s.Caps = append(s.Caps, emit.NewCap(c.Colatitude, c.Azimuth, c.Size, math.Pow(ratio, 4)))
	}
	return s, nil
}

func newSky(e scenes.Emitter, folder string, power float64) (*emit.Sky, error) {
	var pattern emit.Pattern
	switch {
	case e.Image != "":
		file := e.Image
		if !filepath.IsAbs(file) {
			file = filepath.Join(folder, file)
		}
		image, err := emit.LoadImage(file)
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
	return emit.NewSky(pattern, power), nil
}
