package verbs

import (
	"encoding/json"
	"math"
	"slices"
	"strings"
	"testing"
)

// stationsOutput mirrors the fields that scripts rely on; a pointer is null
// where a value does not exist.
type stationsOutput struct {
	Units    map[string]string
	Object   string
	Stations []struct {
		R              json.RawMessage
		ClockRate      *float64 `json:"clock_rate"`
		RulerStretch   *float64 `json:"ruler_stretch"`
		OrbitSpeed     *float64 `json:"orbit_speed"`
		InfallSpeed    *float64 `json:"infall_speed"`
		EscapeConeDeg  *float64 `json:"escape_cone_deg"`
		EscapeMirrored bool     `json:"escape_cone_mirrored"`
		ShadowRadius   struct {
			Static, Orbit, Infall *float64
		} `json:"shadow_radius_deg"`
		ShadowCentreDeg *float64 `json:"shadow_centre_deg"`
		RKm             *float64 `json:"r_km"`
	}
	Pairs []struct {
		FromR            json.RawMessage `json:"from_r"`
		ToR              json.RawMessage `json:"to_r"`
		FrequencyRatio   *float64        `json:"frequency_ratio"`
		ProperDistance   *float64        `json:"proper_distance"`
		ExcessRadius     *float64        `json:"excess_radius"`
		LightTime        *float64        `json:"light_time"`
		ProperDistanceKm *float64        `json:"proper_distance_km"`
		LightTimeS       *float64        `json:"light_time_s"`
	}
	NotIncluded []string `json:"not_included"`
}

// askStations runs the verb with --json.
func askStations(t *testing.T, args string) (r stationsOutput, text string) {
	t.Helper()
	got := do(t, "", strings.Split("stations|--json|"+args, "|")...)
	if got.code != exitDone || got.errors != "" {
		t.Fatalf("%s: %+v", args, got)
	}
	decode(t, got.out, &r)
	return r, got.out
}

// is holds a value that must exist to 12 digits.
func is(t *testing.T, what string, got *float64, want float64) {
	t.Helper()
	if got == nil || !(math.Abs(*got-want) <= 1e-12*max(1, math.Abs(want))) {
		if got == nil {
			t.Errorf("%s is null, want %.15g", what, want)
			return
		}
		t.Errorf("%s = %.15g, want %.15g", what, *got, want)
	}
}

// Sources of the values: stations_test.go of package geodesic.
func TestStationsJSON(t *testing.T) {
	r, text := askStations(t, "--radius|1.5, 2.25,6 M|--radius|infinity")
	if len(r.Stations) != 4 || len(r.Pairs) != 12 || len(r.NotIncluded) == 0 || r.Object != "black-hole" {
		t.Fatal(text)
	}
	if string(r.Stations[3].R) != `"infinity"` || string(r.Stations[0].R) != "1.5" || strings.Contains(text, "_km\": ") {
		t.Error(text)
	}
	six := r.Stations[2]
	is(t, "clock", six.ClockRate, math.Sqrt(2./3))
	is(t, "ruler", six.RulerStretch, math.Sqrt(1.5))
	is(t, "orbit", six.OrbitSpeed, 0.5)
	is(t, "fall", six.InfallSpeed, math.Sqrt(1./3))
	is(t, "cone", six.EscapeConeDeg, 135)
	is(t, "static shadow", six.ShadowRadius.Static, 45)
	is(t, "orbit's shadow", six.ShadowRadius.Orbit, math.Atan(math.Sqrt(3)/2)*180/math.Pi)
	is(t, "its middle", six.ShadowCentreDeg, 22.2076542985965)
	if in := r.Stations[0]; in.ClockRate != nil || in.RulerStretch != nil || in.InfallSpeed != nil || in.ShadowRadius.Static != nil || in.ShadowRadius.Infall == nil {
		t.Errorf("inside the horizon: %s", text)
	}
	if near := r.Stations[1]; near.OrbitSpeed != nil || near.ShadowRadius.Orbit != nil {
		t.Errorf("an orbit within 3 M: %s", text)
	}
	for _, p := range r.Pairs {
		switch from, to := string(p.FromR), string(p.ToR); {
		case from == "1.5" || to == "1.5":
			if p.FrequencyRatio != nil || p.ProperDistance != nil || p.LightTime != nil {
				t.Errorf("%s to %s: %s", from, to, text)
			}
		case from == "2.25" && to == "6":
			is(t, "ratio", p.FrequencyRatio, math.Sqrt(1./9/(2./3)))
			is(t, "light time", p.LightTime, 3.75+2*math.Log(16))
			is(t, "excess", p.ExcessRadius, *p.ProperDistance-3.75)
		case from == `"infinity"` && to == "2.25":
			is(t, "ratio", p.FrequencyRatio, 3)
			if p.ProperDistance != nil || p.LightTime != nil {
				t.Errorf("distances to infinity: %s", text)
			}
		}
	}
	for _, field := range []string{"r", "clock_rate", "shadow_radius_deg", "from_r", "frequency_ratio", "light_time"} {
		if r.Units[field] == "" {
			t.Errorf("no unit of %s", field)
		}
	}

	r, _ = askStations(t, "--radius|2")
	is(t, "fall at the horizon", r.Stations[0].ShadowRadius.Infall, math.Acos(23./31)*180/math.Pi)
	if r.Pairs == nil || len(r.Pairs) != 0 {
		t.Errorf("pairs of one station: %v", r.Pairs)
	}
}

