package measure

import (
	"context"
	"math"

	"annulet/raytrace"
	"annulet/raytrace/emit"
)

// Line is the profile of a line that is narrow in the gas frame, as received
// from all disks of a scene.
type Line struct {
	Bin   float64 // width of the bins in g
	First int     // bin k reaches from (First+k)·Bin to (First+k+1)·Bin
	// Energy and Photon are the fluxes in every bin, ∫ε g⁴ and ∫ε g³ over
	// the image, in M² of ε's unit (sr on an angular field).
	Energy, Photon []float64
	Orders         [][]float64 // energy flux by image order
	Edges          []Range     // extreme g by order, by optimisation
	Edge           Range       // of all orders that shine
	// Bound is a bound on any bin of Energy.
	Bound float64
}

// Totals returns the sums of Energy and Photon.
func (l *Line) Totals() (energy, photon float64) {
	for k := range l.Energy {
		energy += l.Energy[k]
		photon += l.Photon[k]
	}
	return energy, photon
}

// mostBins bounds a profile. Taste.
const mostBins = 1_000_000

// NewLine integrates the profile over the whole image, whatever the field,
// in bins of g. Emissivity is that of the disks in the gas frame; the light
// that the scene asks for does not matter.
func NewLine(ctx context.Context, v *raytrace.View, bin float64, o Options) (*Line, error) {
	if !(bin > 0) || math.IsInf(bin, 0) {
		return nil, cannot("the bins have no width")
	}
	v = bolometric(v)
	o = o.filled()
	l := &Line{Bin: bin}
	g, err := newGeometry(v)
	if err != nil {
		return nil, err
	}
	found, _ := disks(v)
	if len(found) == 0 {
		return nil, cannot("the scene has no disk")
	}
	l.Edge = Range{math.Inf(1), math.Inf(-1)}
	for n := range v.Plan.MaxOrder + 1 {
		edge := Range{math.Inf(1), math.Inf(-1)}
		for _, d := range found {
			e, err := Extremes(ctx, g, d, n)
			if err != nil {
				return nil, err
			}
			edge = Range{min(edge.Min, e.Min), max(edge.Max, e.Max)}
		}
		l.Edges = append(l.Edges, edge)
		l.Edge = Range{min(l.Edge.Min, edge.Min), max(l.Edge.Max, edge.Max)}
	}
	bins := math.Ceil(l.Edge.Max/bin) - math.Floor(l.Edge.Min/bin)
	if bins > mostBins {
		return nil, cannot("%.0f bins are more than %d", bins, mostBins)
	}
	l.First = int(math.Floor(l.Edge.Min / bin))
	fine, err := l.gather(ctx, v, int(bins), o)
	if err != nil {
		return nil, err
	}
	coarse, err := l.gather(ctx, v, int(bins), o.coarser())
	if err != nil {
		return nil, err
	}
	l.Energy, l.Photon, l.Orders = fine.energy, fine.photon, fine.orders
	for k, x := range fine.energy {
		l.Bound = max(l.Bound, samplingBound(x, coarse.energy[k]))
	}
	l.Edge = Range{math.Inf(1), math.Inf(-1)}
	for n, edge := range l.Edges { // an opaque disk may hide an order
		if sum(l.Orders[n]) > 0 {
			l.Edge = Range{min(l.Edge.Min, edge.Min), max(l.Edge.Max, edge.Max)}
		}
	}
	return l, nil
}

// bolometric is the view with disks whose received intensity carries g⁴.
func bolometric(v *raytrace.View) *raytrace.View {
	changed := *v
	changed.Emitters = nil
	for _, e := range v.Emitters {
		if d, ok := e.(*emit.Disk); ok {
			e = d.Bolometric()
		}
		changed.Emitters = append(changed.Emitters, e)
	}
	return &changed
}

