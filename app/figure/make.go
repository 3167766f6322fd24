package figure

import (
	"context"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"

	"annulet/app/curves"
	"annulet/app/output"
	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// Request asks for a figure.
type Request struct {
	Document *scenes.Document
	Figure   scenes.Figure
	Workers  int
	// Begin is told of each image that is rendered, and returns what its
	// progress is told to and what ends it; nil for none.
	Begin func(columns, rows int) (report func(raytrace.Progress), end func())
	// Allow judges the scenes that the figure's vary makes; nil allows all.
	Allow func(d *scenes.Document, changes ...scenes.Assignment) error
	// Measured is told how far a measurement is; nil for none.
	Measured func(done, all int)
}

// ErrRefused marks what a scene or its figure asks for and cannot have.
var ErrRefused = errors.New("refused")

// refusal is an error of that kind which says no more than its reason.
type refusal struct{ error }

func (refusal) Is(target error) bool { return target == ErrRefused }

func refuse(format string, args ...any) error { return refusal{fmt.Errorf(format, args...)} }

// Made is a figure.
type Made struct {
	*Sheet
	Caption string          // a draft
	Plate   *raytrace.Plate // of the first image: counts and bounds; nil without one
	Dpi     float64         // of PNG and TIFF
}

// maker is a figure in the making.
type maker struct {
	Request
	Scene  scenes.Scene
	ctx    context.Context
	view   *raytrace.View
	plates map[int]*raytrace.Plate // by frequency
	which  string                  // of the scenes beside one another
	notes  []string                // of the caption, a panel each
	over   []string                // of the caption: what lies over images
}

// Make traces what a figure needs and draws it. It stops within a tile when
// ctx ends.
func Make(ctx context.Context, r Request) (*Made, error) {
	vary := r.Figure.Vary
	if len(vary) == 0 {
		vary = []string{""}
	}
	const letters = 26 // a to z name the panels
	if n := count(r.Figure) * len(vary); n > letters {
		return nil, refuse("the figure would have %d panels; allowed: %d", n, letters)
	}
	var panels []panel
	var makers []*maker
	for _, text := range vary {
		m, err := newMaker(ctx, r, text)
		if err != nil {
			return nil, err
		}
		for _, word := range r.Figure.Panels {
			made, err := m.panels(word)
			if err != nil {
				return nil, fmt.Errorf("figure: panel %s: %w", word, err)
			}
			panels = append(panels, made...)
		}
		makers = append(makers, m)
	}
	m := makers[0]
	if err := ctx.Err(); err != nil {
		return nil, err
	}
	for _, other := range makers[1:] {
		m.notes = append(m.notes, other.notes...)
		for _, text := range other.over {
			m.say(text)
		}
	}
	m.share(panels)
	across := r.Figure.Across
	if across == 0 {
		across = 1
		if wide := width(r.Figure) > 120; len(panels) > 1 && (wide || len(panels) > 3) {
			across = 2
			if wide && len(panels)%3 == 0 {
				across = 3
			}
		}
	}
	across = min(across, len(panels))
	for _, p := range panels {
		if image, ok := p.(*imagePanel); ok {
			image.second = across == 1
		}
	}
	st := newStyle(r.Figure.Dark, r.Figure.FontSize)
	sheet, err := arrange(panels, across, width(r.Figure), st)
	if err != nil {
		return nil, err
	}
	made := &Made{Sheet: sheet, Dpi: r.Figure.Resolution}
	for _, p := range m.plates {
		made.Plate = p
	}
	if p := m.plates[m.frequencies()[0]]; p != nil {
		made.Plate = p
	}
	made.Caption = m.caption(len(panels) > 1)
	return made, nil
}

// count is how many panels a figure has for one scene.
func count(f scenes.Figure) int {
	n := 0
	for _, word := range f.Panels {
		if word == "image" || word == "blurred" {
			n += len(f.Layers) * len(f.Orders) * max(1, len(f.Frequencies))
		} else {
			n++
		}
	}
	return n
}

// newMaker makes ready the request's scene with some keys changed.
func newMaker(ctx context.Context, r Request, vary string) (*maker, error) {
	d := r.Document
	changes, err := scenes.ParseAssignments(vary)
	if err != nil {
		return nil, refusal{err}
	}
	if len(changes) > 0 {
		if d, err = scenes.Parse(d.Name(), d.Text()); err == nil {
			err = d.SetAll(changes...)
		}
		if err == nil && r.Allow != nil {
			err = r.Allow(d, changes...)
		}
		if err != nil {
			return nil, refuse("figure.vary %q: %v", vary, err)
		}
	}
	view, err := raytrace.NewViewIn(d.Scene(), d.Dir())
	if err != nil {
		return nil, refusal{err}
	}
	m := &maker{Request: r, Scene: d.Scene(), ctx: ctx, view: view, plates: map[int]*raytrace.Plate{}}
	var which []string
	for _, c := range changes {
		which = append(which, strings.ReplaceAll(c.Path[strings.LastIndex(c.Path, ".")+1:], "_", " ")+" "+spaced(strings.Trim(c.Value, `"`)))
	}
	m.which = strings.Join(which, ", ")
	return m, nil
}

// spaced puts a space between a number and its unit.
func spaced(value string) string {
	k := strings.LastIndexAny(value, "0123456789")
	if k < 0 || k == len(value)-1 || value[k+1] == ' ' {
		return value
	}
	return value[:k+1] + " " + value[k+1:]
}

// note says in the caption what a panel is.
func (m *maker) note(format string, args ...any) {
	text := fmt.Sprintf(format, args...)
	if m.which != "" {
		text += "; " + m.which
	}
	m.notes = append(m.notes, text)
}

// say says once what lies over images.
func (m *maker) say(text string) {
	if !slices.Contains(m.over, text) {
		m.over = append(m.over, text)
	}
}

// frequencies are the scene's that images show, counted from 0.
func (m *maker) frequencies() []int {
	all := []int{}
	for _, n := range m.Figure.Frequencies {
		all = append(all, n-1)
	}
	if len(all) == 0 {
		all = []int{0}
	}
	return all
}

func (m *maker) panels(word string) ([]panel, error) {
	one := func(p panel, err error) ([]panel, error) { return []panel{p}, err }
	switch word {
	case "image", "blurred":
		return m.images(word == "blurred")
	case "line":
		return one(m.line())
	case "spectrum":
		return one(m.spectrum())
	case "visibility":
		return one(m.visibility())
	case "light-curve":
		return one(m.lightCurve())
	case "path":
		return one(m.paths())
	case "cut":
		return one(m.cut())
	}
	return nil, refuse("unknown panel %q", word)
}

// shown is how a layer is drawn.
type shown struct {
	word, title string
	layer       raytrace.Layer
	perUnit     float64
	colours     string
	curve       tone.Curve
	centre      float64
}

var layers = []shown{
	{"intensity", "intensity", raytrace.Intensity, 1, "ember", tone.SquareRoot, 0},
	{"g", "redshift factor g", raytrace.Redshift, 1, "shift", tone.Linear, 1},
	{"r", "radius r (M)", raytrace.Radius, 1, "tarn", tone.Linear, 0},
	{"phi", "azimuth φ (deg)", raytrace.Azimuth, math.Pi / 180, "wheel", tone.Linear, 0},
	{"delay", "delay (M)", raytrace.Delay, 1, "tarn", tone.Linear, 0},
	{"mu", "µ = cos of the emission angle", raytrace.Mu, 1, "tarn", tone.Linear, 0},
	{"temperature", "effective temperature (K)", raytrace.Radius, 1, "ember", tone.Linear, 0},
}

func layerOf(word string) shown {
	return layers[slices.IndexFunc(layers, func(l shown) bool { return l.word == word })]
}

// plate renders the scene at one of its frequencies, with every layer that
// the figure needs.
func (m *maker) plate(frequency int) (*raytrace.Plate, *raytrace.View, error) {
	view := m.view
	if frequency > 0 {
		var err error
		if view, err = m.view.WithFrequency(frequency); err != nil {
			return nil, nil, err
		}
	}
	if p := m.plates[frequency]; p != nil {
		return p, view, nil
	}
	need := []raytrace.Layer{}
	add := func(l raytrace.Layer) {
		if !slices.Contains(need, l) {
			need = append(need, l)
		}
	}
	for _, word := range m.Figure.Layers {
		if l := layerOf(word); l.layer != raytrace.Intensity {
			add(l.layer)
		}
	}
	if slices.ContainsFunc(m.Figure.Orders, func(o string) bool { return o != "total" }) {
		add(raytrace.Intensity)
	}
	if m.Figure.Contours != "" {
		add(layerOf(m.Figure.Contours).layer)
	}
	p, err := m.render(view, need)
	if err != nil {
		return nil, nil, err
	}
	m.plates[frequency] = p
	return p, view, nil
}

func (m *maker) render(view *raytrace.View, need []raytrace.Layer) (*raytrace.Plate, error) {
	o := raytrace.Options{Workers: m.Workers, Layers: need}
	if m.Begin != nil {
		report, end := m.Begin(view.Field.Columns, view.Field.Rows)
		o.Report = report
		defer end()
	}
	return view.Render(m.ctx, o)
}

// unit returns the conversion of intensities and how they are called.
func (m *maker) unit(view *raytrace.View) (func(float64) float64, string, error) {
	r := view.Radiometry()
	u := raytrace.Unit(m.Figure.Unit)
	convert, err := r.In(u)
	if err != nil {
		return nil, "", refusal{err}
	}
	pretty := strings.NewReplacer("m-2", "m⁻²", "Hz-1", "Hz⁻¹", "sr-1", "sr⁻¹", "uas2", "µas²", "/m2", " m⁻²")
	switch u {
	case raytrace.PlateUnit:
		if r.Radiance == scenes.PerHertz || r.Radiance == scenes.Bolometric {
			return convert, "intensity (" + pretty.Replace(r.Plate()) + ")", nil
		}
		return convert, relative, nil
	case raytrace.PlanckKelvin:
		return convert, "Planck temperature (K)", nil
	case raytrace.RayleighJeansKelvin:
		return convert, "R–J temperature (K)", nil
	case raytrace.RadianceUnit:
		return convert, "intensity (W m⁻² Hz⁻¹ sr⁻¹)", nil
	case raytrace.BolometricUnit:
		return convert, "intensity (W m⁻² sr⁻¹)", nil
	}
	return convert, "intensity (" + pretty.Replace(string(u)) + ")", nil
}

// relative is what intensities are called whose scene tells no physical unit.
const relative = "relative intensity"

// images makes a panel for each frequency, layer and order.
func (m *maker) images(blurred bool) ([]panel, error) {
	var all []panel
	for _, frequency := range m.frequencies() {
		plate, view, err := m.plate(frequency)
		if err != nil {
			return nil, err
		}
		for _, word := range m.Figure.Layers {
			for _, order := range m.Figure.Orders {
				l := layerOf(word)
				if blurred && l.layer != raytrace.Intensity {
					return nil, refuse("only intensities can be blurred, not %s", word)
				}
				p, err := m.image(plate, view, l, order, blurred)
				if err != nil {
					return nil, err
				}
				note := l.title
				if l.word == "intensity" {
					note = p.name
					if note == relative {
						note += " (" + view.Radiometry().Plate() + ")"
					}
				}
				if blurred {
					b := m.Scene.Telescope.Beam
					note = fmt.Sprintf("the same through a beam of %.4g × %.4g µas FWHM", b[0], b[1])
				}
				var which []string
				if m.which != "" {
					which = append(which, m.which)
				}
				if order != "total" {
					which = append(which, ordersName(max(0, orderOf(order))))
				}
				if nu := view.Frequencies(); len(m.frequencies()) > 1 && len(nu) > frequency {
					which = append(which, fmt.Sprintf("%.4g GHz", nu[frequency]/1e9))
				}
				if blurred {
					which = append(which, "blurred")
				}
				p.which = strings.Join(which, ", ")
				if order != "total" {
					note += ", image order " + order
				} else if l.layer != raytrace.Intensity {
					note += ", image order 0"
				}
				if nu := view.Frequencies(); len(m.frequencies()) > 1 && len(nu) > frequency {
					note += fmt.Sprintf(", %.4g GHz", nu[frequency]/1e9)
				}
				m.note("%s", note)
				all = append(all, p)
			}
		}
	}
	return all, nil
}

func (m *maker) image(plate *raytrace.Plate, view *raytrace.View, l shown, order string, blurred bool) (*imagePanel, error) {
	p := &imagePanel{scene: m.Scene, field: view.Field, name: l.title}
	values := plate.Total
	n := orderOf(order)
	if n >= 0 {
		values = plate.Layer(raytrace.Intensity, n)
	}
	if l.layer != raytrace.Intensity {
		n = max(n, 0)
		values = plate.Layer(l.layer, n)
	}
	convert := func(x float64) float64 { return x / l.perUnit }
	switch {
	case l.word == "temperature":
		if !slices.ContainsFunc(m.Scene.Emitters, func(e scenes.Emitter) bool { return e.Kind == "disk" && e.Light == "blackbody" }) {
			return nil, refuse("layer temperature needs a disk with light = \"blackbody\"")
		}
		convert = view.TemperatureAt
	case l.layer == raytrace.Intensity:
		var err error
		if convert, p.name, err = m.unit(view); err != nil {
			return nil, err
		}
	}
	if blurred {
		var err error
		if values, err = m.blur(view, values, n); err != nil {
			return nil, err
		}
	}
	p.values = make([]float32, len(values))
	for k, v := range values {
		p.values[k] = float32(convert(float64(v)))
	}
	name := m.Figure.Map
	if name == "" {
		name = l.colours
	}
	p.colours, _ = assets.Lookup(name) // a word of the key's table
	t := tone.Tone{Curve: l.curve, FromZero: l.layer == raytrace.Intensity, Centre: l.centre}
	if blurred { // smooth: nothing that a thousandth of the pixels could spoil
		t.HighPercent = 100
	}
	if m.Figure.Curve != "" {
		t.Curve, _ = tone.ParseCurve(m.Figure.Curve)
	}
	if t.Curve != tone.Linear {
		t.Centre = 0
	}
	if l.word == "phi" {
		p.turn = true
		t.Low, t.High = fullTurn(p.values)
	}
	if limits := m.Figure.Limits; len(limits) == 2 {
		t = tone.Tone{Curve: t.Curve, Low: limits[0], High: limits[1]}
	}
	if err := t.Check(); err != nil {
		return nil, refusal{err}
	}
	p.tone = t.Fixed(p.values)
	return p, m.overlays(p, plate, n)
}

// beamReach is how far beyond the field light is looked for that the beam
// brings into it, FWHM: 1.5 of a Gaussian leave 4e-4 of a straight edge's light.
const beamReach = 1.5

// blur returns intensities as the scene's telescope sees them. Where the field
// does not hold all that shines, a wider one is rendered first.
func (m *maker) blur(view *raytrace.View, values []float32, order int) ([]float32, error) {
	theta, ok := angular(m.Scene, view.Field)
	if !ok {
		return nil, refuse("a beam needs a parallel field and the observer at infinity")
	}
	b := m.Scene.Telescope.Beam
	beam := measure.Beam{Major: b[0] / theta, Minor: b[1] / theta,
		Angle: math.Pi/2 + (b[2]-m.Scene.Observer.PositionAngle)*math.Pi/180}
	field, pad := view.Field, 0
	if !m.Scene.Field.AutoWidth {
		pad = int(math.Ceil(beamReach * beam.Major / field.Pitch()))
		const most = 3 // times the field's width
		if most*max(field.Columns, field.Rows) < 2*pad {
			return nil, refuse("the beam is wider than the field")
		}
		wide := *view
		wide.Field.Columns, wide.Field.Rows = field.Columns+2*pad, field.Rows+2*pad
		wide.Field.Width = field.Pitch() * float64(wide.Field.Columns)
		need := []raytrace.Layer{}
		if order >= 0 {
			need = append(need, raytrace.Intensity)
		}
		plate, err := m.render(&wide, need)
		if err != nil {
			return nil, err
		}
		if field, values = wide.Field, plate.Total; order >= 0 {
			values = plate.Layer(raytrace.Intensity, order)
		}
	}
	img, err := measure.NewImage(field, values)
	if err != nil {
		return nil, err
	}
	if img, err = img.Blurred(m.ctx, beam); err != nil {
		return nil, err
	}
	columns, rows := view.Field.Columns, view.Field.Rows
	values = make([]float32, 0, columns*rows)
	for row := range rows {
		from := (row+pad)*field.Columns + pad
		for _, v := range img.Pixels[from : from+columns] {
			values = append(values, float32(max(v, 0))) // rounding of the transform
		}
	}
	return values, nil
}

// orderOf returns the image order that a word of the scene's means, -1 for the
// total.
func orderOf(word string) int {
	n, err := strconv.Atoi(word)
	if err != nil {
		return -1
	}
	return n
}

// fullTurn returns the turn in which azimuths lie: of 360 deg, from a multiple
// of 180.
func fullTurn(values []float32) (lo, hi float64) {
	least := math.Inf(1)
	for _, v := range values {
		if v == v {
			least = min(least, float64(v))
		}
	}
	if math.IsInf(least, 1) {
		return 0, 360
	}
	lo = 180 * math.Floor(least/180+1e-6)
	return lo, lo + 360
}

// share gives all images of one quantity the same limits.
func (m *maker) share(panels []panel) {
	if !m.Figure.SharedScale {
		return
	}
	type range2 struct{ lo, hi float64 }
	limits := map[string]range2{}
	for _, p := range panels {
		if p, ok := p.(*imagePanel); ok {
			lo, hi := p.tone.Limits(p.values)
			if old, some := limits[p.name]; some {
				lo, hi = min(lo, old.lo), max(hi, old.hi)
			}
			limits[p.name] = range2{lo, hi}
		}
	}
	for _, p := range panels {
		if p, ok := p.(*imagePanel); ok {
			p.tone.Low, p.tone.High = limits[p.name].lo, limits[p.name].hi
		}
	}
}

// overlays puts over an image what the figure asks for; order is -1 for the
// total.
func (m *maker) overlays(p *imagePanel, plate *raytrace.Plate, order int) error {
	say := m.say
	for _, word := range m.Figure.Draw {
		switch word {
		case "critical":
			points, name, err := curves.Critical(m.Scene, p.field)
			if err != nil {
				return refusal{err}
			}
			p.lines = append(p.lines, overLine{points: closed(points), dash: []float64{1.1, 0.35, 0.3, 0.35}})
			say("dash-dotted: " + name)
		case "edges":
			if !curves.HasRims(m.Scene) {
				return refuse("draw edges: the images of rims have a closed form only for a static observer outside an uncharged object")
			}
			for _, r := range curves.Rims(m.Scene) {
				if order >= 0 && r.Order != order {
					continue
				}
				points, err := r.On(p.field, m.Scene)
				if err != nil {
					return err
				}
				k := min(r.Order, 2)
				p.lines = append(p.lines, overLine{points: closed(points), dash: dashes[k], thin: true})
				say([]string{"solid: edges of order 0", "dashed: of order 1", "dotted: of higher orders"}[k])
			}
		case "ring":
			theta, _ := m.Scene.ThetaG()
			b := m.Scene.Measured.RingDiameter.Value / theta / 2
			var points [][2]float64
			const smooth = 180
			for k := range smooth + 1 {
				sin, cos := math.Sincos(2 * math.Pi * float64(k) / smooth)
				points = append(points, [2]float64{b * cos, b * sin})
			}
			p.lines = append(p.lines, overLine{points: points, dash: []float64{0.6, 0.4}})
			say(fmt.Sprintf("short dashes: the measured diameter, %.3g µas", m.Scene.Measured.RingDiameter.Value))
		case "beam":
			theta, ok := angular(m.Scene, p.field)
			if !ok {
				return refuse("draw beam: needs the angular scale and the observer at infinity")
			}
			p.beam = curves.Beam(m.Scene, theta)
			say("grey ellipse: the beam at half power")
		case "scale":
			p.scale = true
		case "north":
			p.north = true
		}
	}
	if m.Figure.Contours == "" {
		return nil
	}
	l := layerOf(m.Figure.Contours)
	values := plate.Layer(l.layer, max(order, 0))
	if l.layer == raytrace.Intensity && order < 0 {
		values = plate.Total
	}
	levels, unit := m.levels(l, values)
	left, _, bottom, _ := edges(p.field)
	across, up := p.field.Pitches()
	var words []string
	for _, level := range levels {
		of, at := values, level*unit
		if l.word == "phi" {
			of, at = about(values, at), 0
		}
		for _, line := range curves.Isolines(of, plate.Columns, plate.Rows, at) {
			points := make([][2]float64, len(line))
			for k, q := range line {
				points[k] = [2]float64{left + (q[0]+0.5)*across, bottom + (q[1]+0.5)*up}
			}
			p.lines = append(p.lines, overLine{points: points, thin: true})
		}
		words = append(words, strconv.FormatFloat(level, 'g', 4, 64))
	}
	say("thin lines: " + strings.TrimSuffix(l.title, ")") + strings.Repeat(")", strings.Count(l.title, "(")) + " = " + strings.Join(words, ", "))
	return nil
}

// about returns azimuths, radians, from one of them on, and nothing beyond a
// quarter turn: where they jump by a turn no line lies.
func about(values []float32, zero float64) []float32 {
	all := make([]float32, len(values))
	for k, v := range values {
		x := math.Remainder(float64(v)-zero, 2*math.Pi)
		if math.Abs(x) > math.Pi/2 {
			x = math.NaN()
		}
		all[k] = float32(x)
	}
	return all
}

func closed(points [][2]float64) [][2]float64 { return append(points, points[0]) }

// levels returns those of contours and what one is in the plate's values.
func (m *maker) levels(l shown, values []float32) (levels []float64, unit float64) {
	unit = l.perUnit
	if l.layer == raytrace.Intensity {
		peak := 0.
		for _, v := range values {
			peak = max(peak, float64(v))
		}
		unit = peak
	}
	if len(m.Figure.Levels) > 0 {
		return m.Figure.Levels, unit
	}
	switch l.word { // taste
	case "intensity":
		return []float64{0.1, 0.3, 0.5, 0.7, 0.9}, unit
	case "g":
		return []float64{0.2, 0.4, 0.6, 0.8, 1, 1.2, 1.4}, unit
	case "r":
		return []float64{3, 4, 6, 10, 20, 50, 100, 200, 500}, unit
	case "phi":
		return []float64{-150, -90, -30, 30, 90, 150, 210, 270, 330}, unit
	case "mu":
		return []float64{0.2, 0.4, 0.6, 0.8}, unit
	}
	return []float64{-20, -10, 0, 10, 20, 50}, unit
}

// Provenance is what a figure's files say about where it comes from.
func (m *Made) Provenance(d *scenes.Document, version string) output.Provenance {
	return output.NewProvenance(d, version, m.Plate)
}
