package measure_test

import (
	"errors"
	"fmt"
	"math"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace/measure"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

func hole(t *testing.T) *geodesic.Round {
	t.Helper()
	s, err := geodesic.NewHole(0)
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// Far from the hole, in units of the Einstein radius θ_E = √(4M/D) of a
// source at infinity: (u² + 2)/(u√(u² + 4)), Paczyński, ApJ 304, 1 (1986),
// from memory; the images at (u ± √(u² + 4))/2. The next order in M/b is
// 15π/16 θ_E/4-like: a few θ_E.
func TestWeakFieldMagnification(t *testing.T) {
	const distance = 1e8
	einstein := math.Sqrt(4 / distance)
	for _, u := range []float64{0.1, 0.5, 1, 2} {
		images, total, err := measure.Magnification(hole(t), geodesic.Observer{Radius: distance}, u*einstein, 2)
		if err != nil {
			t.Fatal(err)
		}
		want := (u*u + 2) / (u * math.Sqrt(u*u+4))
		near(t, fmt.Sprintf("magnification at u = %g", u), total/want, 1, 4*einstein)
		if len(images) != 3 {
			t.Fatalf("%d images, want those of orders 0, 1 and 2", len(images))
		}
		root := math.Sqrt(u*u + 4)
		near(t, "direct image", images[0].Angle/einstein, (u+root)/2, 4*einstein)
		near(t, "second image", images[1].Angle/einstein, (root-u)/2, 4*einstein)
	}
}

// A source at rest at 6 M, averaged over the directions from which it is
// looked at: f (1 + cos a_esc)/2 = 0.569035593728849 with all orders
// (physics note, section 11). By reciprocity it is f times the magnification
// for an observer at 6 M, averaged over the sky.
func TestSkyAverage(t *testing.T) {
	const intervals, orders = 64, 5
	// ∫ μ sin ψ dψ/2 by Simpson's rule; μ sin ψ is smooth, also at both ends
	total := 0.0
	for k := range 2*intervals + 1 {
		offset := math.Pi * float64(k) / (2 * intervals)
		weight := 4.0
		switch {
		case k == 0 || k == 2*intervals:
			offset = min(max(offset, 1e-6), math.Pi-1e-6)
			weight = 1
		case k%2 == 0:
			weight = 2
		}
		_, m, err := measure.Magnification(hole(t), geodesic.Observer{Radius: 6}, offset, orders)
		if err != nil {
			t.Fatal(err)
		}
		total += weight * m * math.Sin(offset)
	}
	total *= math.Pi / (2 * intervals) / 3 / 2
	const f = 1 - 2./6
	near(t, "flux of a static source at 6 M averaged over the sky", f*total, 0.569035593728849, 1e-6)
}

// At the centre of a shell the sky is undistorted.
func TestShellCentre(t *testing.T) {
	s, err := geodesic.NewShell(2.5)
	if err != nil {
		t.Fatal(err)
	}
	for _, offset := range []float64{0.3, 1.5, 3} {
		images, total, err := measure.Magnification(s, geodesic.Observer{Radius: 0}, offset, 3)
		if err != nil || len(images) != 1 {
			t.Fatal(images, err)
		}
		near(t, "magnification", total, 1, 1e-6)
		near(t, "angle", images[0].Angle, offset, 1e-6)
		near(t, "shift", images[0].G, 1/math.Sqrt(1-2/2.5), 1e-12)
	}
}

func TestMagnificationRefuses(t *testing.T) {
	for _, o := range []geodesic.Observer{
		{Radius: 10, Motion: geodesic.Orbit}, {Radius: math.Inf(1)},
	} {
		if _, _, err := measure.Magnification(hole(t), o, 0.1, 1); !errors.Is(err, measure.ErrMagnification) {
			t.Errorf("%+v: error %v", o, err)
		}
	}
	if _, _, err := measure.Magnification(hole(t), geodesic.Observer{Radius: 10}, 0, 1); !errors.Is(err, measure.ErrMagnification) {
		t.Errorf("straight behind: error %v", err)
	}
}

// Light of a star straight behind a falling observer: g = 1/(1 + √(2/r)),
// 1/2 at the horizon (physics note, section 12); the star straight behind is
// the one at offset π.
func TestFallingObserver(t *testing.T) {
	for _, r := range []float64{1.5, 2, 6} {
		images, _, err := measure.Magnification(hole(t), geodesic.Observer{Radius: r, Motion: geodesic.Infall}, math.Pi-1e-5, 0)
		if err != nil || len(images) != 1 {
			t.Fatal(images, err)
		}
		near(t, "g", images[0].G, 1/(1+math.Sqrt(2/r)), 1e-9)
	}
}

func ExampleMagnification() {
	hole, err := geodesic.NewHole(0)
	if err != nil {
		fmt.Println(err)
		return
	}
	// a star 5 deg from the point straight behind the hole, seen from 100 M
	images, total, err := measure.Magnification(hole, geodesic.Observer{Radius: 100}, 5*math.Pi/180, 1)
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, i := range images {
		fmt.Printf("order %d at %.3f deg: %.4f\n", i.Order, i.Angle*180/math.Pi, i.Magnification)
	}
	fmt.Printf("total %.4f\n", total)
	// Output:
	// order 0 at 14.864 deg: 1.6733
	// order 1 at 10.260 deg: 0.7266
	// total 2.3999
}
