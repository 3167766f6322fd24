package scenes

import (
	"errors"
	"slices"
	"strconv"
	"strings"
)

// Figure is one figure for a paper.
type Figure struct {
	Panels      []string  // what is drawn, a panel each: see the key figure.panels
	Journal     string    // "aa", "aas" or "mnras"
	Vary        []string  // KEY=VALUE; KEY=VALUE of the scenes beside one another; none for the scene alone
	Columns     int       // of the journal that the figure spans
	Width       float64   // mm; 0 for the journal's
	Across      int       // panels side by side; 0 for as many as look well
	Layers      []string  // of images, a panel each
	Orders      []string  // "total", "0", … "9", a panel each
	Frequencies []int     // of field.frequency, counted from 1, a panel each
	Unit        string    // of intensities
	Curve       string    // value to colour; "" by layer
	Limits      []float64 // ends of the colour map; none for those of the image
	Map         string    // colour map; "" by layer
	SharedScale bool      // the same limits for all panels of one layer
	Draw        []string  // what lies over images
	Contours    string    // layer of the contours; "" for none
	Levels      []float64 // of the contours; none for round ones
	Bin         float64   // of a line profile, in g
	Impacts     []float64 // of the paths drawn, M
	Dark        bool
	FontSize    float64 // points
	Resolution  float64 // pixels an inch
}

const (
	figureSection = "figure"
	millimetre    = "mm"
)

// figureUnits are the units of intensities, those of package raytrace.
var figureUnits = []string{"plate", "W/m2/Hz/sr", "W/m2/sr", "K-planck", "K-rayleigh-jeans", "Jy/pixel", "mJy/pixel", "Jy/beam", "Jy/uas2"}

var figureLayers = []string{"intensity", "g", "r", "phi", "delay", "mu", "temperature"}

// orderWords are "total" and every image order.
var orderWords = []string{"total", "0", "1", "2", "3", "4", "5", "6", "7", "8", "9"}

var figureKeys = []Key{
	{Section: figureSection, Name: "panels", Type: ChoiceList,
		Choices: []string{"image", "blurred", "line", "spectrum", "visibility", "light-curve", "path", "cut"},
		Default: `["image"]`, Text: "what is drawn, a panel each; blurred: the image through the telescope's beam; path: light paths in their plane; cut: intensity along beta = 0"},
	{Section: figureSection, Name: "vary", Type: TextList, Default: `[]`,
		Text: "the panels are repeated for scenes that differ in some keys, \"observer.inclination = 60 deg\", more keys after ; and \"\" for the scene as it is"},
	{Section: figureSection, Name: "journal", Type: Choice, Choices: []string{"aa", "aas", "mnras"},
		Default: `"aa"`, Text: "whose columns the width is taken from: 88 and 180 mm, 86.2 and 180.3 mm, 85.8 and 178.5 mm"},
	{Section: figureSection, Name: "columns", Type: Integer, Range: between(1, 2), Default: `1`, Text: "of the journal that the figure spans"},
	{Section: figureSection, Name: "width", Type: Quantity, Unit: millimetre, Units: []string{millimetre}, Range: between(40, 1000),
		Text: "width of the figure, instead of the journal's"},
	{Section: figureSection, Name: "across", Type: Integer, Range: between(1, 8), Text: "panels side by side; left out: one in one column, else as many as make a grid"},
	{Section: figureSection, Name: "layer", Type: ChoiceList, Choices: figureLayers, Default: `["intensity"]`, Text: "what images show, a panel each"},
	{Section: figureSection, Name: "order", Type: ChoiceList, Choices: orderWords, Default: `["total"]`, Text: "image orders of images, a panel each; layers other than intensity have no total and show the lowest order"},
	{Section: figureSection, Name: "frequency", Type: NumberList, Range: between(1, maxItems), Text: "which of field.frequency, counted from 1, a panel each; left out: the first"},
	{Section: figureSection, Name: "unit", Type: Choice, Choices: figureUnits, Default: `"plate"`, Text: "unit of intensities; plate: as the scene's emitters define it"},
	{Section: figureSection, Name: "curve", Type: Choice, Choices: []string{"linear", "square-root", "logarithmic"}, Text: "value to colour; left out: intensities by the square root, else linear"},
	{Section: figureSection, Name: "limits", Type: NumberList, Range: anyNumber, Text: "two numbers, the ends of the colour map; left out: those of the image"},
	{Section: figureSection, Name: "map", Type: Choice, Choices: []string{"ember", "tarn", "shift", "wheel", "orders"}, Text: "colour map; left out: by layer"},
	{Section: figureSection, Name: "scale", Type: Choice, Choices: []string{"own", "shared"}, Default: `"own"`, Text: "limits of the colours; shared: the same in all panels of one layer"},
	{Section: figureSection, Name: "draw", Type: ChoiceList, Choices: []string{"critical", "edges", "beam", "scale", "north", "ring"},
		Default: `[]`, Text: "what lies over images: the critical curve, images of the rims, the beam at half power, a scale bar, north and east, a circle of the measured ring's diameter"},
	{Section: figureSection, Name: "contours", Type: Choice, Choices: figureLayers[:6], Text: "layer whose contours lie over images; left out: none"},
	{Section: figureSection, Name: "levels", Type: NumberList, Range: anyNumber, Text: "of the contours, in the layer's unit (phi: deg; intensity: of the brightest pixel); left out: round ones"},
	{Section: figureSection, Name: "bin", Type: Number, Range: between(0.001, 1), Default: `0.02`, Text: "width of the bins of a line profile, in g"},
	{Section: figureSection, Name: "impact", Type: NumberList, Range: between(0, 1000), Text: "impact parameters of the paths drawn, M; left out: around the critical one"},
	{Section: figureSection, Name: "theme", Type: Choice, Choices: []string{"light", "dark"}, Default: `"light"`, Text: "light for paper, dark for slides"},
	{Section: figureSection, Name: "font_size", Type: Number, Range: between(5, 16), Default: `8`, Text: "size of the letters at the figure's size, points"},
	{Section: figureSection, Name: "resolution", Type: Number, Range: between(72, 1200), Default: `300`, Text: "of PNG and TIFF, pixels an inch"},
}

