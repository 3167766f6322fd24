package emit

import (
	"bytes"
	"image"
	"image/color"
	"image/jpeg"
	"image/png"
	"math"
	"strings"
	"testing"

	"golang.org/x/image/tiff"
)

// FuzzTable: a profile is refused, or it is finite and not negative wherever
// it reaches, and what it was given at its points.
func FuzzTable(f *testing.F) {
	for _, text := range []string{
		"r,value\n2,1\n6,5\n20,0\n", "1,1\n2,2\n", "# c\n\n1 , 1e300\n2,0\n", "1e-300,1\n1e300,1\n", "1,1\n1.0000000000000002,1e308\n3,0\n",
		"\ufeffr,v\n1,1\n2,1\n", "1,1\n1,1\n", "1,-1\n2,1\n", "1,nan\n2,1\n", "1,1,1\n2,2,2\n", "r\nv\n", "", "1,1", "inf,1\n2,2\n", "5e-324,1\n1e-323,3\n2,0\n",
		"1,1.7e308\n2,1.7e308\n3,0\n4,1.7e308\n",
	} {
		f.Add(text)
	}
	f.Fuzz(func(t *testing.T, text string) {
		table, err := readTable(strings.NewReader(text))
		if err != nil {
			if err.Error() == "" {
				t.Error("an error without a text")
			}
			return
		}
		if !(table.Inner > 0 && table.Inner < table.Outer && table.Outer < math.Inf(1)) {
			t.Fatalf("from %g to %g", table.Inner, table.Outer)
		}
		const steps = 37
		r := make([]float64, 0, 2*steps)
		for k := range steps {
			x := float64(k) / (steps - 1)
			r = append(r, min(table.Outer, table.Inner+x*(table.Outer-table.Inner)), // and evenly in the logarithm:
				max(table.Inner, min(table.Outer, table.Inner*math.Pow(table.Outer/table.Inner, x))))
		}
		lit, values := make([]bool, len(r)), make([]float64, len(r))
		for k := range lit {
			lit[k] = !math.IsNaN(r[k])
		}
		table.Fill(r, lit, values)
		for k, v := range values {
			if !(v >= 0) || math.IsInf(v, 0) {
				t.Errorf("%g at %g M", v, r[k])
			}
		}
	})
}

// FuzzImage: a sky is refused, or its brightness is between black and white.
func FuzzImage(f *testing.F) {
	img := image.NewNRGBA(image.Rect(0, 0, 5, 3))
	for k := range 15 {
		img.Set(k%5, k/5, color.NRGBA{uint8(17 * k), uint8(90 + k), 3, 255})
	}
	var text bytes.Buffer
	for _, encode := range []func() error{
		func() error { return png.Encode(&text, img) },
		func() error { return jpeg.Encode(&text, img, nil) },
		func() error { return tiff.Encode(&text, img, nil) },
		func() error {
			return tiff.Encode(&text, img, &tiff.Options{Compression: tiff.Deflate, Predictor: true})
		},
	} {
		text.Reset()
		if err := encode(); err != nil {
			f.Fatal(err)
		}
		f.Add(bytes.Clone(text.Bytes()))
	}
	const most = 1 << 16 // pixels: larger ones only take time
	f.Fuzz(func(t *testing.T, file []byte) {
		config, _, err := image.DecodeConfig(bytes.NewReader(file))
		if err == nil && (config.Width > most || config.Height > most || config.Width*config.Height > most) {
			return
		}
		p, err := DecodeImage(bytes.NewReader(file))
		if err != nil {
			return
		}
		for _, l := range p.levels {
			for _, v := range l.values {
				if !(v >= 0 && v <= 1.0001) {
					t.Fatalf("brightness %g", v)
				}
			}
		}
	})
}