// Smoothed returns the profile as an instrument sees it whose response is a
// Gaussian of that FWHM in g; light is spread evenly in its bin. The edges
// stay those of the light. It reaches further by five standard deviations.
func (l *Line) Smoothed(fwhm float64) (*Line, error) {
	if !(fwhm > 0) || math.IsInf(fwhm, 0) {
		return nil, cannot("a resolution of %g in g is none", fwhm)
	}
	sigma := fwhm * sigmaPerFWHM
	const reach = 5
	more := int(math.Ceil(reach * sigma / l.Bin))
	if more > mostBins {
		return nil, cannot("the resolution of %g in g is much wider than the bins", fwhm)
	}
	// the share that moves by m bins: second differences of ∫Φ
	integral := func(x float64) float64 {
		x /= sigma
		return sigma * (x*math.Erfc(-x/math.Sqrt2)/2 + math.Exp(-x*x/2)/math.Sqrt(2*math.Pi))
	}
	share := make([]float64, 2*more+1)
	for k := range share {
		x := float64(k-more) * l.Bin
		share[k] = (integral(x+l.Bin) - 2*integral(x) + integral(x-l.Bin)) / l.Bin
	}
	norm := sum(share)
	smooth := func(from []float64) []float64 {
		to := make([]float64, len(from)+2*more)
		for k, x := range from {
			for i, w := range share {
				to[k+i] += x * w / norm
			}
		}
		return to
	}
	s := *l
	s.First = l.First - more
	s.Energy, s.Photon, s.Orders = smooth(l.Energy), smooth(l.Photon), nil
	for _, order := range l.Orders {
		s.Orders = append(s.Orders, smooth(order))
	}
	return &s, nil
}

// EquivalentWidth returns the equivalent width against a power-law continuum,
// in the unit of energy that level is given in: ∫ N_line/N_cont dE
// with N_cont = level g^-index photons per unit of energy, g = E/(energy in the
// gas frame), level in units of the line's photons.
func (l *Line) EquivalentWidth(level, index float64) float64 {
	_, photons := l.Totals()
	width := 0.0
	for k, x := range l.Photon {
		g := (float64(l.First+k) + 0.5) * l.Bin
		if x > 0 && g > 0 {
			width += x / photons / (level * math.Pow(g, -index))
		}
	}
	return width
}

type profile struct {
	energy, photon []float64
	orders         [][]float64
}

func (l *Line) gather(ctx context.Context, v *raytrace.View, bins int, o Options) (profile, error) {
	p := profile{energy: make([]float64, bins), photon: make([]float64, bins)}
	s, err := newSampler(ctx, v, false, o)
	if err != nil {
		return p, err
	}
	_, at := disks(v)
	steps := (v.Plan.MaxOrder + 1) * len(at)
	for n := range v.Plan.MaxOrder + 1 {
		p.orders = append(p.orders, make([]float64, bins))
		for i, disk := range at {
			lines, err := s.image(ctx, disk, n)
			if err != nil {
				return p, err
			}
			for _, line := range lines {
				for k := range line {
					if q := &line[k]; q.intensity > 0 && q.area > 0 {
						l.spread(q, p.orders[n], p.photon)
					}
				}
			}
			if o.Report != nil {
				o.Report(n*len(at)+i+1, steps)
			}
		}
		for k, x := range p.orders[n] {
			p.energy[k] += x
		}
	}
	return p, nil
}

// spread shares the flux of a patch among the bins: g is linear across it in
// both directions, so that its distribution is the trapezium that two uniform
// ones add up to.
func (l *Line) spread(q *patch, energy, photon []float64) {
	flux := q.area * q.intensity
	half := (q.along + q.across) / 2
	lo, hi := max(q.g-half, l.Edge.Min), min(q.g+half, l.Edge.Max)
	first := max(0, int(math.Floor(lo/l.Bin))-l.First)
	last := min(len(energy)-1, int(math.Floor(hi/l.Bin))-l.First)
	below := 0.0
	for k := first; k <= last; k++ {
		share := 1.0
		if k < last {
			share = trapezium(float64(l.First+k+1)*l.Bin-q.g, q.along, q.across)
		}
		energy[k] += flux * (share - below)
		photon[k] += flux * (share - below) / q.g
		below = share
	}
}

// trapezium is the distribution function at x of the sum of two numbers that
// are uniform in ±a/2 and ±b/2.
func trapezium(x, a, b float64) float64 {
	if a < b {
		a, b = b, a
	}
	const flat = 1e-6
	switch {
	case x >= (a+b)/2:
		return 1
	case x <= -(a+b)/2:
		return 0
	case b < flat*a:
		return max(0, min(1, x/a+0.5))
	}
	square := func(y float64) float64 { return max(0, y) * max(0, y) }
	return (square(x+(a+b)/2) - square(x+(a-b)/2) - square(x-(a-b)/2) + square(x-(a+b)/2)) / (2 * a * b)
}

func sum(x []float64) (total float64) {
	for _, v := range x {
		total += v
	}
	return total
}
