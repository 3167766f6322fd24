package verbs

import (
	"fmt"
	"image"
	"math"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"time"

	"github.com/spf13/cobra"

	"annulet/app/output"
	"annulet/app/tone"
	"annulet/assets"
	"annulet/raytrace"
	"annulet/scenes"
)

// temperatureLayer is made of radii.
const temperatureLayer = "temperature"

// layerKind is one of the layers that a picture can show.
type layerKind struct {
	word    string
	layer   raytrace.Layer
	unit    string     // "" for that of the plate
	perUnit float64    // of the plate's value in that unit
	colours string     // map by default
	curve   tone.Curve // by default
	centre  float64    // of the tone on a linear curve; 0 for none
}

var layerKinds = []layerKind{
	{"intensity", raytrace.Intensity, "", 1, "ember", tone.SquareRoot, 0},
	{"g", raytrace.Redshift, "1", 1, "shift", tone.Linear, 1},
	{"r", raytrace.Radius, "M", 1, "ember", tone.Linear, 0},
	{"phi", raytrace.Azimuth, "deg", math.Pi / 180, "wheel", tone.Linear, 0},
	{"delay", raytrace.Delay, "M", 1, "ember", tone.Linear, 0},
	{"mu", raytrace.Mu, "1", 1, "ember", tone.Linear, 0},
	{temperatureLayer, raytrace.Radius, "K", 1, "ember", tone.Linear, 0}, // that of the gas at r
}

func layerWords() string {
	var words []string
	for _, k := range layerKinds {
		words = append(words, k.word)
	}
	return strings.Join(words, ", ")
}

// total is the order that means the sum over orders.
const total = -1

// parseOrder reads an image order, or the word total.
func parseOrder(text string) (int, error) {
	if text == "total" {
		return total, nil
	}
	n, err := strconv.Atoi(text)
	if err != nil || n < 0 {
		return 0, fmt.Errorf("%q is no image order; allowed: 0, 1, 2, … or total", text)
	}
	return n, nil
}

// picture says how a plate becomes a picture.
type picture struct {
	kind    layerKind
	order   int // or total
	tone    tone.Tone
	colours *assets.Map
	deep    bool                  // 16 bits a component
	convert func(float64) float64 // to what is shown; nil for as it is
}

// rendering is what the flags of render say.
type rendering struct {
	set, out                    []string
	depth, workers              int
	curve, limits, layer, order string
	unit                        string
	colours                     string
	keep                        string
	audit                       bool
	json                        bool
}

