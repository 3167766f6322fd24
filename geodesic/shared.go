package geodesic

import (
	"context"
	"fmt"
	"math"
	"runtime"

	"annulet/geodesic/guard"

	"golang.org/x/sync/errgroup"
)

// OrbitTable holds the orbits that the paths of one observer share. In a
// round spacetime a path is u(ψ; v), with v = du/dψ at the observer, and the
// screen angle only says at which ψ it meets the disk plane. The table keeps
// u, w = ∂u/∂ψ, p = ∂u/∂v and q = ∂w/∂v at whole steps of ψ for a grid of v
// that is graded towards the critical orbit; between them u is interpolated
// to fifth order in ψ (u″ is known) and to third across v.
//
// u(ψ; v) is analytic in v, also where v = 0 joins the paths that start
// inward and outward, and is continued past horizon and infinity so that the
// ends of orbits are interpolated like the rest. What light passing through a
// star or a shell does beyond its edge is not tabulated: those rays are
// integrated one by one.
type OrbitTable struct {
	object    *Round
	share     Share
	uObs      float64
	tolerance float64
	orders    int     // image orders held
	critical  float64 // v of the critical orbit
	grading   float64 // |v - critical| below which the grid is even; a power of two
	bits      uint    // 2^bits rows an octave of |v - critical| + grading
	base      int     // index of grading in that numbering
	low, high int     // rows are numbered from low to high, 0 the critical one
	step      float64 // of ψ
	perStep   float64
	knots     int // per row
	bins      int // per row, of the bounds
	timed     bool

	v     []float64
	nodes []node  // row by row, knots each
	times []clock // likewise; empty unless timed
	last  []int32 // knots of a row that hold, row by row
	ends  []rowEnd
	gaps  []gap     // from each row to the next
	off   []float64 // bound on u, row by row, one per binsPerPi-th part of π
	endOf []float64 // bound on the angle at which the orbits of a cell end, radians
	built Build
}

// gap is what a look-up reads of two neighbouring rows, in one cache line.
type gap struct {
	v, dv, perV float64 // of the first row, to the next, 1/dv
	until       float64 // larger of the end angles
	knots       int     // that both rows hold
	sound       bool    // may be interpolated across
}

// node is the state of one orbit at one knot.
type node struct{ u, w, p, q float64 }

// clock is delay + leg r*, and its slope with v; see rideTime.
type clock struct{ time, slope, leg float64 }

// rowEnd is where an orbit leaves the exterior.
type rowEnd struct {
	psi, slope float64 // swept angle, and d/dv of it
	kind       ending  // atEdge, atStop (infinity), or pastOrders
}

// Build reports what a table cost and how good it is.
type Build struct {
	Orbits     int     // rows
	Bytes      int     // of the tables
	WorstBound float64 // largest bound on u of any cell, 1/M
}

// Build returns the report of the table's making.
func (tb *OrbitTable) Build() Build { return tb.built }

// Holds says whether a table serves paths of this object and share: the same
// observer but for inclination and azimuth, and no more asked for.
func (s *Round) Holds(tb *OrbitTable, share Share) bool {
	return tb.object.Same(s) && tb.share.Observer.Radius == share.Observer.Radius &&
		(tb.share.Observer.Motion == Infall) == (share.Observer.Motion == Infall) &&
		tb.share.Tolerance == share.Tolerance && tb.share.MaxOrder >= share.MaxOrder &&
		(tb.share.Outward || !share.Outward) && (tb.timed || !share.Delay)
}

// Share says which paths a table must hold.
type Share struct {
	Observer  Observer
	Tolerance float64 // of the paths that the table stands for
	MaxOrder  int
	Outward   bool // also paths that start outward
	Delay     bool // also times
	Workers   int  // goroutines; 0 means GOMAXPROCS
}

const (
	// shareFrom is the smallest impact parameter held, M. Orbits nearer to
	// radial change on the scale of b itself; rays within are integrated.
	shareFrom = 0.5
	// tightestShared is the tolerance below which interpolation cannot
	// follow and every ray is integrated.
	tightestShared = 3e-11
	// beyondHorizon and beyondInfinity are how far in u orbits are
	// continued past their ends, so that a cell astride an end is held by
	// all four corners. Method: four times the largest step between rows.
	beyondHorizon  = 0.12
	beyondInfinity = -0.05
	// checkEvery is how many rows share one check by direct integration, at
	// the share checkAt of the way to the next row: halfway the cubic is
	// worst, but errors of its slopes cancel, which are worst at a third.
	checkEvery = 6
	checkAt    = 0.3
	// binsPerPi is the resolution of the bounds in ψ. Taste.
	binsPerPi = 8
	// tableShare and checkShare divide the tolerance of the paths that the
	// table stands for: errors of its orbits must not show beside those of
	// the interpolation, nor errors of the check beside either.
	tableShare = 200
	checkShare = 400
	// checkMargin covers what lies between the checks. Method:
	// TestSharedBounds counts none uncovered.
	checkMargin = 4
)

