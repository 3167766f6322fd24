package state

import (
	"math"
	"slices"

	"annulet/app/tone"
	"annulet/raytrace"
	"annulet/scenes"
)

// AllOrders as Look.Order shows the sum of the orders' intensities, and of
// other layers the lowest order that a pixel has.
const AllOrders = -1

// Look is how the scene is looked at; none of it is in the scene file. Screen
// coordinates are those of raytrace.Field.
type Look struct {
	Layer raytrace.Layer
	Order int // or AllOrders
	Tones [layers]Tone

	Window   Window
	Own      bool // show the scene's own pixels, magnified
	Overlays Overlays

	Marker Mark
	Cut    Cut
	Circle Circle

	Tab      Tab
	Graph    Graph
	Stations []float64 // radii, M

	projection string // that the coordinates belong to
}

// Appearance is the part of a look that the picture depends on.
type Appearance struct {
	Layer    raytrace.Layer
	Order    int
	Tone     Tone // of the layer
	Window   Window
	Own      bool
	Overlays Overlays
}

// Appearance returns it.
func (l Look) Appearance() Appearance {
	return Appearance{l.Layer, l.Order, *l.Tone(), l.Window, l.Own, l.Overlays}
}

// layers is how many layers a plate has.
const layers = int(raytrace.Mu) + 1

// Tone is how a layer's values become colours.
type Tone struct {
	Curve     tone.Curve
	Fixed     bool // Low and High hold; else percentiles of the picture
	Low, High float64
}

// Window is the part of the field that the picture shows.
type Window struct {
	Alpha, Beta float64 // of its middle
	Width       float64 // 0 for the whole field
}

// Overlays are what is drawn over the picture.
type Overlays struct {
	Critical bool // the critical curve
	Rims     bool // rims' images, order by order
	Contours Contours
	Scale    bool // scale bar
	North    bool // north and east
	Beam     bool // the telescope's beam, FWHM
}

// Contours says of which layer contours are drawn.
type Contours int

// The contours.
const (
	NoContours Contours = iota
	ContoursOfG
	ContoursOfR
)

// Mark is a point that is held.
type Mark struct {
	On bool
	At [2]float64
}

// Cut is a straight line of values.
type Cut struct {
	On       bool
	From, To [2]float64
}

// Circle measures diameters.
type Circle struct {
	On     bool
	Centre [2]float64
	Radius float64
}

// newLook returns the look of a new window.
func newLook() Look {
	l := Look{Order: AllOrders, Overlays: Overlays{Scale: true}, Stations: []float64{4, 10, math.Inf(1)}}
	l.Tones[raytrace.Intensity].Curve = tone.SquareRoot
	return l
}

func (l Look) clone() Look {
	l.Stations = slices.Clone(l.Stations)
	return l
}

// forScene returns the look for another scene: what belongs to a place on the
// old one's screen goes.
func (l Look) forScene() Look {
	l.Window, l.Marker, l.Cut, l.Circle = Window{}, Mark{}, Cut{}, Circle{}
	for k := range l.Tones {
		l.Tones[k].Fixed = false
	}
	return l
}

// suit makes the look one that the scene can have.
func (l *Look) suit(s scenes.Scene) {
	l.Order = min(l.Order, s.Trace.MaxOrder)
	if l.projection != s.Field.Projection {
		l.Window, l.Marker, l.Cut, l.Circle = Window{}, Mark{}, Cut{}, Circle{}
		l.projection = s.Field.Projection
	}
	if s.Field.Projection == allSky { // it is every direction already
		l.Window = Window{}
	}
}

// Tone returns the tone of the layer shown.
func (l *Look) Tone() *Tone { return &l.Tones[l.Layer] }

// LayerName is one layer of the picture.
type LayerName struct {
	Layer raytrace.Layer
	Word  string // in a row of words
	Name  string // with its symbol
	Unit  string
}

// LayerNames returns the layers, in the order of raytrace.Layer.
func LayerNames() []LayerName {
	return []LayerName{
		{raytrace.Intensity, "Intensity", "intensity", ""},
		{raytrace.Redshift, "g", "redshift factor g", ""},
		{raytrace.Radius, "r", "radius r", "M"},
		{raytrace.Azimuth, "φ", "azimuth φ", "rad"},
		{raytrace.Delay, "Delay", "delay", "M"},
		{raytrace.Mu, "µ", "emission cosine µ", ""},
	}
}

// Curves returns the names of the tone's curves, in the order of tone.Curve.
func Curves() []string {
	return []string{tone.Linear: "linear", tone.SquareRoot: "square root", tone.Logarithmic: "logarithmic"}
}

// Zoom returns the window that shows the field w times closer about a point
// which keeps its place; shown is what the picture shows now.
func (w Window) Zoom(factor float64, about [2]float64) Window {
	return Window{
		Alpha: about[0] + (w.Alpha-about[0])/factor,
		Beta:  about[1] + (w.Beta-about[1])/factor,
		Width: w.Width / factor,
	}
}

// Closest and widest a window may be, relative to the scene's field. Method:
// closer, neighbouring pixels agree in all digits of a float32.
const (
	closestZoom = 1e6
	widestZoom  = 0.1
)

// SetWindow shows a part of the field, of which whole is the scene's; nearly
// the whole of it becomes the whole.
func (s *State) SetWindow(w, whole Window, gesture string) bool {
	if s.scene.Field.Projection == allSky {
		return false
	}
	zoom := whole.Width / w.Width
	if !(zoom < closestZoom && zoom > widestZoom) {
		return false
	}
	const nearly = 1e-3
	if math.Abs(zoom-1) < nearly && math.Hypot(w.Alpha-whole.Alpha, w.Beta-whole.Beta) < nearly*whole.Width {
		w = Window{}
	}
	if w == s.Look.Window {
		return false
	}
	s.Look.Window = w
	s.Looked("view", gesture, true)
	return true
}
