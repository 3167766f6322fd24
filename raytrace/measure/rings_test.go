package measure

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"annulet/raytrace"
)

// Values of the physics reference, recomputed there by two roads: a circle at
// 6 M seen at 60 deg, its image in orders 0 and 1; after Luminet (1979).
func TestOutlines(t *testing.T) {
	v, _ := viewOf(t, diskScene(60, 400))
	plate, err := v.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{raytrace.Radius}})
	if err != nil {
		t.Fatal(err)
	}
	table, err := NewRings(context.Background(), v, plate, Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "critical", table.Critical, 3*math.Sqrt(3), 1e-10)
	near(t, "closed critical", table.CriticalClosed, 3*math.Sqrt(3), 1e-15)
	near(t, "Lyapunov", table.Lyapunov, math.Pi, 1e-14)
	near(t, "outside", table.Outside, 0, 0)
	for n, want := range []struct{ vertical, horizontal float64 }{{10.0747973615, 14.3411378295}, {11.2938623437, 11.0100062430}} {
		o := table.Rings[n].Inner
		what := fmt.Sprintf("order %d ", n)
		near(t, what+"vertical", o.Vertical, want.vertical, 1e-9)
		near(t, what+"horizontal", o.Horizontal, want.horizontal, 1e-9)
		near(t, what+"measured vertical", o.MeasuredVertical, want.vertical, o.MeasuredVerticalBound)
		near(t, what+"measured horizontal", o.MeasuredHorizontal, want.horizontal, o.MeasuredHorizontalBound)
		near(t, what+"measured bound", o.MeasuredHorizontalBound, 0, 2*v.Field.Pitch()/10)
	}
	near(t, "offset of order 1", table.Rings[1].Inner.Offset, (5.29373480638-6.00012753732)/2, 1e-9)
	total := 0.0
	for _, r := range table.Rings {
		total += r.Fraction
	}
	near(t, "fractions", total, 1, 1e-12)
}

// Physics reference: the face-on annulus 6-10 M has area 226.1374137943 and
// ∫g⁴ 88.7759266673 on the screen; its rings lie at the radii given there.
// The delay of a ring at 6 M is -1.015759 directly, and order 1 comes
// 20.3360924044 later.
func TestRingFluxes(t *testing.T) {
	v, _ := viewOf(t, `
[observer]
inclination = 0
[field]
width = 16
[[emitter]]
kind = "disk"
inner = 6
outer = 10
index = 0
`)
	table, err := NewRings(context.Background(), v, nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	r := table.Rings[0]
	near(t, "area", r.Area, 226.1374137943, r.AreaBound)
	near(t, "∫g⁴", r.IntG4, 88.7759266673, r.IntG4Bound)
	near(t, "bound on ∫g⁴", r.IntG4Bound, 0, 1e-4*r.IntG4)
	near(t, "flux", r.Flux, 88.7759266673, r.FluxBound)
	near(t, "inner", r.Inner.Vertical, 2*6.932148479189, 1e-9)
	near(t, "inner of order 1", table.Rings[1].Inner.Horizontal, 2*5.478913722084, 1e-9)
	near(t, "outer of order 2", table.Rings[2].Outer.MeanRadius, 5.21449019924, 1e-8)
	if !(r.Outside > 0 && r.Outside < r.Flux) {
		t.Errorf("outside %g of %g", r.Outside, r.Flux)
	}
	v, _ = viewOf(t, "[observer]\ninclination = 0\n[[emitter]]\nkind = \"disk\"\ninner = 6\nouter = 6.000001\n")
	if table, err = NewRings(context.Background(), v, nil, Options{Lines: 40, Cells: 10}); err != nil {
		t.Fatal(err)
	}
	direct, echo := table.Rings[0], table.Rings[1]
	near(t, "delay", direct.MeanDelay, -1.015759, direct.DelayBound)
	near(t, "echo", echo.MeanDelay-direct.MeanDelay, 20.3360924044, echo.DelayBound+direct.DelayBound)
	near(t, "bound on a delay", direct.DelayBound, 0, 1e-4)
}

// What is seen of order 1 behind an opaque disk lies in its gap.
func TestOpaqueDiskHidesOrders(t *testing.T) {
	text := diskScene(30, 1200)
	thin, _ := viewOf(t, text)
	thick, _ := viewOf(t, text+"optical_depth = \"thick\"\n")
	a, err := NewRings(context.Background(), thin, nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	b, err := NewRings(context.Background(), thick, nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	near(t, "direct", b.Rings[0].Flux, a.Rings[0].Flux, 1e-12)
	plate, err := thick.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{raytrace.Intensity}})
	if err != nil {
		t.Fatal(err)
	}
	flux := 0.0
	for _, x := range plate.Layer(raytrace.Intensity, 1) {
		flux += float64(x) * thick.Field.Pitch() * thick.Field.Pitch()
	}
	if !(b.Rings[1].Flux < 0.9*a.Rings[1].Flux) {
		t.Errorf("%g of %g", b.Rings[1].Flux, a.Rings[1].Flux)
	}
	near(t, "order 1 against an image of 1200 pixels", b.Rings[1].Flux/flux, 1, 0.01)
}

func TestCannot(t *testing.T) {
	for _, text := range []string{
		"[observer]\ninclination = 20\n",
		diskScene(20, 10) + "[object]\nkind = \"shell\"\nradius = 4\n",
	} {
		v, _ := viewOf(t, text)
		if _, err := NewRings(context.Background(), v, nil, Options{}); !errors.Is(err, ErrCannot) {
			t.Errorf("%v", err)
		}
	}
}
