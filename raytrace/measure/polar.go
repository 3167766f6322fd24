package measure

import (
	"context"
	"math"
	"runtime"
	"slices"
	"sync/atomic"

	"golang.org/x/sync/errgroup"

	"annulet/geodesic"
	"annulet/geodesic/guard"
	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// Options is what the long measurements need.
type Options struct {
	Workers int                 // goroutines; 0 means GOMAXPROCS
	Report  func(done, all int) // called from the workers, one call at a time; nil for none
	Lines   int                 // of sight around, 0 means 720
	Cells   int                 // from rim to rim, 0 means 240
}

// The usual grid. Method: line profiles come out to 1e-4 of their peak.
const defaultLines, defaultCells = 720, 240

func (o Options) filled() Options {
	if o.Workers <= 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	if o.Lines <= 0 {
		o.Lines = defaultLines
	}
	if o.Cells <= 0 {
		o.Cells = defaultCells
	}
	return o
}

func (o Options) coarser() Options {
	o.Lines, o.Cells, o.Report = o.Lines/2, o.Cells/2, nil
	return o
}

// patch is a piece of the image of a disk in one order, between two circles
// and two screen angles.
type patch struct {
	base        int     // cell that it belongs to
	area        float64 // M², sr on an angular field
	intensity   float64 // as received, dimmed by what lies in front; G-power of the emitter
	passes      float64 // share of the light that reaches the observer
	g, r        float64
	delay       float64
	alpha, beta float64 // of its middle, M
	turn, span  float64 // its size in screen angle and in b, M
	along       float64 // change of g from screen angle to screen angle
	across      float64 // and from circle to circle
}

// sampler cuts images of disks into patches along lines of constant screen
// angle, so that every image order is resolved however thin it is.
type sampler struct {
	g        *rim.Geometry
	view     *raytrace.View
	parallel bool
	table    *geodesic.OrbitTable
	delay    bool
	options  Options
	angles   []float64     // edges between lines, radians
	blockers []*rim.Curves // rims of disks that dim what lies behind, by order
}

// samplerTolerance is that of the paths through the patches.
const samplerTolerance = 1e-9

func newSampler(ctx context.Context, v *raytrace.View, delay bool, o Options) (*sampler, error) {
	g, err := newGeometry(v)
	if err != nil {
		return nil, err
	}
	found, _ := disks(v)
	if len(flats(v)) == 0 {
		return nil, cannot("the scene has neither disk nor spot")
	}
	o = o.filled()
	s := &sampler{g: g, view: v, parallel: v.Field.IsParallel(), delay: delay, options: o}
	s.table, err = g.Object.SharedOrbits(ctx, geodesic.Share{
		Observer: g.Observer, Tolerance: samplerTolerance, MaxOrder: v.Plan.MaxOrder, Delay: delay, Workers: o.Workers,
	})
	if err != nil {
		return nil, err
	}
	s.angles = lineAngles(g, o.Lines)
	for _, d := range found {
		if !dims(d) {
			continue
		}
		for n := range v.Plan.MaxOrder {
			c, err := g.NewCurves(ctx, n, []float64{d.Inner, d.Outer})
			if err != nil {
				return nil, err
			}
			s.blockers = append(s.blockers, c)
		}
	}
	return s, nil
}

// dims says whether a disk takes light from what lies behind it.
func dims(d *emit.Disk) bool { return d.Depth != 0 }

// lineAngles are the screen angles between lines: half of them even around,
// half even in the azimuth of a flat disk so tilted, where edge-on images
// change fast.
func lineAngles(g *rim.Geometry, lines int) []float64 {
	half := lines / 2
	const most = 1e3 // ratio of the axes of the disk's ellipse that is followed
	squeeze := max(math.Abs(g.CosI), 1/most)
	angles := make([]float64, 0, 2*half+1)
	for k := range half {
		turn := 2*math.Pi*(float64(k)+0.5)/float64(half) - math.Pi
		angles = append(angles, turn)
		// offset, so that no two coincide
		turn = 2*math.Pi*(float64(k)+0.17)/float64(half) - math.Pi
		sin, cos := math.Sincos(turn)
		angles = append(angles, math.Atan2(squeeze*sin, cos))
	}
	slices.Sort(angles)
	return append(angles, angles[0]+2*math.Pi)
}

// tracer returns a tracer of the sampler's own.
func (s *sampler) tracer() (geodesic.Tracer, error) {
	plan := geodesic.Plan{Tolerance: samplerTolerance, MaxOrder: s.view.Plan.MaxOrder, Plane: true, Reach: s.view.Plan.Reach}
	if s.table == nil {
		return s.g.Object.Tracer(s.g.Observer, plan)
	}
	return s.g.Object.SharedTracer(s.g.Observer, plan, s.table)
}

// area of the screen between two impact parameters and two screen angles.
func (s *sampler) area(b1, b2, turn float64) float64 {
	if s.parallel {
		return turn * (b2 - b1) * (b2 + b1) / 2
	}
	x1, x2 := b1/s.g.Widest, b2/s.g.Widest
	c1, c2 := math.Sqrt(max(0, 1-x1*x1)), math.Sqrt(max(0, 1-x2*x2))
	return turn * (x2 - x1) * (x2 + x1) / (c1 + c2)
}

// circles between which the patches of a disk lie.
func (s *sampler) circles(ctx context.Context, disk, order int) (*rim.Curves, error) {
	inner, outer, _ := rims(s.view.Emitters[disk])
	inner = max(inner, s.g.Object.Edge())
	r := make([]float64, s.options.Cells+1)
	for k := range r {
		r[k] = inner * math.Pow(outer/inner, float64(k)/float64(s.options.Cells))
	}
	r[len(r)-1] = outer
	return s.g.NewCurves(ctx, order, r)
}

// image returns the patches of one disk (a place among the view's emitters)
// in one order, line by line.
func (s *sampler) image(ctx context.Context, disk, order int) ([][]patch, error) {
	c, err := s.circles(ctx, disk, order)
	if err != nil {
		return nil, err
	}
	lines := make([][]patch, len(s.angles)-1)
	err = s.around(ctx, c, func(w *lineWorker, k int) (err error) {
		lines[k], err = w.line(s.angles[k], s.angles[k+1], disk, order)
		return err
	})
	if err != nil {
		return nil, err
	}
	s.slopes(lines)
	return lines, nil
}

// around does work for every line, shared among goroutines.
func (s *sampler) around(ctx context.Context, c *rim.Curves, work func(w *lineWorker, k int) error) error {
	var next atomic.Int64
	group, ctx := errgroup.WithContext(ctx)
	for range s.options.Workers {
		group.Go(guard.Work(func() error {
			w, err := s.worker(c)
			if err != nil {
				return err
			}
			for {
				k := int(next.Add(1)) - 1
				if k >= len(s.angles)-1 {
					return nil
				}
				if err := ctx.Err(); err != nil {
					return err
				}
				if err := work(w, k); err != nil {
					return err
				}
			}
		}))
	}
	return group.Wait()
}

// lineWorker is the scratch of one goroutine.
type lineWorker struct {
	s      *sampler
	c      *rim.Curves
	tracer geodesic.Tracer
	b      []float64
	cuts   []float64
	edges  []float64
	dirs   []geodesic.Direction
	rays   geodesic.Rays
	at     geodesic.Crossings
	lights []emit.Light
}

func (s *sampler) worker(c *rim.Curves) (*lineWorker, error) {
	t, err := s.tracer()
	return &lineWorker{s: s, c: c, tracer: t, b: make([]float64, len(c.R)), lights: make([]emit.Light, len(s.view.Emitters))}, err
}

// line returns the patches between two screen angles.
func (w *lineWorker) line(from, to float64, disk, order int) ([]patch, error) {
	patches, err := w.trace(from, to, order)
	if err != nil {
		return nil, err
	}
	w.shade(w.s.view, patches, disk, order)
	return patches, nil
}

// trace follows the paths through the patches between two screen angles.
func (w *lineWorker) trace(from, to float64, order int) ([]patch, error) {
	s := w.s
	middle := (from + to) / 2
	sin, cos := math.Sincos(middle)
	w.c.At(s.g.Swept(middle, order), w.b)
	w.cut(middle, order)
	patches := make([]patch, 0, len(w.b)+len(w.cuts))
	w.dirs = w.dirs[:0]
	for k := 1; k < len(w.b); k++ {
		w.edges = append(w.edges[:0], w.b[k-1])
		for _, x := range w.cuts {
			if x > w.b[k-1] && x < w.b[k] {
				w.edges = append(w.edges, x)
			}
		}
		w.edges = append(w.edges, w.b[k])
		for i := 1; i < len(w.edges); i++ {
			b := (w.edges[i-1] + w.edges[i]) / 2
			patches = append(patches, patch{
				base: k - 1, area: s.area(w.edges[i-1], w.edges[i], to-from), alpha: b * cos, beta: b * sin,
				turn: to - from, span: w.edges[i] - w.edges[i-1],
			})
			w.dirs = append(w.dirs, geodesic.Direction{Alpha: b * cos, Beta: b * sin})
		}
	}
	if err := s.g.Object.Aim(s.g.Observer, true, w.dirs, &w.rays); err != nil {
		return nil, err
	}
	w.tracer.Cross(&w.rays, geodesic.Want{Delay: s.delay}, &w.at)
	return patches, nil
}

// shade fills in the light of traced patches; v is the sampler's view or one
// at another frequency.
func (w *lineWorker) shade(v *raytrace.View, patches []patch, disk, order int) {
	for e, emitter := range v.Emitters {
		if _, _, flat := rims(emitter); flat { // others neither shine here nor dim
			emitter.Shade(&w.rays, &w.at, nil, &w.lights[e])
		}
	}
	for k := range patches {
		patches[k].intensity, patches[k].passes = 0, 0
		w.look(k, &patches[k], disk, order)
	}
}

// cut gathers where light from behind is dimmed or stopped along a line.
func (w *lineWorker) cut(angle float64, order int) {
	w.cuts = w.cuts[:0]
	if w.s.g.Object.Edge() > w.s.g.Object.PhotonSphere() {
		w.cuts = append(w.cuts, w.s.g.Barrier)
	}
	var rims [2]float64
	for _, c := range w.s.blockers {
		if c.Order < order {
			c.At(w.s.g.Swept(angle, c.Order), rims[:])
			w.cuts = append(w.cuts, rims[0], rims[1])
		}
	}
	slices.Sort(w.cuts)
}

// look reads the light of ray k.
func (w *lineWorker) look(k int, p *patch, disk, order int) {
	p.g, p.r, p.delay = math.NaN(), math.NaN(), math.NaN()
	passes := 1.0
	for j := w.at.Start[k]; j < w.at.Start[k+1]; j++ {
		if l := &w.lights[disk]; int(w.at.Order[j]) == order && w.at.Surface[j] == geodesic.Plane && l.Lit[j] {
			p.intensity, p.g, p.r = l.Intensity[j]*passes, l.G[j], w.at.R[j]
			p.passes = passes
			if w.s.delay {
				p.delay = w.at.Delay[j]
			}
			return
		}
		for e := range w.lights {
			if l := &w.lights[e]; int(j) < len(l.Lit) && l.Lit[j] {
				passes *= l.Passes[j]
			}
		}
	}
}

// slopes fills in how g changes across patches.
func (s *sampler) slopes(lines [][]patch) {
	cells := s.options.Cells
	table := make([]float64, len(lines)*cells)
	for k := range table {
		table[k] = math.NaN()
	}
	for k, line := range lines {
		for _, p := range line {
			if !math.IsNaN(p.g) {
				table[k*cells+p.base] = p.g
			}
		}
	}
	at := func(line, cell int) float64 {
		return table[(line+len(lines))%len(lines)*cells+cell]
	}
	slope := func(before, middle, after, left, width, right float64) float64 {
		// left and right are distances of the neighbours' middles
		switch {
		case !math.IsNaN(before) && !math.IsNaN(after):
			return math.Abs(after-before) / (left + right) * width
		case !math.IsNaN(before):
			return math.Abs(middle-before) / left * width
		case !math.IsNaN(after):
			return math.Abs(after-middle) / right * width
		}
		return 0
	}
	width := func(k int) float64 {
		k = (k + len(lines)) % len(lines)
		return s.angles[k+1] - s.angles[k]
	}
	for k, line := range lines {
		for i := range line {
			p := &line[i]
			if math.IsNaN(p.g) {
				continue
			}
			w := width(k)
			p.along = slope(at(k-1, p.base), p.g, at(k+1, p.base), (width(k-1)+w)/2, w, (w+width(k+1))/2)
			before, after := math.NaN(), math.NaN()
			if p.base > 0 {
				before = at(k, p.base-1)
			}
			if p.base+1 < cells {
				after = at(k, p.base+1)
			}
			p.across = slope(before, p.g, after, 1, 1, 1)
		}
	}
}
