package measure

import (
	"context"
	"math"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// Range is the least and the largest redshift factor.
type Range struct{ Min, Max float64 }

// Steps of the search for extreme redshift factors. Method: the scan finds
// the hill, the golden sections its top; g is flat there, so that an error of
// 1e-7 of a step is one of 1e-14 in g.
const (
	scanRadii   = 17
	scanAngles  = 48
	goldenSteps = 34
)

// Extremes returns the extreme redshift factors of the image of a disk in one
// order, by optimisation over radius and azimuth, whether or not something
// stands in the way. Edge-on it is the limit of inclinations towards 90 deg,
// light within the plane of the disk included.
func Extremes(ctx context.Context, g *rim.Geometry, d *emit.Disk, order int) (Range, error) {
	p, err := g.NewPencil(order)
	if err != nil {
		return Range{}, err
	}
	var failed error
	at := func(x, turn float64) float64 {
		r := math.Exp(x)
		if x == math.Log(d.Inner) {
			r = d.Inner
		}
		value, err := redshift(g, p, d, order, r, turn)
		if err != nil {
			failed = err
		}
		return value
	}
	from, to := math.Log(d.Inner), math.Log(d.Outer)
	var best [2]struct{ x, turn, value float64 }
	signs := [2]float64{-1, 1}
	for k := range best {
		best[k].value = math.Inf(-1)
	}
	stepX, stepTurn := (to-from)/(scanRadii-1), 2*math.Pi/scanAngles
	for i := range scanRadii {
		if err := ctx.Err(); err != nil {
			return Range{}, err
		}
		x := from + float64(i)*stepX
		for j := range scanAngles {
			turn := -math.Pi + float64(j)*stepTurn
			value := at(x, turn)
			for k, sign := range signs {
				if sign*value > best[k].value {
					best[k].x, best[k].turn, best[k].value = x, turn, sign*value
				}
			}
		}
	}
	var out Range
	for k, sign := range signs {
		b := best[k]
		peak := func(x float64) float64 {
			_, value := golden(func(turn float64) float64 { return sign * at(x, turn) }, b.turn-stepTurn, b.turn+stepTurn)
			return value
		}
		_, value := golden(peak, max(from, b.x-stepX), min(to, b.x+stepX))
		// the rims themselves, which a golden section only approaches
		value = max(value, peak(from), peak(to)) * sign
		if k == 0 {
			out.Min = value
		} else {
			out.Max = value
		}
	}
	if failed == nil && (math.IsNaN(out.Min) || math.IsNaN(out.Max)) {
		failed = cannot("no light of order %d reaches the observer from all of the disk", order)
	}
	return out, failed
}

// golden returns the place and value of the maximum of f between two places,
// by golden section (Kiefer, Proc. Am. Math. Soc. 4, 502 (1953), from memory).
func golden(f func(float64) float64, lo, hi float64) (x, value float64) {
	const ratio = 0.6180339887498949
	a, b := hi-ratio*(hi-lo), lo+ratio*(hi-lo)
	fa, fb := f(a), f(b)
	for range goldenSteps {
		if fa > fb {
			hi, b, fb = b, a, fa
			a = hi - ratio*(hi-lo)
			fa = f(a)
		} else {
			lo, a, fa = a, b, fb
			b = lo + ratio*(hi-lo)
			fb = f(b)
		}
	}
	if fa > fb {
		return a, fa
	}
	return b, fb
}

// redshift returns g of the light of one order from a place of the disk, at
// an azimuth from the observer's; NaN if there is none.
func redshift(g *rim.Geometry, p *rim.Pencil, d *emit.Disk, order int, r, turn float64) (float64, error) {
	sin, cos := math.Sincos(turn)
	psi := math.Acos(max(-1, min(1, g.SinI*cos)))
	if order%2 == 1 {
		psi = 2*math.Pi - psi
	}
	psi += float64(order/2) * 2 * math.Pi
	const least = 1e-9
	if psi < least {
		psi = least
	}
	cosS := 0.0
	if down := math.Sin(psi); down != 0 {
		cosS = max(-1, min(1, sin/down))
	}
	var b float64
	var err error
	s := math.Acos(cosS)
	if (psi-(float64(order)+0.5)*math.Pi)*g.CosI < 0 {
		s = -s
	}
	if g.Closed {
		b = g.Exterior(psi, r)
	} else if b, err = p.Impact(s, order, r); err != nil {
		return 0, err
	}
	kr := 0.0
	if d.Gas.Plunges(r) {
		if kr, err = leaving(g, p, order, psi, s, r, b); err != nil {
			return 0, err
		}
	}
	sense := 1.0
	if d.Clockwise {
		sense = -1
	}
	return d.Gas.RedshiftFactor(r, 1/g.Object.Lapse(g.Observer.Radius), -b*cosS*g.SinI, kr, sense), nil
}

// leaving is k^r/E of light with impact parameter b as it leaves r.
func leaving(g *rim.Geometry, p *rim.Pencil, order int, psi, s, r, b float64) (float64, error) {
	lapse := 0.0
	if r > g.Object.Edge() {
		lapse = g.Object.Lapse(r)
	}
	x := lapse * b / r
	kr := math.Sqrt(max(0, 1-x*x))
	switch {
	case b <= g.Object.CriticalImpact():
	case g.Closed:
		orbit := geodesic.NewClosedOrbit(b)
		if psi > orbit.Sweep(g.UObs, 1/orbit.Periapsis()) {
			kr = -kr
		}
	default:
		if _, err := p.Radius(b, s, order); err != nil {
			return 0, err
		}
		for j := range p.At.R {
			if int(p.At.Order[j]) == order && p.At.KR[j] < 0 {
				kr = -kr
			}
		}
	}
	return kr, nil
}
