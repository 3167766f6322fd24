package state

import (
	"math"
	"strconv"

	"annulet/scenes"
)

// Projections of the scene file.
const (
	parallel = "parallel"
	allSky   = "all-sky"
)

// Where the sliders end. Taste: the entries take everything the scene file
// takes.
const (
	nearestObserver, farthestObserver = 0.1, 1e5 // M, cut where the scene file ends
	narrowestField, widestField       = 4, 1000  // M
	narrowestAngle, widestAngle       = 1, 150   // deg
	greatestOuter                     = 1000     // M
	greatestInner                     = 100      // M
	largestObject                     = 100      // M
	steepest                          = 10       // emissivity index
	finestTolerance                   = -13      // decade
	coarsestTolerance                 = -3
	mostSeed                          = 50
)

// axisOf returns what makes the axis of a key, nil for one without a slider.
func axisOf(k scenes.Key) func(*State) Axis {
	if axis, ok := axes[k.Path()]; ok {
		return axis
	}
	switch {
	case k.Type == scenes.Quantity && k.Unit == "deg":
		return func(*State) Axis {
			return linear(math.Max(k.Range.Min, -180), math.Min(k.Range.Max, 180), 1, 0, "deg")
		}
	case k.Type == scenes.Quantity && k.Unit == "M" && len(k.Words) == 0:
		return func(*State) Axis { return logarithmic(math.Max(k.Range.Min, 0.1), greatestOuter, "M").above(k.Range) }
	}
	return nil
}

// axes are those of the keys that need more than their row of the table says.
var axes = map[string]func(*State) Axis{
	"object.radius": func(s *State) Axis {
		least := 2.0 // a shell; the Buchdahl limit for a star
		if s.scene.Object.Kind == "star" {
			least = 9. / 4
		}
		return logarithmic(least, largestObject, "M").above(scenes.Range{Min: least, OpenMin: true, Max: math.Inf(1)})
	},
	"object.charge": func(*State) Axis { return linear(0, 0.99, 0.01, 2, "M") },
	"observer.radius": func(s *State) Axis {
		a := logarithmic(nearestObserver, farthestObserver, "M").above(observerRange(s.scene))
		if s.scene.Observer.Motion == "static" && !angular(s.scene) {
			a = a.with(math.Inf(1), "infinity")
		}
		return a
	},
	"observer.inclination": func(*State) Axis { return linear(0, 180, 1, 0, "deg") },
	"field.width": func(s *State) Axis {
		a := logarithmic(narrowestField, widestField, "M")
		if angular(s.scene) {
			a = logarithmic(narrowestAngle, widestAngle, "deg")
		}
		return a.with(math.Inf(-1), "auto")
	},
	"emitter.inner": func(s *State) Axis {
		o := s.scene.Object
		least := math.Max(o.Horizon(), o.Radius)
		a := logarithmic(math.Max(least, 1), greatestInner, "M").above(scenes.Range{Min: least, Max: math.Inf(1)})
		if o.Kind == "black-hole" {
			a = a.with(o.Horizon(), "horizon")
		}
		return a.with(o.ISCO(), "isco")
	},
	"emitter.outer": func(s *State) Axis {
		o := s.scene.Object
		return logarithmic(1, greatestOuter, "M").above(scenes.Range{Min: math.Max(o.Horizon(), o.Radius), OpenMin: true, Max: math.Inf(1)})
	},
	"emitter.index":          func(*State) Axis { return linear(0, steepest, 0.1, 1, "") },
	"emitter.spectral_index": func(*State) Axis { return linear(-3, 3, 0.1, 1, "") },
	"emitter.seed":           func(*State) Axis { return linear(0, mostSeed, 1, 0, "") },
	"trace.max_order":        func(*State) Axis { return linear(0, 9, 1, 0, "") },
	"trace.tolerance":        func(*State) Axis { return decades(finestTolerance, coarsestTolerance) },
	"trace.flux_tolerance":   func(*State) Axis { return decades(-9, -1) },
}

// observerRange is where the scene file takes an observer.
func observerRange(s scenes.Scene) scenes.Range {
	o := s.Object
	least := 0.0
	switch {
	case s.Observer.Motion == "orbit":
		least = math.Max(o.PhotonSphere(), o.Radius)
	case s.Observer.Motion == "infall" && o.Kind == "black-hole" && o.Charge == 0:
	case !angular(s):
		least = math.Max(o.PhotonSphere(), o.Radius)
	case o.Kind == "shell" && s.Observer.Motion == "static":
	default:
		least = math.Max(o.Horizon(), o.Radius)
	}
	return scenes.Range{Min: least, OpenMin: true, Max: math.Inf(1)}
}

// above returns the stops that lie within a range.
func (a Axis) above(r scenes.Range) Axis {
	var out Axis
	for _, at := range a {
		if r.Holds(at.Value) {
			out = append(out, at)
		}
	}
	return out
}

// decades returns the powers of ten between two exponents; their values are
// the exponents.
func decades(from, to int) Axis {
	var a Axis
	for k := from; k <= to; k++ {
		text := "1e" + strconv.Itoa(k)
		value, _ := strconv.ParseFloat(text, 64)
		a = append(a, Stop{value, text})
	}
	return a
}

// angular says whether the field is in angles, not in M.
func angular(s scenes.Scene) bool { return s.Field.Projection != parallel }
