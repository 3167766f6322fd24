package geodesic

import (
	"fmt"
	"math"
	"testing"

	"gonum.org/v1/gonum/integrate/quad"
)

const inDeg = 180 / math.Pi

// tell is near, relative to want.
func tell(t *testing.T, what string, got, want, tol float64) {
	t.Helper()
	near(t, what, got, want, tol*math.Abs(want))
}

func nan(t *testing.T, what string, values ...float64) {
	t.Helper()
	for _, x := range values {
		if !math.IsNaN(x) {
			t.Errorf("%s: %v, want none", what, values)
			return
		}
	}
}

// Published and exact values about a hole.
func TestStationsOfHole(t *testing.T) {
	at := schwarzschild.Station
	for _, c := range []struct {
		what      string
		got, want float64
		source    string
	}{
		{"clock at 2.25 M", at(2.25).ClockRate, 1. / 3, "√(1-2/r)"},
		{"ruler at 2.25 M", at(2.25).RulerStretch, 3, "1/√(1-2/r)"},
		{"orbit at the ISCO", at(6).OrbitSpeed, 0.5, "Bardeen, Press & Teukolsky 1972"},
		{"orbit at 4 M", at(4).OrbitSpeed, math.Sqrt(0.5), "marginally bound, the same"},
		{"fall at 8 M", at(8).InfallSpeed, 0.5, "√(2/r)"},
		{"shadow at 3 M", at(3).ShadowStatic * inDeg, 90, "half the sky: Synge 1966"},
		{"shadow at 6 M", at(6).ShadowStatic * inDeg, 45, "sin² a = 27 f/r²: Synge 1966"},
		{"shadow at 10 M", at(10).ShadowStatic * inDeg, 27.6945614507768, "the same"},
		{"cone at 6 M", at(6).EscapeCone * inDeg, 135, "the same"},
		{"cone at 3 M", at(3).EscapeCone * inDeg, 90, "the same"},
		{"escape at 3 M", at(3).EscapeFraction, 0.5, "the same"},
		{"sky average at 6 M", (1 - 2./6) * at(6).EscapeFraction, 0.569035593728849, "shared physics note, section 11"},
		{"fall, horizon", at(2).ShadowInfall * inDeg, math.Acos(23./31) * inDeg, "shared physics note, section 12"},
		{"fall, 3 M", at(3).ShadowInfall * inDeg, 35.2643896827547, "the same"},
		{"fall, 6 M", at(6).ShadowInfall * inDeg, 24.2034283393298, "the same"},
		{"orbit, 6 M", at(6).ShadowOrbit, math.Atan(math.Sqrt(3) / 2), "the same"},
		{"orbit's middle, 6 M", at(6).ShadowCentre * inDeg, 22.2076542985965, "the same"},
		{"fall, at the centre", at(1e-14).ShadowInfall * inDeg, 90, "its limit"},
	} {
		near(t, c.what+" ("+c.source+")", c.got, c.want, 1e-12*max(1, c.want)+map[bool]float64{true: 1e-4}[c.what == "fall, at the centre"])
	}
	inf := at(math.Inf(1))
	if want := (Station{R: math.Inf(1), ClockRate: 1, RulerStretch: 1, EscapeCone: math.Pi, EscapeFraction: 1}); inf != want {
		t.Errorf("at infinity %+v, want %+v", inf, want)
	}
	for _, r := range []float64{2, 1.5, 0, -1, math.NaN()} {
		s := at(r)
		nan(t, fmt.Sprintf("at %g M", r), s.ClockRate, s.RulerStretch, s.OrbitSpeed, s.InfallSpeed,
			s.EscapeCone, s.EscapeFraction, s.ShadowStatic, s.ShadowOrbit, s.ShadowCentre)
		if (r > 0) != (s.ShadowInfall > 0) {
			t.Errorf("at %g M the falling one's shadow is %v", r, s.ShadowInfall)
		}
	}
	nan(t, "orbit at the photon sphere", at(3).OrbitSpeed, at(3).ShadowOrbit, at(2.5).OrbitSpeed)
	just := math.Nextafter(2+1e-9, 3)
	tell(t, "clock just outside", at(just).ClockRate, math.Sqrt((just-2)/just), 1e-15)
}

