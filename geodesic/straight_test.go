package geodesic

import (
	"math"
	"testing"
)

// Straight paths against vectors: the line through the observer in the
// direction of each line of sight.
func TestStraightPaths(t *testing.T) {
	star, err := NewStar(5, false)
	if err != nil {
		t.Fatal(err)
	}
	flat := NewStraight(star)
	compared := map[Surface]int{}
	for _, inclination := range []float64{0, 35, 80, 130} {
		o := Observer{Radius: 40, InclinationDeg: inclination, AzimuthDeg: 20}
		tracer, err := flat.Tracer(o, Plan{Tolerance: 1e-9, MaxOrder: 2, Plane: true, Sky: true})
		if err != nil {
			t.Fatal(err)
		}
		sinI, cosI := math.Sincos(inclination * math.Pi / 180)
		sinA, cosA := math.Sincos(20 * math.Pi / 180)
		toward := [3]float64{sinI * cosA, sinI * sinA, cosI}
		right := [3]float64{-sinA, cosA, 0}
		up := [3]float64{-cosI * cosA, -cosI * sinA, sinI}
		var dirs []Direction
		for k := range 60 {
			a := math.Pi * (float64(k) + 0.5) / 60 // from straight ahead to straight back
			sin, cos := math.Sincos(float64(k))
			dirs = append(dirs, Direction{Alpha: math.Sin(a) * cos, Beta: math.Sin(a) * sin, Ahead: math.Cos(a)})
		}
		var rays Rays
		if err := flat.Aim(o, false, dirs, &rays); err != nil {
			t.Fatal(err)
		}
		var at Crossings
		tracer.Cross(&rays, Want{Delay: true, Slope: true}, &at)
		for k, d := range dirs {
			var from, way [3]float64
			for x := range 3 {
				from[x] = 40 * toward[x]
				way[x] = d.Alpha*right[x] + d.Beta*up[x] - d.Ahead*toward[x]
			}
			dot := 40 * (way[0]*toward[0] + way[1]*toward[1] + way[2]*toward[2])
			hit := math.Inf(1) // the star
			if square := dot*dot - 1600 + 25; square >= 0 && dot < 0 {
				hit = -dot - math.Sqrt(square)
			}
			want := 0
			check := func(surface Surface, length float64) {
				want++
				compared[surface]++
				j := int(at.Start[k]) + want - 1
				if j >= int(at.Start[k+1]) || at.Surface[j] != surface || at.Order[j] != 0 {
					t.Fatalf("i %g, line of sight %d: crossings %v, want %v", inclination, k, at.Surface[at.Start[k]:at.Start[k+1]], surface)
				}
				var p [3]float64
				r := 0.0
				for x := range 3 {
					p[x] = from[x] + length*way[x]
					if surface == Sky {
						p[x] = way[x]
					}
					r += p[x] * p[x]
				}
				r = math.Sqrt(r)
				near(t, "cos θ", at.CosTheta[j], p[2]/r, 1e-12)
				near(t, "azimuth", math.Remainder(at.Phi[j]-math.Atan2(p[1], p[0]), 2*math.Pi), 0, 1e-11)
				if surface == Sky {
					return
				}
				near(t, "r", at.R[j]/r, 1, 1e-11)
				near(t, "delay", at.Delay[j], length-40, 1e-12*(length+100))
				outward := -(p[0]*way[0] + p[1]*way[1] + p[2]*way[2]) / r // of the light
				near(t, "k^r", at.KR[j], outward, 1e-11)
			}
			if length := -from[2] / way[2]; way[2] != 0 && length > 0 && length < hit && cosI != 0 {
				check(Plane, length)
			}
			if math.IsInf(hit, 1) {
				check(Sky, 0)
			} else {
				check(Star, hit)
			}
			if n := int(at.Start[k+1] - at.Start[k]); n != want {
				t.Errorf("i %g, line of sight %d: %d crossings, want %d", inclination, k, n, want)
			}
		}
	}
	for _, s := range []Surface{Plane, Star, Sky} {
		if compared[s] < 5 {
			t.Errorf("surface %d compared %d times", s, compared[s])
		}
	}
}

// Slopes of straight paths by differences.
func TestStraightSlopes(t *testing.T) {
	hole, err := NewHole(0)
	if err != nil {
		t.Fatal(err)
	}
	flat := NewStraight(hole)
	for _, radius := range []float64{math.Inf(1), 30} {
		o := Observer{Radius: radius, InclinationDeg: 50}
		tracer, err := flat.Tracer(o, Plan{Tolerance: 1e-9, Plane: true, Sky: true})
		if err != nil {
			t.Fatal(err)
		}
		const step = 1e-5
		for k := range 20 {
			sin, cos := math.Sincos(float64(k))
			b := 3 + 0.4*float64(k)
			var dirs []Direction
			for _, d := range []float64{-step, 0, step} {
				dirs = append(dirs, Direction{Alpha: (b + d) * cos, Beta: (b + d) * sin})
			}
			var rays Rays
			if err := flat.Aim(o, true, dirs, &rays); err != nil {
				t.Fatal(err)
			}
			var at Crossings
			tracer.Cross(&rays, Want{Slope: true}, &at)
			if at.Start[1] != 2 || at.Start[3] != 6 {
				t.Fatalf("crossings %v", at.Start)
			}
			near(t, "dr/db", at.Slope[2], (at.R[4]-at.R[0])/(2*step), 1e-5*(1+math.Abs(at.Slope[2])))
		}
	}
}
