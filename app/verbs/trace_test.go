package verbs

import (
	"context"
	"encoding/csv"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"slices"
	"strconv"
	"strings"
	"testing"
)

// traceOutput mirrors the fields that scripts rely on; a pointer is null
// where a value does not exist.
type traceOutput struct {
	Units           map[string]string
	Fate            string
	SweptRad        *float64        `json:"swept_rad"`
	DeflectionRad   *float64        `json:"deflection_rad"`
	ClosestR        *float64        `json:"closest_r"`
	TravelTime      *float64        `json:"travel_time"`
	ObserverRadius  json.RawMessage `json:"observer_radius"`
	Steps           *int
	Evaluations     *int
	BoundRad        *float64 `json:"bound_rad"`
	ClosedFormSwept *float64 `json:"closed_form_swept_rad"`
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
	if d := *r.SweptRad - *r.ClosedFormSwept; *r.DifferenceRad != d {
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
		if swept, err := strconv.ParseFloat(row[4], 64); err != nil || swept != *one.SweptRad {
			t.Errorf("row %q: alone it sweeps %v", row, *one.SweptRad)
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
