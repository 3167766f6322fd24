package verbs

import (
	"math"
	"os"
	"strings"
	"testing"

	"annulet/app/files/foreign"
)

func TestRingsVerb(t *testing.T) {
	folder(t)
	got := do(t, "", "rings", "@first-light", "--set", "observer.inclination=60deg", "--set", "emitter.inner=6M", "--at-angle", "90", "--json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var f struct {
		Units    map[string]string
		Critical struct{ B, ClosedForm, Difference float64 }
		Edges    []struct {
			Order            int
			AtAngleDeg       float64 `json:"at_angle_deg"`
			PositionAngleDeg float64 `json:"position_angle_deg"`
			Edge             string
			B                float64
			ClosedFormB      float64  `json:"closed_form_b"`
			MeasuredB        *float64 `json:"measured_b"`
			MeasuredBBound   *float64 `json:"measured_b_bound"`
		}
		Rings []struct {
			Order        int
			FluxFraction float64 `json:"flux_fraction"`
			Width        float64
			Inner, Outer struct {
				Horizontal float64 `json:"diameter_horizontal"`
				Vertical   float64 `json:"diameter_vertical"`
			}
		}
	}
	decode(t, got.out, &f)
	if len(f.Edges) != 6 || len(f.Rings) != 3 {
		t.Fatalf("%d edges, %d rings", len(f.Edges), len(f.Rings))
	}
	// physics reference: r = 6 M at 60 deg, order 0 at the top
	if e := f.Edges[0]; e.Edge != "inner" || math.Abs(e.B-7.03908299181) > 1e-9 || e.PositionAngleDeg != 0 || e.MeasuredB == nil || math.Abs(*e.MeasuredB-e.B) > *e.MeasuredBBound {
		t.Errorf("%+v", e)
	}
	if r := f.Rings[1]; math.Abs(r.Inner.Horizontal-11.0100062430) > 1e-9 || math.Abs(r.Inner.Vertical-11.2938623437) > 1e-9 {
		t.Errorf("%+v", r)
	}
	for _, name := range []string{"flux", "width", "b", "measured_b_bound", "diameter_horizontal", "mean_delay"} {
		if f.Units[name] == "" {
			t.Errorf("no unit of %s", name)
		}
	}
	got = do(t, "", "rings", "@first-light", "--set", "field.pixels=[80,80]", "--estimate", "--json")
	if got.code != exitDone || strings.Count(got.out, `"estimator": "annulus-fit"`) != 2 || !strings.Contains(got.out, `"image": "blurred"`) {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "rings", "small.toml", "--table", "edges"); got.code != exitDone ||
		!strings.HasPrefix(got.out, "emitter,order,at_angle_deg,position_angle_deg,edge,b,closed_form_b,measured_b,measured_b_bound\n") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "rings", "@slow-room"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because") {
		t.Errorf("%+v", got)
	}
	for _, args := range [][]string{
		{"rings", "small.toml", "--at-angle", "x"}, {"rings", "small.toml", "--table", "x"}, {"rings", "small.toml", "-o", "x.png"},
		{"line", "small.toml", "--bin", "0"},
	} {
		if got := do(t, "", args...); got.code != exitUsage || got.out != "" {
			t.Errorf("%v: %+v", args, got)
		}
	}
}

func TestLineVerb(t *testing.T) {
	folder(t)
	got := do(t, "", "line", "small.toml", "--bin", "0.02", "-o", "line.ecsv", "-o", "line.csv", "-o", "line.json")
	if got.code != exitDone || !strings.HasPrefix(got.out, "g_lo,g_hi,flux,photon_flux,flux_0,flux_1,flux_2\n") {
		t.Fatalf("%+v", got)
	}
	total := 0.0
	for _, line := range strings.Split(strings.TrimSpace(got.out), "\n")[1:] {
		x, err := parseFinite(strings.Split(line, ",")[2])
		if err != nil {
			t.Fatal(err)
		}
		total += x
	}
	if math.Abs(total-1) > 1e-12 {
		t.Errorf("total %v", total)
	}
	var f struct {
		GMin float64 `json:"g_min"`
		GMax float64 `json:"g_max"`
	}
	file, err := os.ReadFile("line.json")
	if err != nil {
		t.Fatal(err)
	}
	decode(t, string(file), &f)
	if !(f.GMin > 0 && f.GMin < f.GMax) {
		t.Errorf("%+v", f)
	}
	broad := []string{"line", "small.toml", "--set", "emitter.light=line", "--set", "emitter.rest=6.4keV", "--set", "telescope.resolution=100eV", "--energies", "--continuum", "2,1.9", "--json"}
	if got := do(t, "", broad...); got.code != exitDone || !strings.Contains(got.out, `"equivalent_width_keV": 0.`) || !strings.Contains(got.out, `"E_lo": `) {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "line", "small.toml", "--energies"); got.code != exitUsage || !strings.Contains(got.errors, "emitter.rest") {
		t.Errorf("%+v", got)
	}
	code := "from astropy.table import Table; t = Table.read('line.ecsv'); assert abs(t['flux'].sum() - 1) < 1e-9; assert 'scene' in t.meta"
	foreign.Python(t, "astropy", code)
}

func TestSpectrumAndLightCurveVerbs(t *testing.T) {
	folder(t)
	write(t, "hot.toml", `schema = 1
[object]
mass = "10 Msun"
distance = "3 kpc"
[field]
frequency = ["1 keV"]
[[emitter]]
profile = "novikov-thorne"
luminosity = "0.1 Edd"
light = "blackbody"
`)
	got := do(t, "", "spectrum", "hot.toml", "--from", "0.1keV", "--to", "10keV", "--points", "5", "-o", "s.ecsv")
	if got.code != exitDone || !strings.HasPrefix(got.out, "nu,E,F_nu,F_nu_bound,photon_flux,F_nu_0,F_nu_1,F_nu_2\n") || strings.Count(got.out, "\n") != 6 {
		t.Fatalf("%+v", got)
	}
	row := strings.Split(strings.Split(got.out, "\n")[3], ",")
	e, _ := parseFinite(row[1])
	flux, _ := parseFinite(row[2])
	photons, _ := parseFinite(row[4])
	// 1 Jy at 1 keV is 1509.19 photons/cm²/s/keV: 1e-23 erg over h
	if math.Abs(e-1) > 1e-12 || math.Abs(photons/flux/1509.19-1) > 1e-5 {
		t.Errorf("%v", row)
	}
	write(t, "spot.toml", "schema = 1\n[field]\npixels = [16, 16]\n[[emitter]]\nkind = \"spot\"\nradius = 9\n[trace]\nmax_order = 1\n")
	got = do(t, "", "lightcurve", "spot.toml", "--set", "time.end=1 orbit", "--set", "time.step=0.05 orbit", "--json")
	var f struct {
		Period float64
		Orders []struct{ Amplitude, Delay *float64 }
		Rows   []struct{ T, Flux float64 }
	}
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	decode(t, got.out, &f)
	if len(f.Rows) != 21 || math.Abs(f.Period-54*math.Pi) > 1e-9 || len(f.Orders) != 2 || f.Orders[0].Delay != nil || f.Orders[1].Delay == nil || f.Orders[1].Amplitude == nil {
		t.Errorf("%s", got.out[:min(1500, len(got.out))])
	}
	if got := do(t, "", "lightcurve", "small.toml"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "spectrum", "small.toml", "--from", "1keV", "--to", "2keV"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "spectrum", "small.toml", "--from", "3keV", "--to", "2keV"); got.code != exitUsage {
		t.Errorf("%+v", got)
	}
}
