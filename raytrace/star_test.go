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

// starScene is an opaque star of radius r seen from infinity.
func starScene(r, inclination float64, pixels int) scenes.Scene {
	return scenes.Scene{
		Object:   scenes.Object{Kind: "star", Radius: r, Interior: "opaque"},
		Observer: scenes.Observer{Radius: math.Inf(1), Inclination: inclination, Motion: "static"},
		Field:    scenes.Field{Projection: "parallel", AutoWidth: true, Pixels: [2]int{pixels, pixels}},
		Emitters: []scenes.Emitter{{Kind: "surface", Light: "bolometric"}},
		Trace:    scenes.Trace{Tolerance: 1e-10, MaxOrder: 2},
	}
}

func flux(v *View, p *Plate) (sum float64) {
	for k, x := range p.Total {
		sum += float64(x) * v.Field.SolidAngle(k%p.Columns, k/p.Columns)
	}
	return sum
}

// A uniform star is a uniform disk of radius R/√(1-2/R), 3√3 M if R < 3 M,
// (1-2/R)² as bright (physics note, section 8).
func TestWholeStar(t *testing.T) {
	for _, r := range []float64{2.6, 3, 6, 20} {
		v := view(t, starScene(r, 40, 240))
		f := 1 - 2/r
		b := r / math.Sqrt(f)
		if r < 3 {
			b = geodesic.CriticalImpact
		}
		near(t, fmt.Sprintf("automatic width at R = %g", r), v.Field.Width, 2*b*framingMargin, 1e-9*b)
		near(t, fmt.Sprintf("flux at R = %g", r), flux(v, render(t, v, Options{}))/(f*f*math.Pi*b*b), 1, 1e-3)
	}
	s := starScene(6, 40, 240)
	for _, law := range []string{"darkened", "brightened"} {
		// isotropic in the mean over emission angles: b² = R² sin² a/f, so the
		// flux ∝ ∫ I μ dμ is the same
		s.Emitters[0].EmissionAngle = law
		v := view(t, s)
		f := 1 - 2./6
		near(t, law, flux(v, render(t, v, Options{}))/(f*math.Pi*36), 1, 2e-3)
	}
}

// The visible share of a star of 6 M, 0.742969713811437 (physics note,
// section 8), by adding up the surface elements that a fan of paths meets:
// seen along N, dΩ/4π = -d(cos θ)/2.
func TestVisibleFraction(t *testing.T) {
	s := starScene(6, 0, 8)
	s.Trace.Tolerance = geodesic.MinTolerance
	v := view(t, s)
	limb := 6 / math.Sqrt(1-2./6)
	var at [][2]float64
	const n = 4000
	for k := range n + 1 {
		x := float64(k) / n // dense towards the limb, which is met at √(1-b/limb)
		at = append(at, [2]float64{limb * (1 - (1-x)*(1-x)) * (1 - 1e-12), 0})
	}
	readings, err := v.Probe(context.Background(), at)
	if err != nil || len(readings) != n+1 {
		t.Fatal(len(readings), err)
	}
	seen := 0.0
	for k := 1; k < len(readings); k++ {
		if readings[k].CosTheta > readings[k-1].CosTheta {
			t.Fatal("the surface folds")
		}
		seen += (readings[k-1].CosTheta - readings[k].CosTheta) / 2
	}
	near(t, "visible fraction", seen, 0.742969713811437, 2e-6)
}

// spotFlux is F/F1 of a point spot at ψ on a star of radius r, exact: cos a
// (dcos a/dcos ψ)/(1-u), by closed form.
func spotFlux(r, cosPsi float64) float64 {
	f := 1 - 2/r
	psi := func(cosA float64) float64 {
		b := r * math.Sqrt(1-cosA*cosA) / math.Sqrt(f)
		o := geodesic.NewClosedOrbit(b)
		return o.Sweep(0, 1/r)
	}
	lo, hi := 0.0, 1.0
	for range 80 {
		if mid := (lo + hi) / 2; math.Cos(psi(mid)) < cosPsi {
			lo = mid
		} else {
			hi = mid
		}
	}
	const h = 1e-5
	return lo * 2 * h / (math.Cos(psi(lo+h)) - math.Cos(psi(lo-h))) / f
}

