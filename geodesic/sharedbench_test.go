package geodesic

import (
	"context"
	"fmt"
	"math"
	"testing"
)

// BenchmarkShared times radii and orders of 800 x 800 pixels, 30 M wide, from
// an observer at 1000 M, on one goroutine, and checks them.
func BenchmarkShared(b *testing.B) {
	const side, wide = 800, 30.0
	for _, inclination := range []float64{20, 50, 75, 85, 89} {
		b.Run(fmt.Sprintf("inclination=%g", inclination), func(b *testing.B) {
			o := Observer{Radius: 1000, InclinationDeg: inclination}
			table, err := schwarzschild.SharedOrbits(context.Background(), Share{Observer: o, Tolerance: 1e-9, MaxOrder: 2})
			if err != nil {
				b.Fatal(err)
			}
			t, err := schwarzschild.SharedTracer(o, Plan{Tolerance: 1e-9, MaxOrder: 2, Plane: true, Reach: 50}, table)
			if err != nil {
				b.Fatal(err)
			}
			dirs := make([]Direction, 0, side)
			var r Rays
			var c Crossings
			worst := 0.0
			sinI, cosI := SinCosDeg(inclination)
			row := func(y int) {
				dirs = dirs[:0]
				for x := range side {
					dirs = append(dirs, Direction{Alpha: wide * ((float64(x)+0.5)/side - 0.5), Beta: wide * ((float64(y)+0.5)/side - 0.5)})
				}
				if err := schwarzschild.Aim(o, true, dirs, &r); err != nil {
					b.Fatal(err)
				}
				t.Cross(&r, Want{NoPlace: true, NoKR: true}, &c)
			}
			for b.Loop() {
				for y := range side {
					row(y)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*side*side), "ns/pixel")
			b.ReportMetric(float64(t.Direct())/float64(b.N*side*side)*1e6, "direct-ppm")
			for y := 0; y < side; y += 7 {
				row(y)
				for k := range dirs {
					closed := NewClosedOrbit(r.Impact(k))
					for j := c.Start[k]; j < c.Start[k+1]; j++ {
						psi := FirstPlaneAngle(sinI, cosI, r.SinS[k]) + float64(c.Order[j])*math.Pi
						if want := closed.RadiusAt(1e-3, psi); want > 0 && want < 50 {
							worst = max(worst, math.Abs(c.R[j]/want-1))
						}
					}
				}
			}
			if worst > 1e-7 {
				b.Errorf("worst relative error in r is %g", worst)
			}
		})
	}
}