// gridFor chooses rows per octave and knots per π from the tolerance: the
// error of the interpolation falls with their fourth and sixth power.
func gridFor(tolerance float64) (bits uint, perPi int) {
	switch {
	case tolerance >= 1e-6:
		return 4, 16
	case tolerance >= 1e-8:
		return 5, 24
	case tolerance >= 3e-10:
		return 6, 40
	}
	return 7, 48
}

// SharedOrbits integrates the table for one observer. It answers ctx within
// a few rows. It returns nil and no error where sharing does not pay:
// tolerances below 3e-11, and observers within a shell.
func (s *Round) SharedOrbits(ctx context.Context, share Share) (*OrbitTable, error) {
	if err := s.Check(share.Observer); err != nil {
		return nil, err
	}
	uObs := 1 / share.Observer.Radius
	if share.Tolerance < tightestShared || s.inside != nil && uObs > s.edge {
		return nil, nil
	}
	tb := s.layOut(share, uObs)
	rows := len(tb.v)
	if err := tb.onRows(ctx, share, share.Tolerance/tableShare, rows, tb.integrate); err != nil {
		return nil, err
	}
	tb.pair()
	checked := make([]tableCheck, (rows+checkEvery-2)/checkEvery)
	if err := tb.onRows(ctx, share, share.Tolerance/checkShare, len(checked), func(t *roundTracer, k int) {
		checked[k] = tb.check(t, k*checkEvery)
	}); err != nil {
		return nil, err
	}
	tb.conclude(checked)
	return tb, nil
}

// onRows does work for the numbers 0 to n-1, shared among goroutines, each
// with a tracer of its own.
func (tb *OrbitTable) onRows(ctx context.Context, share Share, tolerance float64, n int, work func(t *roundTracer, k int)) error {
	workers := share.Workers
	if workers <= 0 {
		workers = runtime.GOMAXPROCS(0)
	}
	group, ctx := errgroup.WithContext(ctx)
	for worker := range workers {
		group.Go(guard.Work(func() error {
			t, err := tb.object.newTracer(share.Observer, Plan{Tolerance: max(tolerance, MinTolerance), MaxOrder: share.MaxOrder})
			if err != nil {
				return err
			}
			for k := worker; k < n; k += workers {
				if err := ctx.Err(); err != nil {
					return fmt.Errorf("geodesic: sharing orbits: %w", err)
				}
				work(t, k)
			}
			return nil
		}))
	}
	return group.Wait()
}

// layOut places the rows.
func (s *Round) layOut(share Share, uObs float64) *OrbitTable {
	tb := &OrbitTable{
		object: s, share: share, uObs: uObs, tolerance: share.Tolerance,
		orders: share.MaxOrder + 1, timed: share.Delay,
	}
	var perPi int
	tb.bits, perPi = gridFor(share.Tolerance)
	tb.step = math.Pi / float64(perPi)
	tb.perStep = 1 / tb.step
	tb.knots = tb.orders*perPi + 2

	bc := s.CriticalImpact()
	tb.critical = math.Sqrt(max(s.speed2(bc, uObs), 0))
	if uObs > 1/s.PhotonSphere() {
		tb.critical = -tb.critical
	}
	// a path at distance d from b_c leaves the photon sphere after
	// ln(80.6 M/d) radians (Gralla, Holz & Wald, Phys. Rev. D 100, 024018
	// (2019), from memory); dv = -db/(b³ v), or its root near v = 0
	scale := 80.6 * math.Exp(-float64(tb.orders)*math.Pi) / (bc * bc * bc)
	scale /= max(math.Abs(tb.critical), math.Sqrt(scale))
	tb.grading = math.Ldexp(1, int(math.Floor(math.Log2(scale))))
	tb.base = int(math.Float64bits(tb.grading) >> (52 - tb.bits))

	steepest := math.Sqrt(max(s.speed2(shareFrom, uObs), 0))
	least := 0.0
	if share.Outward {
		least = -steepest
	}
	tb.high = tb.rowOf(steepest) + 1
	tb.low = tb.rowOf(least)
	for row := tb.low; row <= tb.high; row++ {
		tb.v = append(tb.v, tb.vOf(row))
	}
	rows := len(tb.v)
	tb.nodes = make([]node, rows*tb.knots)
	if tb.timed {
		tb.times = make([]clock, rows*tb.knots)
	}
	tb.last = make([]int32, rows)
	tb.ends = make([]rowEnd, rows)
	tb.gaps = make([]gap, rows-1)
	tb.bins = tb.orders*binsPerPi + 1
	tb.off = make([]float64, rows*tb.bins)
	tb.endOf = make([]float64, rows)
	return tb
}