// The pulse profile of a small cap, rendered, against the exact curve
// (Pechenick, Ftaclas & Cohen, ApJ 274, 846 (1983), from memory) and against
// 1 - cos a = (1 - cos ψ)(1 - u), Beloborodov, ApJ 566, L85 (2002), from
// memory: within 1 % in flux for R > 3 r_s here.
func TestPulseProfile(t *testing.T) {
	near(t, "exact at 60 deg, R = 3 r_s", spotFlux(6, 0.5), 0.667361542, 1e-8)
	near(t, "exact at 60 deg, R = 2 r_s", spotFlux(4, 0.5), 0.7517381246, 1e-8)
	const size, deg = 2.0, math.Pi / 180
	for _, r := range []float64{4, 6} {
		for _, psi := range []float64{20, 60, 90} {
			// the cap is at N: ψ is the inclination, and its image above
			s := starScene(r, psi, 240)
			s.Emitters[0].Caps = []scenes.Cap{{Colatitude: 0, Size: size, Temperature: 1e6}}
			s.Field.AutoWidth, s.Field.Width = false, 4*r*math.Sin(size*deg)
			f := 1 - 2/r
			lo, hi := 0.0, r/math.Sqrt(f)
			for range 80 {
				o := geodesic.NewClosedOrbit((lo + hi) / 2)
				if o.Sweep(0, 1/r) < psi*deg {
					lo = (lo + hi) / 2
				} else {
					hi = (lo + hi) / 2
				}
			}
			s.Field.Center = [2]float64{0, lo}
			v := view(t, s)
			solid := 2 * math.Pi * (1 - math.Cos(size*deg))
			got := flux(v, render(t, v, Options{})) / (f * f * r * r * solid)
			mean := math.Cos(psi*deg) * (1 + math.Cos(size*deg)) / 2 // of cos ψ over the cap
			name := fmt.Sprintf("R = %g, ψ = %g", r, psi)
			near(t, "pulse, "+name, got, spotFlux(r, mean), 2e-3)
			u := 2 / r
			within := 0.01
			if r < 6 {
				within = 0.03
			}
			near(t, "Beloborodov, "+name, got, u+(1-u)*math.Cos(psi*deg), within)
		}
	}
}

// Slow rotation: at the left and right limb of the equator the surface moves
// along the light, where g = √f √((1+v)/(1-v)) and its inverse, and the
// emission angle is aberrated; at the middle it moves across, g = √f √(1-v²).
func TestRotationDoppler(t *testing.T) {
	s := starScene(6, 90, 8)
	const v = 0.1 // in the static frame
	f := 1 - 2./6
	s.Emitters[0].Period = 2 * math.Pi * 6 / (v * math.Sqrt(f))
	limb := 6 / math.Sqrt(f)
	readings, err := view(t, s).Probe(context.Background(), [][2]float64{{-limb * (1 - 1e-8), 0}, {limb * (1 - 1e-8), 0}, {1e-9, 0}})
	if err != nil || len(readings) != 3 {
		t.Fatal(readings, err)
	}
	near(t, "left limb", readings[0].G, math.Sqrt(f*(1+v)/(1-v)), 1e-8)
	near(t, "right limb", readings[1].G, math.Sqrt(f*(1-v)/(1+v)), 1e-8)
	near(t, "middle", readings[2].G, math.Sqrt(f*(1-v*v)), 1e-9)
	near(t, "emission angle in the middle", readings[2].Mu, math.Sqrt(1-v*v), 1e-9)
}

// A cap turns counter-clockwise about N: on the near side to the right; and
// it is seen where it was when its light left.
func TestCapTurns(t *testing.T) {
	s := starScene(6, 90, 8)
	s.Emitters[0].Caps = []scenes.Cap{{Colatitude: 90, Azimuth: 0, Size: 1, Temperature: 1e6}}
	s.Emitters[0].Period = 1000
	vw := view(t, s)
	surface := vw.Emitters[0].(*emit.Surface)
	// light from the middle of the star left at Time + r*(6) as regularised
	delay := -(6 + 2*math.Log(6./2-1))
	for _, time := range []float64{delay, delay + 40} {
		surface.Time = time
		turned := 2 * math.Pi * (time - delay) / 1000
		var at [][2]float64
		for k := range 801 {
			at = append(at, [2]float64{-8 + 0.02*float64(k), 0})
		}
		readings, err := vw.Probe(context.Background(), at)
		if err != nil {
			t.Fatal(err)
		}
		var sum, moment float64
		for _, r := range readings {
			if r.Intensity > 0 {
				sum++
				moment += r.Phi
			}
		}
		if sum < 5 {
			t.Fatalf("%g points of the cap seen", sum)
		}
		// light from the side has further to go than from the middle: within
		// 1 M, 0.4 deg of rotation, at these angles
		near(t, "azimuth of the cap", moment/sum, turned, 0.015)
		if time > delay && !(moment > 0) {
			t.Error("the cap turns clockwise")
		}
	}
}