func newRender(s streams) *cobra.Command {
	var o rendering
	cmd := &cobra.Command{
		Use:   "render SCENE -o FILE [-o FILE ...]",
		Short: "trace a scene and write its image",
		Long: "Traces every pixel of the scene's field and writes it. The extension chooses the\n" +
			"format: PNG and TIFF are pictures of one layer, FITS and NPZ hold the numbers of\n" +
			"all of them. Every file carries the scene (see scene recover) and appears whole\n" +
			"or not at all. Layers other than intensity belong to one image order: g, r (M),\n" +
			"phi (deg), delay (M), mu, temperature (K: the effective one of a\n" +
			"blackbody disk); --limits are in these units. --unit converts the intensity of a\n" +
			"picture, if the scene says how bright it is. Images too large for the memory go to\n" +
			"PNG and FITS in strips. Pictures show the first field.frequency; of several, FITS\n" +
			"and NPZ hold the total at each.\n\n" +
			"A name with %04d in it writes a file for every time of the scene (time.start to\n" +
			"time.end), numbered from 0, each with the scene of its own time; the colours have\n" +
			"the same limits in all. A movie is then made with\n" +
			"  ffmpeg -framerate 25 -i frame-%04d.png -c:v libx264 -pix_fmt yuv420p movie.mp4\n" +
			"which wants even numbers of pixels.",
		Example: "  " + programName() + " render @first-light -o first-light.png\n" +
			"  " + programName() + " render scene.toml --set observer.inclination=75deg --layer g --order 0 -o g.png\n" +
			"  " + programName() + " render scene.toml --keep intensity,g -o scene.fits -o scene.npz\n" +
			"  " + programName() + " render @late-twin -o frame-%04d.png",
		Args: takes(1, "one SCENE"),
		RunE: func(cmd *cobra.Command, args []string) error { return render(cmd, s, o, args[0]) },
	}
	f := cmd.Flags()
	f.StringArrayVarP(&o.out, "output", "o", nil, "`FILE` to write: "+formatWords+"; repeatable")
	addSet(f, &o.set)
	f.StringVar(&o.layer, "layer", "intensity", "what to show: "+layerWords())
	f.StringVar(&o.unit, "unit", "", "`UNIT` of an intensity shown: "+raytrace.UnitWords())
	f.StringVar(&o.order, "order", "", "image `ORDER` 0, 1, …; intensity also total (its default; else 0)")
	f.StringVar(&o.curve, "curve", "", "value to colour: "+strings.Join(tone.CurveWords(), ", ")+" (default by layer)")
	f.StringVar(&o.limits, "limits", "", "ends of the colour map, `LOW:HIGH` or P1%:P2% (default 0%:99.9%, an intensity from 0)")
	f.StringVar(&o.colours, "map", "", "colour map: "+strings.Join(assets.Names(), ", ")+" (default by layer)")
	f.StringVar(&o.keep, "keep", "", "`LAYER,…` that FITS and NPZ hold beside the total (default all)")
	f.IntVar(&o.depth, "depth", 8, "bits a component, 8 or 16")
	f.BoolVar(&o.audit, "audit", false, "audit the paths first, and say in the files what it found")
	f.IntVar(&o.workers, "workers", 0, "tiles traced at a time; 0 means one a processor")
	f.BoolVar(&o.json, "json", false, "print a summary as one JSON document on stdout")
	return cmd
}

// choose turns the words of the flags into a picture.
func (o rendering) choose() (p picture, err error) {
	at := slices.IndexFunc(layerKinds, func(k layerKind) bool { return k.word == o.layer })
	if at < 0 {
		return p, refuse("--layer %q: allowed: %s", o.layer, layerWords())
	}
	p.kind = layerKinds[at]
	intensity := p.kind.layer == raytrace.Intensity
	switch {
	case o.order != "":
		if p.order, err = parseOrder(o.order); err != nil {
			return p, refuse("--order: %w", err)
		}
		if p.order == total && !intensity {
			return p, refuse("--order total: a layer of %s belongs to one order; allowed: 0, 1, 2, …", p.kind.word)
		}
	case intensity:
		p.order = total
	}
	p.tone.Curve = p.kind.curve
	if o.curve != "" {
		if p.tone.Curve, err = tone.ParseCurve(o.curve); err != nil {
			return p, refuse("--curve: %w", err)
		}
	}
	p.tone.FromZero = p.kind.layer == raytrace.Intensity && o.limits == ""
	if p.tone.Curve == tone.Linear && o.limits == "" {
		p.tone.Centre = p.kind.centre
	}
	limits := o.limits
	if limits == "" && p.kind.layer == raytrace.Azimuth {
		limits = "-180:180" // once round the wheel
	}
	if limits != "" {
		if err := p.tone.SetLimits(limits); err != nil {
			return p, refuse("--limits: %w", err)
		}
	}
	name := o.colours
	if name == "" {
		name = p.kind.colours
	}
	known := false
	if p.colours, known = assets.Lookup(name); !known {
		return p, refuse("--map %q: allowed: %s", name, strings.Join(assets.Names(), ", "))
	}
	if o.depth != 8 && o.depth != 16 {
		return p, refuse("--depth %d: allowed: 8, 16", o.depth)
	}
	p.deep = o.depth == 16
	return p, checkWorkers(o.workers)
}

