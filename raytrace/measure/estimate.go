package measure

import (
	"context"
	"math"
	"slices"

	"gonum.org/v1/gonum/mat"
	"gonum.org/v1/gonum/optimize"
)

// Estimator names a way to read a ring off an image; each gives a diameter of
// its own.
type Estimator string

// The estimators.
const (
	// Ridge: twice the mean distance of the brightest point, at every angle
	// around a centre from which these distances have no first harmonic.
	Ridge Estimator = "ridge"
	// FluxWeighted: twice the mean distance of the light from its centroid,
	// over the whole field.
	FluxWeighted Estimator = "flux-weighted"
	// AnnulusFit: least squares of a ring with a Gaussian cut, brightness
	// 1 + A cos(angle), and a disc of even brightness within, to the image
	// up to 1.5 ridge radii from the ridge's centre.
	AnnulusFit Estimator = "annulus-fit"
)

// Estimators lists them.
func Estimators() []Estimator { return []Estimator{Ridge, FluxWeighted, AnnulusFit} }

// Estimate is a ring read off an image. Lengths are in M.
type Estimate struct {
	Estimator Estimator
	Diameter  float64
	// Bound is how much the diameter changes if the image has pixels twice
	// as wide; a bound on what pixels do to it, not on the model.
	Bound  float64
	Center [2]float64 // screen coordinates
	// Width is the FWHM of the ring's cut: the mean over angles, that of the
	// fit; flux-weighted: 2 √(2 ln 2) times the scatter of distances.
	Width float64
	// Asymmetry A and Brightest, its screen angle in radians: the first
	// harmonic of brightness around the ring, half its relative size as
	// |Σ I e^(iφ)|/Σ I for ridge and flux-weighted (EHT, ApJL 875, L4 (2019),
	// from memory), A/2 of the fit so that the three compare.
	Asymmetry, Brightest float64
	// Depression is the brightness at the centre over the mean brightness
	// of the ring; NaN for flux-weighted.
	Depression float64
}

// Estimate measures the ring.
func (m *Image) Estimate(ctx context.Context, e Estimator) (Estimate, error) {
	if !slices.Contains(Estimators(), e) {
		return Estimate{}, cannot("there is no estimator %q", e)
	}
	if err := m.Check(); err != nil {
		return Estimate{}, err
	}
	fine, err := m.estimate(ctx, e)
	if err != nil {
		return fine, err
	}
	fine.Bound = m.Pitch
	if m.Columns/2 >= leastPixels && m.Rows/2 >= leastPixels {
		if coarse, err := m.Coarser(2).estimate(ctx, e); err == nil {
			fine.Bound = math.Abs(coarse.Diameter - fine.Diameter)
		}
	}
	return fine, ctx.Err()
}

func (m *Image) estimate(ctx context.Context, e Estimator) (Estimate, error) {
	switch e {
	case Ridge:
		return m.ridge(ctx)
	case FluxWeighted:
		return m.fluxWeighted()
	}
	return m.annulus(ctx)
}

func (m *Image) fluxWeighted() (Estimate, error) {
	x, y := m.centroid()
	var total, mean, square, re, im float64
	for k, w := range m.Pixels {
		a, b := m.at(k%m.Columns, k/m.Columns)
		d := math.Hypot(a-x, b-y)
		total += w
		mean += w * d
		square += w * d * d
		if d > 0 {
			re += w * (a - x) / d
			im += w * (b - y) / d
		}
	}
	mean /= total
	scatter := math.Sqrt(max(0, square/total-mean*mean))
	return Estimate{
		Estimator: FluxWeighted, Diameter: 2 * mean, Center: [2]float64{x, y}, Width: scatter / sigmaPerFWHM,
		Asymmetry: math.Hypot(re, im) / total, Brightest: math.Atan2(im, re), Depression: math.NaN(),
	}, nil
}

// ridgeAngles is how many cuts are made. Taste.
const ridgeAngles = 180

func (m *Image) ridge(ctx context.Context) (Estimate, error) {
	var x, y float64 // the object's place, which a ring surrounds
	var e Estimate
	const turns = 50
	for turn := range turns {
		if err := ctx.Err(); err != nil {
			return e, err
		}
		var mean, dx, dy, peak, re, im, width float64
		wide := 0
		for k := range ridgeAngles {
			s := 2 * math.Pi * float64(k) / ridgeAngles
			sin, cos := math.Sincos(s)
			r, top, fwhm := m.cutAlong(x, y, cos, sin)
			if math.IsNaN(r) {
				return e, cannot("at %.0f deg on the screen brightness has no ridge within the field", s*180/math.Pi)
			}
			mean += r / ridgeAngles
			dx += 2 * r * cos / ridgeAngles
			dy += 2 * r * sin / ridgeAngles
			peak += top / ridgeAngles
			re += top * cos / ridgeAngles
			im += top * sin / ridgeAngles
			if !math.IsNaN(fwhm) {
				width += fwhm
				wide++
			}
		}
		if mean < 2*m.Pitch {
			return e, cannot("the image is brightest in its middle: there is no ring")
		}
		e = Estimate{
			Estimator: Ridge, Diameter: 2 * mean, Center: [2]float64{x, y}, Width: math.NaN(),
			Asymmetry: math.Hypot(re, im) / peak, Brightest: math.Atan2(im, re), Depression: m.Value(x, y) / peak,
		}
		if wide > 0 {
			e.Width = width / float64(wide)
		}
		if math.Hypot(dx, dy) < 1e-6*m.Pitch || turn == turns-1 {
			break
		}
		x, y = x+dx/2, y+dy/2
	}
	return e, nil
}