// PlainFigure is the figure of a scene that describes none.
func PlainFigure() Figure {
	b := &builder{src: &source{}, readings: map[address]reading{}}
	b.figure(0)
	return b.scene.Figures[0]
}

func (b *builder) figure(index int) {
	get := func(key string) reading { return b.get(figureSection, index, key) }
	list := func(r reading) (all []float64) {
		for k := range r.numbers {
			all = append(all, b.number(r, k))
		}
		return all
	}
	number := func(key string) float64 { return b.number(get(key), 0) }
	f := Figure{
		Panels: get("panels").words, Vary: get("vary").words, Journal: get("journal").word, Columns: int(number("columns")), Across: int(number("across")),
		Layers: get("layer").words, Orders: get("order").words, Unit: get("unit").word, Curve: get("curve").word,
		Limits: list(get("limits")), Map: get("map").word, SharedScale: get("scale").word == "shared",
		Draw: get("draw").words, Contours: get("contours").word, Levels: list(get("levels")), Bin: number("bin"),
		Impacts: list(get("impact")), Dark: get("theme").word == "dark", FontSize: number("font_size"), Resolution: number("resolution"),
	}
	if width := get("width"); width.given {
		f.Width = b.plain(width, 0)
	}
	for _, name := range []string{"panels", "layer", "order"} {
		if r := get(name); len(r.words) == 0 {
			b.failAt(r, Error{Problem: "an empty list", Allowed: r.key.Allowed()})
		}
	}
	for _, text := range f.Vary {
		all, err := ParseAssignments(text)
		if err != nil {
			b.failAt(get("vary"), Error{Problem: err.Error(), Allowed: "KEY = VALUE; KEY = VALUE"})
		}
		for _, a := range all {
			if target, wrong := parsePath(a.Path); wrong != nil || target.section == figureSection {
				b.failAt(get("vary"), Error{Problem: "not a key that can vary: " + a.Path, Allowed: "the keys of all tables but figure"})
			} else if _, known := findKey(target.section, target.key); !known {
				b.failAt(get("vary"), *unknownPath(target))
			}
		}
	}
	if r := get("limits"); len(f.Limits) != 0 && (len(f.Limits) != 2 || f.Limits[0] >= f.Limits[1]) {
		b.failAt(r, Error{Problem: "not two limits in order", Allowed: "[low, high], low below high"})
	}
	frequency := get("frequency")
	for k, x := range list(frequency) {
		n := int(x)
		if float64(n) != x || n > max(1, len(b.scene.Field.Frequency)) {
			b.fail(frequency, frequency.numbers[k].span, Error{Problem: "not the number of a frequency",
				Allowed: "whole numbers, 1 to " + strconv.Itoa(len(b.scene.Field.Frequency)) + " (field.frequency)"})
		}
		f.Frequencies = append(f.Frequencies, n)
	}
	for _, order := range f.Orders {
		if n, err := strconv.Atoi(order); err == nil && n > b.scene.Trace.MaxOrder && len(b.readings) > 0 {
			b.failAt(get("order"), Error{Problem: "order " + order + " is not traced", Allowed: "0 to " + strconv.Itoa(b.scene.Trace.MaxOrder) + " (trace.max_order), total"})
		}
	}
	needs := func(r reading, word string, ok bool, what string) {
		if slices.Contains(r.words, word) && !ok {
			b.failAt(r, Error{Problem: word + " needs " + what})
		}
	}
	panels, draw := get("panels"), get("draw")
	_, angular := b.scene.ThetaG()
	needs(panels, "blurred", b.scene.Telescope.GivenBeam, "telescope.beam")
	needs(draw, "beam", b.scene.Telescope.GivenBeam, "telescope.beam")
	needs(draw, "ring", b.scene.Measured.RingDiameter.Given, "measured.ring_diameter")
	needs(panels, "visibility", angular, "the angular scale: object.mass and object.distance, or object.theta_g")
	needs(panels, "spectrum", len(b.scene.Field.Frequency) > 1, "more than one field.frequency")
	needs(panels, "light-curve", len(b.scene.Time.Frames()) > 1, "time.end")
	b.scene.Figures = append(b.scene.Figures, f)
}

