package verbs

import (
	"context"
	"errors"
	"fmt"
	"io"
	"math"
	"slices"
	"strconv"
	"strings"
	"sync"
	"time"

	"github.com/spf13/cobra"

	"annulet/app/files"
	"annulet/app/output"
	"annulet/app/sweep"
	"annulet/raytrace"
	"annulet/raytrace/measure"
	"annulet/scenes"
)

// sweepProduct is one thing that a sweep makes of every case.
type sweepProduct struct {
	name   string
	layers []raytrace.Layer // that it reads, beside the total
	make   func(ctx context.Context, job *sweep.Job, view *raytrace.View, plate *raytrace.Plate) error
}

// sweepProducts are all of them; a further one is one line here.
var sweepProducts = []sweepProduct{
	{"image", []raytrace.Layer{raytrace.Intensity}, writeCaseImage},
	{"layers", otherLayers, writeCaseLayers},
	{"picture", []raytrace.Layer{}, writeCasePicture},
	{"rings", []raytrace.Layer{}, writeCaseRings},
	{"line", []raytrace.Layer{}, writeCaseLine},
	{"spectrum", []raytrace.Layer{}, writeCaseSpectrum},
	{"visibility", []raytrace.Layer{}, writeCaseVisibility},
}

var defaultProducts = []string{"image", "rings"}

func productNames() (names []string) {
	for _, p := range sweepProducts {
		names = append(names, p.name)
	}
	return names
}

func checkProducts(products []string) error {
	for k, p := range products {
		if !slices.Contains(productNames(), p) {
			return refuse("product %q: allowed: %s", p, strings.Join(productNames(), ", "))
		}
		if slices.Contains(products[:k], p) {
			return refuse("product %q is asked for twice", p)
		}
	}
	return nil
}

// kitchen makes cases. Cases with the same object, observer's radius and
// tolerance share their orbits.
type kitchen struct {
	products []sweepProduct
	layers   []raytrace.Layer
	workers  int // of one case
	s        streams

	mu     sync.Mutex
	orbits map[string]*raytrace.Orbits
	recent []string // keys of orbits, oldest first
}

// keptOrbits is for how many observers orbits are kept, some MiB each. Taste.
const keptOrbits = 8

func newKitchen(products []string, workers int, s streams) *kitchen {
	k := &kitchen{workers: workers, s: s, orbits: map[string]*raytrace.Orbits{}, layers: layersOf(products)}
	for _, p := range sweepProducts {
		if slices.Contains(products, p.name) {
			k.products = append(k.products, p)
		}
	}
	return k
}

// layersOf lists the layers that products read; not nil, which would be all.
func layersOf(products []string) []raytrace.Layer {
	layers := []raytrace.Layer{}
	for _, p := range sweepProducts {
		if slices.Contains(products, p.name) {
			layers = append(layers, p.layers...)
		}
	}
	return layers
}

// make is a sweep.Produce.
func (k *kitchen) make(ctx context.Context, job *sweep.Job) error {
	if err := k.s.confine(job.Document); err != nil {
		return err
	}
	scene := job.Document.Scene()
	view, err := raytrace.NewViewIn(scene, job.Document.Dir())
	if err != nil {
		return err
	}
	view.Orbits = k.orbitsOf(scene)
	plate, err := view.Render(ctx, raytrace.Options{Workers: k.workers, Layers: k.layers})
	if err != nil {
		return err
	}
	bound := plate.WorstBound
	job.Column("worst_bound_r", "relative", &bound)
	for _, p := range k.products {
		if err := p.make(ctx, job, view, plate); err != nil {
			return fmt.Errorf("%s: %w", p.name, err)
		}
	}
	return nil
}

// orbitsOf finds the orbits that a scene shares with others.
func (k *kitchen) orbitsOf(s scenes.Scene) *raytrace.Orbits {
	o := s.Object
	key := fmt.Sprint(o.Kind, o.Charge, o.Radius, o.Interior, s.Observer.Radius, s.Observer.Motion,
		s.Field.Projection, s.Trace.Tolerance, s.Trace.MaxOrder)
	k.mu.Lock()
	defer k.mu.Unlock()
	if found := k.orbits[key]; found != nil {
		return found
	}
	if len(k.recent) == keptOrbits {
		delete(k.orbits, k.recent[0])
		k.recent = k.recent[1:]
	}
	k.recent = append(k.recent, key)
	k.orbits[key] = new(raytrace.Orbits)
	return k.orbits[key]
}

// writeCaseImage writes the intensities: total, and per order.
func writeCaseImage(ctx context.Context, job *sweep.Job, view *raytrace.View, plate *raytrace.Plate) error {
	return writeCaseNPZ(ctx, job, view, plate, "image", []raytrace.Layer{raytrace.Intensity})
}

// writeCaseLayers writes everything else that the plate holds.
func writeCaseLayers(ctx context.Context, job *sweep.Job, view *raytrace.View, plate *raytrace.Plate) error {
	return writeCaseNPZ(ctx, job, view, plate, "layers", otherLayers)
}

var otherLayers = []raytrace.Layer{raytrace.Redshift, raytrace.Radius, raytrace.Azimuth, raytrace.Delay, raytrace.Mu}

