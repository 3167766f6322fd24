package verbs

import (
	"bytes"
	"context"
	"image"
	"io"
	"os"
	"strings"
	"testing"

	"annulet/raytrace"
	"annulet/scenes"
)

// A picture rendered in strips is the one rendered whole, if both have the
// same limits; strips take theirs from a pilot, which is no larger here than
// the picture itself.
func TestStripsArePicture(t *testing.T) {
	folder(t)
	d, err := scenes.Parse("x.toml", []byte("schema = 1\n[field]\npixels = [75, 101]\n[[emitter]]\nkind = \"disk\"\n"))
	if err != nil {
		t.Fatal(err)
	}
	view, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	for _, o := range []rendering{
		{layer: "intensity", depth: 8}, {layer: "intensity", depth: 16}, {layer: "g", depth: 8}, {layer: "r", depth: 16, order: "1"},
	} {
		var pictures [2]image.Image
		for k, hold := range []int64{holdBytes, 0} {
			p, err := o.choose()
			if err != nil {
				t.Fatal(err)
			}
			j := renderJob{
				s: streams{err: io.Discard}, view: view, picture: p, document: d,
				options: raytrace.Options{Layers: p.layers(), TileSide: 16}, hold: hold,
			}
			plate, err := j.write(context.Background(), []string{"a.png"})
			if err != nil {
				t.Fatal(err)
			}
			if plate.Paths < 75*101 {
				t.Errorf("%d paths", plate.Paths)
			}
			pictures[k], _ = readPNG(t, "a.png")
		}
		whole, strips := flat(pictures[0]), flat(pictures[1])
		if !bytes.Equal(whole, strips) {
			t.Errorf("%+v: strips differ from the whole", o)
		}
	}
}

// Several frequencies are not written in strips, and the refusal says so.
func TestSeveralFrequenciesNeedMemory(t *testing.T) {
	folder(t)
	d, err := scenes.Parse("x.toml", []byte(blackbodyScene))
	if err != nil {
		t.Fatal(err)
	}
	view, err := raytrace.NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	p, err := rendering{layer: "intensity", depth: 8}.choose()
	if err != nil {
		t.Fatal(err)
	}
	j := renderJob{s: streams{err: io.Discard}, view: view, picture: p, document: d, hold: 0}
	if _, err := j.write(context.Background(), []string{"a.fits"}); err == nil || !strings.Contains(err.Error(), "3 frequencies") {
		t.Errorf("%v", err)
	}
	if _, err := os.Stat("a.fits"); err == nil {
		t.Error("a file was left")
	}
}

// flat is a picture's colours in order.
func flat(img image.Image) []byte {
	var all []byte
	b := img.Bounds()
	for y := b.Min.Y; y < b.Max.Y; y++ {
		for x := b.Min.X; x < b.Max.X; x++ {
			r, g, bl, _ := img.At(x, y).RGBA()
			all = append(all, byte(r>>8), byte(r), byte(g>>8), byte(g), byte(bl>>8), byte(bl))
		}
	}
	return all
}
