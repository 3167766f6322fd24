package measure

import (
	"context"
	"math"

	"gonum.org/v1/gonum/mat"

	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/raytrace/rim"
)

// Edge is the image of one rim of a disk at one screen angle, in one image
// order. Impact parameters are in M, NaN where there is none.
type Edge struct {
	Emitter     int     // its place among the view's emitters
	Order       int     // image order
	ScreenAngle float64 // radians, counter-clockwise from +α
	Outer       bool    // the outer rim, else the inner
	Impact      float64 // root-found on paths integrated one by one
	Closed      float64 // by closed form
	// Measured is read off the image; MeasuredBound is a bound on its
	// distance from the edge, M.
	Measured, MeasuredBound float64
}

// Edges returns the edges of every disk, order and rim at the given screen
// angles, in radians; order by order, the angles in turn, inner before outer.
// Plate is the view's image with its Radius layers; nil leaves the measured
// values out.
func Edges(ctx context.Context, v *raytrace.View, angles []float64, plate *raytrace.Plate) ([]Edge, error) {
	g, err := newGeometry(v)
	if err != nil {
		return nil, err
	}
	p, err := g.NewPencil(v.Plan.MaxOrder)
	if err != nil {
		return nil, err
	}
	found, at := disks(v)
	if len(found) == 0 {
		return nil, cannot("the scene has no disk")
	}
	var edges []Edge
	for k, d := range found {
		for n := range v.Plan.MaxOrder + 1 {
			var rim *imageRim
			if plate != nil {
				if rim, err = newImageRim(g, v, plate.Layer(raytrace.Radius, n), n, d); err != nil {
					return nil, err
				}
			}
			for _, s := range angles {
				if err := ctx.Err(); err != nil {
					return nil, err
				}
				for _, r := range []float64{d.Inner, d.Outer} {
					e := Edge{
						Emitter: at[k], Order: n, ScreenAngle: s, Outer: r == d.Outer,
						Closed: g.ClosedImpact(g.Swept(s, n), r), Measured: math.NaN(), MeasuredBound: math.NaN(),
					}
					if e.Impact, err = p.Impact(s, n, r); err != nil {
						return nil, err
					}
					if rim != nil && !math.IsNaN(e.Impact) { // else something stands in the way
						e.Measured, e.MeasuredBound = rim.at(s, r)
					}
					edges = append(edges, e)
				}
			}
		}
	}
	return edges, nil
}

// imageRim is what an image shows of one disk in one order: its lit pixels.
type imageRim struct {
	g     *rim.Geometry
	order int
	pitch float64 // M
	lit   []litPixel
}

// litPixel is a pixel's place on the screen and the radius that it shows.
type litPixel struct{ alpha, beta, b, s, u, psi float64 }

// newImageRim gathers the pixels of a Radius layer that show the disk.
func newImageRim(g *rim.Geometry, v *raytrace.View, radius []float32, n int, d *emit.Disk) (*imageRim, error) {
	if radius == nil {
		return nil, cannot("the image holds no radius layer")
	}
	f := v.Field
	rim := &imageRim{g: g, order: n}
	rim.pitch = f.Pitch()
	perRadian := 1.0
	if !f.IsParallel() {
		perRadian = g.Widest // b = (r_o/√A) sin a
		rim.pitch *= perRadian
	}
	for k, r := range radius {
		r := float64(r)
		// float32 may round a rim outwards
		if !(r >= d.Inner*(1-1e-6) && r <= d.Outer*(1+1e-6)) {
			continue
		}
		alpha, beta := f.PixelCenter(k%f.Columns, k/f.Columns)
		switch f.Projection {
		case raytrace.Perspective:
			norm := perRadian / math.Sqrt(1+alpha*alpha+beta*beta)
			alpha, beta = alpha*norm, beta*norm
		case raytrace.AllSky:
			alpha, beta = perRadian*math.Sin(alpha)*math.Cos(beta), perRadian*math.Sin(beta)
		}
		s := math.Atan2(beta, alpha)
		rim.lit = append(rim.lit, litPixel{alpha, beta, math.Hypot(alpha, beta), s, 1 / r, g.Swept(s, n)})
	}
	return rim, nil
}

// How many pixels near the edge are fitted, and how far from its screen
// angle, in radians, they may lie. Method: near the direct image's edge few
// pixels carry a local fit; lensed rings are thin, and their shape, close to
// F(1/r) exp(-ψ), is smooth all around.
const (
	directPixels = 40
	directSector = 50 * math.Pi / 180
	lensedPixels = 200
	lensedSector = math.Pi
	// leastRimPixels: with fewer the image does not tell where the edge is.
	leastRimPixels = 12
	// turnWeight is how much an angle counts against a relative radius
	// where the edge is guessed. Taste.
	turnWeight = 20
	// rimReach is how far from the edge, in pixels, some must lie.
	rimReach = 4
)

