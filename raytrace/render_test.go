package raytrace

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"

	"annulet/scenes"
)

func near(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tol) {
		t.Errorf("%s = %.17g, want %.17g ± %g", what, got, want, tol)
	}
}

// scene is a thin disk from inner to 20 M seen by an observer at infinity.
func scene(inclination, inner float64, pixels int) scenes.Scene {
	return scenes.Scene{
		Object:   scenes.Object{Kind: "black-hole"},
		Observer: scenes.Observer{Radius: math.Inf(1), Inclination: inclination, Motion: "static"},
		Field:    scenes.Field{Projection: "parallel", AutoWidth: true, Pixels: [2]int{pixels, pixels}},
		Emitters: []scenes.Emitter{{
			Kind: "disk", Inner: scenes.Rim{Radius: inner}, Outer: 20,
			Gas: "circular", Profile: "power", Index: []float64{3}, Light: "bolometric",
		}},
		Trace: scenes.Trace{Tolerance: 1e-9, MaxOrder: 2},
	}
}

func view(t *testing.T, s scenes.Scene) *View {
	t.Helper()
	v, err := NewView(s)
	if err != nil {
		t.Fatal(err)
	}
	return v
}

func render(t *testing.T, v *View, o Options) *Plate {
	t.Helper()
	p, err := v.Render(context.Background(), o)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// samePlate compares bit for bit, NaN included.
func samePlate(t *testing.T, what string, a, b *Plate) {
	t.Helper()
	same := func(x, y []float32) bool {
		for i := range x {
			if math.Float32bits(x[i]) != math.Float32bits(y[i]) {
				return false
			}
		}
		return len(x) == len(y)
	}
	if a.Integrated != b.Integrated || !same(a.Total, b.Total) || a.WorstBound != b.WorstBound || a.Paths != b.Paths {
		t.Errorf("%s: totals differ", what)
	}
	for k := range a.layers {
		if !same(a.layers[k], b.layers[k]) {
			t.Errorf("%s: layer %d differs", what, k)
		}
	}
}

func TestPlateDoesNotDependOnWorkers(t *testing.T) {
	v := view(t, scene(60, 2, 75)) // 75 is no multiple of a tile
	one := render(t, v, Options{Workers: 1})
	for _, o := range []Options{{Workers: 2}, {Workers: 7}, {Workers: 16}, {Workers: 3, TileSide: 5}, {Workers: 2, TileSide: 1000}} {
		samePlate(t, fmt.Sprintf("%+v", o), one, render(t, v, o))
	}
}

func TestRenderStopsWithinATile(t *testing.T) {
	v := view(t, scene(60, 6, 512))
	ctx, cancel := context.WithCancel(context.Background())
	defer cancel()
	last := 0
	_, err := v.Render(ctx, Options{Workers: 2, TileSide: 16, Report: func(p Progress) {
		last = p.TilesDone
		if p.TilesDone == 3 {
			cancel()
		}
	}})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error %v, want one that wraps context.Canceled", err)
	}
	if last > 5 { // two workers may have had a tile each in hand
		t.Errorf("went on to tile %d after the third", last)
	}
}

func TestProgressCounts(t *testing.T) {
	v := view(t, scene(60, 6, 70))
	var seen, paths, area int
	render(t, v, Options{Workers: 3, Report: func(p Progress) {
		seen++
		if p.TilesDone != seen || p.Tiles != 9 {
			t.Errorf("report %d says %d of %d", seen, p.TilesDone, p.Tiles)
		}
		paths = p.PathsDone
		area += p.Tile.Dx() * p.Tile.Dy()
	}})
	if seen != 9 || paths != 70*70 || area != 70*70 {
		t.Errorf("%d reports, %d paths, area %d", seen, paths, area)
	}
}

