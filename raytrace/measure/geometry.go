package measure

import (
	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// newGeometry returns how the observer of a view sees its disk plane.
func newGeometry(v *raytrace.View) (*rim.Geometry, error) {
	return rim.NewGeometry(v.Spacetime, v.Observer)
}

// disks returns the disks of a view and their places among its emitters.
func disks(v *raytrace.View) (found []*emit.Disk, at []int) {
	for k, e := range v.Emitters {
		if d, ok := e.(*emit.Disk); ok {
			found, at = append(found, d), append(at, k)
		}
	}
	return found, at
}

// rims returns between which radii an emitter lies on the disk plane.
func rims(e raytrace.Emitter) (inner, outer float64, ok bool) {
	switch e := e.(type) {
	case *emit.Disk:
		return e.Inner, e.Outer, true
	case *emit.Spot:
		return e.Inner(), e.Outer(), true
	}
	return 0, 0, false
}

// flats returns the places of the emitters of the disk plane.
func flats(v *raytrace.View) (at []int) {
	for k, e := range v.Emitters {
		if _, _, flat := rims(e); flat {
			at = append(at, k)
		}
	}
	return at
}
