package measure

import (
	"context"
	"math"
)

// circles is where concentric circles of the disk plane appear in one image
// order: their impact parameters as functions of the swept angle.
type circles struct {
	order  int
	lo, hi float64     // swept angles
	coeffs [][]float64 // of b/(1 + r), one row a circle
	r      []float64
}

// Sizes of the expansion, and the largest relative error of b with which it
// is content. Method: areas need no more; edges themselves are rooted on.
const (
	radiusNodes     = 20
	leastAngleNodes = 24
	mostAngleNodes  = 96
	circleTolerance = 1e-8
)

// newCircles expands the images of circles of radius r, which must rise.
func (g *Geometry) newCircles(ctx context.Context, order int, r []float64) (*circles, error) {
	tilt := math.Atan2(g.sinI, math.Abs(g.cosI))
	middle := (float64(order) + 0.5) * math.Pi
	c := &circles{order: order, lo: middle - tilt, hi: middle + tilt, r: r}
	if g.cosI == 0 { // every path meets the plane behind the object
		c.lo, c.hi = middle+math.Pi/2, middle+math.Pi/2
	}
	const least = 1e-9 // rad: at no angle at all there is no image
	c.lo = max(c.lo, least)
	p, err := g.pencil(order)
	if err != nil {
		return nil, err
	}
	angles := leastAngleNodes
	if c.hi <= c.lo {
		angles = 1
	}
	for radii := radiusNodes; ; angles, radii = angles*2, radii*3/2 {
		if err := c.expand(ctx, g, p, radii, min(angles, mostAngleNodes)); err != nil {
			return nil, err
		}
		worst, err := c.worst(g, p)
		if err != nil || worst < circleTolerance || angles >= mostAngleNodes {
			return c, err
		}
	}
}

// rootAt returns the impact parameter at which a circle appears at a swept
// angle: by closed form where there is one, else rooted on traced paths. What
// an opaque surface hides is not left out.
func (g *Geometry) rootAt(p *pencil, psi, r float64, order int) (float64, error) {
	if g.closed {
		return g.exterior(psi, r), nil
	}
	// any screen angle that sweeps psi
	turn := psi - (float64(order)+0.5)*math.Pi
	sin := 0.0
	if g.sinI != 0 {
		sin = max(-1, min(1, math.Tan(turn)*g.cosI/g.sinI))
	}
	return p.impact(math.Asin(sin), order, r)
}

func (c *circles) expand(ctx context.Context, g *Geometry, p *pencil, radii, angles int) error {
	from, to := math.Log(c.r[0]), math.Log(c.r[len(c.r)-1])
	byRadius := make([][]float64, angles) // coefficients in ln r, one row an angle
	values := make([]float64, radii)
	for l, psi := range chebyshevNodes(angles, c.lo, c.hi) {
		if err := ctx.Err(); err != nil {
			return err
		}
		for k, x := range chebyshevNodes(radii, from, to) {
			r := math.Exp(x)
			b, err := g.rootAt(p, psi, r, c.order)
			if err != nil {
				return err
			}
			if math.IsNaN(b) {
				return cannot("the circle of %.6g M has no image of order %d all around: it lies beyond the observer or behind the object", r, c.order)
			}
			values[k] = b / (1 + r)
		}
		byRadius[l] = make([]float64, radii)
		chebyshevFit(values, byRadius[l])
	}
	c.coeffs = make([][]float64, len(c.r))
	basis := make([]float64, radii)
	along := make([]float64, angles)
	for k, r := range c.r {
		chebyshevBasis(math.Log(r), from, to, basis)
		for l := range along {
			along[l] = dot(byRadius[l], basis)
		}
		c.coeffs[k] = make([]float64, angles)
		chebyshevFit(along, c.coeffs[k])
	}
	return nil
}

// worst returns the largest relative error at a few places between the nodes.
func (c *circles) worst(g *Geometry, p *pencil) (worst float64, err error) {
	b := make([]float64, len(c.r))
	for _, x := range []float64{0.003, 0.02, 0.11, 0.37, 0.63, 0.89, 0.985, 0.999} {
		psi := c.lo + x*(c.hi-c.lo)
		c.at(psi, b)
		for _, k := range []int{0, len(c.r) / 7, len(c.r) / 2, len(c.r) - 1} {
			want, err := g.rootAt(p, psi, c.r[k], c.order)
			if err != nil {
				return 0, err
			}
			worst = max(worst, math.Abs(b[k]/want-1))
		}
	}
	return worst, nil
}

// at fills b with the impact parameters at a swept angle.
func (c *circles) at(psi float64, b []float64) {
	var store [2 * mostAngleNodes]float64
	basis := store[:len(c.coeffs[0])]
	chebyshevBasis(psi, c.lo, c.hi, basis)
	for k, r := range c.r {
		b[k] = (1 + r) * dot(c.coeffs[k], basis)
	}
}

func dot(a, b []float64) (sum float64) {
	for k, x := range a {
		sum += x * b[k]
	}
	return sum
}