// ParseAssignments reads KEY = VALUE, several with semicolons between; the
// empty text has none.
func ParseAssignments(text string) ([]Assignment, error) {
	var all []Assignment
	for part := range strings.SplitSeq(text, ";") {
		if strings.TrimSpace(part) == "" {
			continue
		}
		key, value, ok := strings.Cut(part, "=")
		if !ok {
			return nil, errors.New("no KEY = VALUE: " + strconv.Quote(strings.TrimSpace(part)))
		}
		all = append(all, Assignment{Path: strings.TrimSpace(key), Value: strings.TrimSpace(value)})
	}
	return all, nil
}

// figure writes what differs from the default.
func (w writer) figure(f Figure) {
	w.header("[[figure]]")
	w.list("panels", f.Panels)
	w.list("vary", f.Vary)
	w.key("journal", quote(f.Journal))
	w.key("columns", strconv.Itoa(f.Columns))
	if f.Width > 0 {
		w.quantity("width", f.Width, millimetre)
	}
	if f.Across > 0 {
		w.key("across", strconv.Itoa(f.Across))
	}
	w.list("layer", f.Layers)
	w.list("order", f.Orders)
	numbers := func(name string, all []float64) {
		if len(all) > 0 {
			w.key(name, formatNumbers(all))
		}
	}
	var frequencies []float64
	for _, n := range f.Frequencies {
		frequencies = append(frequencies, float64(n))
	}
	numbers("frequency", frequencies)
	word := func(name, text string) {
		if text != "" {
			w.key(name, quote(text))
		}
	}
	word("unit", f.Unit)
	word("curve", f.Curve)
	numbers("limits", f.Limits)
	word("map", f.Map)
	word("scale", pick(f.SharedScale, "shared", "own"))
	w.list("draw", f.Draw)
	word("contours", f.Contours)
	numbers("levels", f.Levels)
	w.key("bin", tomlNumber(f.Bin))
	numbers("impact", f.Impacts)
	word("theme", pick(f.Dark, "dark", "light"))
	w.key("font_size", tomlNumber(f.FontSize))
	w.key("resolution", tomlNumber(f.Resolution))
}
