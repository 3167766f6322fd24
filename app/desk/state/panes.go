package state

// Tab is one of the tables beside the image.
type Tab int

// The tables.
const (
	TabPixel Tab = iota
	TabRings
	TabObserver
	TabStations
	TabNumerics
	TabText // the scene file
)

// TabNames returns the names of the tables, in the order of Tab.
func TabNames() []string {
	return []string{TabPixel: "Pixel", TabRings: "Rings", TabObserver: "Observer", TabStations: "Stations", TabNumerics: "Numerics", TabText: "Text"}
}

// Graph is one of the graphs under the tables.
type Graph int

// The graphs.
const (
	GraphPath Graph = iota
	GraphCut
	GraphOrders
	// These take a while, and are of the whole scene.
	GraphLine
	GraphSpectrum
	GraphVisibility
	GraphLightCurve
)

// Measured says whether the graph takes a while.
func (g Graph) Measured() bool { return g >= GraphLine }

// GraphNames returns the names of the graphs, in the order of Graph.
func GraphNames() []string {
	return []string{GraphPath: "Path", GraphCut: "Cut", GraphOrders: "Orders",
		GraphLine: "Line", GraphSpectrum: "Spectrum", GraphVisibility: "Visibility", GraphLightCurve: "Light curve"}
}

// OverlayNames returns what can be drawn over the image, in the order of
// List.
func OverlayNames() []string {
	return []string{"critical curve", "rims", "g lines", "r lines", "scale", "N E", "beam"}
}

// List returns which overlays are on.
func (o Overlays) List() []bool {
	return []bool{o.Critical, o.Rims, o.Contours == ContoursOfG, o.Contours == ContoursOfR, o.Scale, o.North, o.Beam}
}

// Turn turns one overlay of List on or off.
func (o *Overlays) Turn(k int) {
	contours := func(of Contours) {
		if o.Contours == of {
			of = NoContours
		}
		o.Contours = of
	}
	switch k {
	case 0:
		o.Critical = !o.Critical
	case 1:
		o.Rims = !o.Rims
	case 2:
		contours(ContoursOfG)
	case 3:
		contours(ContoursOfR)
	case 4:
		o.Scale = !o.Scale
	case 5:
		o.North = !o.North
	case 6:
		o.Beam = !o.Beam
	}
}