// rowOf returns the row at or below v: the leading bits of
// |v - critical| + grading number the rows, evenly within each octave.
func (tb *OrbitTable) rowOf(v float64) int {
	z := v - tb.critical
	if z >= 0 {
		return int(math.Float64bits(z+tb.grading)>>(52-tb.bits)) - tb.base
	}
	return tb.base - int(math.Float64bits(tb.grading-z)>>(52-tb.bits)) - 1
}

// vOf is the v of a row.
func (tb *OrbitTable) vOf(row int) float64 {
	at := math.Float64frombits(uint64(tb.base+max(row, -row)) << (52 - tb.bits))
	if row >= 0 {
		return tb.critical + (at - tb.grading)
	}
	return tb.critical - (at - tb.grading)
}

// launchSlope puts the orbit at the observer with slope v, its riders those
// of ∂/∂v. Within a horizon not every v belongs to light with E > 0.
func (t *roundTracer) launchSlope(v float64) (ok bool) {
	o, s := &t.orbit, t.spacetime
	square := v*v + t.uObs*t.uObs*s.lapse2(t.uObs) // 1/b²
	if square < 0 || t.uObs > s.edge && square < 1e-6 {
		return false
	}
	*o = orbit{b: 1 / max(math.Sqrt(square), 1e-30), curve: o.curve, u0: t.uObs, w0: v, leg: 1, q0: 1}
	if v < 0 {
		o.leg = -1
	}
	t.pace.start(o.b)
	t.pace.h = min(t.pace.h, t.pace.first)
	return true
}

// integrate fills one row of the table.
func (tb *OrbitTable) integrate(t *roundTracer, row int) {
	o, s := &t.orbit, tb.object
	v := tb.v[row]
	if !t.launchSlope(v) {
		return
	}
	nodes := tb.nodes[row*tb.knots : (row+1)*tb.knots]
	nodes[0] = node{o.u0, o.w0, o.p0, o.q0}
	var ride clockRider
	if tb.timed {
		ride = newClockRider(t, v)
		tb.times[row*tb.knots] = ride.clock
	}
	end := rowEnd{psi: math.Inf(1), kind: pastOrders}
	k := 1
	for ; k < tb.knots; k++ {
		if o.u0 > s.edge+beyondHorizon && o.w0 > 0 || o.u0 < beyondInfinity && o.w0 < 0 {
			break
		}
		target := float64(k) * tb.step
		for o.psi < target {
			if t.pace.tried > maxSteps {
				return // last stays 0: no cell of this row is sound
			}
			h := min(t.pace.h, target-o.psi)
			errU, errW := o.try(h)
			if !t.pace.judge(h, errU, errW) {
				continue
			}
			o.rideSlope()
			if tb.timed {
				ride.advance(o)
			}
			if end.kind == pastOrders {
				end = tb.lookForEnd(o)
			}
			o.accept()
			if target-o.psi < 1e-14*target {
				o.psi = target
			}
		}
		nodes[k] = node{o.u0, o.w0, o.p0, o.q0}
		if tb.timed {
			tb.times[row*tb.knots+k] = ride.clock
		}
		// the integration's own share of the bound; ∂/∂b at relative size one
		// is ∂/∂v at 1/b
		bin := &tb.off[row*tb.bins+int(target*(binsPerPi/math.Pi))]
		*bin = max(*bin, t.pace.global(o.b, o.w0, o.p0/(o.b*o.b)))
	}
	tb.last[row] = int32(k)
	tb.ends[row] = end
}