func writeCaseNPZ(ctx context.Context, job *sweep.Job, view *raytrace.View, plate *raytrace.Plate, product string, layers []raytrace.Layer) error {
	return job.Write(ctx, product, ".npz", func(w io.Writer) error {
		return output.WriteNPZ(w, plate, view, nil, layers, output.NewProvenance(job.Document, Version, plate))
	})
}

// writeCasePicture writes what render writes by default.
func writeCasePicture(ctx context.Context, job *sweep.Job, _ *raytrace.View, plate *raytrace.Plate) error {
	p, err := rendering{layer: "intensity", depth: 8}.choose()
	if err != nil {
		return err
	}
	img, err := p.paint(p.values(plate), plate.Columns, plate.Rows)
	if err != nil {
		return err
	}
	return job.Write(ctx, "picture", ".png", func(w io.Writer) error {
		return files.EncodePNG(w, img, output.NewProvenance(job.Document, Version, plate).PNGTexts())
	})
}

// writeCaseRings adds the rings of every disk and order to the sweep's table.
// Cases that cannot be measured have none.
func writeCaseRings(ctx context.Context, job *sweep.Job, view *raytrace.View, _ *raytrace.Plate) error {
	t, err := measure.NewRings(ctx, view, nil, measure.Options{Workers: 1, Lines: caseLines, Cells: caseCells})
	if errors.Is(err, measure.ErrCannot) {
		return nil
	}
	if err != nil {
		return err
	}
	area := areaUnit(view)
	add := func(name, unit string, value float64) {
		if !math.IsNaN(value) {
			job.Column(name, unit, &value)
		}
	}
	add("critical_b", "M", t.Critical)
	for _, r := range t.Rings {
		of := fmt.Sprintf("_%d", r.Order)
		if r.Emitter > 0 {
			of = fmt.Sprintf("_%d_emitter_%d", r.Order, r.Emitter+1)
		}
		add("flux"+of, area, r.Flux)
		add("flux_bound"+of, area, r.FluxBound)
		add("width"+of, "M", r.Width)
		add("mean_delay"+of, "M", r.MeanDelay)
		add("mean_delay_bound"+of, "M", r.DelayBound)
		for _, rim := range []struct {
			name string
			o    measure.Outline
		}{{"inner", r.Inner}, {"outer", r.Outer}} {
			add(rim.name+"_diameter_horizontal"+of, "M", rim.o.Horizontal)
			add(rim.name+"_diameter_vertical"+of, "M", rim.o.Vertical)
		}
	}
	return nil
}

// measuringCase makes the product of a case as the verb of that name does.
func measuringCase(ctx context.Context, job *sweep.Job, product string) (*cobra.Command, streams, measuring) {
	cmd := new(cobra.Command)
	cmd.SetContext(ctx)
	return cmd, streams{err: io.Discard}, measuring{workers: 1, job: job, product: product}
}

func writeCaseLine(ctx context.Context, job *sweep.Job, _ *raytrace.View, _ *raytrace.Plate) error {
	cmd, s, m := measuringCase(ctx, job, "line")
	return line(cmd, s, m, lineOptions{bin: defaultBin}, "")
}

// writeCaseSpectrum spans the scene's frequencies.
func writeCaseSpectrum(ctx context.Context, job *sweep.Job, _ *raytrace.View, _ *raytrace.Plate) error {
	f := job.Document.Scene().Field.Frequency
	if len(f) < 2 {
		return refuse("a sweep's spectra go from the lowest to the highest of field.frequency: allowed: two or more, as in [\"0.1 keV\", \"20 keV\"]")
	}
	hertz := func(nu float64) string { return strconv.FormatFloat(nu, 'g', -1, 64) + " Hz" }
	cmd, s, m := measuringCase(ctx, job, "spectrum")
	return spectrum(cmd, s, m, hertz(slices.Min(f)), hertz(slices.Max(f)), defaultPoints, "")
}

func writeCaseVisibility(ctx context.Context, job *sweep.Job, _ *raytrace.View, _ *raytrace.Plate) error {
	cmd, s, m := measuringCase(ctx, job, "visibility")
	return visibility(cmd, s, looking{measuring: m, steps: defaultSteps, orders: true}, "")
}

// The grid of a case's rings. Method: its fluxes are right to about 1e-4.
const caseLines, caseCells = 240, 120

// sweepProgress prints how far a sweep is, every few seconds.
type sweepProgress struct {
	w     io.Writer
	begun time.Time
	next  time.Time
}

func newSweepProgress(w io.Writer) *sweepProgress {
	now := time.Now()
	return &sweepProgress{w: w, begun: now, next: now.Add(lineEvery)}
}

func (p *sweepProgress) report(t sweep.Tally) {
	now := time.Now()
	if now.Before(p.next) {
		return
	}
	p.next = now.Add(lineEvery)
	left := ""
	if t.Made > 0 {
		each := now.Sub(p.begun) / time.Duration(t.Made)
		left = fmt.Sprintf(", about %v left", (time.Duration(t.Waiting) * each).Round(time.Second))
	}
	fmt.Fprintf(p.w, "sweep: %d of %d cases done, %d failed%s\n", t.Done, t.Cases, t.Failed, left)
}
