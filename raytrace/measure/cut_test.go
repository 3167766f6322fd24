package measure

import (
	"context"
	"errors"
	"math"
	"testing"

	"annulet/geodesic"
)

// Along a cut through a face-on disk radii are those of the closed orbits
// (Darwin 1959), g is √(1-3/r) and intensity g⁴ r⁻³, order by order.
func TestCut(t *testing.T) {
	v, _ := viewOf(t, diskScene(0, 10))
	points, err := Cut(context.Background(), v, [2]float64{0, 4}, [2]float64{0, 24}, 4001)
	if err != nil {
		t.Fatal(err)
	}
	seen := [3]int{}
	for _, p := range points {
		total := 0.0
		orbit := geodesic.NewClosedOrbit(p.Beta)
		for n, o := range p.Orders {
			total += o.Intensity
			if math.IsNaN(o.R) {
				continue
			}
			seen[n]++
			near(t, "r", o.R, orbit.RadiusAt(0, (float64(n)+0.5)*math.Pi), 1e-6*o.R)
			near(t, "g", o.G, math.Sqrt(1-3/o.R), 1e-12)
			near(t, "intensity", o.Intensity, math.Pow(o.G, 4)*math.Pow(o.R, -3), 1e-12)
		}
		near(t, "total", p.Intensity, total, 1e-15)
		near(t, "distance", p.Distance, p.Beta-4, 1e-12)
	}
	// widths of the images from the physics reference, in steps of 0.005
	for n, width := range []float64{20.97665113584 - 6.932148479189, 5.865410841326 - 5.478913722084, 5.220484439229 - 5.207989587555} {
		near(t, "points lit", float64(seen[n]), width/0.005, 1)
	}
	if _, err := Cut(context.Background(), v, [2]float64{}, [2]float64{}, 10); !errors.Is(err, ErrCannot) {
		t.Error(err)
	}
}

// EHT 2019 (ApJL 875, L1, L6; published): 42 ± 3 uas and 3.8 ± 0.4 uas for
// M87*. A ring of 11.05 M is then no test of either.
func TestCompare(t *testing.T) {
	c := Compare(11, 2*geodesic.CriticalImpact, Angle{3.8, 0.4}, Angle{42, 3})
	near(t, "model", c.Model.Value, 41.8, 1e-12)
	near(t, "model's error", c.Model.Sigma, 4.4, 1e-12)
	near(t, "implied", c.Implied.Value, 42./11, 1e-12)
	near(t, "sigmas", c.Sigmas, -0.2/math.Hypot(4.4, 3), 1e-12)
	near(t, "critical", c.Critical.Value, 39.490758, 1e-6)
	if !math.IsNaN(Compare(11, 10, Angle{3.8, 0}, Angle{42, 0}).Sigmas) {
		t.Error("sigmas without errors")
	}
}