// depth is bits a component.
func (p picture) depth() int {
	if p.deep {
		return 16
	}
	return 8
}

// layers are those of the plate that the picture needs beside the total.
func (p picture) layers() []raytrace.Layer {
	if p.order == total {
		return []raytrace.Layer{}
	}
	return []raytrace.Layer{p.kind.layer}
}

// values picks the layer, in the unit of the picture.
func (p picture) values(plate *raytrace.Plate) []float32 {
	if p.order == total {
		return p.converted(plate.Total)
	}
	return p.converted(plate.Layer(p.kind.layer, p.order))
}

// converted returns values of the plate as they are shown.
func (p picture) converted(values []float32) []float32 {
	if p.kind.perUnit == 1 && p.convert == nil {
		return values
	}
	values = slices.Clone(values)
	for k, v := range values {
		x := float64(v) / p.kind.perUnit
		if p.convert != nil {
			x = p.convert(x)
		}
		values[k] = float32(x)
	}
	return values
}

// calibrate settles the unit of what is shown.
func (p *picture) calibrate(view *raytrace.View, scene scenes.Scene, unit string) error {
	if p.kind.word == temperatureLayer {
		if !slices.ContainsFunc(scene.Emitters, func(e scenes.Emitter) bool { return e.Kind == "disk" && e.Light == "blackbody" }) {
			return refuse("--layer temperature needs a disk with light = \"blackbody\"")
		}
		p.convert = view.TemperatureAt
	}
	if p.kind.layer != raytrace.Intensity {
		if unit != "" {
			return refuse("--unit %s: only for --layer intensity", unit)
		}
		return nil
	}
	r := view.Radiometry()
	p.kind.unit = r.Plate()
	if unit == "" {
		return nil
	}
	convert, err := r.In(raytrace.Unit(unit))
	if err != nil {
		return refuse("--unit: %w", err)
	}
	if u := raytrace.Unit(unit); u != raytrace.PlateUnit {
		p.kind.unit = unit
	}
	p.convert = convert
	return nil
}

// paint makes the picture of a layer.
func (p picture) paint(values []float32, columns, rows int) (image.Image, error) {
	rect := image.Rect(0, 0, columns, rows)
	if p.deep {
		img := image.NewRGBA64(rect)
		return img, p.tone.Apply16(img, values, columns, rows, p.colours)
	}
	img := image.NewRGBA(rect)
	return img, p.tone.Apply(img, values, columns, rows, p.colours)
}

// checkOutputs refuses files that this version cannot write, before any work
// is done.
func checkOutputs(paths []string, scenePath string) error {
	if len(paths) == 0 {
		return refuse("render needs an output: -o FILE.png, say; allowed: %s", formatWords)
	}
	return checkFiles(paths, scenePath, func(path string) error {
		switch {
		case path == "":
			return refuse("-o: the name of the file is empty")
		case formatOf(path) == "":
			return refuse("-o %s: extension %q is not in this version; allowed: %s", path, filepath.Ext(path), formatWords)
		}
		return nil
	})
}

// renderReport is the JSON of a render.
type renderReport struct {
	Units      map[string]string `json:"units"`
	Files      []string          `json:"files"`
	Pixels     [2]int            `json:"pixels"` // columns, rows
	Paths      int               `json:"paths"`
	WorstBound number            `json:"worst_bound"`
	Layer      string            `json:"layer"`
	Order      *int              `json:"order"` // null for the total
	Curve      string            `json:"curve"`
	Map        string            `json:"map"`
	Limits     [2]number         `json:"limits"`
	// of the field, by image order; absent where the image has no areas
	Flux           []number `json:"flux"`
	FluxBound      []number `json:"flux_bound"`
	TotalFlux      number   `json:"total_flux"`
	TotalFluxBound number   `json:"total_flux_bound"`
	Jansky         *number  `json:"total_flux_Jy"` // null without a scale
	NotIncluded    []string `json:"not_included"`
}

