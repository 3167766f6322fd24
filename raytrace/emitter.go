package raytrace

import (
	"annulet/geodesic"
	"annulet/raytrace/emit"
)

// Emitter turns a block of crossings into light. It must be safe for
// concurrent use.
type Emitter interface {
	Shade(rays *geodesic.Rays, crossings *geodesic.Crossings, light *emit.Light)
}