func TestStationsObjects(t *testing.T) {
	r, text := askStations(t, "--object|shell|--object-radius|2.25|--radius|0,2,infinity")
	is(t, "clock in the shell", r.Stations[0].ClockRate, 1./3)
	if s := r.Stations[1]; s.OrbitSpeed != nil || s.ShadowRadius.Static != nil || !s.EscapeMirrored {
		t.Error(text)
	}
	r, _ = askStations(t, "--object|star|--object-radius|4|--interior|uniform|--radius|0,4")
	is(t, "centre clock", r.Stations[0].ClockRate, (3*math.Sqrt(0.5)-1)/2)
	is(t, "proper radius", r.Pairs[0].ProperDistance, math.Sqrt(32)*math.Pi/4)
	r, text = askStations(t, "--object|star|--object-radius|4|--radius|3,4")
	if r.Stations[0].ClockRate != nil || r.Pairs[0].LightTime != nil {
		t.Errorf("in an opaque star: %s", text)
	}
	is(t, "a star's disk from its surface", r.Stations[1].ShadowRadius.Static, 90)
	r, _ = askStations(t, "--charge|0.6|--radius|1.8,4")
	is(t, "charged clock", r.Stations[1].ClockRate, math.Sqrt(1-0.5+0.36/16))
	r, _ = askStations(t, "--radius|6,infinity|--from-motion|orbit")
	is(t, "sent in orbit", r.Pairs[0].FrequencyRatio, math.Sqrt(0.5))
	r, _ = askStations(t, "--radius|2,infinity|--to-motion|infall")
	is(t, "received at the horizon", r.Pairs[1].FrequencyRatio, 0.5)
}

func TestStationsUnitsAndScenes(t *testing.T) {
	// GM/c² of the Sun 1476.62503805012 m, GM/c³ 4.92549094764127e-6 s:
	// IAU 2015 Resolution B3
	r, _ := askStations(t, "--mass|10 Msun|--radius|4,10")
	is(t, "km", r.Stations[0].RKm, 4*14.7662503805012)
	is(t, "distance in km", r.Pairs[0].ProperDistanceKm, *r.Pairs[0].ProperDistance*14.7662503805012)
	is(t, "light time in s", r.Pairs[0].LightTimeS, *r.Pairs[0].LightTime*4.92549094764127e-5)

	folder(t)
	r, text := askStations(t, "small.toml|--radius|4|--set|object.charge=0.6 M|--set|object.mass=10 Msun")
	is(t, "a scene's clock", r.Stations[0].ClockRate, math.Sqrt(1-0.5+0.36/16))
	is(t, "a scene's km", r.Stations[0].RKm, 4*14.7662503805012)
	if !strings.Contains(text, `"charge": 0.6`) {
		t.Error(text)
	}
}

func TestStationsTable(t *testing.T) {
	got := do(t, "", "stations", "--radius", "1.5,6,infinity", "--mass", "10")
	for _, want := range []string{"r [km]", "45.0000000000", "22.2076542986", "0.500000000000", "infinity", "light time [s]", " -"} {
		if !strings.Contains(got.out, want) {
			t.Errorf("no %q in\n%s", want, got.out)
		}
	}
	if got.code != exitDone || got.errors != notIncludedLine+"\n" {
		t.Errorf("exit %d, stderr %q", got.code, got.errors)
	}
	got = do(t, "", "stations", "--object", "shell", "--object-radius", "2.05", "--radius", "2.5")
	if got.code != exitDone || !strings.Contains(got.out, "mirror image") || !strings.Contains(got.errors, "dominant energy") {
		t.Errorf("%+v", got)
	}
}

func TestStationsRefusals(t *testing.T) {
	folder(t)
	for _, c := range []struct{ args, says string }{
		{"", "needs --radius"},
		{"--radius|", "needs --radius"},
		{"--radius|4,,5", "neither"},
		{"--radius|4,nan", "nan"},
		{"--radius|4,-inf", "-inf"},
		{"--radius|4,-1", "negative"},
		{"--radius|1e13", "infinity"},
		{"--radius|4 km", "4 km"},
		{"--radius|" + strings.Repeat("4,", 200) + "5", "too many"},
		{"--radius|4|--object|teapot", "teapot"},
		{"--radius|4|--object|star", "needs --object-radius"},
		{"--radius|4|--object|star|--object-radius|2.25", "Buchdahl"},
		{"--radius|4|--object|star|--object-radius|4|--interior|hollow", "hollow"},
		{"--radius|4|--object|star|--object-radius|4|--charge|0.5", "--charge"},
		{"--radius|4|--object|shell|--object-radius|2", "more than 2 M"},
		{"--radius|4|--object|shell|--object-radius|4|--interior|uniform", "only a star"},
		{"--radius|4|--object-radius|4", "no object radius"},
		{"--radius|4|--charge|1", "[0, 1)"},
		{"--radius|4|--charge|-0.1", "[0, 1)"},
		{"--radius|4|--mass|0", "above 0"},
		{"--radius|4|--mass|10 kg", "Msun"},
		{"--radius|4|--from-motion|sideways", "static, orbit, infall"},
		{"--radius|4|--to-motion|sideways", "--to-motion"},
		{"--radius|4|--set|object.charge=0.5", "no"},
		{"--radius|4|small.toml|--charge|0.5", "exclude each other"},
		{"--radius|4|small.toml|other.toml", "at most one SCENE"},
		{"--radius|4|missing.toml", "missing.toml"},
		{"--radius|4|--bogus", "--bogus"},
	} {
		args := []string{"stations"}
		if c.args != "" {
			args = slices.Concat(args, strings.Split(c.args, "|"))
		}
		got := do(t, "", args...)
		if got.code != exitUsage || got.out != "" || !strings.Contains(got.errors, c.says) || strings.Count(got.errors, "annulet-batch: ") != 1 {
			t.Errorf("%s: %+v, want a message with %q", c.args, got, c.says)
		}
	}
}
