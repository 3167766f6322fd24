package measure

import (
	"context"
	"fmt"
	"math"
	"testing"

	"annulet/geodesic"
)

// Edge-on the extremes of a circle are exact: √(1-3/r)/(1 ∓ 1/√(r-2)), light
// along the orbit at its ends (physics: Doppler and gravitational shift). The
// values at 60 deg are those of the physics reference, by two roads.
func TestExtremes(t *testing.T) {
	thin := func(r, i float64) Range {
		v, _ := viewOf(t, fmt.Sprintf(`
[observer]
inclination = %g
[[emitter]]
kind = "disk"
inner = %g
outer = %.15g
`, i, r, r*(1+1e-12)))
		g, err := newGeometry(v)
		if err != nil {
			t.Fatal(err)
		}
		d, _ := disks(v)
		e, err := Extremes(context.Background(), g, d[0], 0)
		if err != nil {
			t.Fatal(err)
		}
		return e
	}
	for _, r := range []float64{6, 10, 20, 100} {
		e := thin(r, 90)
		what := fmt.Sprintf("r %g edge-on", r)
		near(t, what+" max", e.Max, math.Sqrt(1-3/r)/(1-1/math.Sqrt(r-2)), 1e-9)
		near(t, what+" min", e.Min, math.Sqrt(1-3/r)/(1+1/math.Sqrt(r-2)), 1e-9)
	}
	e := thin(6, 60)
	near(t, "r 6, i 60 max", e.Max, 1.224490566, 1e-9)
	near(t, "r 6, i 60 min", e.Min, 0.497076946, 1e-9)
	e = thin(6, 0)
	near(t, "face-on", e.Max, math.Sqrt(0.5), 1e-12)
	near(t, "face-on", e.Min, math.Sqrt(0.5), 1e-12)
}

func TestTrapezium(t *testing.T) {
	// two equal widths make a triangle, one makes a ramp
	near(t, "triangle", trapezium(-0.5, 1, 1), 0.125, 1e-15)
	near(t, "triangle", trapezium(0.5, 1, 1), 0.875, 1e-15)
	near(t, "ramp", trapezium(0.25, 1, 0), 0.75, 1e-15)
	near(t, "middle", trapezium(0, 3, 1), 0.5, 1e-15)
	near(t, "flank", trapezium(-1.5, 3, 1), 1./24, 1e-15)
}

// Every bin of 0.02 within 0.5 % of the peak, order by order, against points
// of the screen whose radii come from elliptic integrals (Darwin 1959) and
// whose g from the formula for circular orbits; and the totals.
func TestLine(t *testing.T) {
	for _, c := range []struct{ inner, outer, index, i float64 }{{6, 20, 3, 30}, {6, 50, 2.5, 70}, {6, 20, 3, 0}} {
		v, _ := viewOf(t, fmt.Sprintf(`
[observer]
inclination = %g
[trace]
max_order = 1
[[emitter]]
kind = "disk"
inner = %g
outer = %g
index = %g
`, c.i, c.inner, c.outer, c.index))
		const bin = 0.02
		l, err := NewLine(context.Background(), v, bin, Options{})
		if err != nil {
			t.Fatal(err)
		}
		sinI, cosI := math.Sincos(c.i * math.Pi / 180)
		for n, got := range l.Orders {
			want := make([]float64, len(got))
			around := 900
			const out = 400
			if c.i == 0 {
				around = 30 // every line is the same but for its shift
			}
			for j := range around {
				s := 2 * math.Pi * (float64(j) + 0.3) / float64(around)
				psi := geodesic.FirstPlaneAngle(sinI, cosI, math.Sin(s)) + float64(n)*math.Pi
				lo, hi := geodesic.RimImpact(0, psi, c.inner), geodesic.RimImpact(0, psi, c.outer)
				for k := range out {
					// a shift from line to line that never repeats
					_, shift := math.Modf(float64(j) * 0.6180339887498949)
					x := (float64(k) + shift) / out
					b := lo + (hi-lo)*x*x // denser where it is bright
					orbit := geodesic.NewClosedOrbit(b)
					r := orbit.RadiusAt(0, psi)
					g := math.Sqrt(1-3/r) / (1 + b*math.Cos(s)*sinI*math.Pow(r, -1.5))
					at := int(math.Floor(g/bin)) - l.First
					want[at] += math.Pow(g, 4) * math.Pow(r, -c.index) * b * 2 * x * (hi - lo) / out * 2 * math.Pi / float64(around)
				}
			}
			peak, worst := 0.0, 0.0
			for k, x := range want {
				peak = max(peak, x)
				worst = max(worst, math.Abs(x-got[k]))
			}
			t.Logf("%+v order %d: worst bin off by %.1e of the peak", c, n, worst/peak)
			if !(worst <= 0.005*peak) {
				t.Errorf("%+v order %d: a bin is off by %.2g of the peak", c, n, worst/peak)
			}
		}
		photon, energy := 0.0, 0.0
		for k := range l.Energy { // a photon's energy is within its bin
			photon += l.Photon[k]
			energy += l.Energy[k]
			lo, hi := float64(l.First+k)*bin, float64(l.First+k+1)*bin
			if mean := l.Energy[k] / l.Photon[k]; !(mean >= lo && mean <= hi) {
				t.Errorf("%+v: photons of energy %g in the bin from %g", c, mean, lo)
			}
		}
		if !(energy > 0 && photon > 0) {
			t.Errorf("%+v: dark", c)
		}
	}
}

// A spike of light becomes a Gaussian (any handbook: the error function) of
// the same flux; for a flat continuum the equivalent width is photons over
// level, and the index weighs them by g.
func TestSmoothed(t *testing.T) {
	l := &Line{Bin: 0.01, First: 99, Energy: []float64{2, 0}, Photon: []float64{3, 0}, Orders: [][]float64{{2, 0}}}
	s, err := l.Smoothed(0.2)
	if err != nil {
		t.Fatal(err)
	}
	energy, photon := s.Totals()
	near(t, "energy", energy, 2, 1e-12)
	near(t, "photons", photon, 3, 1e-12)
	below := 0.0
	for k, x := range s.Energy {
		below += x
		edge := float64(s.First+k+1)*s.Bin - 0.995
		want := 1 + math.Erf(edge/(0.2*sigmaPerFWHM)/math.Sqrt2)
		near(t, fmt.Sprintf("below %+.3f", edge), below, want, 2e-3)
	}
	near(t, "flat", l.EquivalentWidth(0.25, 0), 4, 1e-12)
	near(t, "steep", l.EquivalentWidth(0.25, 2), 4*0.995*0.995, 1e-12)
	if _, err := l.Smoothed(0); err == nil {
		t.Error("no resolution")
	}
}
