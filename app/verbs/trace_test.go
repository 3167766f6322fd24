package verbs

import (
	"context"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"math/rand/v2"
	"slices"
	"strconv"
	"strings"
	"testing"

	"annulet/geodesic"
)

// traceOutput mirrors the fields that scripts rely on; a pointer is null
// where a value does not exist.
type traceOutput struct {
	Units           map[string]string
	Object          string
	ObjectRadius    *float64 `json:"object_radius"`
	Interior        *string
	Charge          *float64
	Fate            string
	SweptRad        any             `json:"swept_rad"` // a number or "infinity"
	DeflectionRad   *float64        `json:"deflection_rad"`
	ClosestR        *float64        `json:"closest_r"`
	TravelTime      *float64        `json:"travel_time"`
	ObserverRadius  json.RawMessage `json:"observer_radius"`
	Steps           *int
	Evaluations     *int
	BoundRad        *float64 `json:"bound_rad"`
	ClosedFormSwept any      `json:"closed_form_swept_rad"`
	DifferenceRad   *float64 `json:"difference_rad"`
	NotIncluded     []string `json:"not_included"`
}

func TestTraceJSON(t *testing.T) {
	got := do(t, "", "trace", "--observer-radius", "infinity", "--impact", "10", "--tolerance", "1e-10", "--json")
	if got.code != exitDone || got.errors != "" {
		t.Fatalf("%+v", got)
	}
	var r traceOutput
	decode(t, got.out, &r)
	// Deflection at b = 10 M: physics.md section 4, after Darwin (1959).
	const want, tol = 0.590395787605827, 1e-8
	if r.DeflectionRad == nil || !(math.Abs(*r.DeflectionRad-want) <= tol) {
		t.Errorf("deflection %v, want %v ± %v", r.DeflectionRad, want, tol)
	}
	if r.Fate != "escaped" || string(r.ObserverRadius) != `"infinity"` || r.TravelTime == nil || len(r.NotIncluded) == 0 {
		t.Errorf("%s", got.out)
	}
	if r.Units["swept_rad"] != "rad" || r.Units["closest_r"] != "M" {
		t.Errorf("units %v", r.Units)
	}

	got = do(t, "", "trace", "--observer-radius", "12", "--impact", "2", "--json")
	r = traceOutput{}
	decode(t, got.out, &r)
	if r.Fate != "captured" || r.TravelTime != nil || r.DeflectionRad != nil || r.SweptRad == nil || r.Steps == nil || r.Evaluations == nil {
		t.Errorf("captured: %s", got.out)
	}
	if d := r.SweptRad.(float64) - r.ClosedFormSwept.(float64); *r.DifferenceRad != d {
		t.Errorf("difference %v, want %v", *r.DifferenceRad, d)
	}
}

func TestTraceLines(t *testing.T) {
	got := do(t, "", "trace", "--observer-radius", "1000", "--impact", "5.3")
	for _, want := range []string{"r = 1000 M", "b = 5.3 M", "escaped", " rad", " deg", "error bound"} {
		if !strings.Contains(got.out, want) {
			t.Errorf("no %q in\n%s", want, got.out)
		}
	}
	if got.code != exitDone || got.errors != notIncludedLine+"\n" {
		t.Errorf("exit %d, stderr %q", got.code, got.errors)
	}
}

