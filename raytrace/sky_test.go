package raytrace

import (
	"context"
	"fmt"
	"math"
	"testing"

	"annulet/geodesic"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// skyScene is a generated sky seen in all directions.
func skyScene(kind string, size, r float64, motion, pattern string, columns int) scenes.Scene {
	return scenes.Scene{
		Object:   scenes.Object{Kind: kind, Radius: size},
		Observer: scenes.Observer{Radius: r, Inclination: 70, Azimuth: 25, Motion: motion},
		Field:    scenes.Field{Projection: "all-sky", Width: 360, Pixels: [2]int{columns, columns / 2}},
		Emitters: []scenes.Emitter{{Kind: "sky", Pattern: pattern, Seed: 3, Light: "bolometric"}},
		Trace:    scenes.Trace{Tolerance: 1e-9, MaxOrder: 5},
	}
}

// uniformSky is the view with a sky of brightness 1 everywhere.
func uniformSky(t *testing.T, s scenes.Scene) *View {
	t.Helper()
	v := view(t, s)
	v.Emitters = []Emitter{emit.NewSky(nil, 4)}
	return v
}

// circleOf fits a circle of the unit sphere, a plane n·x = 1, to the middles
// between dark and lit neighbours of an all-sky plate, and returns its
// angular radius and the angle of its centre to the right of ahead, degrees.
func circleOf(t *testing.T, v *View, p *Plate) (radius, right float64) {
	t.Helper()
	var sum [3][3]float64
	var side [3]float64
	edges := 0
	add := func(c0, r0, c1, r1 int) {
		if (p.Total[r0*p.Columns+c0] > 0) == (p.Total[r1*p.Columns+c1] > 0) {
			return
		}
		a0, b0 := v.Field.PixelCenter(c0, r0)
		a1, b1 := v.Field.PixelCenter(c1, r1)
		d := v.Field.direction((a0+a1)/2, (b0+b1)/2)
		x := [3]float64{d.Alpha, d.Beta, d.Ahead}
		edges++
		for i := range 3 {
			side[i] += x[i]
			for j := range 3 {
				sum[i][j] += x[i] * x[j]
			}
		}
	}
	for row := range p.Rows - 1 {
		for column := range p.Columns - 1 {
			add(column, row, column+1, row)
			add(column, row, column, row+1)
		}
	}
	if edges < 100 {
		t.Fatalf("%d edges", edges)
	}
	det := func(m [3][3]float64) float64 {
		return m[0][0]*(m[1][1]*m[2][2]-m[1][2]*m[2][1]) - m[0][1]*(m[1][0]*m[2][2]-m[1][2]*m[2][0]) + m[0][2]*(m[1][0]*m[2][1]-m[1][1]*m[2][0])
	}
	var n [3]float64 // Cramer's rule
	for i := range 3 {
		m := sum
		for j := range 3 {
			m[j][i] = side[j]
		}
		n[i] = det(m) / det(sum)
	}
	const deg = 180 / math.Pi
	length := math.Sqrt(n[0]*n[0] + n[1]*n[1] + n[2]*n[2])
	return math.Acos(1/length) * deg, math.Atan2(n[0], n[2]) * deg
}

// The shadow from edges in rendered pixels, to a tenth of a pixel. Static:
// Synge, MNRAS 131, 463 (1966); aberration: Penrose, Proc. Camb. Phil. Soc.
// 55, 137 (1959); both from memory. Values: physics note, section 12.
func TestShadowInPixels(t *testing.T) {
	const deg = 180 / math.Pi
	for _, c := range []struct {
		motion           string
		r, radius, right float64
	}{
		{"static", 6, 45, 0},
		{"infall", 2, math.Acos(23./31) * deg, 0},
		{"infall", 6, 24.2034283393298, 0},
		{"orbit", 6, math.Atan(math.Sqrt(3)/2) * deg, 22.2076542985965},
	} {
		v := uniformSky(t, skyScene("black-hole", 0, c.r, c.motion, "grid", 480))
		radius, right := circleOf(t, v, render(t, v, Options{}))
		pixel := v.Field.Pitch() * deg
		name := fmt.Sprintf("%s at %g M", c.motion, c.r)
		near(t, "radius of the shadow, "+name, radius, c.radius, pixel/10)
		near(t, "its centre, "+name, right, c.right, pixel/10)
	}
}

// The shadow of an infaller grows on inside the horizon, towards 90 deg at
// the centre, and nothing leans on t there.
func TestShadowInsideTheHorizon(t *testing.T) {
	last := 42.1034488707458
	for _, r := range []float64{1.5, 1, 0.3} {
		v := uniformSky(t, skyScene("black-hole", 0, r, "infall", "grid", 240))
		radius, _ := circleOf(t, v, render(t, v, Options{}))
		if !(radius > last+1 && radius < 90) {
			t.Errorf("radius at %g M %g deg, after %g", r, radius, last)
		}
		last = radius
	}
}

// Surface brightness is conserved up to g, whatever the pattern's filter
// does, and with the closed forms of g: static 1/√(1-2/r), inside a shell
// 1/√(1-2/R).
func TestUniformSky(t *testing.T) {
	for _, c := range []struct {
		kind    string
		size, r float64
		g       float64
	}{
		{"black-hole", 0, 6, 1 / math.Sqrt(1-2./6)},
		{"shell", 4, 2.5, 1 / math.Sqrt(1-2./4)},
		{"shell", 4, 0, 1 / math.Sqrt(1-2./4)},
	} {
		v := uniformSky(t, skyScene(c.kind, c.size, c.r, "static", "grid", 64))
		p := render(t, v, Options{})
		v.Emitters = []Emitter{emit.NewSky(emit.NewGrid(), 4)} // structure lies between its extremes
		drawn := render(t, v, Options{})
		lit := 0
		for order := range p.Orders {
			for k, x := range p.Layer(Intensity, order) {
				if x == 0 {
					continue
				}
				lit++
				near(t, "intensity", float64(x), math.Pow(c.g, 4), 1e-6*math.Pow(c.g, 4))
				near(t, "g", float64(p.Layer(Redshift, order)[k]), c.g, 1e-6)
				if share := float64(drawn.Layer(Intensity, order)[k]) / math.Pow(c.g, 4); !(share > 0.01 && share < 1.00001) {
					t.Fatalf("the grid is %g bright", share)
				}
				for _, l := range []Layer{Radius, Delay, Mu} {
					if !math.IsNaN(float64(p.Layer(l, order)[k])) {
						t.Fatalf("layer %d of the sky is not NaN", l)
					}
				}
			}
		}
		if lit < 500 {
			t.Fatalf("%d pixels compared", lit)
		}
	}
}

// A static observer at 6 M sees the sky in (1 + cos 45°)/2 of all directions;
// by reciprocity that times f is the flux of a static source there averaged
// over the sky, 0.569035593728849 (physics note, section 11).
func TestSkyAveragedFlux(t *testing.T) {
	v := uniformSky(t, skyScene("black-hole", 0, 6, "static", "grid", 360))
	p := render(t, v, Options{})
	seen := 0.0
	for k, x := range p.Total {
		if x > 0 {
			seen += v.Field.SolidAngle(k%p.Columns, k/p.Columns)
		}
	}
	const f = 1 - 2./6
	near(t, "flux averaged over the sky", f*seen/(4*math.Pi), 0.569035593728849, 3e-4)
}

// At the centre of a shell the sky is undistorted: what lies ahead in flat
// space is seen ahead. Off-centre it is not. Directions: longitude α to the
// right, latitude β up.
func TestSkyInsideShell(t *testing.T) {
	for _, c := range []struct {
		r      float64
		wanted func(off float64) bool
	}{
		{0, func(off float64) bool { return off < 1e-6 }},
		{1.5, func(off float64) bool { return off > 0.01 }},
	} {
		v := view(t, skyScene("shell", 2.5, c.r, "static", "grid", 64))
		for _, at := range [][2]float64{{0.4, 0.3}, {-1.2, 0.8}, {2.5, -0.5}} {
			readings, err := v.Probe(context.Background(), [][2]float64{at})
			if err != nil || len(readings) != 1 {
				t.Fatal(readings, err)
			}
			r := readings[0]
			d := v.Field.direction(at[0], at[1])
			var pixels emit.Pixels
			pixels.Orient(v.Observer.InclinationDeg, v.Observer.AzimuthDeg)
			var off float64
			sin := math.Sqrt(1 - r.CosTheta*r.CosTheta)
			seen := [3]float64{sin * math.Cos(r.Phi), sin * math.Sin(r.Phi), r.CosTheta}
			for i := range 3 {
				flat := d.Alpha*pixels.Right[i] + d.Beta*pixels.Up[i] - d.Ahead*pixels.Toward[i]
				off = math.Hypot(off, seen[i]-flat)
			}
			if !c.wanted(off) {
				t.Errorf("at %g M the sky is moved by %g", c.r, off)
			}
		}
	}
}

// straightBehind is the sky of one star behind the object.
func straightBehind(v *View, offset, flux float64) *emit.Sky {
	// at inclination 90 deg and azimuth 0 a star to the right of straight
	// behind is at azimuth 180 deg - offset
	return emit.NewSky(emit.NewStars([]emit.Star{{CosTheta: 0, Phi: math.Pi - offset, Flux: flux}}), 4)
}

// The Einstein ring of a star straight behind, in the image and where the
// closed form sweeps π from the observer through the periapsis to infinity.
func TestEinsteinRing(t *testing.T) {
	for _, r := range []float64{30, 1000} {
		swept := func(b float64) float64 {
			o := geodesic.NewClosedOrbit(b)
			turn := 1 / o.Periapsis()
			return o.Sweep(1/r, turn) + o.Sweep(0, turn)
		}
		lo, hi := geodesic.CriticalImpact*1.0001, r*0.99
		for range 100 {
			if mid := (lo + hi) / 2; swept(mid) > math.Pi {
				lo = mid
			} else {
				hi = mid
			}
		}
		ring := tangent(lo * geodesic.Lapse(r) / r)
		s := skyScene("black-hole", 0, r, "static", "grid", 0)
		s.Observer.Inclination, s.Observer.Azimuth = 90, 0
		s.Trace.MaxOrder = 1
		s.Field = scenes.Field{Projection: "perspective", Width: 2 * math.Atan(1.3*ring) * 180 / math.Pi, Pixels: [2]int{160, 160}}
		v := view(t, s)
		v.Emitters = []Emitter{straightBehind(v, 0, 1)}
		p := render(t, v, Options{})
		var sum, moment float64
		for k, x := range p.Total {
			alpha, beta := v.Field.PixelCenter(k%p.Columns, k/p.Columns)
			if rho := math.Hypot(alpha, beta); rho > ring/2 { // not the second ring, at the shadow
				sum += float64(x)
				moment += float64(x) * rho
			}
		}
		near(t, fmt.Sprintf("Einstein ring at %g M, in pixels", r), moment/sum/v.Field.Pitch(), ring/v.Field.Pitch(), 0.1)
	}
}

// The random stars have mean brightness 1; seen from the centre of a shell
// they keep it, in fine pixels that show points and coarse ones that do not.
func TestMeanOfStars(t *testing.T) {
	for _, columns := range []int{400, 20} {
		v := view(t, skyScene("shell", 2.5, 0, "static", "stars", columns))
		p := render(t, v, Options{})
		sum := 0.0
		for k, x := range p.Total {
			sum += float64(x) * v.Field.SolidAngle(k%p.Columns, k/p.Columns)
		}
		near(t, fmt.Sprintf("mean in %d columns", columns), sum/(4*math.Pi)/math.Pow(1-2/2.5, -2), 1, 0.01)
	}
}

// A star to the right of straight behind, offset less than the shadow's
// lensing, is seen to the right, and its second image to the left; a star
// nearer to N is seen above.
func TestSkyOrientation(t *testing.T) {
	s := skyScene("black-hole", 0, 30, "static", "grid", 240)
	s.Observer.Inclination, s.Observer.Azimuth = 90, 0
	v := view(t, s)
	for _, c := range []struct {
		star        emit.Star
		right, up   float64 // signs of the brightest pixel's place
		what        string
		alpha, beta bool
	}{
		{emit.Star{Phi: math.Pi - 0.5, Flux: 1}, 1, 0, "right", true, false},
		{emit.Star{Phi: -math.Pi + 0.5, Flux: 1}, -1, 0, "left", true, false},
		{emit.Star{CosTheta: math.Sin(0.5), Phi: math.Pi, Flux: 1}, 0, 1, "up", false, true},
	} {
		v.Emitters = []Emitter{emit.NewSky(emit.NewStars([]emit.Star{c.star}), 4)}
		p := render(t, v, Options{})
		best := 0
		for k, x := range p.Layer(Intensity, 0) {
			if x > p.Layer(Intensity, 0)[best] {
				best = k
			}
		}
		alpha, beta := v.Field.PixelCenter(best%p.Columns, best/p.Columns)
		if c.alpha && alpha*c.right < 0.1 || c.beta && beta*c.up < 0.1 {
			t.Errorf("%s: seen at %g, %g", c.what, alpha, beta)
		}
	}
}

// In front of the sky a thin disk adds to it, and the layers of an order are
// those of the first crossing.
func TestDiskBeforeTheSky(t *testing.T) {
	s := skyScene("black-hole", 0, 30, "static", "grid", 0)
	s.Field = scenes.Field{Projection: "perspective", Width: 40, Pixels: [2]int{40, 40}}
	disk := scene(70, 6, 1).Emitters[0]
	s.Emitters = append([]scenes.Emitter{disk}, s.Emitters...)
	v := view(t, s)
	v.Emitters[1] = emit.NewSky(nil, 4)
	both := render(t, v, Options{})
	v.Emitters = v.Emitters[:1]
	alone := render(t, v, Options{})
	v.Emitters = []Emitter{emit.NewSky(nil, 4)}
	sky := render(t, v, Options{})
	over := 0
	for k, x := range both.Total {
		near(t, "total", float64(x), float64(alone.Total[k])+float64(sky.Total[k]), 1e-6*float64(x))
		for order := range both.Orders {
			near(t, "order", float64(both.Layer(Intensity, order)[k]),
				float64(alone.Layer(Intensity, order)[k])+float64(sky.Layer(Intensity, order)[k]), 1e-6*float64(x))
			if r := alone.Layer(Radius, order)[k]; r == r {
				if both.Layer(Radius, order)[k] != r || both.Layer(Redshift, order)[k] != alone.Layer(Redshift, order)[k] {
					t.Fatal("the sky hides the disk's layers")
				}
				if sky.Layer(Intensity, order)[k] > 0 {
					over++
				}
			}
		}
	}
	if over < 50 {
		t.Fatalf("%d pixels show both", over)
	}
}

// Where light arrives at right angles to the radius the Jacobian is finite
// although dψ/db is not: with 4k + 2 columns a column of pixels looks there.
// Brightness of stars spread evenly is that of the neighbouring columns.
func TestFold(t *testing.T) {
	s := skyScene("black-hole", 0, 10, "static", "stars", 0)
	s.Field.Pixels = [2]int{90, 45}
	v := view(t, s)
	b, err := v.newBench(nil)
	if err != nil {
		t.Fatal(err)
	}
	row := 22
	for column := 66; column <= 68; column++ { // 67.5/90 of a turn is 90 deg to the right
		alpha, beta := v.Field.PixelCenter(column, row)
		b.screen = append(b.screen, [2]float64{alpha, beta})
	}
	if _, err := b.follow(geodesic.Want{Delay: true, Slope: true}); err != nil {
		t.Fatal(err)
	}
	var turn [3]float64 // dψ from side to side of a pixel
	for k := range turn {
		turn[k] = math.Abs(b.at.Slope[k] * b.pixels.Column[k][0])
	}
	near(t, "dψ at the fold", turn[1], (turn[0]+turn[2])/2, 0.01*turn[1])
	// dψ/da = √(1-2/r)/r over u - 3u² where u turns, u = 1/r
	near(t, "dψ/da", turn[1]/v.Field.Pitch(), geodesic.Lapse(10)/10/0.07, 2e-3)
}

// Every built-in scene can be seen.
func TestBuiltInScenes(t *testing.T) {
	for _, info := range scenes.BuiltIn() {
		d, err := scenes.Load(info.Name)
		if err != nil {
			t.Fatal(err)
		}
		v, err := NewView(d.Scene())
		if err != nil {
			t.Errorf("%s: %v", info.Name, err)
			continue
		}
		p := render(t, v.Coarsened(16), Options{})
		sum := 0.0
		for _, x := range p.Total {
			sum += float64(x)
		}
		if !(sum > 0) || math.IsInf(sum, 0) {
			t.Errorf("%s: total intensity %g", info.Name, sum)
		}
	}
}