// The shadow's edge is where Aim's frames see b = b_c, and the orbit's two
// edges and the static ones are each other's aberration.
func TestShadowFrames(t *testing.T) {
	charged := must(t)(NewHole(0.6))
	star := must(t)(NewStar(5, false))
	compact := must(t)(NewStar(2.6, false))
	for _, s := range []*Round{schwarzschild, charged, star, compact} {
		for _, r := range []float64{1.9, 2.1, 2.65, 2.9, 3.4, 5.5, 12, 3000} {
			at := s.Station(r)
			want, _ := s.rim(r)
			if !math.IsNaN(at.ShadowInfall) && s.end == Captured {
				// E = ν (1 - β cos a), L = r ν sin a
				sin, cos := math.Sincos(at.ShadowInfall)
				tell(t, fmt.Sprintf("%s: b of the fall's edge at %g", s.name, r), r*sin/(1-s.fallSpeed(r)*cos), want, 1e-12)
			}
			if math.IsNaN(at.ShadowStatic) {
				continue
			}
			sin, cos := math.Sincos(at.ShadowStatic)
			tell(t, fmt.Sprintf("%s: b of the edge at %g", s.name, r), r*sin/at.ClockRate, want, 2e-12)
			v := at.InfallSpeed
			near(t, "aberration of the fall", math.Cos(at.ShadowInfall), (cos+v)/(1+v*cos), 1e-12)
			near(t, "cone and shadow", at.EscapeCone+at.ShadowStatic, math.Pi, 1e-14)
			near(t, "share", at.EscapeFraction, (1+cos)/2, 1e-14)
			if v := at.OrbitSpeed; !math.IsNaN(v) {
				hi, lo := math.Asin((sin+v)/(1+v*sin)), math.Asin((v-sin)/(1-v*sin))
				near(t, fmt.Sprintf("%s: orbit's radius at %g", s.name, r), at.ShadowOrbit, (hi-lo)/2, 1e-12)
				near(t, fmt.Sprintf("%s: orbit's middle at %g", s.name, r), at.ShadowCentre, (hi+lo)/2, 1e-12)
			}
		}
	}
	near(t, "a star fills half the sky of its surface", star.Station(5).ShadowStatic*inDeg, 90, 1e-12)
	near(t, "an orbit at the surface", star.Station(5).ShadowOrbit*inDeg, 90, 1e-12)
	// limb at R = 6 M from 12 M: sin a = (R/√A(R)) √A(r)/r
	near(t, "a star's disk", math.Sin(must(t)(NewStar(6, false)).Station(12).ShadowStatic), 6/Lapse(6)*Lapse(12)/12, 1e-14)
	in := star.Station(4)
	nan(t, "within an opaque star", in.ClockRate, in.RulerStretch, in.OrbitSpeed, in.InfallSpeed, in.EscapeCone, in.ShadowStatic, in.ShadowInfall)
	// the limits of no charge
	weak := must(t)(NewHole(1e-9))
	for _, r := range []float64{1, 2.5, 7} {
		near(t, "weakly charged", weak.Station(r).ShadowInfall, schwarzschild.Station(r).ShadowInfall, 1e-13)
	}
}