// lookForEnd returns the end of the orbit if it lies in the trial step.
func (tb *OrbitTable) lookForEnd(o *orbit) rowEnd {
	to, kind := 0.0, atStop
	switch edge := tb.object.edge; {
	case o.w > 0 && o.u0 < edge && o.u >= edge:
		to, kind = edge, atEdge
	case o.w < 0 && o.u0 > 0 && o.u <= 0:
	default:
		return rowEnd{psi: math.Inf(1), kind: pastOrders}
	}
	theta := o.locate(1, func(theta float64) float64 { return o.uAt(theta) - to })
	return rowEnd{psi: o.psi + theta*o.h, slope: -o.slopeAt(theta) / o.wAt(theta), kind: kind}
}

// pair fills the gaps once all rows are integrated.
func (tb *OrbitTable) pair() {
	for row := range tb.gaps {
		dv := tb.v[row+1] - tb.v[row]
		tb.gaps[row] = gap{
			v: tb.v[row], dv: dv, perV: 1 / dv,
			until: max(tb.ends[row].psi, tb.ends[row+1].psi),
			knots: int(min(tb.last[row], tb.last[row+1])),
			sound: tb.bothPastEnd(row),
		}
	}
}

// conclude turns the checks into bounds for every row.
func (tb *OrbitTable) conclude(checked []tableCheck) {
	for row := range len(tb.v) - 1 {
		k := row / checkEvery
		near := checked[max(k-1, 0):min(k+2, len(checked))]
		for bin := range tb.bins {
			worst := 0.0
			for _, c := range near {
				for _, off := range c.off[max(bin-1, 0):min(bin+2, tb.bins)] {
					worst = max(worst, off)
				}
			}
			at := &tb.off[row*tb.bins+bin]
			*at += checkMargin*worst + roundoff
			tb.built.WorstBound = max(tb.built.WorstBound, *at)
		}
		for _, c := range near {
			tb.endOf[row] = max(tb.endOf[row], checkMargin*c.end+tb.tolerance)
		}
	}
	tb.built.Orbits = len(tb.v)
	tb.built.Bytes = 32*len(tb.nodes) + 24*len(tb.times) + 8*(len(tb.v)+len(tb.off)) + 24*len(tb.ends) + 48*len(tb.gaps)
}

// bothPastEnd says whether, where the shorter of two neighbouring orbits stops
// being held, the other has ended too, so that no crossing is lost there. One
// continued past infinity may have turned back since.
func (tb *OrbitTable) bothPastEnd(row int) bool {
	k := int(min(tb.last[row], tb.last[row+1]))
	if k == 0 {
		return false
	}
	if k == tb.knots {
		return true
	}
	a, b := tb.nodes[row*tb.knots+k-1], tb.nodes[(row+1)*tb.knots+k-1]
	past := func(n node) bool { return n.u >= tb.object.edge && n.w > 0 || n.u < 0 }
	return past(a) && past(b)
}

// tableCheck is what one integrated orbit says of the interpolation: the
// largest difference in u for each bin of ψ, and that of the end angle.
type tableCheck struct {
	off []float64
	end float64
}

// check integrates one orbit between two rows.
func (tb *OrbitTable) check(t *roundTracer, row int) tableCheck {
	c := tableCheck{off: make([]float64, tb.bins)}
	o, edge := &t.orbit, tb.object.edge
	if !t.launchSlope(tb.v[row] + checkAt*(tb.v[row+1]-tb.v[row])) {
		return c
	}
	limit := float64(tb.orders) * math.Pi
	across := hermiteAcross(checkAt, tb.gaps[row].dv)
	part := tb.step / 3 // a third of a step: neither knot nor middle is left out, nor what lies between
	for o.psi < limit && t.pace.tried < maxSteps {
		h := t.pace.h
		errU, errW := o.try(h)
		if !t.pace.judge(h, errU, errW) {
			continue
		}
		for k := math.Ceil(o.psi / part); k*part < min(o.psi+h, limit); k++ {
			psi := k * part
			u := o.uAt((psi - o.psi) / h)
			cell, held := tb.cell(row, psi)
			if !held || u <= 0 || u >= edge {
				continue
			}
			bin := int(psi * (binsPerPi / math.Pi))
			c.off[bin] = max(c.off[bin], math.Abs(u-interpolate(cell.a, cell.b, cell.theta, tb.step, 2*tb.object.charge2, &across)))
		}
		if end := tb.lookForEnd(o); end.kind != pastOrders {
			from, to := tb.ends[row], tb.ends[row+1]
			if from.kind == end.kind && to.kind == end.kind {
				c.end = math.Abs(end.psi - tb.endPsi(row, checkAt))
			}
			break
		}
		o.accept()
	}
	return c
}

