package files

import (
	"bytes"
	"errors"
	"image"
	"image/color"
	"image/png"
	"math/rand/v2"
	"testing"
)

// A PNG written row by row decodes to the pixels and texts put in.
func TestPNGRows(t *testing.T) {
	const columns, rows = 37, 23
	rng := rand.New(rand.NewPCG(1, 2))
	for _, depth := range []int{8, 16} {
		var out bytes.Buffer
		p, err := NewPNGRows(&out, columns, rows, depth, []Text{{"Annulet scene", "schema = 1\n"}})
		if err != nil {
			t.Fatal(err)
		}
		var all [][]byte
		for range rows {
			row := make([]byte, columns*3*depth/8)
			for k := range row {
				row[k] = byte(rng.Uint32())
			}
			if err := p.Write(row); err != nil {
				t.Fatal(err)
			}
			all = append(all, row)
		}
		if err := p.Write(all[0]); !errors.Is(err, ErrRows) {
			t.Errorf("a row too many: %v", err)
		}
		if err := p.Close(); err != nil {
			t.Fatal(err)
		}
		texts, err := PNGTexts(bytes.NewReader(out.Bytes()), 1<<10)
		if err != nil || len(texts) != 1 || texts[0].Value != "schema = 1\n" {
			t.Errorf("texts %v, %v", texts, err)
		}
		img, err := png.Decode(&out)
		if err != nil {
			t.Fatal(err)
		}
		if img.Bounds() != image.Rect(0, 0, columns, rows) {
			t.Fatalf("bounds %v", img.Bounds())
		}
		for y, row := range all {
			for x := range columns {
				var want color.RGBA64
				if depth == 8 {
					at := row[3*x:]
					want = color.RGBA64{uint16(at[0]) * 257, uint16(at[1]) * 257, uint16(at[2]) * 257, 0xffff}
				} else {
					at := row[6*x:]
					word := func(k int) uint16 { return uint16(at[2*k])<<8 | uint16(at[2*k+1]) }
					want = color.RGBA64{word(0), word(1), word(2), 0xffff}
				}
				if r, g, b, a := img.At(x, y).RGBA(); (color.RGBA64{uint16(r), uint16(g), uint16(b), uint16(a)}) != want {
					t.Fatalf("pixel %d,%d is %v, want %v", x, y, img.At(x, y), want)
				}
			}
		}
	}
}

func TestPNGRowsRefusals(t *testing.T) {
	var out bytes.Buffer
	for _, c := range [][3]int{{0, 1, 8}, {1, 0, 8}, {1, 1, 4}, {-1, 1, 8}} {
		if _, err := NewPNGRows(&out, c[0], c[1], c[2], nil); !errors.Is(err, ErrRows) {
			t.Errorf("%v: %v", c, err)
		}
	}
	p, err := NewPNGRows(&out, 2, 2, 8, nil)
	if err != nil {
		t.Fatal(err)
	}
	if err := p.Write(make([]byte, 5)); !errors.Is(err, ErrRows) {
		t.Errorf("a short row: %v", err)
	}
	if err := p.Close(); !errors.Is(err, ErrRows) {
		t.Errorf("closed early: %v", err)
	}
}