func TestTraceTable(t *testing.T) {
	// Columns in an order of their own, a byte order mark, an empty object.
	const table = "\ufeffimpact,object,observer_radius\n2,black-hole,12\n10,,infinity\n5.3, black-hole ,1000\n"
	got := do(t, table, "trace", "--table", "-")
	if got.code != exitDone {
		t.Fatalf("%+v", got)
	}
	rows, err := csv.NewReader(strings.NewReader(got.out)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	want := strings.Split("impact,object,observer_radius,fate,swept_rad,closest_r,difference_rad", ",")
	if !slices.Equal(rows[0], want) {
		t.Errorf("header %q, want %q", rows[0], want)
	}
	if len(rows) != 4 || rows[1][3] != "captured" || rows[2][3] != "escaped" || rows[3][0] != "5.3" {
		t.Errorf("rows %q", rows)
	}
	for _, row := range rows[1:] {
		var one traceOutput
		decode(t, do(t, "", "trace", "--json", "--impact", row[0], "--observer-radius", row[2]).out, &one)
		if swept, err := strconv.ParseFloat(row[4], 64); err != nil || swept != one.SweptRad {
			t.Errorf("row %q: alone it sweeps %v", row, one.SweptRad)
		}
	}

	var asJSON struct {
		Units map[string]string
		Rows  []traceOutput
	}
	decode(t, do(t, table, "trace", "--table", "-", "--json").out, &asJSON)
	if len(asJSON.Rows) != 3 || asJSON.Rows[1].Fate != "escaped" || asJSON.Units["impact"] != "M" {
		t.Errorf("JSON %+v", asJSON)
	}
}

// askTrace runs the verb with --json on one path.
func askTrace(t *testing.T, args string) (r traceOutput, notes string) {
	t.Helper()
	got := do(t, "", strings.Split("trace|--json|"+args, "|")...)
	if got.code != exitDone {
		t.Fatalf("%s: %+v", args, got)
	}
	decode(t, got.out, &r)
	return r, got.errors
}

func TestTraceObjects(t *testing.T) {
	r, notes := askTrace(t, "--object|shell|--object-radius|4|--observer-radius|infinity|--impact|4|--tolerance|1e-11")
	// Two independent routes: physics.md.
	const want, tol = 0.715201453549592, 1e-10
	if r.DeflectionRad == nil || !(math.Abs(*r.DeflectionRad-want) <= tol) {
		t.Errorf("deflection by a shell %v, want %v ± %v", r.DeflectionRad, want, tol)
	}
	is(t, "closest within the shell", r.ClosestR, 4*math.Sqrt(0.5))
	is(t, "object radius", r.ObjectRadius, 4)
	if r.Object != "shell" || r.Fate != "escaped" || r.Interior != nil || r.Charge != nil || r.TravelTime == nil || notes != "" {
		t.Errorf("shell: %+v, %q", r, notes)
	}

	r, _ = askTrace(t, "--object|star|--object-radius|6 M|--observer-radius|infinity|--impact|4")
	is(t, "closest", r.ClosestR, 6)
	if r.Object != "star" || r.Fate != "surface" || r.Interior == nil || *r.Interior != "opaque" ||
		r.TravelTime == nil || r.DeflectionRad != nil || r.DifferenceRad == nil {
		t.Errorf("opaque star: %+v", r)
	}
	r, _ = askTrace(t, "--object|star|--object-radius|6|--interior|uniform|--observer-radius|infinity|--impact|4")
	if r.Fate != "escaped" || *r.Interior != "uniform" || !(*r.ClosestR < 6) || r.DeflectionRad == nil {
		t.Errorf("uniform star: %+v", r)
	}

	// Charged: captured within b_c = 4.858694 M (object_test.go of package
	// geodesic), escaped beyond.
	for impact, fate := range map[string]string{"4.858": "captured", "4.859": "escaped"} {
		r, _ = askTrace(t, "--charge|0.6|--observer-radius|1000|--impact|"+impact)
		is(t, "charge", r.Charge, 0.6)
		if r.Object != "black-hole" || r.Fate != fate || r.ObjectRadius != nil || r.SweptRad == nil ||
			r.ClosedFormSwept != nil || r.DifferenceRad != nil || (r.TravelTime == nil) != (fate == "captured") {
			t.Errorf("charged hole, b = %s: %+v", impact, r)
		}
	}

	// Within a shell: straight out from the centre, and trapped for ever
	// beyond b_c in a shell smaller than 3 M.
	r, _ = askTrace(t, "--object|shell|--object-radius|6|--observer-radius|0|--impact|0")
	if r.Fate != "escaped" || *r.ClosestR > 1e-8 {
		t.Errorf("from the centre: %+v", r)
	}
	r, _ = askTrace(t, "--object|shell|--object-radius|2.25|--observer-radius|2|--impact|5.5")
	if r.Fate != "trapped" || r.SweptRad != "infinity" || r.ClosedFormSwept != "infinity" || r.TravelTime != nil || r.DeflectionRad != nil {
		t.Errorf("trapped: %+v", r)
	}
	is(t, "closest of trapped light", r.ClosestR, 5.5/3)
}

func TestTraceObjectNotes(t *testing.T) {
	for _, c := range []struct {
		args string
		said bool
	}{
		{"--object|star|--object-radius|2.6|--interior|uniform", true},
		{"--object|star|--object-radius|2.7|--interior|uniform", false},
		{"--object|star|--object-radius|2.6", false},
		{"--object|shell|--object-radius|2.08", true},
		{"--object|shell|--object-radius|2.09", false},
	} {
		_, notes := askTrace(t, c.args+"|--observer-radius|10|--impact|1")
		if strings.Contains(notes, "dominant energy") != c.said {
			t.Errorf("%s: %q", c.args, notes)
		}
	}
	got := do(t, "object,object_radius,observer_radius,impact\nshell,2.05,9,1\nshell,2.06,9,1\n", "trace", "--table", "-")
	if got.code != exitDone || strings.Count(got.errors, "dominant energy") != 1 {
		t.Errorf("%+v", got)
	}
}

func TestTraceObjectLines(t *testing.T) {
	for args, wants := range map[string][]string{
		"--object|shell|--object-radius|4|--observer-radius|1|--impact|1": {"shell of 4 M", "within the shell"},
		"--object|star|--object-radius|4|--observer-radius|9|--impact|1":  {"opaque star of 4 M", "surface"},
		"--charge|0.6|--observer-radius|9|--impact|1":                     {"black hole of charge 0.6 M", "b/b_c - 1 = -0.794", "none for a charged hole"},
	} {
		got := do(t, "", strings.Split("trace|"+args, "|")...)
		for _, want := range wants {
			if got.code != exitDone || !strings.Contains(got.out, want) {
				t.Errorf("%s: no %q in %+v", args, want, got)
			}
		}
		if strings.Contains(got.out, "NaN") || strings.Contains(args, "object-radius") && strings.Contains(got.out, "b_c") {
			t.Errorf("%s:\n%s", args, got.out)
		}
	}
}

// At tolerance 1e-10 integration and closed form agree within
// 1e-9 + 1e-10/|x|, x = b/b_c - 1, for stars and shells, near the critical
// curve, near the edge and elsewhere.
func TestTraceObjectPromise(t *testing.T) {
	objects := []struct {
		kind, interior string
		radius         float64
	}{
		{"star", "opaque", 3.6}, {"star", "opaque", 6}, {"star", "uniform", 3.6}, {"star", "uniform", 6},
		{"shell", "", 2.25}, {"shell", "", 4}, {"shell", "", 9},
	}
	const each = 100 // of three kinds of path
	rng := rand.New(rand.NewPCG(5, 6))
	var b strings.Builder
	b.WriteString("object,object_radius,interior,observer_radius,impact\n")
	for _, o := range objects {
		for _, observer := range []float64{30, 1000, math.Inf(1)} {
			for k := range 3 * each {
				near := (2*rng.Float64() - 1) * math.Pow(10, -6*rng.Float64())
				impact := 25 * rng.Float64() // within reach of all observers
				switch k % 3 {
				case 0:
					impact = geodesic.CriticalImpact * (1 + near)
				case 1:
					impact = o.radius / geodesic.Lapse(o.radius) * (1 + near) // grazing
				}
				fmt.Fprintf(&b, "%s,%v,%s,%s,%s\n", o.kind, o.radius, o.interior, number(observer).csv(), number(impact).csv())
			}
		}
	}
	got := do(t, b.String(), "trace", "--table", "-", "--tolerance", "1e-10")
	if got.code != exitDone {
		t.Fatal(got.errors)
	}
	rows, err := csv.NewReader(strings.NewReader(got.out)).ReadAll()
	if err != nil {
		t.Fatal(err)
	}
	if want := len(objects)*3*3*each + 1; len(rows) != want {
		t.Fatalf("%d rows, want %d", len(rows), want)
	}
	fates := map[string]int{}
	for _, row := range rows[1:] {
		impact, err := strconv.ParseFloat(row[4], 64)
		if err != nil {
			t.Fatal(err)
		}
		off, err := strconv.ParseFloat(row[8], 64)
		x := geodesic.CriticalDistance(impact)
		if err != nil || !(math.Abs(off) <= 1e-9+1e-10/math.Abs(x)) {
			t.Errorf("%q: off by %v at x = %g", row, row[8], x)
		}
		fates[row[5]]++
	}
	if fates["surface"] < each || fates["escaped"] < each || len(fates) != 2 {
		t.Errorf("fates %v", fates)
	}
}

func TestTraceTableObjects(t *testing.T) {
	const table = `object,object_radius,observer_radius,impact,interior,charge
black-hole,0,10,1,,
,2,10,1,,0
black-hole,,10,1,,0.6
star,4,10,1,,
star,4.0,10,1,opaque,0
star,4 M,10,1,uniform,
shell,4,0,0,,
`
	got := do(t, table, "trace", "--table", "-")
	rows, err := csv.NewReader(strings.NewReader(got.out)).ReadAll()
	if err != nil || got.code != exitDone || len(rows) != 8 {
		t.Fatalf("%v, %+v", err, got)
	}
	for k, want := range strings.Fields("captured captured captured surface surface escaped escaped") {
		if rows[k+1][6] != want {
			t.Errorf("%q: want %s", rows[k+1], want)
		}
	}
	if rows[1][7] != rows[2][7] || rows[3][9] != "" || rows[4][9] == "" {
		t.Errorf("%q", rows)
	}
	var asJSON struct {
		Units map[string]string
		Rows  []traceOutput
	}
	decode(t, do(t, table, "trace", "--table", "-", "--json").out, &asJSON)
	if r := asJSON.Rows; len(r) != 7 || r[1].Object != "black-hole" || r[1].ObjectRadius != nil || *r[2].Charge != 0.6 ||
		r[2].DifferenceRad != nil || *r[3].Interior != "opaque" || *r[5].ObjectRadius != 4 || asJSON.Units["charge"] != "M" {
		t.Errorf("%+v", asJSON)
	}

	// One object for each that differs.
	in, err := openTable("-", strings.NewReader(table), traceRequired, traceOptional)
	if err != nil {
		t.Fatal(err)
	}
	known := bodies{}
	requests, err := readRequests(in, defaultTolerance, known)
	if err != nil {
		t.Fatal(err)
	}
	if len(known) != 5 || requests[0].centre != requests[1].centre || requests[3].centre != requests[4].centre {
		t.Errorf("%d objects of 5", len(known))
	}
}

func TestTraceTableKeepsOrder(t *testing.T) {
	const rows = 3000 // several chunks
	var b strings.Builder
	b.WriteString("observer_radius,impact\n")
	for k := range rows {
		fmt.Fprintf(&b, "30,%v\n", float64(k)/rows*20)
	}
	one := do(t, b.String(), "trace", "--table", "-", "--workers", "1")
	many := do(t, b.String(), "trace", "--table", "-", "--workers", "7")
	if one.code != exitDone || one.out != many.out {
		t.Error("the table depends on the number of workers")
	}
	if n := strings.Count(one.out, "\n"); n != rows+1 {
		t.Errorf("%d lines, want %d", n, rows+1)
	}
}

func TestInOrderStops(t *testing.T) {
	items := make([]int, 100*chunk)
	broken := errors.New("broken")
	keep := func(int) error { return nil }

	err := inOrder(t.Context(), items, 3, func([]int) (int, error) { return 0, broken }, keep)
	if !errors.Is(err, broken) {
		t.Errorf("work failed: %v", err)
	}
	err = inOrder(t.Context(), items, 3, func([]int) (int, error) { return 0, nil }, func(int) error { return broken })
	if !errors.Is(err, broken) {
		t.Errorf("done failed: %v", err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	err = inOrder(ctx, items, 3, func([]int) (int, error) { cancel(); return 0, nil }, keep)
	if !errors.Is(err, context.Canceled) {
		t.Errorf("cancelled: %v", err)
	}
}

func TestHonest(t *testing.T) {
	for _, c := range []struct {
		x, bound float64
		want     string
	}{
		{math.Pi, 1e-3, "3.142"},
		{math.Pi, 3e-7, "3.1415927"},
		{-math.Pi, 1e-3, "-3.142"},
		{1234.5, 10, "1234"},
		{math.Pi, 0, "3.14159265358979"},
		{0, 0, "0"},
		{math.Inf(1), 0, "infinity"},
	} {
		if got := honest(c.x, c.bound); got != c.want {
			t.Errorf("honest(%v, %v) = %q, want %q", c.x, c.bound, got, c.want)
		}
	}
}

func TestNumbersRoundTrip(t *testing.T) {
	for _, x := range []float64{0, 0.1, 1. / 3, 5.196152422706632, 1e-300, -1e22, 123456789} {
		text, err := number(x).MarshalJSON()
		if err != nil {
			t.Fatal(err)
		}
		var fromJSON float64
		if err := json.Unmarshal(text, &fromJSON); err != nil || fromJSON != x {
			t.Errorf("JSON of %v reads back as %v (%v)", x, fromJSON, err)
		}
		if fromCSV, err := strconv.ParseFloat(number(x).csv(), 64); err != nil || fromCSV != x {
			t.Errorf("CSV of %v reads back as %v (%v)", x, fromCSV, err)
		}
	}
	for x, want := range map[number]string{number(math.Inf(1)): `"infinity"`, number(math.Inf(-1)): `"-infinity"`} {
		if text, err := x.MarshalJSON(); err != nil || string(text) != want {
			t.Errorf("JSON of %v is %s (%v)", x, text, err)
		}
	}
	if text, err := number(math.NaN()).MarshalJSON(); err != nil || string(text) != "null" || number(math.NaN()).csv() != "" {
		t.Errorf("NaN is %s (%v)", text, err)
	}
}
