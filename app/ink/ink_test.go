package ink

import (
	"image"
	"image/color"
	"math"
	"testing"
)

var white = color.NRGBA{0xff, 0xff, 0xff, 0xff}

func sum(m *image.RGBA) (total float64) {
	for k := 3; k < len(m.Pix); k += 4 {
		total += float64(m.Pix[k]) / 255
	}
	return total
}

// A line covers its length times its width, straight or through many points,
// also where most of it is outside.
func TestStrokeCoversItsArea(t *testing.T) {
	var curve []Point
	for k := range 721 {
		sin, cos := math.Sincos(math.Pi * float64(k) / 360)
		curve = append(curve, Point{100 + 60*cos, 100 + 60*sin})
	}
	for _, k := range []struct {
		name string
		line []Point
		pen  Pen
		want float64
	}{
		{"straight", []Point{{20, 30}, {120, 90}}, Pen{Width: 3}, 3 * math.Hypot(100, 60)},
		{"circle", curve, Pen{Width: 2}, 2 * 2 * math.Pi * 60},
		{"dashed", []Point{{20, 50}, {180, 50}}, Pen{Width: 2, Dash: []float64{6, 4}}, 2 * 160 * 0.6},
		{"from outside", []Point{{-1e6, 50.5}, {100, 50.5}}, Pen{Width: 2}, 200},
		{"broken", []Point{{20, 50}, {60, 50}, {math.NaN(), 0}, {100, 50}, {120, 50}}, Pen{Width: 2}, 120},
	} {
		m := image.NewRGBA(image.Rect(0, 0, 200, 200))
		k.pen.Colour = white
		Stroke(m, k.pen, k.line)
		if got := sum(m); !(math.Abs(got/k.want-1) < 0.02) {
			t.Errorf("%s: covers %.1f pixels, want %.1f", k.name, got, k.want)
		}
	}
}

// No pixel along a nearly level line through close points is darker or
// lighter than its neighbours by more than rounding.
func TestStrokeIsEven(t *testing.T) {
	var line []Point
	for x := 0.; x < 200; x += 0.37 {
		line = append(line, Point{x, 50.3})
	}
	m := image.NewRGBA(image.Rect(0, 0, 200, 100))
	Stroke(m, Pen{Width: 1.5, Colour: white}, line)
	for x := 5; x < 190; x++ {
		a, b := int(m.RGBAAt(x, 50).A), int(m.RGBAAt(x+1, 50).A)
		if a-b > 3 || b-a > 3 {
			t.Fatalf("pixels %d and %d have %d and %d", x, x+1, a, b)
		}
	}
}

func TestTicks(t *testing.T) {
	values, decimals := Ticks(-1.3, 2.2, 4)
	if len(values) != 4 || values[0] != -1 || values[3] != 2 || decimals != 0 {
		t.Errorf("ticks are %v with %d decimals", values, decimals)
	}
	if values, decimals = Ticks(0, 0.05, 5); len(values) != 6 || decimals != 2 || Decimal(values[1], decimals) != "0.01" {
		t.Errorf("ticks are %v with %d decimals", values, decimals)
	}
	if Decimal(-2.5, 1) != "−2.5" || Decimal(0, 2) != "0" {
		t.Errorf("written as %q, %q", Decimal(-2.5, 1), Decimal(0, 2))
	}
	if values, _ = Ticks(1, 1, 3); values != nil {
		t.Errorf("an empty axis has ticks %v", values)
	}
}
