package raytrace

import (
	"context"
	"errors"
	"fmt"
	"math"
	"testing"
)

// Strips are the plate cut into rows, bit for bit, in both directions and
// whatever the workers.
func TestStripsAreThePlate(t *testing.T) {
	s := scene(60, 2, 40)
	s.Field.Pixels = [2]int{45, 71}
	v := view(t, s)
	want := render(t, v, Options{})
	layers := []Layer{Intensity, Radius}
	for _, topDown := range []bool{false, true} {
		for _, workers := range []int{1, 3} {
			rows, last := 0, Progress{}
			whole, err := v.Strips(t.Context(), Options{Workers: workers, TileSide: 16, Layers: layers, Report: func(p Progress) { last = p }}, topDown, func(s Strip) error {
				first := rows
				if topDown {
					first = 71 - rows - s.Rows
				}
				if s.FirstRow != first {
					t.Fatalf("a strip begins at row %d, want %d", s.FirstRow, first)
				}
				rows += s.Rows
				for k, x := range s.Total {
					if x != want.Total[first*45+k] {
						t.Fatalf("total of row %d: %g, want %g", first+k/45, x, want.Total[first*45+k])
					}
				}
				for order := range 3 {
					for k, x := range s.Layer(Radius, order) {
						if y := want.Layer(Radius, order)[first*45+k]; math.Float32bits(x) != math.Float32bits(y) {
							t.Fatalf("r of order %d, row %d: %g, want %g", order, first+k/45, x, y)
						}
						if x, y := s.Layer(Intensity, order)[k], want.Layer(Intensity, order)[first*45+k]; x != y {
							t.Fatalf("intensity of order %d, row %d: %g, want %g", order, first+k/45, x, y)
						}
					}
				}
				if s.Layer(Delay, 0) != nil {
					t.Error("a layer that was not asked for")
				}
				return nil
			})
			if err != nil || rows != 71 {
				t.Fatalf("%d rows, %v", rows, err)
			}
			if whole.Paths != want.Paths || whole.WorstBound != want.WorstBound || whole.Integrated != want.Integrated {
				t.Errorf("whole %+v, want %d paths, bound %g", whole, want.Paths, want.WorstBound)
			}
			if last.TilesDone != 15 || last.Tiles != 15 || last.PathsDone != want.Paths {
				t.Errorf("progress ends at %+v", last)
			}
		}
	}
}

func TestStripsStop(t *testing.T) {
	v := view(t, scene(60, 2, 64))
	full := errors.New("no room")
	if _, err := v.Strips(t.Context(), Options{TileSide: 8}, false, func(Strip) error { return full }); !errors.Is(err, full) {
		t.Errorf("%v", err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	if _, err := v.Strips(ctx, Options{TileSide: 8}, false, func(Strip) error { cancel(); return nil }); !errors.Is(err, context.Canceled) {
		t.Errorf("%v", err)
	}
}

// BenchmarkLinear renders 1 to 64 megapixels in strips; the time a pixel is
// the same. Orbits are made before.
func BenchmarkLinear(b *testing.B) {
	for _, side := range []int{1000, 2000, 4000, 8000} {
		b.Run(fmt.Sprintf("megapixels=%d", side*side/1_000_000), func(b *testing.B) {
			s := scene(75, 6, side)
			s.Field.AutoWidth, s.Field.Width = false, 44
			v, err := NewView(s)
			if err != nil {
				b.Fatal(err)
			}
			if _, err := v.Coarsened(side/100).Render(b.Context(), Options{Layers: []Layer{}}); err != nil {
				b.Fatal(err)
			}
			for b.Loop() {
				lit := 0
				if _, err := v.Strips(b.Context(), Options{Layers: []Layer{}}, false, func(s Strip) error {
					for _, x := range s.Total {
						if x > 0 {
							lit++
						}
					}
					return nil
				}); err != nil {
					b.Fatal(err)
				}
				if share := float64(lit) / float64(side*side); share < 0.2 || share > 0.9 {
					b.Fatalf("%g of the pixels shine", share)
				}
			}
			b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N)/float64(side*side), "ns/pixel")
		})
	}
}