// Within shells and uniform stars; centre clock (3s-1)/2: Schwarzschild 1916.
func TestStationsWithin(t *testing.T) {
	shell := must(t)(NewShell(2.25)).Station(1)
	near(t, "clock in the shell", shell.ClockRate, 1./3, 1e-15)
	near(t, "ruler in the shell", shell.RulerStretch, 1, 0)
	near(t, "fall in the shell", shell.InfallSpeed, math.Sqrt(8./9), 1e-15)
	nan(t, "in the shell", shell.OrbitSpeed, shell.ShadowStatic, shell.ShadowOrbit, shell.ShadowInfall)
	near(t, "on the shell, outside", must(t)(NewShell(49)).Station(49).RulerStretch, 1/Lapse(49), 1e-15)

	for _, radius := range []float64{2.3, 2.8, 3, 6, 1e9} {
		s := must(t)(NewStar(radius, true))
		centre := s.Station(0)
		near(t, "centre clock", centre.ClockRate, (3*Lapse(radius)-1)/2, 1e-15)
		near(t, "centre ruler", centre.RulerStretch, 1, 0)
		near(t, "centre orbit", centre.OrbitSpeed, 0, 0)
		near(t, "centre escape", centre.EscapeFraction, 1, 0)
		for _, share := range []float64{0.1, 0.5, 0.9, 0.999} {
			r := share * radius
			at := s.Station(r)
			h := 1e-5 * radius
			slope := (s.Lapse(r+h) - s.Lapse(r-h)) / (2 * h)
			if v2 := r * slope / s.Lapse(r); v2 < 0.99 && radius < 100 && share < 0.99 {
				near(t, fmt.Sprintf("orbit at %g of %g M", r, radius), at.OrbitSpeed, math.Sqrt(v2), 1e-8)
			} else if v2 > 1.01 {
				nan(t, "orbit beyond the ring of light", at.OrbitSpeed)
			}
			near(t, "fall", at.InfallSpeed*at.InfallSpeed+at.ClockRate*at.ClockRate, 1, 1e-15)
		}
		at := s.Station(radius * (1 - 1e-14))
		if out := s.Station(radius); radius > 3 {
			near(t, "orbit across the surface", at.OrbitSpeed, out.OrbitSpeed, 1e-12)
			tell(t, "fall across the surface", at.InfallSpeed, out.InfallSpeed, 1e-12)
			tell(t, "ruler across the surface", at.RulerStretch, out.RulerStretch, 1e-12)
		}
	}
	// a weak star: v² = r²/R³ within to first order, fall at the centre √(3/R)
	weak := must(t)(NewStar(1e10, true))
	tell(t, "weak orbit", weak.Station(5e9).OrbitSpeed, math.Sqrt(25e18/1e30), 1e-9)
	tell(t, "weak fall", weak.Station(0).InfallSpeed, math.Sqrt(3e-10), 1e-9)
}

// What the cone lets out escapes and what it holds does not, by the fates
// that paths meet. A path leaves inward first: its mirror image.
func TestEscapeThrough(t *testing.T) {
	checked := 0
	for _, s := range []*Round{must(t)(NewShell(2.25)), must(t)(NewShell(2.9))} {
		for _, r := range []float64{0.5, 1.5, 1.8, 2.2, 2.24, 2.8, 2.897} {
			at := s.Station(r)
			if s.place(r) != within {
				continue
			}
			if !at.EscapeMirrored {
				if r/at.ClockRate > CriticalImpact || at.EscapeCone != math.Pi {
					t.Errorf("%g M in %g M: %+v", r, s.Edge(), at)
				}
				continue
			}
			near(t, "share", at.EscapeFraction, 1-math.Cos(at.EscapeCone), 1e-14)
			for _, side := range []float64{-1e-7, 1e-7} {
				story, err := s.Trace(Path{ObserverRadius: r, Impact: r * math.Sin(at.EscapeCone*(1+side)) / at.ClockRate, Tolerance: 1e-10})
				if err != nil {
					t.Fatal(err)
				}
				if (story.Fate == Trapped) != (side > 0) {
					t.Errorf("%g M in %g M: %v at %g of the cone's edge", r, s.Edge(), story.Fate, side)
				}
				checked++
			}
		}
	}
	if checked != 8 {
		t.Errorf("checked %d edges", checked)
	}
	for _, s := range []*Round{must(t)(NewShell(2.25)), must(t)(NewStar(2.5, true)), must(t)(NewShell(4))} {
		for _, r := range []float64{3, 5, math.Inf(1)} {
			at := s.Station(r)
			if at.EscapeCone != math.Pi || at.EscapeMirrored {
				t.Errorf("%s of %g M at %g M: %+v", s.name, s.Edge(), r, at)
			}
			nan(t, "shadow of what light passes", at.ShadowStatic, at.ShadowOrbit, at.ShadowCentre, at.ShadowInfall)
		}
	}
	// continuous through the surface, and closing on the sphere's ring
	s := must(t)(NewStar(2.5, true))
	near(t, "cone across the surface", s.Station(2.5*(1-1e-13)).EscapeCone, s.Station(2.5).EscapeCone, 1e-11)
	near(t, "cone by the photon sphere", s.Station(3-1e-9).EscapeCone*inDeg, 90, 1e-6)
}