// at returns where the image shows radius r at screen angle s: the impact
// parameter fitted to nearby pixels as a polynomial in 1/r and the swept
// angle, taken at the rim. The bound is what the highest terms of the fit
// change, and its largest residual. NaN where it would be more than a pixel,
// or no pixel nearby shows the disk.
func (m *imageRim) at(s, r float64) (b, bound float64) {
	near := m.nearest(s, r)
	if len(near) < leastRimPixels {
		return math.NaN(), math.NaN()
	}
	psi := m.g.Swept(s, m.order)
	degree := lowestDegree
	for degree < highestDegree && 2*terms(degree+1) <= len(near) {
		degree++
	}
	lower, _ := m.fit(near, s, psi, 1/r, degree-1)
	fitted, residual := m.fit(near, s, psi, 1/r, degree)
	bound = fitSafety*(math.Abs(fitted-lower)+residual) + m.resolution(fitted)
	if !(bound < m.pitch) || !m.shown(s, fitted) {
		return math.NaN(), math.NaN()
	}
	return fitted, bound
}

// resolution is the part of the bound that a float32 radius leaves, and a
// hundredth of a pixel for what a fit of its own data cannot know.
func (m *imageRim) resolution(b float64) float64 { return 0.01*m.pitch + 3e-7*b }

// fitSafety widens what two fits differ by into a bound: pixels lie on one
// side of an edge only. Method: checked against closed forms all around, at
// inclinations of 1 to 130 deg.
const fitSafety = 4

// shown says whether a lit pixel is near the place: within rimReach pixels
// in b, and in an angle within which even thin rings show themselves.
func (m *imageRim) shown(s, b float64) bool {
	const turn = 0.6 // radians
	for _, p := range m.lit {
		if math.Abs(p.b-b) < rimReach*m.pitch && math.Abs(math.Remainder(p.s-s, 2*math.Pi)) < turn {
			return true
		}
	}
	return false
}

// nearest returns the lit pixels nearest to the edge, in the sector.
func (m *imageRim) nearest(s, r float64) []litPixel {
	var sector []litPixel
	pixels, widest := directPixels, directSector
	if m.order > 0 {
		pixels, widest = lensedPixels, lensedSector
	}
	best, guess := math.Inf(1), 0.0
	for _, p := range m.lit {
		turn := math.Abs(math.Remainder(p.s-s, 2*math.Pi))
		if turn > widest {
			continue
		}
		sector = append(sector, p)
		// nearest in radius; far off in angle only if nothing else shows
		if off := math.Abs(p.u*r-1) + turnWeight*turn*turn; off < best {
			best, guess = off, p.b
		}
	}
	sin, cos := math.Sincos(s)
	x, y := guess*cos, guess*sin
	near := smallest(sector, pixels, func(p litPixel) float64 {
		return (p.alpha-x)*(p.alpha-x) + (p.beta-y)*(p.beta-y)
	})
	if m.order == 0 && (len(near) == 0 || math.Hypot(near[0].alpha-x, near[0].beta-y) > rimReach*m.pitch) {
		return nil // the edge lies outside the field
	}
	return near
}

// The degrees of the fitted polynomials.
const lowestDegree, highestDegree = 2, 5

// terms is the number of terms of a polynomial in two variables, and two for
// a shift of the image.
func terms(degree int) int { return (degree+1)*(degree+2)/2 + 2 }

// fit returns b at the rim and the largest residual.
func (m *imageRim) fit(near []litPixel, s, psi, u float64, degree int) (b, residual float64) {
	rows := make([][5]float64, len(near)) // 1/r, swept angle, shift along and across
	var span [5]float64
	for k, p := range near {
		sin, cos := math.Sincos(p.s - s)
		y := p.psi - psi
		if m.order > 0 {
			y = math.Expm1(-y)
		}
		rows[k] = [5]float64{p.u - u, y, sin, 1 - cos}
		for i, x := range rows[k] {
			span[i] = max(span[i], math.Abs(x))
		}
	}
	design := mat.NewDense(len(near), terms(degree), nil)
	row := make([]float64, 0, terms(degree))
	values := mat.NewVecDense(len(near), nil)
	for k, p := range near {
		for i := range span {
			if span[i] > 0 {
				rows[k][i] /= span[i]
			}
		}
		x, y, z, w := rows[k][0], rows[k][1], rows[k][2], rows[k][3]
		row := append(row[:0], 1, z, w)
		power := 1.0
		for i := range degree + 1 { // x^i y^j
			term := power
			for j := range degree + 1 - i {
				if i+j > 0 {
					row = append(row, term)
				}
				term *= y
			}
			power *= x
		}
		design.SetRow(k, row)
		if value := p.b; m.order > 0 {
			values.SetVec(k, value)
		} else { // b/r is the sine of the swept angle, nearly
			values.SetVec(k, value*p.u/u)
		}
	}
	var svd mat.SVD
	if !svd.Factorize(design, mat.SVDThin) {
		return math.NaN(), math.NaN()
	}
	// at small inclinations ψ hardly varies, and its terms fall away
	const least = 1e-9
	var solved, back mat.Dense
	svd.SolveTo(&solved, values, svd.Rank(least))
	back.Mul(design, &solved)
	for k := range near {
		residual = max(residual, math.Abs(back.At(k, 0)-values.AtVec(k)))
	}
	return solved.At(0, 0), residual
}