// Orientation: the left side approaches for every inclination between 0 and
// 180 deg, the right side when the gas turns clockwise; the far half of the
// disk is on top below 90 deg and the near half above.
func TestOrientation(t *testing.T) {
	for _, inclination := range []float64{10, 60, 89, 91, 150} {
		for _, clockwise := range []bool{false, true} {
			s := scene(inclination, 6, 40)
			s.Emitters[0].Clockwise = clockwise
			v := view(t, s)
			p := render(t, v, Options{})
			g, phi := p.Layer(Redshift, 0), p.Layer(Azimuth, 0)
			var left, right, top, bottom float64
			for row := range p.Rows {
				for column := range p.Columns {
					x, f := float64(g[row*p.Columns+column]), float64(phi[row*p.Columns+column])
					if math.IsNaN(x) {
						continue
					}
					if column < p.Columns/2 {
						left = max(left, x)
					} else {
						right = max(right, x)
					}
					if row >= p.Rows/2 {
						top += math.Cos(f)
					} else {
						bottom += math.Cos(f)
					}
				}
			}
			if (left > right) == clockwise {
				t.Errorf("i = %g, clockwise %v: brightest g left %g, right %g", inclination, clockwise, left, right)
			}
			// cos φ > 0 is the half towards the observer
			if nearOnTop := top > bottom; nearOnTop != (inclination > 90) {
				t.Errorf("i = %g: near half on top is %v", inclination, nearOnTop)
			}
		}
	}
}

// The azimuth's zero at the limits i = 0 and 180 deg: towards -β and +β.
func TestAzimuthFaceOn(t *testing.T) {
	for _, c := range []struct{ inclination, beta float64 }{{0, -8}, {180, 8}} {
		readings, err := view(t, scene(c.inclination, 6, 8)).Probe(context.Background(), [][2]float64{{0, c.beta}})
		if err != nil || len(readings) != 1 {
			t.Fatal(readings, err)
		}
		near(t, fmt.Sprintf("azimuth at i = %g", c.inclination), readings[0].Phi, 0, 1e-12)
	}
}

// Edge-on every path meets the plane behind the hole, at ψ = π; a path
// within the plane contributes nothing.
func TestEdgeOn(t *testing.T) {
	s := scene(90, 2, 9)
	s.Emitters[0].Outer = 50
	readings, err := view(t, s).Probe(context.Background(), [][2]float64{{0, 9}, {0, -9}, {9, 0}, {0, 0}})
	if err != nil {
		t.Fatal(err)
	}
	if len(readings) < 2 || readings[0].R != readings[1].R || readings[0].Order != 0 {
		t.Fatalf("readings %+v", readings)
	}
	for _, r := range readings {
		if r.Beta == 0 {
			t.Errorf("a path within the plane crosses it: %+v", r)
		}
	}
	near(t, "azimuth behind the hole", math.Abs(readings[0].Phi), math.Pi, 1e-12)
}

// Edges of the images of a face-on disk from the horizon outwards: Gralla,
// Holz & Wald, Phys. Rev. D 100, 024018 (2019), from memory: the lensed
// images lie at b = 5.02 to 6.17 M (order 1) and 5.19 to 5.23 M (order 2).
func TestFaceOnImageBands(t *testing.T) {
	s := scene(0, 2, 8)
	s.Emitters[0].Outer = 1e5 // its order-1 rim lies 2e-4 M inside that of an endless disk
	v := view(t, s)
	var at [][2]float64
	const step = 1e-3
	for b := 4.9; b < 6.3; b += step {
		at = append(at, [2]float64{b, 0})
	}
	readings, err := v.Probe(context.Background(), at)
	if err != nil {
		t.Fatal(err)
	}
	lo, hi := [3]float64{99, 99, 99}, [3]float64{}
	for _, r := range readings {
		lo[r.Order], hi[r.Order] = min(lo[r.Order], r.Alpha), max(hi[r.Order], r.Alpha)
	}
	const printed = 0.005 + step
	near(t, "inner edge of order 1", lo[1], 5.02, printed)
	near(t, "outer edge of order 1", hi[1], 6.17, printed)
	near(t, "inner edge of order 2", lo[2], 5.19, printed)
	near(t, "outer edge of order 2", hi[2], 5.23, printed)
}

