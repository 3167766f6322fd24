package tone

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"
)

var (
	nan = float32(math.NaN())
	inf = float32(math.Inf(1))
)

// disk is a layer as a plate has them: empty sky, a few paths without value,
// and intensities over many decades.
func disk(n int) []float32 {
	rng := rand.New(rand.NewPCG(1, 2)) // fixed, so failures repeat
	values := make([]float32, n)
	for i := range values {
		switch rng.IntN(4) {
		case 0:
			values[i] = 0
		case 1:
			values[i] = nan
		default:
			values[i] = float32(math.Exp(rng.NormFloat64() * 4))
		}
	}
	return values
}

// TestPercentilesTwoRoads sorts the counted values and takes the ranks, which
// the selection never does.
func TestPercentilesTwoRoads(t *testing.T) {
	rng := rand.New(rand.NewPCG(3, 4))
	layers := map[string][]float32{"disk": disk(5000)}
	mixed := []float32{nan, inf, -inf, 0, float32(math.Copysign(0, -1)), math.SmallestNonzeroFloat32, -math.MaxFloat32, math.MaxFloat32}
	for range 3000 {
		mixed = append(mixed, float32(rng.NormFloat64()))
	}
	layers["mixed"] = mixed
	layers["few"] = []float32{3, 3, 1}
	var checked int
	for name, values := range layers {
		for _, which := range []counted{{}, {zeros: true}, {negative: true}, {zeros: true, negative: true}} {
			var sorted []float64
			for _, v := range values {
				x := float64(v)
				if math.IsNaN(x) || math.IsInf(x, 0) || x == 0 && !which.zeros || x < 0 && !which.negative {
					continue
				}
				sorted = append(sorted, x)
			}
			slices.Sort(sorted)
			for _, p := range [][2]float64{{0, 100}, {1, 99.8}, {25, 50}, {0.001, 99.999}} {
				lo, hi, some := selectPercentiles(values, which, p[0], p[1])
				if !some {
					t.Fatalf("%s %+v: nothing counted", name, which)
				}
				near(t, name+" low", lo, sorted[rankOf(p[0], len(sorted))], 0)
				near(t, name+" high", hi, sorted[rankOf(p[1], len(sorted))], 0)
				checked++
			}
		}
	}
	if want := len(layers) * 4 * 4; checked != want {
		t.Fatalf("checked %d pairs, want %d", checked, want)
	}
}

func TestRankOf(t *testing.T) {
	for _, c := range []struct {
		percent float64
		n, want int
	}{{0, 10, 0}, {10, 10, 0}, {10.1, 10, 1}, {50, 3, 1}, {99.9, 1000, 998}, {100, 10, 9}, {1, 1, 0}} {
		if got := rankOf(c.percent, c.n); got != c.want {
			t.Errorf("rank of %g %% among %d = %d, want %d", c.percent, c.n, got, c.want)
		}
	}
}

func TestLimits(t *testing.T) {
	values := []float32{nan, 0, 0, 0, 1, 2, inf, 4, -inf, 8}
	const tol = 1e-12
	for _, c := range []struct {
		name   string
		tone   Tone
		values []float32
		lo, hi float64
	}{
		{"zero tone", Tone{}, values, 1, 8},
		{"zeros counted", Tone{CountZeros: true}, values, 0, 8},
		{"from zero", Tone{FromZero: true}, values, 0, 8},
		{"from zero, negative too", Tone{FromZero: true}, []float32{-2, 1, 8}, -2, 8},
		{"percentiles", Tone{LowPercent: 30, HighPercent: 75}, values, 2, 4},
		{"fixed", Tone{Low: -1, High: 3}, values, -1, 3},
		{"centre", Tone{Centre: 1, Low: 0.5, High: 1.2}, values, 0.5, 1.5},
		{"centre outside", Tone{Centre: 10}, values, 1, 19},
		{"log, default", Tone{Curve: Logarithmic}, values, 8e-3, 8},
		{"log, decades", Tone{Curve: Logarithmic, Decades: 1}, values, 0.8, 8},
		{"log, fixed", Tone{Curve: Logarithmic, Low: 0.1, High: 10}, values, 0.1, 10},
		{"log, fixed from zero", Tone{Curve: Logarithmic, High: 10}, values, 1e-2, 10},
		{"log, nothing positive", Tone{Curve: Logarithmic}, []float32{-1, 0, nan}, 1e-3, 1},
		{"nothing", Tone{}, nil, 0, 1},
		{"all empty", Tone{}, []float32{0, nan, inf}, 0, 1},
	} {
		lo, hi := c.tone.Limits(c.values)
		near(t, c.name+" low", lo, c.lo, tol)
		near(t, c.name+" high", hi, c.hi, tol)
		fixed := c.tone.Fixed(c.values)
		if err := fixed.Check(); err != nil {
			t.Errorf("%s: fixed tone: %v", c.name, err)
		}
		lo2, hi2 := fixed.Limits([]float32{77, -3})
		near(t, c.name+" fixed low", lo2, lo, 0)
		near(t, c.name+" fixed high", hi2, hi, 0)
	}
}

func TestLimitsOfOneValue(t *testing.T) {
	for _, v := range []float32{5, -5, 1e-30, math.MaxFloat32} {
		tone := Tone{}
		lo, hi := tone.Limits([]float32{v, v})
		if !(lo < hi) {
			t.Fatalf("limits of %g: %g to %g", v, lo, hi)
		}
		const rounding = 1e-6
		near(t, "position", tone.Normalise(float64(v), lo, hi), 0.5, rounding)
	}
}

func TestLimitsIgnoreOrder(t *testing.T) {
	values := disk(1000)
	lo, hi := Tone{}.Limits(values)
	slices.Reverse(values)
	lo2, hi2 := Tone{}.Limits(values)
	near(t, "low", lo2, lo, 0)
	near(t, "high", hi2, hi, 0)
}

func BenchmarkLimits(b *testing.B) {
	const side = 1000
	const n = side * side
	values := annulus(side, side)
	var hi float64
	for b.Loop() {
		_, hi = Tone{}.Limits(values)
	}
	sorted := slices.DeleteFunc(slices.Clone(values), func(v float32) bool { return !(v > 0) })
	slices.Sort(sorted)
	if want := float64(sorted[rankOf(DefaultHighPercent, len(sorted))]); hi != want {
		b.Fatalf("high limit %g, want %g", hi, want)
	}
	b.ReportMetric(b.Elapsed().Seconds()*1e9/float64(b.N*n), "ns/value")
}
