package verbs

import (
	"testing"
)

// What bench times is right; how fast it is, no test asks.
func TestBench(t *testing.T) {
	if testing.Short() {
		t.Skip("some seconds")
	}
	got := do(t, "", "bench", "--json", "--rounds", "1")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var r struct {
		SinglePaths []struct {
			Tolerance   float64
			RaysPerCPUS float64 `json:"rays_per_cpu_s"`
			MedianError float64 `json:"median_error"`
			FatesMissed int     `json:"fates_missed"`
		} `json:"single_paths"`
		Crossings []struct {
			InclinationDeg float64 `json:"inclination_deg"`
			Workers        int
			NSPerPixel     float64 `json:"ns_per_pixel"`
			Worst          float64 `json:"worst_relative_error"`
			Crossings      int
		}
		Frame []struct {
			TraceShadeMS float64 `json:"trace_shade_ms"`
			ShadeMS      float64 `json:"shade_ms"`
		}
	}
	decode(t, got.out, &r)
	if len(r.SinglePaths) != 3 || len(r.Crossings) != 10 || len(r.Frame) != 1 {
		t.Fatalf("%s", got.out)
	}
	for _, p := range r.SinglePaths {
		if !(p.RaysPerCPUS > 0) || !(p.MedianError <= 3*p.Tolerance) || p.FatesMissed != 0 {
			t.Errorf("%+v", p)
		}
	}
	for _, c := range r.Crossings {
		if !(c.NSPerPixel > 0) || !(c.Worst <= 1e-7) || c.Crossings < 400_000 {
			t.Errorf("%+v", c)
		}
	}
	if f := r.Frame[0]; !(f.TraceShadeMS > 0) || !(f.ShadeMS > 0) {
		t.Errorf("%+v", f)
	}
	if got := do(t, "", "bench", "--only", "crossing"); got.code != exitUsage {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "bench", "--rounds", "0"); got.code != exitUsage {
		t.Errorf("%+v", got)
	}
}