// Redshift extremes of the ring at 6 M seen at 60 deg, from two independent
// routes: 1.224490566 and 0.497076946 (order 0).
func TestRedshiftExtremes(t *testing.T) {
	v := view(t, scene(60, 5.9, 8))
	lo, hi := 9.0, 0.0
	var at [][2]float64
	for k := range 5000 { // both extremes lie 9 deg from the horizontal, at the top
		sin, cos := math.Sincos(20 * math.Pi / 180 * float64(k) / 5000)
		b := rimOn(60, sin, 6)
		at = append(at, [2]float64{b * cos, b * sin}, [2]float64{-b * cos, b * sin})
	}
	readings, err := v.Probe(context.Background(), at)
	if err != nil {
		t.Fatal(err)
	}
	for _, r := range readings {
		if r.Order == 0 {
			lo, hi = min(lo, r.G), max(hi, r.G)
		}
	}
	near(t, "largest g", hi, 1.224490566, 2e-8)
	near(t, "smallest g", lo, 0.497076946, 2e-8)
}

// Probe and plate share everything but rounding.
func TestProbeAgreesWithPlate(t *testing.T) {
	for _, depth := range []float64{0, math.Inf(1), 0.5} {
		s := scene(75, 2, 31)
		s.Emitters[0].OpticalDepth = depth
		thick := depth > 1
		v := view(t, s)
		p := render(t, v, Options{PathByPath: true})
		compared := 0
		for row := range p.Rows {
			for column := range p.Columns {
				alpha, beta := v.Field.PixelCenter(column, row)
				readings, err := v.Probe(context.Background(), [][2]float64{{alpha, beta}})
				if err != nil {
					t.Fatal(err)
				}
				if thick && len(readings) > 1 {
					t.Fatalf("a thick disk is seen %d times at %g, %g", len(readings), alpha, beta)
				}
				sum := 0.0
				for _, r := range readings {
					k := row*p.Columns + column
					for layer, x := range map[Layer]float64{Intensity: r.Intensity, Redshift: r.G, Radius: r.R, Azimuth: r.Phi, Delay: r.Delay, Mu: r.Mu} {
						near(t, fmt.Sprintf("layer %d", layer), float64(p.Layer(layer, r.Order)[k]), x, 6e-8*math.Abs(x))
						compared++
					}
					sum += r.Intensity
				}
				near(t, "total", float64(p.Total[row*p.Columns+column]), sum, 6e-8*sum)
			}
		}
		if compared < 1000 {
			t.Fatalf("compared %d values", compared)
		}
	}
}

// A far observer's perspective field shows what a parallel field shows, to
// the order of 1/r; and a near one keeps the closed relation of sin a and b.
func TestPerspective(t *testing.T) {
	far := scene(50, 6, 21)
	far.Observer.Radius = 1e7
	parallel := view(t, far)
	far.Field.Projection = "perspective"
	perspective := view(t, far)
	near(t, "width", perspective.Field.Width*1e7/parallel.Field.Width, 1, 1e-5)
	a, b := render(t, parallel, Options{}), render(t, perspective, Options{})
	different := 0
	for k := range a.Total {
		if math.Abs(float64(a.Total[k]-b.Total[k])) > 1e-4*float64(a.Total[k]) {
			different++
		}
	}
	if different > 4 { // pixels astride a rim may flip
		t.Errorf("%d of %d pixels differ", different, len(a.Total))
	}
	s := scene(50, 6, 21)
	s.Observer.Radius, s.Field.Projection = 30, "perspective"
	readings, err := view(t, s).Probe(context.Background(), [][2]float64{{0.2, 0.3}})
	if err != nil || len(readings) == 0 {
		t.Fatal(readings, err)
	}
	sinA := math.Sin(math.Atan(math.Hypot(0.2, 0.3)))
	near(t, "b", readings[0].Impact, 30*sinA/math.Sqrt(1-2./30), 1e-12)
}

