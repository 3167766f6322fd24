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
	Spacetime geodesic.Spacetime
	Observer  geodesic.Observer
	Field     Field
	Emitters  []Emitter
	Plan      geodesic.Plan
}

// NewView prepares a scene. The scene must have passed the checks of
// package scenes; what this version cannot trace is an error.
func NewView(s scenes.Scene) (*View, error) {
	object, err := newObject(s.Object)
	if err != nil {
		return nil, fmt.Errorf("raytrace: %w", err)
	}
	v := &View{
		Spacetime: object,
		Observer: geodesic.Observer{
			Radius:         s.Observer.Radius,
			InclinationDeg: s.Observer.Inclination,
			AzimuthDeg:     s.Observer.Azimuth,
		},
		Field: Field{
			Parallel: s.Field.Projection == "parallel",
			Width:    s.Field.Width,
			Center:   s.Field.Center,
			Columns:  s.Field.Pixels[0],
			Rows:     s.Field.Pixels[1],
		},
		Plan: geodesic.Plan{Tolerance: s.Trace.Tolerance, MaxOrder: s.Trace.MaxOrder, Plane: true},
	}
	if !v.Field.Parallel {
		const deg = math.Pi / 180
		v.Field.Width = 2 * math.Tan(s.Field.Width*deg/2)
		v.Field.Center = [2]float64{math.Tan(s.Field.Center[0] * deg), math.Tan(s.Field.Center[1] * deg)}
	}
	var disks []*emit.Disk
	for i, e := range s.Emitters {
		d, err := newDisk(e, object)
		if err != nil {
			return nil, fmt.Errorf("raytrace: emitter %d: %w", i+1, err)
		}
		disks = append(disks, d)
		v.Emitters = append(v.Emitters, d)
	}
	if s.Field.AutoWidth {
		v.Field.Width = autoWidth(v.Field, v.Observer, disks, v.Plan.MaxOrder)
	}
	return v, nil
}

// newObject is the one line a kind of object takes here.
func newObject(o scenes.Object) (*geodesic.Round, error) {
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

func newDisk(e scenes.Emitter, object *geodesic.Round) (*emit.Disk, error) {
	if e.Kind != "disk" {
		return nil, fmt.Errorf("kind %q cannot be traced in this version", e.Kind)
	}
	d := &emit.Disk{
		Gas:   object.CircularGas(),
		Inner: e.Inner.Radius, Outer: e.Outer,
		Index: e.Index, Clockwise: e.Clockwise, Thick: e.Thick,
	}
	switch e.Light {
	case "bolometric":
		d.GPower = 4
	case "monochromatic":
		d.GPower = 3 - e.SpectralIndex
	default:
		return nil, fmt.Errorf("light %q cannot be traced in this version", e.Light)
	}
	return d, nil
}

// Coarsened returns the same view with k times fewer columns and rows (at
// least one of each), for previews. Pixels are k times as wide, and the
// bottom left corners of both fields agree.
func (v *View) Coarsened(k int) *View {
	coarse := *v
	coarse.Field = v.Field.coarsened(max(1, k))
	return &coarse
}
