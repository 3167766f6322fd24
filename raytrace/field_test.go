package raytrace

import (
	"math"
	"testing"

	"annulet/scenes"
)

// Pixels of an all-sky field tile the sphere, also where they are not square;
// those of a perspective field tile its rectangle, 4 asin(sin² (w/2)) sr for
// a square of tangent half-width tan(w/2).
func TestSolidAngle(t *testing.T) {
	sum := func(f Field) (total float64) {
		for row := range f.Rows {
			for column := range f.Columns {
				total += f.SolidAngle(column, row)
			}
		}
		return total
	}
	near(t, "all sky", sum(Field{Projection: AllSky, Columns: 37, Rows: 11}), 4*math.Pi, 1e-12)
	near(t, "a cube's face", sum(Field{Projection: Perspective, Width: 2, Columns: 13, Rows: 13}), 4*math.Pi/6, 1e-12)
	near(t, "parallel", sum(Field{Projection: Parallel, Width: 6, Columns: 12, Rows: 8}), 24, 1e-12)
	// a small pixel away from the centre: pitch² cos³ of its angle
	f := Field{Projection: Perspective, Width: 1e-9, Columns: 1, Rows: 1, Center: [2]float64{0.3, -0.4}}
	near(t, "a small pixel", f.SolidAngle(0, 0)/(1e-18*math.Pow(1.25, -1.5)), 1, 1e-8)
}

// All-sky: the middle is ahead, longitude runs to the right, latitude up.
func TestAllSkyDirections(t *testing.T) {
	f := Field{Projection: AllSky, Columns: 360, Rows: 180}
	for _, c := range []struct{ lon, lat, alpha, beta, ahead float64 }{
		{0, 0, 0, 0, 1}, {math.Pi / 2, 0, 1, 0, 0}, {-math.Pi / 2, 0, -1, 0, 0}, {0, math.Pi / 2, 0, 1, 0}, {math.Pi, 0, 0, 0, -1},
	} {
		d := f.direction(c.lon, c.lat)
		near(t, "right", d.Alpha, c.alpha, 1e-15)
		near(t, "up", d.Beta, c.beta, 1e-15)
		near(t, "ahead", d.Ahead, c.ahead, 1e-15)
	}
	lon, lat := f.PixelCenter(0, 0)
	near(t, "first column", lon, -math.Pi+math.Pi/360, 1e-14)
	near(t, "first row", lat, -math.Pi/2+math.Pi/360, 1e-14)
	c := f.coarsened(7)
	near(t, "width of a coarse field", c.Pitch()*float64(c.Columns), 2*math.Pi, 1e-14)
	if c.Columns != 52 || c.Rows != 26 {
		t.Errorf("%d x %d pixels", c.Columns, c.Rows)
	}
}

// The automatic width where no closed form holds: a charged hole, a moving
// observer. What shines reaches 1/1.05 of it.
func TestProbedWidth(t *testing.T) {
	for _, c := range []struct {
		charge float64
		motion string
		r      float64
	}{{0.6, "static", math.Inf(1)}, {0, "infall", 60}, {0, "orbit", 60}} {
		s := scene(50, 6, 100)
		s.Object.Charge = c.charge
		if c.motion != "static" {
			s.Observer = scenes.Observer{Radius: c.r, Inclination: 50, Motion: c.motion}
			s.Field.Projection = "perspective"
		}
		p := render(t, view(t, s), Options{})
		reach := 0
		for k, x := range p.Total {
			if x > 0 {
				column, row := k%100, k/100
				reach = max(reach, column-49, 50-column, row-49, 50-row)
			}
		}
		near(t, "reach, in half widths", float64(reach)/50, 1/framingMargin, 0.021)
	}
}