func render(cmd *cobra.Command, s streams, o rendering, scenePath string) error {
	p, err := o.choose()
	if err != nil {
		return err
	}
	document, err := s.loadScene(scenePath, o.set)
	if err != nil {
		return err
	}
	scene := document.Scene()
	if p.order > scene.Trace.MaxOrder {
		return refuse("--order %d: the scene follows orders up to %d (trace.max_order)", p.order, scene.Trace.MaxOrder)
	}
	movie, err := isMovie(o.out)
	if err != nil {
		return err
	}
	if frames := scene.Time.Frames(); movie && len(frames) == 1 {
		return refuse("-o %s asks for a movie, and the scene has one time only; needed: time.end", o.out[0])
	}
	written := o.out
	if movie {
		written = framePaths(o.out, 0)
	}
	if err := checkOutputs(written, scenePath); err != nil {
		return err
	}
	data, err := output.ParseLayers(o.keep)
	if err != nil {
		return refuse("--keep: %w", err)
	}
	for _, n := range scene.Notes() {
		s.note("%s", n)
	}
	view, err := raytrace.NewViewIn(scene, document.Dir())
	if err != nil {
		return usage{err}
	}
	if err := p.calibrate(view, scene, o.unit); err != nil {
		return err
	}
	audited := ""
	if o.audit {
		note, err := audit(cmd.Context(), document, auditSamples, auditSeed)
		if err != nil {
			return err
		}
		audited = note.summary()
		s.note("audit: %s", audited)
	}
	begun := time.Now()
	job := renderJob{s: s, view: view, picture: p, document: document, options: raytrace.Options{Workers: o.workers}, data: data, hold: holdBytes, audit: audited}
	var plate *raytrace.Plate
	if movie {
		plate, written, err = job.writeMovie(cmd.Context(), o.out)
	} else {
		plate, err = job.write(cmd.Context(), o.out)
	}
	if err != nil {
		return err
	}
	p.tone = job.picture.tone
	low, high := p.tone.Low, p.tone.High

	s.note("%d x %d pixels, %d paths, worst bound on r %.1e relative, %.2f s",
		plate.Columns, plate.Rows, plate.Paths, plate.WorstBound, time.Since(begun).Seconds())
	if flux, bound := plate.WholeFlux(); flux > 0 {
		s.note("flux of the field %.7g, bound %.1e, in %s", flux, bound, fluxUnit(view))
	}
	s.note("%s", output.NotIncludedLine(output.NotIncludedIn(scene)))
	if !o.json {
		_, err := fmt.Fprintln(s.out, strings.Join(written, "\n"))
		return err
	}
	report := renderReport{
		Units:  map[string]string{"pixels": "count", "paths": "count", "worst_bound": "relative, on r", "limits": p.kind.unit},
		Files:  written,
		Pixels: [2]int{plate.Columns, plate.Rows}, Paths: plate.Paths, WorstBound: number(plate.WorstBound),
		Layer: p.kind.word, Curve: p.tone.Curve.String(), Map: p.colours.Name(),
		Limits:      [2]number{number(low), number(high)},
		NotIncluded: output.NotIncludedIn(scene),
	}
	flux, bound := plate.WholeFlux()
	report.TotalFlux, report.TotalFluxBound = number(flux), number(bound)
	for n := range plate.Flux {
		report.Flux = append(report.Flux, number(plate.Flux[n]))
		report.FluxBound = append(report.FluxBound, number(plate.FluxBound[n]))
	}
	if jansky, ok := view.Jansky(flux); ok {
		x := number(jansky)
		report.Jansky = &x
		report.Units["total_flux_Jy"] = "Jy"
	}
	unit := fluxUnit(view)
	for _, key := range []string{"flux", "flux_bound", "total_flux", "total_flux_bound"} {
		report.Units[key] = unit
	}
	if p.order != total {
		report.Order = &p.order
	}
	return writeJSON(s.out, report)
}