// Temperatures: brightness as T⁴ relative to the surface, or to the hottest
// cap around which it is dark; one frequency is refused.
func TestSurfaceTemperatures(t *testing.T) {
	s := starScene(6, 0, 8)
	s.Emitters[0].Temperature = 1e6
	s.Emitters[0].Caps = []scenes.Cap{{Size: 10, Temperature: 2e6}, {Colatitude: 60, Size: 10, Temperature: 1e6}}
	g4 := math.Pow(1-2./6, 2)
	intensity := func(s scenes.Scene, at [2]float64) float64 {
		t.Helper()
		readings, err := view(t, s).Probe(context.Background(), [][2]float64{at})
		if err != nil || len(readings) != 1 {
			t.Fatal(readings, err)
		}
		return readings[0].Intensity
	}
	near(t, "hot cap", intensity(s, [2]float64{0, 0.01}), 16*g4, 1e-9)
	near(t, "surface", intensity(s, [2]float64{0, 4}), g4, 1e-9)
	s.Emitters[0].Temperature = 0
	near(t, "hottest cap", intensity(s, [2]float64{0, 0.01}), g4, 1e-9)
	near(t, "dark around it", intensity(s, [2]float64{0, 4}), 0, 0)
	s.Emitters[0].Light = "monochromatic"
	if _, err := NewView(s); err == nil {
		t.Error("one frequency of temperatures is not refused")
	}
	s.Emitters[0].Caps = nil
	s.Emitters[0].SpectralIndex = 1
	near(t, "one frequency", intensity(s, [2]float64{0, 0.01}), 1-2./6, 1e-9)
}

// What any worker count must not change, for every emitter and observer.
func TestEveryEmitterAnyWorkers(t *testing.T) {
	star := starScene(4, 60, 50)
	star.Emitters[0].Caps = []scenes.Cap{{Colatitude: 50, Size: 20, Temperature: 1e6}}
	star.Emitters[0].Temperature, star.Emitters[0].Period, star.Emitters[0].EmissionAngle = 5e5, 300, "darkened"
	disk := scene(60, 6, 1).Emitters[0]
	disk.EmissionAngle = "brightened"
	sky := scenes.Emitter{Kind: "sky", Pattern: "stars", Seed: 5, Light: "bolometric"}
	star.Emitters = append(star.Emitters, disk, sky)
	all := []scenes.Scene{star}
	for _, pattern := range []string{"grid", "stars"} {
		all = append(all,
			skyScene("black-hole", 0, 1.5, "infall", pattern, 70),
			skyScene("black-hole", 0, 8, "orbit", pattern, 70),
			skyScene("shell", 2.5, 1, "static", pattern, 70))
	}
	for _, s := range all {
		v := view(t, s)
		one := render(t, v, Options{Workers: 1})
		for _, o := range []Options{{Workers: 2}, {Workers: 7}, {Workers: 3, TileSide: 7}} {
			samePlate(t, fmt.Sprintf("%s %s %+v", s.Object.Kind, s.Observer.Motion, o), one, render(t, v, o))
		}
	}
}

// The wiring of gas and angle laws: static gas has g = √(1-2/r), and a
// darkened disk is 1 + 2.06 μ with its flux kept.
func TestDiskWiring(t *testing.T) {
	s := scene(50, 4, 8)
	s.Emitters[0].Gas = "static"
	s.Emitters[0].EmissionAngle = "darkened"
	s.Emitters[0].Index = []float64{0}
	readings, err := view(t, s).Probe(context.Background(), [][2]float64{{7, 2}, {-7, 2}})
	if err != nil || len(readings) < 2 {
		t.Fatal(readings, err)
	}
	for _, r := range readings {
		near(t, "g", r.G, math.Sqrt(1-2/r.R), 1e-12)
		near(t, "intensity", r.Intensity, math.Pow(r.G, 4)*(1+2.06*r.Mu)/(1+4.12/3), 1e-12)
	}
}