// Lengths and times against quadrature of √g_rr and 1/A, excesses against
// that of √g_rr - 1; pieces add up.
func TestPairLengths(t *testing.T) {
	objects := []*Round{
		schwarzschild, must(t)(NewHole(0.6)), must(t)(NewHole(0.999)),
		must(t)(NewStar(6, false)), must(t)(NewStar(2.3, true)), must(t)(NewStar(6, true)), must(t)(NewStar(1e7, true)),
		must(t)(NewShell(2.25)), must(t)(NewShell(9)),
	}
	radii := []float64{0, 0.7, 2.2, 2.2501, 3.1, 5, 8.9, 40, 41, 9e6, 2e7}
	compared := 0
	for _, s := range objects {
		for i, r1 := range radii {
			for _, r2 := range radii[i+1:] {
				p := s.Pair(r1, r2, Static, Static)
				if back := s.Pair(r2, r1, Static, Static); s.place(r1) != nowhere && (back.ProperDistance != p.ProperDistance || back.LightTime != p.LightTime) {
					t.Errorf("%s: the way back from %g to %g M is another", s.name, r2, r1)
				}
				if s.place(r1) == nowhere {
					nan(t, fmt.Sprintf("%s, %g to %g M", s.name, r1, r2), p.ProperDistance, p.ExcessRadius, p.LightTime)
					continue
				}
				// ln r as variable where the range is wide
				integrate := func(f func(r float64) float64, a, b float64) float64 {
					if b <= a {
						return 0
					}
					if a == 0 || b/a < 3 {
						return quad.Fixed(f, a, b, 400, nil, 0)
					}
					return quad.Fixed(func(x float64) float64 { r := math.Exp(x); return r * f(r) }, math.Log(a), math.Log(b), 600, nil, 0)
				}
				less := func(r float64) float64 { // √g_rr - 1
					if s.place(r) == within {
						if f, ok := s.inside.(*uniform); ok {
							x2 := r * r / (f.a * f.a)
							c := math.Sqrt(1 - x2)
							return x2 / (c * (1 + c))
						}
						return 0
					}
					a, depth := s.lapse2(1/r), s.depth(r)
					return depth / (math.Sqrt(a) * (1 + math.Sqrt(a)))
				}
				slow := func(r float64) float64 { return s.Station(r).RulerStretch / s.Station(r).ClockRate }
				middle := min(max(s.Edge(), r1), r2)
				what := fmt.Sprintf("%s of %g M, %g to %g M: ", s.name, s.Edge(), r1, r2)
				excess := integrate(less, r1, middle) + integrate(less, middle, r2)
				tell(t, what+"excess", p.ExcessRadius, excess, 3e-12)
				tell(t, what+"distance", p.ProperDistance, r2-r1+excess, 1e-12)
				tell(t, what+"light time", p.LightTime, integrate(slow, r1, middle)+integrate(slow, middle, r2), 3e-12)
				if r2 < 1e3 {
					tell(t, what+"tortoise", p.LightTime, s.Tortoise(r2)-s.Tortoise(r1), 1e-11+1e-15*max(r2, s.Edge())/(r2-r1))
				}
				compared++
			}
		}
	}
	if compared < 250 {
		t.Errorf("compared %d pairs", compared)
	}

	// the textbook's form; from the horizon to 2.25 M it is 3/4 + ln 2
	length := func(r float64) float64 {
		return math.Sqrt(r*(r-2)) + 2*math.Log(math.Sqrt(r)+math.Sqrt(r-2))
	}
	p := schwarzschild.Pair(10, 4, Static, Static)
	tell(t, "length", p.ProperDistance, length(10)-length(4), 1e-14)
	tell(t, "light time", p.LightTime, 6+2*math.Log(8./2), 1e-15)
	p = schwarzschild.Pair(2, 2.25, Static, Static)
	tell(t, "length from the horizon", p.ProperDistance, 0.75+math.Log(2), 1e-14)
	nan(t, "from the horizon", p.LightTime, p.FrequencyRatio, p.FrequencyShift)
	p = schwarzschild.Pair(10, math.Inf(1), Static, Static)
	nan(t, "to infinity", p.ProperDistance, p.ExcessRadius, p.LightTime)
	p = must(t)(NewHole(0.6)).Pair(1.8, 1.9, Static, Static)
	// y = 0.9 = 0.8 cosh x: x + 0.8 sinh x
	x := math.Acosh(0.9 / 0.8)
	tell(t, "length from the charged horizon", p.ProperDistance, x+0.8*math.Sinh(x), 1e-13)
	p = must(t)(NewStar(4, true)).Pair(0, 4, Static, Static)
	tell(t, "a star's proper radius", p.ProperDistance, math.Sqrt(32)*math.Asin(math.Sqrt(0.5)), 1e-15)
	// the Earth, if uniform, has an excess of GM/3c² = 1.5 mm, the weak limit
	// of Schwarzschild's (1916) interior; GM/c² = 4.4350 mm and the mean
	// radius from IAU 2015 Resolution B3 and common practice
	p = must(t)(NewStar(6.371e6/4.4350e-3, true)).Pair(0, 6.371e6/4.4350e-3, Static, Static)
	near(t, "the Earth's excess radius, mm", p.ExcessRadius*4.4350, 1.5, 0.05)
	tell(t, "the Earth's excess radius, M", p.ExcessRadius, 1./3, 1e-8)
}

