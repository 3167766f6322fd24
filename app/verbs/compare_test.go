package verbs

import (
	"math"
	"strings"
	"testing"
)

func TestCompareVerb(t *testing.T) {
	folder(t)
	got := do(t, "", "compare", "@first-light", "--estimator", "annulus-fit", "--diameter", "42 +- 3 uas", "--set", "field.pixels=[300,300]", "--json")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	var f struct {
		Rows []struct {
			Row, Unit, Note string
			Value, Sigma    *float64
		}
	}
	decode(t, got.out, &f)
	rows := map[string]float64{}
	for _, r := range f.Rows {
		if r.Value != nil {
			rows[r.Row] = *r.Value
		}
		if strings.HasPrefix(r.Row, "critical") && r.Note != notATest {
			t.Errorf("%+v", r)
		}
	}
	if ratio := rows["implied_theta_g"] / rows["theta_g"] * rows["model_diameter"] / 42; math.Abs(ratio-1) > 1e-12 {
		t.Errorf("implied scale is off by %g", ratio-1)
	}
	// the mass's and distance's errors are not given: 3 uas alone
	if want := (rows["model_diameter"] - 42) / 3; math.Abs(rows["difference"]-want) > 1e-12 {
		t.Errorf("%g sigma, want %g", rows["difference"], want)
	}
	if d := rows["model_diameter"]; !(d > 35 && d < 45) {
		t.Errorf("diameter %g uas", d)
	}
	for args, says := range map[string]string{
		"compare|@first-light":                             "estimator",
		"compare|small.toml|--estimator|ridge":             "measured",
		"compare|@first-light|--estimator|x":               "estimator",
		"visibility|small.toml":                            "theta_g",
		"visibility|@first-light|--map|--position-angle|3": "one of",
		"cut|@first-light|--from|1,2":                      "--to",
		"cut|@first-light|--points|1":                      "--points",
	} {
		if got := do(t, "", strings.Split(args, "|")...); got.code != exitUsage || !strings.Contains(got.errors, says) || got.out != "" {
			t.Errorf("%s: %+v", args, got)
		}
	}
	if got := do(t, "", "compare", "@first-light", "--estimator", "ridge", "--set", "telescope.beam=[900,900,0]", "--set", "field.pixels=[64,64]"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because the beam") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "compare", "@first-light", "--estimator", "ridge", "--set", "field.pixels=[1,1]"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because") {
		t.Errorf("%+v", got)
	}
}

// The flux is V at 0; east is left: a source to the left of the centre has
// the phase -2π u l of a positive l.
func TestVisibilityVerb(t *testing.T) {
	folder(t)
	scene := strings.Replace(smallScene, "[[emitter]]", "[object]\ntheta_g = \"4 uas\"\n[[emitter]]", 1)
	write(t, "scaled.toml", scene)
	write(t, "uv.csv", "u,v\n0,0\n1,0\n-1,0\n0,1\n")
	write(t, "triangles.csv", "u1,v1,u2,v2\n1,0,0,1\n")
	got := do(t, "", "visibility", "scaled.toml", "--uv", "uv.csv", "--orders")
	if got.code != exitDone || !strings.HasPrefix(got.out, "u,v,re,im,amplitude,phase,amplitude_0,amplitude_1,amplitude_2\n") {
		t.Fatalf("%+v", got)
	}
	rows := strings.Split(strings.TrimSpace(got.out), "\n")[1:]
	number := func(row, column int) float64 {
		x, err := parseFinite(strings.Split(rows[row], ",")[column])
		if err != nil {
			t.Fatal(err)
		}
		return x
	}
	if number(0, 3) != 0 || !(number(0, 2) > 0) {
		t.Errorf("V at 0: %s", rows[0])
	}
	if number(1, 2) != number(2, 2) || number(1, 3) != -number(2, 3) {
		t.Errorf("V of a real image: %s, %s", rows[1], rows[2])
	}
	// the left, approaching side is brighter and lies east: V has Im < 0
	if !(number(1, 3) < 0) {
		t.Errorf("east: %s", rows[1])
	}
	// turned by 90 deg up is east
	turned := do(t, "", "visibility", "scaled.toml", "--uv", "uv.csv", "--orders", "--set", "observer.position_angle=90deg")
	if turned.code != exitDone {
		t.Fatalf("%+v", turned)
	}
	north := number(3, 2)
	rows = strings.Split(strings.TrimSpace(turned.out), "\n")[1:]
	if math.Abs(number(1, 2)-north) > 1e-12*math.Abs(north) {
		t.Errorf("up turned to the east: %s, want re %g", rows[1], north)
	}
	if got := do(t, "", "visibility", "scaled.toml", "--triangles", "triangles.csv"); got.code != exitDone || !strings.HasPrefix(got.out, "u1,v1,u2,v2,closure_phase\n1,0,0,1,") {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "visibility", "scaled.toml", "--exact", "--to", "300", "--steps", "5", "--orders"); got.code != exitDone || strings.Count(got.out, "\n") != 7 {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "visibility", "scaled.toml", "--map", "--to", "3"); got.code != exitDone || strings.Count(got.out, "\n") < 10 {
		t.Errorf("%+v", got)
	}
	if got := do(t, "", "visibility", "scaled.toml", "--to", "3000"); got.code != exitCouldNot || !strings.Contains(got.errors, "cannot be measured because") {
		t.Errorf("%+v", got)
	}
}
