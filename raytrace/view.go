package raytrace

import (
	"fmt"
	"math"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// View is a scene made ready to trace.
type View struct {
	scene     scenes.Scene // that it was made of; empty for a view made by hand
	frequency int          // which of the scene's frequencies it shows
	Spacetime geodesic.Spacetime
	Observer  geodesic.Observer
	Field     Field
	Emitters  []Emitter
	Plan      geodesic.Plan
	// FluxTolerance is the relative error of the flux of each image order up
	// to which pixels are integrated over; 0 leaves their middles.
	FluxTolerance float64
	// Orbits are the shared orbits that Render keeps. Views that follow one
	// another share them: see Follow.
	Orbits *Orbits
}

// NewView prepares a scene. The scene must have passed the checks of
// package scenes; what this version cannot trace is an error. Paths of
// images are taken from the working directory.
func NewView(s scenes.Scene) (*View, error) { return NewViewIn(s, "") }

// NewViewIn is NewView with the folder from which paths of images are taken:
// that of the scene file.
func NewViewIn(s scenes.Scene, folder string) (*View, error) {
	object, err := NewObject(s.Object)
	if err != nil {
		return nil, fmt.Errorf("raytrace: %w", err)
	}
	observer, err := newObserver(s.Observer)
	if err != nil {
		return nil, fmt.Errorf("raytrace: %w", err)
	}
	field, err := newField(s.Field)
	if err != nil {
		return nil, fmt.Errorf("raytrace: %w", err)
	}
	v := &View{
		scene:     s,
		Spacetime: object, Observer: observer, Field: field,
		Plan:          geodesic.Plan{Tolerance: s.Trace.Tolerance, MaxOrder: s.Trace.MaxOrder},
		Orbits:        new(Orbits),
		FluxTolerance: s.Trace.FluxTolerance,
	}
	if s.Trace.NoBending {
		v.Spacetime = geodesic.NewStraight(object)
	}
	light := newLighting(s, object, folder)
	for i := range s.Emitters {
		shining, err := light.emitter(i)
		if err != nil {
			return nil, fmt.Errorf("raytrace: emitter %d: %w", i+1, err)
		}
		switch shining.(type) {
		case *emit.Disk, *emit.Spot:
			v.Plan.Plane = true
			v.Plan.Reach = max(v.Plan.Reach, outerRim(shining))
		case *emit.Sky:
			v.Plan.Sky = true
		}
		v.Emitters = append(v.Emitters, shining)
	}
	if s.Field.AutoWidth && field.Projection != AllSky {
		v.Field.Width, err = autoWidth(v, object)
	}
	return v, err
}

// newField turns a scene's field into screen coordinates; an automatic width
// is left open.
func newField(f scenes.Field) (Field, error) {
	field := Field{Width: f.Width, Center: f.Center, Columns: f.Pixels[0], Rows: f.Pixels[1]}
	const deg = math.Pi / 180
	switch f.Projection {
	case "parallel":
		field.Projection = Parallel
	case "perspective":
		field.Projection = Perspective
		field.Width = 2 * math.Tan(f.Width*deg/2)
		field.Center = [2]float64{math.Tan(f.Center[0] * deg), math.Tan(f.Center[1] * deg)}
	case "all-sky":
		field.Projection = AllSky
		field.Width, field.Center = 2*math.Pi, [2]float64{}
	default:
		return Field{}, fmt.Errorf("projection %q cannot be traced in this version", f.Projection)
	}
	return field, nil
}

func newObserver(o scenes.Observer) (geodesic.Observer, error) {
	observer := geodesic.Observer{Radius: o.Radius, InclinationDeg: o.Inclination, AzimuthDeg: o.Azimuth}
	switch o.Motion {
	case "", "static":
		observer.Motion = geodesic.Static
	case "orbit":
		observer.Motion = geodesic.Orbit
	case "infall":
		observer.Motion = geodesic.Infall
	default:
		return observer, fmt.Errorf("motion %q cannot be traced in this version", o.Motion)
	}
	return observer, nil
}

// NewObject returns the spacetime of a scene's object; this is the one line
// that a kind of object takes here.
func NewObject(o scenes.Object) (*geodesic.Round, error) {
	switch o.Kind {
	case "black-hole":
		return geodesic.NewHole(o.Charge)
	case "star":
		return geodesic.NewStar(o.Radius, o.Interior == "uniform")
	case "shell":
		return geodesic.NewShell(o.Radius)
	}
	return nil, fmt.Errorf("object of kind %q cannot be traced in this version", o.Kind)
}

// Coarsened returns the same view with k times fewer columns and rows (at
// least one of each), for previews. Pixels are k times as wide, and the
// bottom left corners of both fields agree; all-sky fields stay the whole
// sky.
func (v *View) Coarsened(k int) *View {
	coarse := *v
	coarse.Field = v.Field.coarsened(max(1, k))
	return &coarse
}

// Follow lets v use the shared orbits of an earlier view, which it finds
// ready if only inclination, azimuth, field or emitters have changed.
func (v *View) Follow(earlier *View) {
	if earlier != nil && earlier.Orbits != nil {
		v.Orbits = earlier.Orbits
	}
}
