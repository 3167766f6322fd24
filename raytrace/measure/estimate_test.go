package measure

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

// blurredRing is an infinitely thin ring of unit flux, blurred by a circular
// Gaussian: exp(-(r²+R²)/2σ²) I₀(rR/σ²)/(2πσ²), with Bessel's integral for I₀
// (any handbook of functions), here by quadrature.
func blurredRing(r, radius, sigma float64) float64 {
	integrand := func(s float64) float64 {
		return math.Exp((2*r*radius*math.Cos(s) - r*r - radius*radius) / (2 * sigma * sigma))
	}
	return quad.Fixed(integrand, 0, math.Pi, 80, nil, 0) / math.Pi / (2 * math.Pi * sigma * sigma)
}

// ringImage holds such a ring, centred at x, y, times 1 + a cos(s - s0).
func ringImage(pixels int, pitch, x, y, radius, sigma, a, s0 float64) *Image {
	m := &Image{Columns: pixels, Rows: pixels, Pitch: pitch, Pixels: make([]float64, pixels*pixels)}
	const steps = 4000
	table := make([]float64, steps+2) // by radius: quadrature at every pixel would be slow
	most := float64(pixels) * pitch * 1.5
	for k := range table {
		table[k] = blurredRing(most*float64(k)/steps, radius, sigma)
	}
	for k := range m.Pixels {
		alpha, beta := m.at(k%pixels, k/pixels)
		r := math.Hypot(alpha-x, beta-y)
		at := r / most * steps
		i := int(at)
		v := table[i] + (table[i+1]-table[i])*(at-float64(i))
		m.Pixels[k] = v * (1 + a*math.Cos(math.Atan2(beta-y, alpha-x)-s0))
	}
	return m
}

// The ridge of a ring of 42 uas seen with a beam of 20 uas: pixels blurred by
// Fourier transform against the maximum of Bessel's formula.
func TestBlurMovesTheRidge(t *testing.T) {
	const diameter, fwhm, thin = 42, 20, 2
	sigma := fwhm * sigmaPerFWHM
	sharp := ringImage(320, 0.5, 0, 0, diameter/2, thin*sigmaPerFWHM, 0, 0)
	// two Gaussians make one
	beam := math.Sqrt(fwhm*fwhm - thin*thin)
	blurred, err := sharp.Blurred(context.Background(), Beam{Major: beam, Minor: beam})
	if err != nil {
		t.Fatal(err)
	}
	got, err := blurred.Estimate(context.Background(), Ridge)
	if err != nil {
		t.Fatal(err)
	}
	want, _ := golden(func(r float64) float64 { return blurredRing(r, diameter/2, sigma) }, 5, 25)
	near(t, "ridge", got.Diameter, 2*want, 1e-3)
	t.Logf("42 uas becomes %.4f uas; first order says %.4f", got.Diameter, diameter-fwhm*fwhm/diameter/(4*math.Ln2))
	if !(got.Diameter < diameter-2) {
		t.Errorf("the beam moves the ridge by %g only", diameter-got.Diameter)
	}
	total := func(m *Image) (sum float64) {
		for _, x := range m.Pixels {
			sum += x * m.Pitch * m.Pitch
		}
		return sum
	}
	near(t, "flux of the sharp ring", total(sharp), 1, 1e-5)
	near(t, "flux of the blurred ring", total(blurred), total(sharp), 1e-6)
}

// An elliptical beam widens a point by its axes along its angle.
func TestEllipticalBeam(t *testing.T) {
	m := &Image{Columns: 200, Rows: 160, Pitch: 1, Pixels: make([]float64, 200*160)}
	m.Pixels[80*200+100] = 1
	angle := 30 * math.Pi / 180
	b, err := m.Blurred(context.Background(), Beam{Major: 20, Minor: 8, Angle: angle})
	if err != nil {
		t.Fatal(err)
	}
	var along, across float64
	for k, w := range b.Pixels {
		x, y := m.at(k%200, k/200)
		x, y = x-0.5, y-0.5
		p, q := x*math.Cos(angle)+y*math.Sin(angle), y*math.Cos(angle)-x*math.Sin(angle)
		along += w * p * p
		across += w * q * q
	}
	near(t, "major", math.Sqrt(along), 20*sigmaPerFWHM, 1e-4)
	near(t, "minor", math.Sqrt(across), 8*sigmaPerFWHM, 1e-4)
}

// Every estimator finds a ring of known place, diameter and brightest side;
// shifted and stretched it follows.
func TestEstimators(t *testing.T) {
	const radius, fwhm, a, s0 = 5.0, 1.0, 0.3, 2.0
	for _, e := range Estimators() {
		for _, c := range []struct{ x, y, stretch float64 }{{0, 0, 1}, {0.37, -0.61, 1}, {0, 0, 1.1}} {
			m := ringImage(200, 0.1*c.stretch, c.x, c.y, radius*c.stretch, fwhm*c.stretch*sigmaPerFWHM, a, s0)
			got, err := m.Estimate(context.Background(), e)
			if err != nil {
				t.Fatal(e, err)
			}
			what := fmt.Sprintf("%s %+v ", e, c)
			if e == FluxWeighted { // a brighter side pulls the centroid by a R/2
				near(t, what+"x", got.Center[0], c.x+a*radius*c.stretch/2*math.Cos(s0), 0.02)
				continue
			}
			// a blurred ring's ridge lies inside by FWHM²/(16 ln2 R)
			near(t, what+"diameter", got.Diameter/c.stretch, 2*radius, 0.08)
			near(t, what+"x", got.Center[0], c.x, 0.02)
			near(t, what+"y", got.Center[1], c.y, 0.02)
			near(t, what+"width", got.Width/c.stretch, fwhm, 0.02)
			near(t, what+"asymmetry", got.Asymmetry, a/2, 0.005)
			near(t, what+"brightest", got.Brightest, s0, 0.01)
			near(t, what+"depression", got.Depression, 0, 1e-3)
			near(t, what+"bound", got.Bound, 0, m.Pitch/10)
		}
	}
	even := ringImage(200, 0.1, 0.3, 0, radius, fwhm*sigmaPerFWHM, 0, 0)
	got, err := even.Estimate(context.Background(), FluxWeighted)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "flux-weighted", got.Diameter, 2*radius, 0.04)
}

func TestDegenerateImages(t *testing.T) {
	dark := &Image{Columns: 20, Rows: 20, Pitch: 1, Pixels: make([]float64, 400)}
	blob := &Image{Columns: 40, Rows: 40, Pitch: 1, Pixels: make([]float64, 1600)}
	for k := range blob.Pixels {
		x, y := blob.at(k%40, k/40)
		blob.Pixels[k] = math.Exp(-(x*x + y*y) / 20)
	}
	outside := ringImage(40, 0.1, 0, 0, 5, 0.3, 0, 0)
	for _, e := range Estimators() {
		if got, err := dark.Estimate(context.Background(), e); !errors.Is(err, ErrCannot) {
			t.Errorf("dark, %s: %+v, %v", e, got, err)
		}
	}
	for _, m := range []*Image{blob, outside} {
		if got, err := m.Estimate(context.Background(), Ridge); !errors.Is(err, ErrCannot) {
			t.Errorf("%+v, %v", got, err)
		}
	}
	if _, err := blob.Blurred(context.Background(), Beam{Major: 50, Minor: 50}); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
	if _, err := blob.Estimate(context.Background(), "x"); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
	if _, err := dark.Nulls(context.Background(), 0, 0.1, 10); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
}
