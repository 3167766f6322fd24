package state

import (
	"math"
	"slices"
	"strconv"
	"strings"

	"annulet/scenes"
)

// Headings, in the order in which the window shows them.
const (
	Observer = "Observer"
	Disk     = "Disk"
	Image    = "Image"
)

// Keys of the scene file that have a control.
const (
	Radius      = "observer.radius"
	Inclination = "observer.inclination"
	Width       = "field.width"
	Inner       = "emitter.inner"
	Outer       = "emitter.outer"
	Index       = "emitter.index"
	MaxOrder    = "trace.max_order"
	Sense       = "emitter.sense"
	Depth       = "emitter.optical_depth"
)

// Control is one quantity of the scene, shown as a slider and an entry.
type Control struct {
	Key   string // of the scene file
	Name  string // the trade's word for it
	Range string // what may be typed
	Help  string // what it means, one line
	Group string // heading it stands under

	Axis     Axis
	Position float64 // of the slider, 0 to Axis.Last()
	Text     string  // in the entry, possibly being typed
	Wrong    string  // what is wrong with Text; "" when nothing is known to be

	read func(scenes.Scene) Stop           // the scene's value, with its text
	axis func(scenes.Scene) (Axis, string) // stops and Range
}

// Choice is one property of the scene with few values.
type Choice struct {
	Key, Name, Help, Group string
	Options                []Option
	Chosen                 int

	read func(scenes.Scene) int
}

// Option is one value of a Choice.
type Option struct {
	Label string
	text  string // in the scene file
}

// Where the sliders end. Taste: the entries take everything the scene file
// takes.
const (
	nearestObserver, farthestObserver = 3.15, 1e5 // M; a parallel field needs r > 3 M
	narrowestField, widestField       = 4, 1000   // M
	narrowestAngle, widestAngle       = 1, 150    // deg
	leastOuter, greatestOuter         = 3, 1000   // M
	greatestInner                     = 100       // M
	horizon, isco                     = 2, 6      // M, of an uncharged hole
	steepest                          = 10        // emissivity index
	highestOrder                      = 5
)

func newControls() []*Control {
	all := []*Control{
		{
			Group: Observer, Key: Radius, Name: "Observer radius",
			axis: always(logarithmic(nearestObserver, farthestObserver, "M").with(math.Inf(1), "infinity"),
				"above 2 M (parallel: 3 M), infinity"),
			read: func(s scenes.Scene) Stop { return length(s.Observer.Radius) },
		}, {
			Group: Observer, Key: Inclination, Name: "Inclination",
			axis: always(linear(0, 180, 1, 0, "deg"), "0 to 180 deg"),
			read: func(s scenes.Scene) Stop { return quantity(s.Observer.Inclination, "deg") },
		}, {
			Group: Image, Key: Width, Name: "Field width",
			axis: func(s scenes.Scene) (Axis, string) {
				if angular(s) {
					return logarithmic(narrowestAngle, widestAngle, "deg").with(math.Inf(-1), "auto"), "auto, or below 180 deg"
				}
				if _, ok := ThetaG(s); ok {
					return lengthsOrAuto, "auto, or a length (M, µas)"
				}
				return lengthsOrAuto, "auto, or a length (M)"
			},
			read: func(s scenes.Scene) Stop {
				switch {
				case s.Field.AutoWidth:
					return Stop{math.Inf(-1), "auto"}
				case angular(s):
					return quantity(s.Field.Width, "deg")
				}
				return length(s.Field.Width)
			},
		}, {
			Group: Disk, Key: Inner, Name: "Disk inner radius",
			axis: always(logarithmic(horizon, greatestInner, "M").with(horizon, "horizon").with(isco, "isco"),
				"horizon, isco, or from 2 M"),
			read: func(s scenes.Scene) Stop {
				rim := disk(s).Inner
				if rim.Name != "" {
					return Stop{rim.Radius, rim.Name}
				}
				return length(rim.Radius)
			},
		}, {
			Group: Disk, Key: Outer, Name: "Disk outer radius",
			axis: always(logarithmic(leastOuter, greatestOuter, "M"), "above the inner radius"),
			read: func(s scenes.Scene) Stop { return length(disk(s).Outer) },
		}, {
			Group: Disk, Key: Index, Name: "Emissivity index",
			axis: always(linear(0, steepest, 0.1, 1, ""), "emissivity (r/M)^−index"),
			read: func(s scenes.Scene) Stop { return quantity(disk(s).Index, "") },
		}, {
			Group: Image, Key: MaxOrder, Name: "Highest image order",
			axis: always(linear(0, highestOrder, 1, 0, ""), "0 direct, 1 first lensed, …"),
			read: func(s scenes.Scene) Stop { return quantity(float64(s.Trace.MaxOrder), "") },
		},
	}
	for _, c := range all {
		c.Help = help(c.Key)
	}
	return all
}

var lengthsOrAuto = logarithmic(narrowestField, widestField, "M").with(math.Inf(-1), "auto")

func newChoices() []*Choice {
	all := []*Choice{
		{
			Group: Disk, Key: Sense, Name: "Gas turns",
			Options: []Option{{"counter-clockwise", "counter-clockwise"}, {"clockwise", "clockwise"}},
			read:    func(s scenes.Scene) int { return index(disk(s).Clockwise) },
		}, {
			Group: Disk, Key: Depth, Name: "Disk depth",
			Options: []Option{{"thin", "thin"}, {"thick", "thick"}},
			read:    func(s scenes.Scene) int { return index(disk(s).Thick) },
		},
	}
	for _, c := range all {
		c.Help = help(c.Key)
	}
	return all
}

// help returns the scene file's one-line text for a key.
func help(path string) string {
	for _, k := range scenes.Keys() {
		if k.Path() == path {
			return k.Text
		}
	}
	return ""
}

func always(a Axis, limits string) func(scenes.Scene) (Axis, string) {
	return func(scenes.Scene) (Axis, string) { return a, limits }
}

// firstDisk returns the index of the emitter that the controls edit: the
// first disk; 0 when there is none.
func firstDisk(s scenes.Scene) int {
	return max(0, slices.IndexFunc(s.Emitters, func(e scenes.Emitter) bool { return e.Kind == "disk" }))
}

// disk returns the emitter that the controls edit.
func disk(s scenes.Scene) scenes.Emitter {
	if len(s.Emitters) == 0 {
		return scenes.Emitter{}
	}
	return s.Emitters[firstDisk(s)]
}

// address returns a control's key as the document takes it: emitters but the
// first are numbered.
func address(key string, s scenes.Scene) string {
	const section = "emitter."
	if rest, ok := strings.CutPrefix(key, section); ok && firstDisk(s) > 0 {
		return section + strconv.Itoa(firstDisk(s)+1) + "." + rest
	}
	return key
}

// angular says whether the field is in angles, not in M.
func angular(s scenes.Scene) bool { return s.Field.Projection != "parallel" }

func length(m float64) Stop {
	if math.IsInf(m, 1) {
		return Stop{m, "infinity"}
	}
	return quantity(m, "M")
}

// quantity writes a value with at most seven digits.
func quantity(v float64, unit string) Stop {
	const digits = 7
	text := strconv.FormatFloat(v, 'g', -1, 64)
	if short := strconv.FormatFloat(v, 'g', digits, 64); len(short) < len(text) {
		text = short
	}
	return Stop{v, withUnit(text, unit)}
}

func index(b bool) int {
	if b {
		return 1
	}
	return 0
}
