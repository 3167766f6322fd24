package geodesic

import (
	"fmt"
	"math"
	"slices"
	"testing"
)

// sunflower spreads impact parameters evenly over a disk of 15 M.
func sunflower(n int) []float64 {
	b := make([]float64, n)
	for k := range b {
		_, frac := math.Modf((float64(k) + 0.5) / math.Phi)
		b[k] = 15 * math.Sqrt(frac)
	}
	return b
}

// sweepErrors integrates the sunflower's paths between 1000 M and 2.0001 M
// and returns their differences from the closed form, sorted.
func sweepErrors(t testing.TB, tolerance float64, b, swept []float64, captured []bool) []float64 {
	const uObs, uEnd = 1e-3, 1 / 2.0001
	SweepAll(uObs, uEnd, tolerance, b, swept, captured)
	off := make([]float64, len(b))
	for k := range b {
		o := NewClosedOrbit(b[k])
		want := 0.0
		if o.scattering {
			want = 2 * o.Sweep(uObs, o.u2)
		} else {
			want = o.Sweep(uObs, uEnd)
		}
		if captured[k] == o.scattering {
			t.Errorf("b = %.17g: captured is %v", b[k], captured[k])
		}
		off[k] = math.Abs(swept[k] - want)
	}
	slices.Sort(off)
	return off
}

func TestSweepAll(t *testing.T) {
	b := sunflower(4000)
	swept, captured := make([]float64, len(b)), make([]bool, len(b))
	for _, tolerance := range []float64{1e-6, 1e-9, 1e-12} {
		off := sweepErrors(t, tolerance, b, swept, captured)
		near(t, fmt.Sprintf("median error at %g", tolerance), off[len(off)/2], 0, 3*tolerance)
	}
	// every remainder of paths by lanes
	for n := range 5 {
		SweepAll(1e-3, 0.499, 1e-9, b[:n], swept, captured)
	}
	off := sweepErrors(t, 1e-9, b[:7], swept, captured)
	near(t, "worst of seven", off[6], 0, 1e-7)
}

func TestFoldIsTry(t *testing.T) {
	o := launched(0.11, 5.3)
	errU, errW := o.try(0.2)
	u, w, f, eu, ew := fold(o.u0, o.w0, bend(o.u0, 0), 0.2)
	for k, pair := range [][2]float64{{u, o.u}, {w, o.w}, {f, o.fs[6]}, {eu, errU}, {ew, errW}} {
		near(t, fmt.Sprintf("value %d", k), pair[0], pair[1], 1e-16)
	}
}

func BenchmarkSweepAll(b *testing.B) {
	for _, tolerance := range []float64{1e-6, 1e-7, 1e-8, 1e-9, 1e-10, 1e-12} {
		b.Run(fmt.Sprintf("tolerance=%g", tolerance), func(b *testing.B) {
			paths := sunflower(4000)
			swept, captured := make([]float64, len(paths)), make([]bool, len(paths))
			for b.Loop() {
				SweepAll(1e-3, 1/2.0001, tolerance, paths, swept, captured)
			}
			off := sweepErrors(b, tolerance, paths, swept, captured)
			b.ReportMetric(float64(b.N*len(paths))/b.Elapsed().Seconds(), "paths/s")
			b.ReportMetric(off[len(off)/2], "median-rad")
			b.ReportMetric(off[len(off)-1], "worst-rad")
		})
	}
}