// The automatic width holds everything that shines, and not much more.
func TestAutoWidth(t *testing.T) {
	for _, inclination := range []float64{0, 45, 80, 100} {
		v := view(t, scene(inclination, 6, 200))
		p := render(t, v, Options{})
		reach := 0
		for k, x := range p.Total {
			if x > 0 {
				column, row := k%200, k/200
				reach = max(reach, column-99, 100-column, row-99, 100-row)
			}
		}
		near(t, fmt.Sprintf("reach at i = %g, in half widths", inclination), float64(reach)/100, 1/framingMargin, 0.011)
	}
}

// A coarse view covers the same field with the same bottom left corner.
func TestCoarsened(t *testing.T) {
	v := view(t, scene(30, 6, 50))
	v.Field.Rows = 31
	c := v.Coarsened(4)
	if c.Field.Columns != 13 || c.Field.Rows != 8 {
		t.Fatalf("%d x %d pixels", c.Field.Columns, c.Field.Rows)
	}
	near(t, "pitch", c.Field.Pitch(), 4*v.Field.Pitch(), 1e-14)
	fx, fy := v.Field.PixelCenter(0, 0)
	cx, cy := c.Field.PixelCenter(0, 0)
	near(t, "left edge", cx-c.Field.Pitch()/2, fx-v.Field.Pitch()/2, 1e-12)
	near(t, "bottom edge", cy-c.Field.Pitch()/2, fy-v.Field.Pitch()/2, 1e-12)
}

func TestNothingShines(t *testing.T) {
	s := scene(30, 6, 20)
	s.Emitters = nil
	p := render(t, view(t, s), Options{})
	for _, x := range p.Total {
		if x != 0 {
			t.Fatal("light from nowhere")
		}
	}
}

// Two disks on one plane: where they overlap intensities add.
func TestTwoDisks(t *testing.T) {
	s := scene(40, 6, 24)
	one := render(t, view(t, s), Options{})
	s.Emitters = append(s.Emitters, s.Emitters[0])
	two := render(t, view(t, s), Options{})
	for k := range one.Total {
		near(t, "sum", float64(two.Total[k]), 2*float64(one.Total[k]), 1e-6*float64(one.Total[k]))
	}
}

// A disk of optical depth τ emits S (1 - exp(-τ/μ)) and dims what lies
// behind by exp(-τ/μ): radiative transfer through a slab, any textbook.
func TestOpticalDepth(t *testing.T) {
	probe := func(depth float64) []Reading {
		s := scene(40, 2, 31)
		s.Emitters[0].Inner.Radius, s.Emitters[0].OpticalDepth = 2, depth
		readings, err := view(t, s).Probe(context.Background(), [][2]float64{{-3, 4.3}, {5.2, 0.1}})
		if err != nil {
			t.Fatal(err)
		}
		return readings
	}
	const depth = 0.7
	thin, slab := probe(0), probe(depth)
	if len(thin) != len(slab) || len(thin) < 4 {
		t.Fatalf("%d and %d crossings", len(thin), len(slab))
	}
	through := 1.0
	for k, r := range thin {
		if k == 0 || thin[k-1].Alpha != r.Alpha {
			through = 1
		}
		passes := math.Exp(-depth / r.Mu)
		near(t, "intensity", slab[k].Intensity/(r.Intensity*through*(1-passes)), 1, 1e-12)
		through *= passes
	}
	if thick := probe(1e9); len(thick) != 2 {
		t.Errorf("an optically thick disk is seen %d times on 2 paths", len(thick))
	}
}
