package measure

import (
	"context"
	"math"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// Outline is the image of one rim as a closed curve around the centre; M.
type Outline struct {
	Horizontal float64 // 2 max|α|, not the width at screen angle 0
	Vertical   float64 // from β at -90 to β at 90 deg
	MeanRadius float64 // mean of b over the screen angle
	Offset     float64 // of the middle of the vertical diameter, upwards
	// As read off the image, with bounds; NaN where the image does not tell.
	MeasuredHorizontal, MeasuredHorizontalBound float64
	MeasuredVertical, MeasuredVerticalBound     float64
}

// Ring is the image of one disk in one image order. Areas and fluxes are
// integrals over what of it is seen; an absorbing disk in front dims it.
type Ring struct {
	Emitter, Order int
	Inner, Outer   Outline
	Width          float64 // at screen angle 0, M

	Area         float64 // M²; sr on an angular field, as are the next
	IntG3, IntG4 float64 // ∫ g³ and ∫ g⁴ over the area
	Flux         float64 // ∫ I over the area
	Outside      float64 // the part of Flux that the field misses
	// Bounds on these, from sampling a quarter as finely.
	AreaBound, IntG3Bound, IntG4Bound, FluxBound, OutsideBound float64

	Fraction  float64 // of the flux of all disks and orders
	MeanDelay float64 // flux-weighted t_obs - t_em - r*(r_obs), M; NaN if dark
	// DelayBound bounds MeanDelay, M.
	DelayBound float64

	// WidthRatio and FluxRatio are those to the order before; NaN for 0.
	WidthRatio, FluxRatio float64
}

// Rings is the table of critical curve and image orders.
type Rings struct {
	// Critical is the impact parameter of the critical curve, M, rooted on
	// traced paths (between those that escape and the others) and in closed
	// form; NaN if the object covers its photon sphere.
	Critical, CriticalClosed float64
	// Lyapunov is the closed form of the exponent γ: widths of successive
	// orders tend to the ratio e^-γ. π for Schwarzschild.
	Lyapunov float64
	Rings    []Ring // disk by disk, order by order
	Flux     float64
	Bound    float64 // on Flux
	Outside  float64 // the part of Flux that the field misses
	// OutsideBound bounds Outside.
	OutsideBound float64
}

// NewRings measures the images of all disks, whatever the field. Plate is
// the view's image with its Radius layers; nil leaves out what is read off
// it. Only disks are counted.
func NewRings(ctx context.Context, v *raytrace.View, plate *raytrace.Plate, o Options) (*Rings, error) {
	g, err := newGeometry(v)
	if err != nil {
		return nil, err
	}
	found, at := disks(v)
	if len(found) == 0 {
		return nil, cannot("the scene has no disk")
	}
	t := &Rings{Critical: math.NaN(), CriticalClosed: math.NaN(), Lyapunov: math.NaN()}
	if g.Object.PhotonSphere() > g.Object.Edge() {
		t.CriticalClosed, t.Lyapunov = g.Object.CriticalImpact(), g.Object.Lyapunov()
		if t.Critical, err = critical(g); err != nil {
			return nil, err
		}
	}
	o = o.filled()
	report, steps, done := o.Report, 3*len(found)*(v.Plan.MaxOrder+1), 0
	step := func() {
		if done++; report != nil {
			report(done, steps)
		}
	}
	fine, err := newSampler(ctx, v, true, o)
	if err != nil {
		return nil, err
	}
	coarse, err := newSampler(ctx, v, true, o.coarser())
	if err != nil {
		return nil, err
	}
	for k, d := range found {
		for n := range v.Plan.MaxOrder + 1 {
			ring := Ring{Emitter: at[k], Order: n}
			if err := outlines(ctx, g, v, plate, d, &ring); err != nil {
				return nil, err
			}
			step()
			lines, err := fine.image(ctx, at[k], n)
			if err != nil {
				return nil, err
			}
			step()
			ring.integrate(lines, v)
			rough := Ring{}
			if lines, err = coarse.image(ctx, at[k], n); err != nil {
				return nil, err
			}
			step()
			rough.integrate(lines, v)
			ring.DelayBound = samplingBound(ring.MeanDelay, rough.MeanDelay) + pathDelay
			ring.AreaBound = samplingBound(ring.Area, rough.Area)
			ring.IntG3Bound = samplingBound(ring.IntG3, rough.IntG3)
			ring.IntG4Bound = samplingBound(ring.IntG4, rough.IntG4)
			ring.FluxBound = samplingBound(ring.Flux, rough.Flux)
			ring.OutsideBound = samplingBound(ring.Outside, rough.Outside)
			ring.WidthRatio, ring.FluxRatio = math.NaN(), math.NaN()
			if n > 0 {
				before := t.Rings[len(t.Rings)-1]
				ring.WidthRatio = ring.Width / before.Width
				if before.Flux > 0 {
					ring.FluxRatio = ring.Flux / before.Flux
				}
			}
			t.Flux += ring.Flux
			t.Bound += ring.FluxBound
			t.Outside += ring.Outside
			t.OutsideBound += ring.OutsideBound
			t.Rings = append(t.Rings, ring)
		}
	}
	for k := range t.Rings {
		t.Rings[k].Fraction = math.NaN()
		if t.Flux > 0 {
			t.Rings[k].Fraction = t.Rings[k].Flux / t.Flux
		}
	}
	return t, nil
}

// pathDelay is a bound on the delay of a path at the tolerance of the sampler,
// M. Method: geodesic's tests hold shared delays to it.
const pathDelay = 1e-5

// samplingBound bounds the error of a sum over patches by its difference from
// one over patches twice as long and twice as wide: midpoints make that three
// times the error where all is smooth, and about as much where a nearer image
// ends. pathShare is what the paths leave.
func samplingBound(fine, rough float64) float64 {
	const room, pathShare = 1.5, 1e-8
	return room*math.Abs(fine-rough) + pathShare*math.Abs(fine)
}

// integrate sums patches.
func (r *Ring) integrate(lines [][]patch, v *raytrace.View) {
	f := v.Field
	across, up := f.Pitches()
	halfWidth, halfHeight := across*float64(f.Columns)/2, up*float64(f.Rows)/2
	var delay float64
	for _, line := range lines {
		for k := range line {
			p := &line[k]
			if math.IsNaN(p.g) || p.passes == 0 {
				continue
			}
			seen, g3 := p.area*p.passes, p.g*p.g*p.g
			r.Area += seen
			r.IntG3 += seen * g3
			r.IntG4 += seen * g3 * p.g
			flux := p.area * p.intensity
			r.Flux += flux
			delay += flux * p.delay
			if x, y := onScreen(v, p.alpha, p.beta); f.Projection != raytrace.AllSky &&
				!(math.Abs(x-f.Center[0]) <= halfWidth && math.Abs(y-f.Center[1]) <= halfHeight) {
				r.Outside += flux
			}
		}
	}
	r.MeanDelay = math.NaN()
	if r.Flux > 0 {
		r.MeanDelay = delay / r.Flux
	}
}

// onScreen turns components of L/E, in M, into coordinates of the field.
func onScreen(v *raytrace.View, alpha, beta float64) (x, y float64) {
	if v.Field.IsParallel() {
		return alpha, beta
	}
	round := v.Spacetime.(*geodesic.Round)
	perRadian := v.Observer.Radius / round.Lapse(v.Observer.Radius)
	x, y = alpha/perRadian, beta/perRadian
	ahead := math.Sqrt(max(0, 1-x*x-y*y))
	return x / ahead, y / ahead
}

// outlines fills in the curves of both rims.
func outlines(ctx context.Context, g *rim.Geometry, v *raytrace.View, plate *raytrace.Plate, d *emit.Disk, ring *Ring) error {
	p, err := g.NewPencil(ring.Order)
	if err != nil {
		return err
	}
	var rim *imageRim
	if plate != nil {
		if rim, err = newImageRim(g, v, plate.Layer(raytrace.Radius, ring.Order), ring.Order, d); err != nil {
			return err
		}
	}
	c, err := g.NewCurves(ctx, ring.Order, []float64{d.Inner, d.Outer})
	if err != nil {
		return err
	}
	var at0 [2]float64
	for k, o := range []*Outline{&ring.Inner, &ring.Outer} {
		r := c.R[k]
		b := func(s float64) (x float64) {
			if x, err = g.RootAt(p, g.Swept(s, ring.Order), r, ring.Order); err != nil {
				return math.NaN()
			}
			return x
		}
		o.outline(b, func(s float64) float64 {
			var rims [2]float64
			c.At(g.Swept(s, ring.Order), rims[:])
			return rims[k]
		})
		widest := o.measure(rim, r, b)
		o.Horizontal = 2 * widest
		at0[k] = b(0)
		if err != nil {
			return err
		}
	}
	ring.Width = at0[1] - at0[0]
	return nil
}

// outlineAngles is how many screen angles the widest point is looked for at,
// and the mean is taken over. Method: the curves are smooth and periodic.
const outlineAngles = 720

// outline fills in what needs no image; b is exact, quick a good guess.
func (o *Outline) outline(b, quick func(float64) float64) {
	top, bottom := b(math.Pi/2), b(-math.Pi/2)
	o.Vertical, o.Offset = top+bottom, (top-bottom)/2
	best, widest := 0.0, math.Inf(-1)
	for k := range outlineAngles {
		s := 2*math.Pi*float64(k)/outlineAngles - math.Pi
		x := quick(s)
		o.MeanRadius += x / outlineAngles
		if x := x * math.Cos(s); x > widest {
			best, widest = s, x
		}
	}
	o.Horizontal = best // for measure
}

// measure refines the widest point, reads the diameters off the image, and
// returns the exact half width.
func (o *Outline) measure(rim *imageRim, r float64, b func(float64) float64) (half float64) {
	const step = 2 * math.Pi / outlineAngles
	s, half := golden(func(s float64) float64 { return b(s) * math.Cos(s) }, o.Horizontal-step, o.Horizontal+step)
	o.MeasuredHorizontal, o.MeasuredHorizontalBound = math.NaN(), math.NaN()
	o.MeasuredVertical, o.MeasuredVerticalBound = math.NaN(), math.NaN()
	if rim == nil {
		return half
	}
	right, rightBound := rim.at(s, r)
	left, leftBound := rim.at(math.Pi-s, r)
	o.MeasuredHorizontal = (right + left) * math.Cos(s)
	o.MeasuredHorizontalBound = rightBound + leftBound
	top, topBound := rim.at(math.Pi/2, r)
	bottom, bottomBound := rim.at(-math.Pi/2, r)
	o.MeasuredVertical, o.MeasuredVerticalBound = top+bottom, topBound+bottomBound
	return half
}

// critical roots the critical curve: the least impact parameter of traced
// paths that escape within the orders that a tracer follows.
func critical(g *rim.Geometry) (float64, error) {
	const orders = 9 // paths nearer than e^-9π to the curve are not told apart
	t, err := g.Object.Tracer(g.Observer, geodesic.Plan{Tolerance: rim.RootTolerance, MaxOrder: orders, Sky: true})
	if err != nil {
		return 0, err
	}
	var failed error
	var rays geodesic.Rays
	var at geodesic.Crossings
	captured := func(b float64) float64 {
		if err := g.Object.Aim(g.Observer, true, []geodesic.Direction{{Alpha: b}}, &rays); err != nil {
			failed = err
		}
		t.Cross(&rays, geodesic.Want{NoPlace: true, NoKR: true}, &at)
		for _, s := range at.Surface {
			if s == geodesic.Sky {
				return -1
			}
		}
		return 1
	}
	lo, hi := g.Object.Edge(), 2*g.Object.CriticalImpact()
	if hi >= g.Widest {
		hi = g.Widest * (1 - 1e-9)
	}
	b := rim.BisectToRoot(captured, lo, captured(lo), hi, captured(hi))
	return b, failed
}
