package curves

import (
	"math"
	"testing"
)

// On values x² + y² the line of a level is a circle: one closed line, its
// points off by no more than the chord of a quadratic within a pixel.
func TestIsolineOfCircle(t *testing.T) {
	const side, radius = 81, 25.3
	values := make([]float32, side*side)
	for k := range values {
		x, y := float64(k%side-side/2), float64(k/side-side/2)
		values[k] = float32(x*x + y*y)
	}
	lines := Isolines(values, side, side, radius*radius)
	if len(lines) != 1 {
		t.Fatalf("%d lines, want 1", len(lines))
	}
	line := lines[0]
	if line[0] != line[len(line)-1] {
		t.Error("the circle is not closed")
	}
	if float64(len(line)) < 4*radius {
		t.Errorf("only %d points", len(line))
	}
	for _, p := range line {
		if r := math.Hypot(p[0]-side/2, p[1]-side/2); !(math.Abs(r-radius) <= 0.01) {
			t.Fatalf("a point at radius %g, want %g", r, radius)
		}
	}
}

// A line ends at the picture's sides and at missing values.
func TestIsolineEnds(t *testing.T) {
	const side = 10
	values := make([]float32, side*side)
	for k := range values {
		values[k] = float32(k % side)
	}
	values[5*side+4] = float32(math.NaN())
	lines := Isolines(values, side, side, 4.5)
	if len(lines) != 2 {
		t.Fatalf("%d lines, want one below and one above the missing value", len(lines))
	}
	points := 0
	for _, line := range lines {
		points += len(line)
		for _, p := range line {
			if p[0] != 4.5 {
				t.Errorf("a point at column %g, want 4.5", p[0])
			}
		}
	}
	if want := 5 + 4; points != want { // rows 0 to 4 and 6 to 9
		t.Errorf("%d points, want %d", points, want)
	}
}