// Frequency ratios: exact, published, and consistent.
func TestPairFrequencies(t *testing.T) {
	inf := math.Inf(1)
	ratio := func(s *Round, from, to float64, a, b Motion) float64 { return s.Pair(from, to, a, b).FrequencyRatio }
	hole, shell := schwarzschild, must(t)(NewShell(2.25))
	for _, c := range []struct {
		what      string
		got, want float64
	}{
		{"2.25 M to infinity", ratio(hole, 2.25, inf, Static, Static), 1. / 3},
		{"a star at infinity, within the shell", ratio(shell, inf, 1, Static, Static), 3},
		{"out of a star's centre", ratio(must(t)(NewStar(4, true)), 0, inf, Static, Static), (3*math.Sqrt(0.5) - 1) / 2},
		// Bardeen, Press & Teukolsky 1972: u^t = 1/√(1-3/r), radial light
		{"orbit at 6 M to infinity", ratio(hole, 6, inf, Orbit, Static), math.Sqrt(0.5)},
		{"infinity to orbit at 6 M", ratio(hole, inf, 6, Static, Orbit), math.Sqrt2},
		{"orbit to orbit", ratio(hole, 6, 12, Orbit, Orbit), math.Sqrt(0.5) / math.Sqrt(0.75)},
		// shared physics note, section 12: g = 1/(1 + √(2/r)) of what is behind
		{"star behind, at the horizon", ratio(hole, inf, 2, Static, Infall), 0.5},
		{"star behind, within", ratio(hole, inf, 0.5, Static, Infall), 1. / 3},
		{"star behind, at 8 M", ratio(hole, inf, 8, Static, Infall), 2. / 3},
		{"falling from 8 M, back to infinity", ratio(hole, 8, inf, Infall, Static), 0.5},
		{"falling through the shell", ratio(shell, inf, 0, Static, Infall), 1 / (1 + math.Sqrt(8./9))},
		{"two that fall", ratio(hole, 8, 0.5, Infall, Infall), 0.5},
		{"at one place", ratio(hole, 6, 6, Orbit, Static), 1 / math.Sqrt(4./3)},
		{"the same one", ratio(hole, 6, 6, Infall, Infall), 1},
	} {
		tell(t, c.what, c.got, c.want, 1e-14)
	}
	nan(t, "frequencies",
		ratio(hole, 1.5, 4, Static, Static), ratio(hole, 1.5, 4, Infall, Static), ratio(hole, 2, 4, Infall, Static),
		ratio(hole, 3, 4, Orbit, Static), ratio(hole, 6, 6, Infall, Static), ratio(hole, 4, 0, Static, Infall),
		ratio(shell, 1, 4, Orbit, Static), ratio(must(t)(NewStar(6, false)), 5, 8, Static, Static),
		hole.Pair(1.5, 4, Static, Static).FrequencyShift, must(t)(NewStar(6, false)).Pair(5, 8, Static, Static).FrequencyShift)

	// local Doppler of the fall, (1+v)/(1-v) squared root, either way
	for _, s := range []*Round{hole, must(t)(NewHole(0.6)), shell, must(t)(NewStar(5, true)), must(t)(NewStar(5, false))} {
		for _, r := range []float64{0.5, 2.3, 5.5, 30} {
			at := s.Station(r)
			if math.IsNaN(at.ClockRate) {
				continue
			}
			v := at.InfallSpeed
			doppler := math.Sqrt((1 + v) / (1 - v))
			tell(t, "received in the fall", ratio(s, 40, r, Static, Infall), ratio(s, 40, r, Static, Static)/doppler, 1e-13)
			tell(t, "sent in the fall", ratio(s, r, 40, Infall, Static), ratio(s, r, 40, Static, Static)/doppler, 1e-13)
			for _, to := range []float64{0.1, 2.6, 5.2, 100, inf} {
				for _, m := range [][2]Motion{{Static, Static}, {Orbit, Static}, {Static, Infall}, {Infall, Orbit}} {
					p := s.Pair(r, to, m[0], m[1])
					if math.IsNaN(p.FrequencyRatio) {
						nan(t, "shift", p.FrequencyShift)
						continue
					}
					near(t, fmt.Sprintf("%s of %g M, %g to %g M, %v: shift", s.name, s.Edge(), r, to, m), p.FrequencyShift, p.FrequencyRatio-1, 1e-13*max(1, p.FrequencyRatio))
				}
			}
		}
	}

	// Pound & Rebka, PRL 4, 337 (1960): gh/c² = 2.46e-15 over 22.5 m
	const earth = 4.4350280e-3 // GM/c², m
	r := 6.371e6 / earth
	p := hole.Pair(r+22.5/earth, r, Static, Static)
	near(t, "Pound & Rebka", p.FrequencyShift, 2.46e-15, 0.01e-15)
	tell(t, "gh/c²", p.FrequencyShift, 22.5/6.371e6/r, 5e-6)
	tell(t, "and back", hole.Pair(r, r+22.5/earth, Static, Static).FrequencyShift, -p.FrequencyShift, 1e-12)
	// Ashby, Living Rev. Relativ. 6, 1 (2003), from memory: a GPS clock is
	// slower by 3GM/2ac² = 2.5046e-10 than one at infinity, a = 26 562 km
	p = hole.Pair(2.6562e7/earth, inf, Orbit, Static)
	near(t, "a GPS orbit", p.FrequencyShift, -2.5046e-10, 0.0002e-10)
}

func ExampleRound_Station() {
	hole, _ := NewHole(0)
	at := hole.Station(6)
	fmt.Printf("clock %.6f, orbit %.3f c, shadow %.1f deg\n", at.ClockRate, at.OrbitSpeed, at.ShadowStatic*180/math.Pi)
	out := hole.Pair(6, math.Inf(1), Static, Static)
	fmt.Printf("seen from infinity: %.6f\n", out.FrequencyRatio)
	// Output:
	// clock 0.816497, orbit 0.500 c, shadow 45.0 deg
	// seen from infinity: 0.816497
}
