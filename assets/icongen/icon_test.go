package main

import (
	"bytes"
	"image"
	"image/png"
	"os"
	"testing"

	"annulet/assets"
)

// TestIconIsCurrent compares what is committed with a fresh drawing. Floating
// point may differ by architecture, hence a step of tolerance.
func TestIconIsCurrent(t *testing.T) {
	svg, err := os.ReadFile("../icon.svg")
	if err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(svg, drawSVG()) {
		t.Error("icon.svg is stale: run go generate ./assets")
	}
	got, err := png.Decode(bytes.NewReader(assets.IconPNG))
	if err != nil {
		t.Fatal(err)
	}
	want := drawPixels()
	if got.Bounds() != want.Bounds() {
		t.Fatalf("icon.png measures %v, want %v", got.Bounds(), want.Bounds())
	}
	pixels, ok := got.(*image.NRGBA)
	if !ok {
		t.Fatalf("icon.png is %T, want 8 bits with alpha", got)
	}
	for i, v := range pixels.Pix {
		if d := int(v) - int(want.Pix[i]); d > 1 || d < -1 {
			t.Fatalf("icon.png is stale at byte %d: run go generate ./assets", i)
		}
	}
}

func TestLeftSideIsBrighter(t *testing.T) {
	img := drawPixels()
	const inRing = 6.0
	left := img.NRGBAAt(int(middle-outer+inRing), int(middle))
	right := img.NRGBAAt(int(middle+outer-inRing), int(middle))
	if !(left.G > right.G && left.B > right.B) {
		t.Errorf("left %v, right %v: want the left brighter", left, right)
	}
	if corner := img.NRGBAAt(0, 0); corner.A != 0 {
		t.Errorf("the corner is %v, want transparent", corner)
	}
}