// cutAlong returns where the brightest maximum of a ray lies, its brightness,
// and the FWHM there (NaN if one side does not fall to half). NaN all if
// brightness has no maximum between the ray's ends or a higher one at the end.
func (m *Image) cutAlong(x, y, cos, sin float64) (r, top, fwhm float64) {
	const perPixel = 4
	step := m.Pitch / perPixel
	const margin = 2 // pixels that Value needs around it
	halfWidth, halfHeight := (float64(m.Columns)/2-margin)*m.Pitch, (float64(m.Rows)/2-margin)*m.Pitch
	inside := func(r float64) bool {
		return math.Abs(x+r*cos-m.Center[0]) < halfWidth && math.Abs(y+r*sin-m.Center[1]) < halfHeight
	}
	value := func(r float64) float64 { return m.Value(x+r*cos, y+r*sin) }
	best := 0
	before, here := math.Inf(1), value(0)
	for k := 1; inside(float64(k) * step); k++ {
		after := value(float64(k) * step)
		if here > before && here >= after && (best == 0 || here > top) {
			best, top = k-1, here
		}
		before, here = here, after
	}
	if best == 0 || here > top { // it still rises at the edge of the field
		return math.NaN(), math.NaN(), math.NaN()
	}
	r, top = golden(value, float64(best-1)*step, float64(best+1)*step)
	half := func(direction float64) float64 {
		for k := 1; ; k++ {
			at := r + direction*float64(k)*step
			if at < 0 || !inside(at) {
				return math.NaN()
			}
			if v := value(at); v < top/2 {
				before := value(at - direction*step)
				return at - direction*step*(top/2-v)/(before-v)
			}
		}
	}
	return r, top, half(1) - half(-1)
}

// fitReach is how far the fit looks, in ridge radii: a disk's faint outside
// is no ring. Taste.
const fitReach = 1.5

// fitSide is about the side, in pixels, of the image that annuli are fitted
// to. Method: a blurred ring is smooth on that scale.
const fitSide = 160

func (m *Image) annulus(ctx context.Context) (Estimate, error) {
	if k := max(m.Columns, m.Rows) / fitSide; k > 1 {
		m = m.Coarser(k)
	}
	start, err := m.ridge(ctx)
	if err != nil {
		return start, err
	}
	width := start.Width
	if math.IsNaN(width) || width < m.Pitch {
		width = 2 * m.Pitch
	}
	var linear [4]float64
	var failed error
	problem := optimize.Problem{Func: func(p []float64) float64 {
		if failed = ctx.Err(); failed != nil {
			return 0
		}
		var misfit float64
		linear, misfit = m.fitAnnulus(p[0], p[1], math.Abs(p[2]), math.Abs(p[3]), start)
		return misfit
	}}
	x := []float64{start.Center[0], start.Center[1], start.Diameter / 2, width * sigmaPerFWHM}
	settings := &optimize.Settings{
		MajorIterations: 600,
		Converger:       &optimize.FunctionConverge{Relative: 1e-10, Absolute: 1e-14, Iterations: 40},
	}
	found, err := optimize.Minimize(problem, x, settings, &optimize.NelderMead{SimplexSize: start.Diameter / 20})
	if failed != nil {
		return start, failed
	}
	if found == nil || err != nil && found.F > 0.99 {
		return start, cannot("no annulus fits: %v", err)
	}
	linear, _ = m.fitAnnulus(found.X[0], found.X[1], math.Abs(found.X[2]), math.Abs(found.X[3]), start)
	radius, sigma := math.Abs(found.X[2]), math.Abs(found.X[3])
	if !(radius > m.Pitch/2) || linear[0] <= 0 {
		return start, cannot("the best annulus has no hole: there is no ring")
	}
	return Estimate{
		Estimator: AnnulusFit, Diameter: 2 * radius, Center: [2]float64{found.X[0], found.X[1]}, Width: sigma / sigmaPerFWHM,
		Asymmetry: math.Hypot(linear[1], linear[2]) / linear[0] / 2, Brightest: math.Atan2(linear[2], linear[1]),
		Depression: m.Value(found.X[0], found.X[1]) / linear[0],
	}, nil
}

// fitAnnulus fits the four brightnesses of an annulus (mean, cosine, sine,
// disc within) and returns the square of what is left, relative to the
// image's.
func (m *Image) fitAnnulus(x, y, radius, sigma float64, within Estimate) (linear [4]float64, misfit float64) {
	sigma = max(sigma, m.Pitch/4)
	var normal [16]float64
	var right [4]float64
	var power float64
	for k, v := range m.Pixels {
		a, b := m.at(k%m.Columns, k/m.Columns)
		if math.Hypot(a-within.Center[0], b-within.Center[1]) > fitReach*within.Diameter/2 {
			continue
		}
		a, b = a-x, b-y
		d := math.Hypot(a, b)
		t := (d - radius) / sigma
		ring := math.Exp(-t * t / 2)
		var cos, sin float64
		if d > 0 {
			cos, sin = a/d, b/d
		}
		basis := [4]float64{ring, ring * cos, ring * sin, math.Erfc(t/math.Sqrt2) / 2}
		for i, p := range basis {
			right[i] += p * v
			for j := range i + 1 {
				normal[4*i+j] += p * basis[j]
			}
		}
		power += v * v
	}
	for i := range 4 {
		for j := range i {
			normal[4*j+i] = normal[4*i+j]
		}
		normal[5*i] *= 1 + 1e-12
	}
	var solved mat.VecDense
	if err := solved.SolveVec(mat.NewDense(4, 4, normal[:]), mat.NewVecDense(4, right[:])); err != nil {
		return linear, 1
	}
	misfit = power
	for i := range linear {
		linear[i] = solved.AtVec(i)
		misfit -= linear[i] * right[i]
	}
	return linear, max(0, misfit/power)
}
