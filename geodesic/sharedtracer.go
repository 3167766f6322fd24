package geodesic

import "math"

// SharedTracer finds crossings by interpolation between the orbits of a
// table; rays that it does not hold well enough are integrated one by one.
type SharedTracer struct {
	*roundTracer
	table  *OrbitTable
	target float64 // relative bound on r up to which interpolation serves
	least  float64 // 1/r beyond which nothing lies
	direct int
}

var _ Tracer = (*SharedTracer)(nil)

// sharedTarget is the relative bound on r that interpolated crossings must
// keep, in units of the tolerance per path: about what the path's own error
// grows to at order 2.
const sharedTarget = 100.0

const (
	// widestWithin is the impact parameter, M, up to which delays are shared
	// by observers within a horizon, where 1/b² passes zero. Method.
	widestWithin = 10.0
	// clockRows is how many rows lie between a path and the straight one, at
	// 1/b = 0, at least where delays are shared: 2 GM/c³ ln b in them leaves
	// an error of clockRows^-4/96 M, 3e-6 M. Method.
	clockRows = 8
	// grazingBend is how much the angle at which a star is met, radians, may
	// bend between two rows: it ends as a square root at the limb. Method,
	// both: TestSharedBounds.
	grazingBend = 1e-4
)

// directShare divides the tolerance for the rays that are integrated after
// all, so that they are no worse than their neighbours. Method.
const directShare = 20

// SharedTracer returns a tracer on a table. The plan's observer may differ
// from the table's in inclination and azimuth only, and may not ask for
// more orders or a tighter tolerance; it falls back to integration if it does.
func (s *Round) SharedTracer(o Observer, plan Plan, table *OrbitTable) (*SharedTracer, error) {
	target := sharedTarget * plan.Tolerance
	if table != nil { // rays that the table refuses are its hardest
		plan.Tolerance = max(plan.Tolerance/directShare, MinTolerance)
	}
	t, err := s.newTracer(o, plan)
	if err != nil {
		return nil, err
	}
	if table != nil && (!table.object.Same(s) || table.uObs != t.uObs || table.orders <= plan.MaxOrder || table.tolerance*sharedTarget > target*(1+1e-12)) {
		table = nil
	}
	shared := &SharedTracer{roundTracer: t, table: table, target: target}
	if plan.Reach > 0 {
		shared.least = 1 / plan.Reach
	}
	return shared, nil
}

// Direct returns how many rays were integrated one by one so far.
func (t *SharedTracer) Direct() int { return t.direct }

// Cross implements Tracer.
func (t *SharedTracer) Cross(rays *Rays, want Want, out *Crossings) {
	out.Reset(rays.Len())
	t.want, t.out = want, out
	for k := range rays.Lambda {
		if rays.Seen[k] {
			t.cosS, t.sinS = rays.CosS[k], rays.SinS[k]
			b, kr := max(rays.Impact(k), radial), rays.KR[k]
			if !t.look(b, kr) {
				out.cut(k)
				t.crossOne(b, kr)
				t.direct++
			}
		}
		out.Start = append(out.Start, int32(len(out.R)))
	}
}

// cut drops the crossings recorded since ray k began.
func (c *Crossings) cut(k int) {
	n := int(c.Start[k])
	if len(c.R) == n {
		return
	}
	c.Surface, c.Order, c.R = c.Surface[:n], c.Order[:n], c.R[:n]
	c.CosTheta, c.Phi, c.KR = c.CosTheta[:min(n, len(c.CosTheta))], c.Phi[:min(n, len(c.Phi))], c.KR[:min(n, len(c.KR))]
	c.Delay, c.Slope, c.Bound = c.Delay[:min(n, len(c.Delay))], c.Slope[:min(n, len(c.Slope))], c.Bound[:n]
}

// look records the crossings of the ray in hand from the table; false if it
// must be integrated.
func (t *SharedTracer) look(b, kr float64) bool {
	tb := t.table
	if tb == nil {
		return false
	}
	v := kr / b
	row := tb.rowOf(v)
	if row < tb.low || row >= tb.high {
		return t.missesAll(b)
	}
	i := row - tb.low
	gap := &tb.gaps[i]
	if !gap.sound || t.want.Delay && (!tb.timed || tb.uObs > tb.object.edge && b > widestWithin || b*clockRows*gap.dv > 1) {
		return false
	}
	share := (v - gap.v) * gap.perV
	if t.plan.Plane {
		target := t.firstAngle()
		across := hermiteAcross(share, gap.dv)
		more := !t.want.NoKR || t.want.Slope || t.want.Delay
		off := tb.off[i*tb.bins : (i+1)*tb.bins]
		edge, curve := tb.object.edge, 2*tb.object.charge2
		for n := 0; n <= t.plan.MaxOrder && target <= gap.until; n++ {
			at := target * tb.perStep
			k := int(at)
			if k+1 >= gap.knots {
				break // past the end of the path
			}
			theta := at - float64(k)
			k += i * tb.knots
			from, to := (*[2]node)(tb.nodes[k:]), (*[2]node)(tb.nodes[k+tb.knots:])
			u := interpolate(from, to, theta, tb.step, curve, &across)
			if u >= edge && tb.uObs > edge && from[0].w < 0 {
				target += math.Pi // still within the horizon, on the way out
				continue
			}
			if !(u > 0 && u < edge) {
				break
			}
			r := 1 / u
			bound := off[int(target*(binsPerPi/math.Pi))] * r
			if bound > t.target && u > t.least {
				return false
			}
			t.place(Plane, n, target, r)
			t.out.Bound = append(t.out.Bound, bound)
			if more {
				t.recordShared(i, share, b, v, u, target)
			}
			target += math.Pi
		}
	}
	return t.sharedEnd(i, share, b, v)
}

