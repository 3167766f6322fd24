package files

import (
	"context"
	"encoding/json"
	"io"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"annulet/app/files/foreign"
)

// trialFITS writes a FITS file with all that the writer can do.
func trialFITS(t *testing.T) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "a.fits")
	err := WriteAt(context.Background(), path, 0o666, func(w io.WriterAt) error {
		f, err := NewFITS(w,
			HDU{Columns: 3, Rows: 2, Cards: []Card{
				{"TOLERANC", 1e-9, "relative"}, {"WHOLE", 3.0, ""}, {"COUNT", -12, ""}, {"FLAG", false, "a long comment that does not fit into the line and must be cut somewhere"},
				{"OBJECT", "it's a hole, ☉ and µ", ""}, {"EMPTY", "", ""},
				{"LONG", strings.Repeat("a long text with 'quotes', ", 12), ""},
				{"HISTORY", nil, strings.Repeat("history ", 20)}, {"COMMENT", nil, ""},
			}},
			HDU{Name: "G", Version: 1, Columns: 500, Rows: 301},
			HDU{Name: "NONE"},
			HDU{Name: "SCENE", Column: "TEXT", Bytes: []byte("title = \"µ\"\n")},
		)
		if err != nil {
			return err
		}
		g := make([]float32, 500*301)
		for k := range g {
			g[k] = float32(math.Sin(float64(k)))
		}
		g[7] = float32(math.NaN())
		// rows in any order
		for _, part := range [][2]int{{200, 301}, {0, 1}, {1, 200}} {
			if err := f.Rows(1, part[0], g[part[0]*500:part[1]*500]); err != nil {
				return err
			}
		}
		if err := f.Rows(0, 0, []float32{1, 2, 3, 4, 5, 6}); err != nil {
			return err
		}
		return f.Close()
	})
	if err != nil {
		t.Fatal(err)
	}
	return path
}

// fitsverify is HEASARC's judge of the standard.
func TestFITSVerify(t *testing.T) {
	out := foreign.Run(t, "fitsverify", "-q", trialFITS(t))
	if !strings.Contains(out, "verification OK") {
		t.Errorf("%s", out)
	}
}

func TestFITSAstropy(t *testing.T) {
	out := foreign.Python(t, "astropy", `
import json, sys
from astropy.io import fits
with fits.open(sys.argv[1], checksum=True) as f:
    f.verify("exception")
    h = f[0].header
    g = f["G", 1].data
    print(json.dumps({
        "corner": float(f[0].data[1, 0]), "shape": g.shape, "value": float(g[300, 499]), "nan": str(g[0, 7]),
        "keys": [h["TOLERANC"], h["WHOLE"], h["COUNT"], h["FLAG"], h["OBJECT"], h["EMPTY"]], "long": h["LONG"],
        "scene": bytes(f["SCENE"].data["TEXT"][0]).decode(), "sums": [x.verify_checksum() + 10 * x.verify_datasum() for x in f]}))
`, trialFITS(t))
	var got struct {
		Corner, Value float64
		Shape         []int
		NaN           string `json:"nan"`
		Keys          []any
		Long, Scene   string
		Sums          []int
	}
	if err := json.Unmarshal([]byte(out), &got); err != nil {
		t.Fatalf("%v: %s", err, out)
	}
	want := float64(float32(math.Sin(500*301 - 1)))
	if got.Corner != 4 || got.Shape[0] != 301 || got.Shape[1] != 500 || got.Value != want || got.NaN != "nan" {
		t.Errorf("data %+v, want the last %g", got, want)
	}
	if got.Scene != "title = \"µ\"\n" || got.Long != strings.TrimRight(strings.Repeat("a long text with 'quotes', ", 12), " ") {
		t.Errorf("texts %q, %q", got.Scene, got.Long)
	}
	wantKeys := []any{1e-9, 3.0, -12.0, false, "it's a hole, sun and u", ""}
	for k := range wantKeys {
		if got.Keys[k] != wantKeys[k] {
			t.Errorf("key %d: %v, want %v", k, got.Keys[k], wantKeys[k])
		}
	}
	for k, ok := range got.Sums {
		if ok != 11 {
			t.Errorf("unit %d: checksum and datasum %d", k, ok)
		}
	}
}

func TestFITSRefuses(t *testing.T) {
	var none nowhere
	for _, unit := range []HDU{
		{Cards: []Card{{"lower", 1, ""}}}, {Cards: []Card{{"TOOLONGKEY", 1, ""}}}, {Cards: []Card{{"X", math.NaN(), ""}}},
		{Cards: []Card{{"X", nil, ""}}}, {Cards: []Card{{"X", []int{1}, ""}}}, {Bytes: []byte("x")},
	} {
		if _, err := NewFITS(none, unit); err == nil {
			t.Errorf("%+v was taken", unit)
		}
	}
	f, err := NewFITS(none, HDU{Columns: 2, Rows: 2})
	if err != nil {
		t.Fatal(err)
	}
	if f.Rows(0, 1, make([]float32, 4)) == nil || f.Rows(0, 0, make([]float32, 3)) == nil || f.Rows(1, 0, nil) == nil {
		t.Error("rows outside the image were taken")
	}
	if f.Close() == nil {
		t.Error("closed with data missing")
	}
}

type nowhere struct{}

func (nowhere) WriteAt(p []byte, _ int64) (int, error) { return len(p), nil }
