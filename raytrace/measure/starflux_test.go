package measure

import (
	"context"
	"fmt"
	"math"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// A star's flux is its own times magnification times g⁴ whatever the size of
// the pixels: on the plate, and root-found on paths.
func TestStarFlux(t *testing.T) {
	for _, c := range []struct{ offset, tolerance float64 }{{0.3, 0.01}, {0.12, 0.03}, {1.2, 0.01}} {
		s := scenes.Scene{
			Object:   scenes.Object{Kind: "black-hole"},
			Observer: scenes.Observer{Radius: 30, Inclination: 90, Motion: "static"},
			Emitters: []scenes.Emitter{{Kind: "sky", Pattern: "grid", Light: "bolometric"}},
			Trace:    scenes.Trace{Tolerance: 1e-9, MaxOrder: 1},
		}
		const flux = 2.5
		hole, err := geodesic.NewHole(0)
		if err != nil {
			t.Fatal(err)
		}
		images, _, err := Magnification(hole, geodesic.Observer{Radius: 30}, c.offset, 0)
		if err != nil || len(images) != 1 {
			t.Fatal(images, err)
		}
		want := flux * images[0].Magnification * math.Pow(images[0].G, 4)
		for _, pixels := range []int{60, 133, 400} {
			s.Field = scenes.Field{Projection: "perspective", Width: 14, Center: [2]float64{images[0].Angle * 180 / math.Pi, 0.3}, Pixels: [2]int{pixels, pixels}}
			v, err := raytrace.NewView(s)
			if err != nil {
				t.Fatal(err)
			}
			// at inclination 90 deg and azimuth 0 a star to the right of
			// straight behind is at azimuth 180 deg - offset
			stars := emit.NewStars([]emit.Star{{Phi: math.Pi - c.offset, Flux: flux}})
			v.Emitters = []raytrace.Emitter{emit.NewSky(stars, 4)}
			p, err := v.Render(context.Background(), raytrace.Options{})
			if err != nil {
				t.Fatal(err)
			}
			got := 0.0
			for k, x := range p.Layer(raytrace.Intensity, 0) {
				got += float64(x) * v.Field.SolidAngle(k%p.Columns, k/p.Columns)
			}
			near(t, fmt.Sprintf("flux at offset %g in %d pixels", c.offset, pixels), got/want, 1, c.tolerance)
		}
	}
}