// missesAll says that a ray outside the table, steep as it is, falls in
// before it could meet the plane: cheaper to know than to integrate.
func (t *SharedTracer) missesAll(b float64) bool {
	if b >= shareFrom || !t.plan.Plane || t.plan.Sky || t.spacetime.end != Captured || t.uObs >= t.spacetime.edge || t.uObs > 0.3 {
		return false
	}
	// ψ to the horizon grows with b: below shareFrom it is less than that of
	// the first row inside, in proportion
	end := t.table.ends[len(t.table.ends)-1]
	return end.kind == atEdge && t.firstAngle() > 1.1*end.psi*b/shareFrom+1e-9
}

// recordShared appends what is wanted of a crossing beside its place.
func (t *SharedTracer) recordShared(i int, share, b, v, u, psi float64) {
	tb, out := t.table, t.out
	c, _ := tb.cell(i, psi)
	if !t.want.NoKR || t.want.Slope {
		w, p := tb.turn(&c, share)
		if !t.want.NoKR {
			out.KR = append(out.KR, b*w)
		}
		if t.want.Slope { // dr/db = -(∂u/∂v)/u² · dv/db, dv/db = -1/(b³ v)
			out.Slope = append(out.Slope, p/(u*u*b*b*b*v))
		}
	}
	if t.want.Delay {
		out.Delay = append(out.Delay, tb.delay(&c, share, u))
	}
}

// turn interpolates w = ∂u/∂ψ and p = ∂u/∂v in a cell.
func (tb *OrbitTable) turn(c *cell, s float64) (w, p float64) {
	curve := 2 * tb.object.charge2
	wa, qa := slopeAlong(c.a, c.theta, tb.step, curve)
	wb, qb := slopeAlong(c.b, c.theta, tb.step, curve)
	w = cubic(s, wa, wb, qa*c.dv, qb*c.dv)
	ua, pa := along(c.a, c.theta, tb.step, curve)
	ub, pb := along(c.b, c.theta, tb.step, curve)
	return w, cubicSlope(s, ua, ub, pa*c.dv, pb*c.dv) / c.dv
}

// slopeAlong interpolates w and q within one row by the cubics that their
// own slopes, u″ and (∂u″/∂u) p, allow.
func slopeAlong(n *[2]node, theta, h, curve float64) (w, q float64) {
	w = quintic(theta, h, n[0].w, n[1].w, bend(n[0].u, curve), bend(n[1].u, curve), tide(n[0].u, curve)*n[0].w, tide(n[1].u, curve)*n[1].w)
	q = cubic(theta, n[0].q, n[1].q, h*tide(n[0].u, curve)*n[0].p, h*tide(n[1].u, curve)*n[1].p)
	return w, q
}

// sharedEnd records where the path ends, on a star or the sky; false if it
// must be integrated.
func (t *SharedTracer) sharedEnd(i int, share, b, v float64) bool {
	tb, s := t.table, t.spacetime
	sky, star := t.plan.Sky, s.end == OnSurface && s.inside == nil
	if s.inside != nil && (tb.ends[i].kind == atEdge || tb.ends[i+1].kind == atEdge) {
		return false // light goes on through the object
	}
	if !sky && !star {
		return true
	}
	from, to := tb.ends[i], tb.ends[i+1]
	if from.kind != to.kind {
		return false
	}
	surface := Sky
	switch {
	case from.kind == pastOrders || from.kind == atEdge && !star || from.kind == atStop && !sky:
		return true
	case from.kind == atEdge:
		surface = Star
	}
	bound := tb.endOf[i]
	bent := math.Abs(to.slope-from.slope) * (tb.v[i+1] - tb.v[i])
	if bound > t.target || surface == Star && bent > grazingBend {
		return false
	}
	psi := tb.endPsi(i, share)
	if psi > t.limit {
		return true
	}
	c, held := tb.cell(i, psi)
	if !held {
		return false
	}
	uEnd := 0.0
	if surface == Star {
		uEnd = s.edge
	}
	t.place(surface, orderOf(psi), psi, 1/uEnd)
	out := t.out
	out.Bound = append(out.Bound, bound)
	if !t.want.NoKR {
		kr := b * math.Sqrt(max(s.speed2(b, uEnd), 0))
		if surface == Sky {
			kr = -kr
		}
		out.KR = append(out.KR, kr)
	}
	if t.want.Slope {
		dv := tb.v[i+1] - tb.v[i]
		slope := cubicSlope(share, from.psi, to.psi, from.slope*dv, to.slope*dv) / dv
		out.Slope = append(out.Slope, -slope/(b*b*b*v))
	}
	if t.want.Delay {
		delay := math.NaN()
		if surface == Star {
			delay = tb.delay(&c, share, uEnd)
		}
		out.Delay = append(out.Delay, delay)
	}
	return true
}
