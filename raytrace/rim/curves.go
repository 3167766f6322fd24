package rim

import (
	"context"
	"math"
)

// Curves is where concentric circles of the disk plane appear in one image
// order: their impact parameters as functions of the swept angle.
type Curves struct {
	Order  int
	R      []float64   // of the circles, M, rising
	Off    float64     // largest relative error of an impact parameter found between the nodes
	lo, hi float64     // swept angles
	coeffs [][]float64 // of b/(1 + r), one row a circle
}

// Sizes of the expansion, and the largest relative error of b with which it
// is content. Method: areas need no more; edges themselves are rooted on.
const (
	radiusNodes     = 20
	leastAngleNodes = 24
	mostAngleNodes  = 96
	circleTolerance = 1e-8
)

// NewCurves expands the images of circles of radius r, which must rise.
func (g *Geometry) NewCurves(ctx context.Context, order int, r []float64) (*Curves, error) {
	tilt := math.Atan2(g.SinI, math.Abs(g.CosI))
	middle := (float64(order) + 0.5) * math.Pi
	c := &Curves{Order: order, lo: middle - tilt, hi: middle + tilt, R: r}
	if g.CosI == 0 { // every path meets the plane behind the object
		c.lo, c.hi = middle+math.Pi/2, middle+math.Pi/2
	}
	const least = 1e-9 // rad: at no angle at all there is no image
	c.lo = max(c.lo, least)
	p, err := g.NewPencil(order)
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
		if c.Off, err = c.worst(g, p); err != nil || c.Off < circleTolerance || angles >= mostAngleNodes {
			return c, err
		}
	}
}

// RootAt returns the impact parameter at which a circle appears at a swept
// angle: by closed form where there is one, else rooted on traced paths. What
// an opaque surface hides is not left out.
func (g *Geometry) RootAt(p *Pencil, psi, r float64, order int) (float64, error) {
	if g.Closed {
		return g.Exterior(psi, r), nil
	}
	// any screen angle that sweeps psi
	turn := psi - (float64(order)+0.5)*math.Pi
	sin := 0.0
	if g.SinI != 0 {
		sin = max(-1, min(1, math.Tan(turn)*g.CosI/g.SinI))
	}
	return p.Impact(math.Asin(sin), order, r)
}

// expand fills in the coefficients. Many circles are interpolated in ln r
// between radii, fewer are rooted themselves.
func (c *Curves) expand(ctx context.Context, g *Geometry, p *Pencil, radii, angles int) error {
	from, to := math.Log(c.R[0]), math.Log(c.R[len(c.R)-1])
	rooted := c.R
	if len(c.R) > radii {
		rooted = chebyshevNodes(radii, from, to)
		for k, x := range rooted {
			rooted[k] = math.Exp(x)
		}
	}
	at := make([][]float64, len(rooted)) // b/(1 + r) by radius and angle
	for k := range at {
		at[k] = make([]float64, angles)
	}
	for l, psi := range chebyshevNodes(angles, c.lo, c.hi) {
		if err := ctx.Err(); err != nil {
			return err
		}
		for k, r := range rooted {
			b, err := g.RootAt(p, psi, r, c.Order)
			if err != nil {
				return err
			}
			if math.IsNaN(b) {
				return cannot("the circle of %.6g M has no image of order %d all around: it lies beyond the observer or behind the object", r, c.Order)
			}
			at[k][l] = b / (1 + r)
		}
	}
	if len(c.R) > radii {
		at = byRadius(at, c.R, from, to)
	}
	c.coeffs = make([][]float64, len(c.R))
	for k := range c.coeffs {
		c.coeffs[k] = make([]float64, angles)
		chebyshevFit(at[k], c.coeffs[k])
	}
	return nil
}

// byRadius interpolates what is given at Chebyshev nodes in ln r to the radii
// r, angle by angle.
func byRadius(at [][]float64, r []float64, from, to float64) [][]float64 {
	radii, angles := len(at), len(at[0])
	coeffs := make([][]float64, angles)
	values := make([]float64, radii)
	for l := range coeffs {
		for k := range values {
			values[k] = at[k][l]
		}
		coeffs[l] = make([]float64, radii)
		chebyshevFit(values, coeffs[l])
	}
	basis := make([]float64, radii)
	out := make([][]float64, len(r))
	for k, r := range r {
		chebyshevBasis(math.Log(r), from, to, basis)
		out[k] = make([]float64, angles)
		for l := range out[k] {
			out[k][l] = dot(coeffs[l], basis)
		}
	}
	return out
}

// worst returns the largest relative error at a few places between the nodes.
func (c *Curves) worst(g *Geometry, p *Pencil) (worst float64, err error) {
	b := make([]float64, len(c.R))
	for _, x := range []float64{0.003, 0.02, 0.11, 0.37, 0.63, 0.89, 0.985, 0.999} {
		psi := c.lo + x*(c.hi-c.lo)
		c.At(psi, b)
		for _, k := range []int{0, len(c.R) / 7, len(c.R) / 2, len(c.R) - 1} {
			want, err := g.RootAt(p, psi, c.R[k], c.Order)
			if err != nil {
				return 0, err
			}
			worst = max(worst, math.Abs(b[k]/want-1))
		}
	}
	return worst, nil
}

// At fills b with the impact parameters at a swept angle.
func (c *Curves) At(psi float64, b []float64) {
	var store [2 * mostAngleNodes]float64
	basis := store[:len(c.coeffs[0])]
	chebyshevBasis(psi, c.lo, c.hi, basis)
	for k, r := range c.R {
		b[k] = (1 + r) * dot(c.coeffs[k], basis)
	}
}

func dot(a, b []float64) (sum float64) {
	for k, x := range a {
		sum += x * b[k]
	}
	return sum
}
