package measure

import (
	"context"
	"fmt"
	"math"
	"strings"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/scenes"
)

// viewOf parses a scene.
func viewOf(t testing.TB, text string) (*raytrace.View, scenes.Scene) {
	t.Helper()
	d, err := scenes.Parse("test.toml", []byte("schema = 1\n"+text))
	if err != nil {
		t.Fatal(err)
	}
	v, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	return v, d.Scene()
}

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.15g, want %.15g ± %g", what, got, want, tol)
	}
}

// diskScene is a disk of 6 to 20 M.
func diskScene(inclination float64, pixels int) string {
	return fmt.Sprintf(`
[observer]
inclination = %g
[field]
pixels = [%d, %d]
[[emitter]]
kind = "disk"
inner = 6
outer = 20
`, inclination, pixels, pixels)
}

// Issue 6: rooted on traced paths, by closed form, and read off an image of
// 800 x 800 pixels. The closed forms are Darwin's (1959).
func TestEdges(t *testing.T) {
	var angles []float64
	for deg := -180.0; deg < 180; deg += 30 {
		angles = append(angles, deg*math.Pi/180)
	}
	for _, inclination := range []float64{1, 40, 75, 85} {
		v, _ := viewOf(t, diskScene(inclination, 800))
		plate, err := v.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{raytrace.Radius}})
		if err != nil {
			t.Fatal(err)
		}
		edges, err := Edges(context.Background(), v, angles, plate)
		if err != nil {
			t.Fatal(err)
		}
		if len(edges) != 3*2*len(angles) {
			t.Fatalf("%d edges", len(edges))
		}
		var rooted, measured, widest float64
		for _, e := range edges {
			what := fmt.Sprintf("i %g, order %d, s %.0f, outer %v", inclination, e.Order, e.ScreenAngle*180/math.Pi, e.Outer)
			near(t, what, e.Impact, e.Closed, 1e-8*e.Closed)
			rooted = max(rooted, math.Abs(e.Impact/e.Closed-1))
			near(t, what+" measured", e.Measured, e.Closed, v.Field.Pitch()/10)
			near(t, what+" within its bound", e.Measured, e.Closed, e.MeasuredBound)
			measured = max(measured, math.Abs(e.Measured-e.Closed)/v.Field.Pitch())
			widest = max(widest, e.MeasuredBound/v.Field.Pitch())
		}
		t.Logf("i %g: rooted %.1e relative, measured %.1e pixel, bound %.1e pixel", inclination, rooted, measured, widest)
	}
}

// Shifted and stretched by known amounts, an image shows shifted and
// stretched edges.
func TestEdgesFollowTheImage(t *testing.T) {
	v, _ := viewOf(t, diskScene(40, 800))
	plate, err := v.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{raytrace.Radius}})
	if err != nil {
		t.Fatal(err)
	}
	pixel := v.Field.Pitch()
	angles := []float64{0, math.Pi}
	measured := func(f raytrace.Field) []Edge {
		w := *v
		w.Field = f
		edges, err := Edges(context.Background(), &w, angles, plate)
		if err != nil {
			t.Fatal(err)
		}
		return edges
	}
	was := measured(v.Field)
	const shift, stretch = 0.3, 1.01
	moved := v.Field
	moved.Center[0] += shift * pixel
	wide := v.Field
	wide.Width *= stretch
	for k, e := range measured(moved) {
		want := was[k].Measured + shift*pixel*math.Cos(e.ScreenAngle)
		near(t, fmt.Sprintf("shifted, order %d, s %.2f", e.Order, e.ScreenAngle), e.Measured, want, pixel/10)
	}
	for k, e := range measured(wide) {
		near(t, fmt.Sprintf("stretched, order %d", e.Order), e.Measured, was[k].Measured*stretch, pixel/10)
	}
}

// Edge-on every path meets the plane behind the object; a star hides the
// lensed image; a rim outside the field or hidden is not measured.
func TestEdgesAtTheLimits(t *testing.T) {
	edges := func(text string, deg float64) []Edge {
		v, _ := viewOf(t, text)
		plate, err := v.Render(context.Background(), raytrace.Options{Layers: []raytrace.Layer{raytrace.Radius}})
		if err != nil {
			t.Fatal(err)
		}
		e, err := Edges(context.Background(), v, []float64{deg * math.Pi / 180}, plate)
		if err != nil {
			t.Fatal(err)
		}
		return e
	}
	for _, deg := range []float64{0, 37, 90, 180} {
		for _, e := range edges(diskScene(90, 200), deg) {
			rim := 6.0
			if e.Outer {
				rim = 20
			}
			near(t, fmt.Sprintf("edge-on at %g", deg), e.Impact, e.Closed, 1e-8)
			near(t, "edge-on", e.Closed, geodesic.RimImpact(0, float64(e.Order+1)*math.Pi, rim), 1e-12)
		}
	}
	star := diskScene(75, 200) + "[object]\nkind = \"star\"\nradius = 5\n"
	e := edges(star, 0)
	near(t, "beside a star", e[0].Impact, 6.932148479189, 1e-9)
	for _, hidden := range e[2:] {
		if !math.IsNaN(hidden.Impact) || !math.IsNaN(hidden.Closed) || !math.IsNaN(hidden.Measured) {
			t.Errorf("behind a star: %+v", hidden)
		}
	}
	inside := strings.Replace(diskScene(40, 200), "[field]", "[field]\nwidth = 24", 1)
	e = edges(inside, 0)
	near(t, "in the field", e[0].Measured, e[0].Closed, e[0].MeasuredBound)
	if !math.IsNaN(e[1].Measured) {
		t.Errorf("a rim outside the field is measured: %+v", e[1])
	}
}
