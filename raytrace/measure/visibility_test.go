package measure

import (
	"context"
	"fmt"
	"math"
	"math/cmplx"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"

	"annulet/geodesic"
	"annulet/raytrace"
)

// A thin ring of diameter d has V = J₀(πdu), blurred times a Gaussian; its
// nulls are the zeros of J₀ over π (any handbook of functions; after Johnson
// et al., Sci. Adv. 6, eaaz1310 (2020)).
func TestRingVisibility(t *testing.T) {
	const radius, sigma = 5.0, 0.15
	m := ringImage(400, 0.05, 0.2, -0.1, radius, sigma, 0, 0)
	flux := real(m.Visibility(0, 0))
	near(t, "flux", flux, 1, 1e-5)
	nulls, err := m.Nulls(context.Background(), 0.7, 0.2, 100)
	if err != nil || len(nulls) < 2 {
		t.Fatal(nulls, err)
	}
	for k, want := range []float64{0.765479749562012, 1.75709543501087} {
		near(t, "null", nulls[k].Baseline*2*radius, want, 1e-3)
		near(t, "amplitude there", nulls[k].Amplitude, 0, 1e-4)
	}
	for _, u := range []float64{0.03, 0.11, 0.33, 0.71} {
		want := math.J0(2*math.Pi*radius*u) * math.Exp(-2*math.Pi*math.Pi*sigma*sigma*u*u)
		// the ring is off the centre of phase; pixels are points here
		got := m.Visibility(u, 0) * cmplx.Rect(sinc(u*m.Pitch), 2*math.Pi*u*0.2)
		near(t, "J0", real(got), want, 1e-4)
		near(t, "J0, imaginary", imag(got), 0, 1e-4)
	}
}

// The Fourier transform of the padded image against the direct sum.
func TestVisibilityMap(t *testing.T) {
	v, _ := viewOf(t, diskScene(50, 120)+"[trace]\nmax_order = 1\n")
	plate, err := v.Render(context.Background(), raytrace.Options{})
	if err != nil {
		t.Fatal(err)
	}
	m, err := NewImage(v.Field, plate.Total)
	if err != nil {
		t.Fatal(err)
	}
	grid, err := m.VisibilityMap(context.Background(), m.Nyquist()/2, 3)
	if err != nil {
		t.Fatal(err)
	}
	flux := real(m.Visibility(0, 0))
	worst, compared := 0.0, 0
	for k := 0; k < len(grid.Values); k += 97 {
		u := float64(k%grid.Columns-grid.Columns/2) * grid.Step
		w := float64(k/grid.Columns-grid.Rows/2) * grid.Step
		worst = max(worst, cmplx.Abs(grid.Values[k]-m.Visibility(u, w))/flux)
		compared++
	}
	t.Logf("worst difference %.1e of the flux in %d places", worst, compared)
	near(t, "FFT against direct sum", worst, 0, 1e-4)
	if compared < 100 {
		t.Errorf("%d compared", compared)
	}
	// a shift of the image turns no closure phase
	shifted := *m
	shifted.Center[0] += 3.3
	a, b := [2]float64{0.021, 0.013}, [2]float64{-0.006, 0.017}
	closure := func(m *Image) float64 {
		return ClosurePhase(m.Visibility(a[0], a[1]), m.Visibility(b[0], b[1]), m.Visibility(-a[0]-b[0], -a[1]-b[1]))
	}
	near(t, "closure phase", closure(&shifted), closure(m), 1e-10)
	if math.Abs(closure(m)) < 1e-3 {
		t.Errorf("the image is too even to tell: %g", closure(m))
	}
}

// Face-on, each order is a set of rings: V is Hankel's transform ∫ I(b)
// J₀(2πub) 2πb db of closed-form radii (Darwin 1959). At long baselines
// orders 1 and 2 ring as J₀ does, and fall as u^(-1/2) up to the inverse of
// their widths: Johnson et al., Sci. Adv. 6, eaaz1310 (2020).
func TestOrdersRing(t *testing.T) {
	v, _ := viewOf(t, diskScene(0, 10))
	const step, places = 0.013, 160
	var at [][2]float64
	for k := range places + 1 {
		u := step * float64(k)
		at = append(at, [2]float64{u * math.Cos(0.4), u * math.Sin(0.4)})
	}
	orders, err := DiskVisibilities(context.Background(), v, at, Options{Lines: 360, Cells: 200})
	if err != nil {
		t.Fatal(err)
	}
	hankel := func(n int, u float64) float64 {
		psi := (float64(n) + 0.5) * math.Pi
		integrand := func(b float64) float64 {
			orbit := geodesic.NewClosedOrbit(b)
			r := orbit.RadiusAt(0, psi)
			return math.Pow(1-3/r, 2) * math.Pow(r, -3) * math.J0(2*math.Pi*u*b) * 2 * math.Pi * b
		}
		return quad.Fixed(integrand, geodesic.RimImpact(0, psi, 6), geodesic.RimImpact(0, psi, 20), 200, nil, 0)
	}
	for n, order := range orders {
		flux := hankel(n, 0)
		for k := 0; k <= places; k += 16 {
			want := hankel(n, step*float64(k))
			near(t, fmt.Sprintf("order %d at %g", n, step*float64(k)), cmplx.Abs(order[k].Value-complex(want, 0))/flux, 0, 2e-4)
		}
	}
	// nulls of order 2, a ring of some 10.42 M: one in every 1/d
	nulls := 0
	for k := 1; k <= places; k++ {
		if real(orders[2][k].Value)*real(orders[2][k-1].Value) < 0 {
			nulls++
		}
	}
	near(t, "nulls of order 2", float64(nulls), step*places*10.42, 1)
	// order 0 is as good as gone where order 1 still rings, and order 1
	// falls before order 2 does
	peak := func(n, from, to int) (most float64) {
		for k := from; k < to; k++ {
			most = max(most, cmplx.Abs(orders[n][k].Value))
		}
		return most
	}
	if !(peak(0, 140, places)/peak(0, 0, 20) < peak(1, 140, places)/peak(1, 0, 20)) ||
		!(peak(1, 140, places)/peak(1, 0, 20) < peak(2, 140, places)/peak(2, 0, 20)) {
		t.Error("orders do not outlast each other")
	}
	fall := peak(2, 140, places) / peak(2, 60, 80)
	near(t, "fall of order 2", fall/math.Sqrt(70./150), 1, 0.1)
}