// endPsi interpolates the swept angle at the ends of two neighbouring orbits.
func (tb *OrbitTable) endPsi(row int, s float64) float64 {
	from, to, dv := tb.ends[row], tb.ends[row+1], tb.v[row+1]-tb.v[row]
	return cubic(s, from.psi, to.psi, from.slope*dv, to.slope*dv)
}

// cell is the part of the table around one ψ, between two rows.
type cell struct {
	row, knot int
	theta     float64 // share of the way to the next knot
	dv        float64
	a, b      *[2]node // this row and the next, at this knot and the next
}

// cell finds the knots around psi; held is false past the end of either row.
func (tb *OrbitTable) cell(row int, psi float64) (c cell, held bool) {
	at := psi * tb.perStep
	k := int(at)
	g := &tb.gaps[row]
	if k+1 >= g.knots {
		return cell{}, false
	}
	i := row*tb.knots + k
	return cell{
		row: row, knot: k, theta: at - float64(k), dv: g.dv,
		a: (*[2]node)(tb.nodes[i : i+2]),
		b: (*[2]node)(tb.nodes[i+tb.knots : i+tb.knots+2]),
	}, true
}

// weights are Hermite's cubic weights across a cell, for the difference of
// two values and their slopes.
type weights struct{ step, from, to float64 }

// hermiteAcross returns the weights at share s of the way to the next row, dv
// away.
func hermiteAcross(s, dv float64) weights {
	rest := 1 - s
	return weights{step: s * s * (3 - 2*s), from: dv * s * rest * rest, to: -dv * s * s * rest}
}

// interpolate returns u between two rows at the share x of the way to the
// next knot: along and cubic, with the weights in θ worked out once for both
// rows. Step and curvature, h and 2Q², are the table's.
func interpolate(a, b *[2]node, x, h, curve float64, across *weights) float64 {
	x2 := x * x
	x3 := x2 * x
	y := 1 - x
	y2 := y * y
	// quintic: u and, at both ends, w and u″
	k0 := x3 * (10 + x*(6*x-15))
	h1, k1 := h*x*y*y2*(1+3*x), -h*x3*y*(1+3*y)
	h2, k2 := 0.5*h*h*x2*y*y2, 0.5*h*h*x3*y2
	// cubic: p and q
	c0 := x2 * (3 - 2*x)
	c1, d1 := h*x*y2, -h*x2*y
	a0, a1, b0, b1 := &a[0], &a[1], &b[0], &b[1]
	ua := a0.u + k0*(a1.u-a0.u) + (h1*a0.w + k1*a1.w) + (h2*bend(a0.u, curve) + k2*bend(a1.u, curve))
	ub := b0.u + k0*(b1.u-b0.u) + (h1*b0.w + k1*b1.w) + (h2*bend(b0.u, curve) + k2*bend(b1.u, curve))
	pa := a0.p + c0*(a1.p-a0.p) + (c1*a0.q + d1*a1.q)
	pb := b0.p + c0*(b1.p-b0.p) + (c1*b0.q + d1*b1.q)
	return ua + across.step*(ub-ua) + (across.from*pa + across.to*pb)
}

// along interpolates u and p within one row, u by the quintic, p by the
// cubic: p enters only with the distance to the row.
func along(n *[2]node, theta, h, curve float64) (u, p float64) {
	u = quintic(theta, h, n[0].u, n[1].u, n[0].w, n[1].w, bend(n[0].u, curve), bend(n[1].u, curve))
	p = cubic(theta, n[0].p, n[1].p, h*n[0].q, h*n[1].q)
	return u, p
}

// cubic is Hermite's interpolation from values y and slopes m per unit.
func cubic(s, y0, y1, m0, m1 float64) float64 {
	d := y1 - y0
	return y0 + s*(m0+s*(3*d-2*m0-m1+s*(m0+m1-2*d)))
}

// cubicSlope is the derivative of cubic.
func cubicSlope(s, y0, y1, m0, m1 float64) float64 {
	d := y1 - y0
	return m0 + s*(2*(3*d-2*m0-m1)+3*s*(m0+m1-2*d))
}
