package measure

import (
	"context"
	"errors"
	"math"
	"testing"

	"annulet/raytrace"
	"annulet/raytrace/emit"
)

const hotDisk = `
[object]
mass = "10 Msun"
distance = "3 kpc"
[observer]
inclination = 50
[field]
frequency = ["0.2 keV", "1 keV", "5 keV"]
[[emitter]]
profile = "novikov-thorne"
luminosity = "0.1 Edd"
light = "blackbody"
colour_correction = 1.7
inner = 8
outer = 40
`

// Against package raytrace's own integration on the disk, by Gauss and
// Legendre, order by order; and for a face-on annulus g³ B_ν(ν/g, fT)/f⁴ of
// its area, with g = √(1-3/r).
func TestSpectrum(t *testing.T) {
	v, _ := viewOf(t, hotDisk+"[trace]\nmax_order = 1\n")
	s, err := NewSpectrum(context.Background(), v, 0, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for _, k := range []int{1} { // that integration takes its time
		tuned, err := v.WithFrequency(k)
		if err != nil {
			t.Fatal(err)
		}
		want, _, err := tuned.DiskFlux(tuned.Emitters[0].(*emit.Disk))
		if err != nil {
			t.Fatal(err)
		}
		total := 0.0
		for n, x := range want {
			near(t, "order", s.Orders[n][k]/x, 1, 2e-4)
			total += x
		}
		near(t, "flux", s.Flux[k]/total, 1, 1e-4)
		near(t, "flux within its bound", s.Flux[k], total, s.Bound[k])
	}

	v, _ = viewOf(t, hotDisk+"[trace]\nmax_order = 0\n")
	v.Observer.InclinationDeg = 0
	d := v.Emitters[0].(*emit.Disk)
	d.Inner, d.Outer = 10, 10.0001
	if s, err = NewSpectrum(context.Background(), v, 0, Options{Lines: 40, Cells: 8}); err != nil {
		t.Fatal(err)
	}
	geometry, err := NewRings(context.Background(), v, nil, Options{Lines: 40, Cells: 8})
	if err != nil {
		t.Fatal(err)
	}
	g := math.Sqrt(0.7)
	for k, nu := range s.Frequencies {
		const f = 1.7
		want := math.Pow(g, 3) * emit.BlackBody(nu/g, f*v.TemperatureAt(10.00005)) / math.Pow(f, 4) * geometry.Rings[0].Area
		near(t, "annulus", s.Flux[k]/want, 1, 2e-5)
	}
	bare, _ := viewOf(t, diskScene(30, 10))
	if _, err := NewSpectrum(context.Background(), bare, 0, Options{}); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
}

// A spot's light curve over its whole image against sums over fine pixels;
// it repeats after 2π r^(3/2).
func TestLightCurve(t *testing.T) {
	const text = `
[observer]
inclination = 60
[field]
pixels = [500, 500]
[trace]
max_order = 1
[[emitter]]
kind = "spot"
radius = 9
size = 0.7
`
	v, _ := viewOf(t, text)
	period := 2 * math.Pi * 27
	times := []float64{0, 0.3 * period, 0.55 * period, 0.8 * period, period}
	curve, err := LightCurve(context.Background(), v, times, Options{})
	if err != nil {
		t.Fatal(err)
	}
	pixels, err := pixelCurve(context.Background(), v, times, Options{})
	if err != nil {
		t.Fatal(err)
	}
	for k, i := range curve {
		near(t, "flux against pixels", i.Flux/pixels[k].Flux, 1, 2e-3)
		near(t, "direct", i.Orders[0]/pixels[k].Orders[0], 1, 1e-4)
		near(t, "lensed", i.Orders[1]/pixels[k].Orders[1], 1, 0.03)
		near(t, "centroid", math.Hypot(i.Centroid[0]-pixels[k].Centroid[0], i.Centroid[1]-pixels[k].Centroid[1]), 0, 0.03)
		near(t, "bound", i.Bound/i.Flux, 0, 0.005)
	}
	near(t, "after a period", curve[4].Flux/curve[0].Flux, 1, 1e-9)
	if math.Abs(curve[1].Flux/curve[0].Flux-1) < 0.1 {
		t.Error("the spot does not vary")
	}
	bare, _ := viewOf(t, diskScene(30, 10))
	if _, err := LightCurve(context.Background(), bare, times, Options{}); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
}

// A known echo between samples; and the face-on ring at 6 M, whose order 1
// follows 20.3360924044 M after the direct one (physics reference, by two
// roads): here read off delays, in TestRingFluxes, as it does not vary.
func TestEchoDelay(t *testing.T) {
	const n, step, delay = 60, 1.5, 20.3360924044
	pulse := func(x float64) float64 {
		x = math.Remainder(x, n*step)
		return math.Exp(-x * x / 50)
	}
	a, b := make([]float64, n), make([]float64, n)
	for k := range n {
		a[k] = 1 + pulse(float64(k)*step-7)
		b[k] = 0.02 * pulse(float64(k)*step-7-delay)
	}
	got, err := EchoDelay(a, b, step)
	if err != nil {
		t.Fatal(err)
	}
	near(t, "delay", got, delay, 0.02*step)
	for k := range b {
		b[k] = 3
	}
	if _, err := EchoDelay(a, b, step); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
}

// A spot flashes at every order: for one seen face-on, whose order n lags by
// the ring's delay, the pattern at the same azimuth comes that much later.
func TestFaceOnSpotEcho(t *testing.T) {
	v, _ := viewOf(t, `
[observer]
inclination = 0
[trace]
max_order = 1
[[emitter]]
kind = "spot"
radius = 6
size = 0.2
`)
	omega := math.Pow(6, -1.5)
	curve, err := overViews(context.Background(), v, []*raytrace.View{v.AtTime(0)}, true, Options{Lines: 2400, Cells: 60}.filled())
	if err != nil {
		t.Fatal(err)
	}
	// the places of both images on the screen tell the spot's azimuth when
	// the light left; order 1 shows it on the other side
	direct := math.Atan2(curve[0][0].beta, curve[0][0].alpha)
	lensed := math.Atan2(curve[1][0].beta, curve[1][0].alpha) + math.Pi
	turn := math.Mod(direct-lensed+4*math.Pi, 2*math.Pi)
	near(t, "echo", turn/omega, 20.3360924044, 0.02)
}
