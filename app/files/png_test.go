package files

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"errors"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"slices"
	"strings"
	"testing"
)

var someTexts = []Text{
	{"Annulet scene", "schema = 1\ntitle = \"Δα in µas, 5×10⁹ M☉\"\n"},
	{"Software", "Annulet"},
	{"Comment", ""},
}

const roomy = 1 << 16 // a limit no text here meets

func picture8() *image.RGBA {
	img := image.NewRGBA(image.Rect(0, 0, 5, 4))
	for i := range img.Pix {
		img.Pix[i] = uint8(i * 7)
	}
	for i := 3; i < len(img.Pix); i += 4 {
		img.Pix[i] = 0xff
	}
	return img
}

func picture16() *image.RGBA64 {
	img := image.NewRGBA64(image.Rect(0, 0, 5, 4))
	for y := range 4 {
		for x := range 5 {
			img.SetRGBA64(x, y, color.RGBA64{R: uint16(x * 12345), G: uint16(y * 4321), B: 1, A: 0xffff})
		}
	}
	return img
}

func encoded(t testing.TB, img image.Image, texts []Text) []byte {
	t.Helper()
	var out bytes.Buffer
	if err := EncodePNG(&out, img, texts); err != nil {
		t.Fatal(err)
	}
	return out.Bytes()
}

func TestPNGRoundTrip(t *testing.T) {
	const depthAt = len(signature) + lengthBytes + typeBytes + 8 // in IHDR, after width and height
	for _, c := range []struct {
		img  image.Image
		bits byte
	}{{picture8(), 8}, {picture16(), 16}} {
		file := encoded(t, c.img, someTexts)
		if file[depthAt] != c.bits {
			t.Errorf("%T: %d bits, want %d", c.img, file[depthAt], c.bits)
		}
		got, err := PNGTexts(bytes.NewReader(file), roomy)
		if err != nil || !slices.Equal(got, someTexts) {
			t.Errorf("%T: texts %q, %v", c.img, got, err)
		}
		img, err := png.Decode(bytes.NewReader(file)) // checks every CRC
		if err != nil {
			t.Fatal(err)
		}
		var checked int
		for y := range c.img.Bounds().Dy() {
			for x := range c.img.Bounds().Dx() {
				if color.RGBA64Model.Convert(img.At(x, y)) != color.RGBA64Model.Convert(c.img.At(x, y)) {
					t.Errorf("%T: pixel %d,%d differs", c.img, x, y)
				}
				checked++
			}
		}
		if want := 20; checked != want {
			t.Fatalf("checked %d pixels, want %d", checked, want)
		}
		if !bytes.Equal(file, encoded(t, c.img, someTexts)) {
			t.Errorf("%T: a second encoding differs", c.img)
		}
		if at, data := bytes.Index(file, []byte(typeText)), bytes.Index(file, []byte("IDAT")); !(at > 0 && at < data) {
			t.Errorf("texts at %d, pixels at %d: want texts first", at, data)
		}
	}
}

func TestPNGWithoutTexts(t *testing.T) {
	var plain bytes.Buffer
	if err := png.Encode(&plain, picture8()); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(encoded(t, picture8(), nil), plain.Bytes()) {
		t.Error("without texts the file is not what image/png writes")
	}
}

// oneByte writes a byte at a time, so that the splice meets every split.
type oneByte struct{ w io.Writer }

func (o oneByte) Write(p []byte) (int, error) {
	for i := range p {
		if n, err := o.w.Write(p[i : i+1]); err != nil {
			return i + n, err
		}
	}
	return len(p), nil
}

func TestSpliceAtEverySplit(t *testing.T) {
	var out bytes.Buffer
	s := &splice{w: &out, at: 3, insert: []byte("XY")}
	if n, err := (oneByte{s}).Write([]byte("abcdef")); n != 6 || err != nil {
		t.Fatal(n, err)
	}
	if got := out.String(); got != "abcXYdef" {
		t.Errorf("spliced %q", got)
	}
}

func TestTextsThatDoNotFit(t *testing.T) {
	for _, text := range []Text{
		{"", "x"},
		{strings.Repeat("k", maxKeyword+1), "x"},
		{" k", "x"},
		{"k  k", "x"},
		{"clé", "x"},
		{"k\n", "x"},
		{"k", "a\x00b"},
		{"k", "\xff"},
	} {
		var out bytes.Buffer
		if err := EncodePNG(&out, picture8(), []Text{text}); !errors.Is(err, ErrText) || out.Len() != 0 {
			t.Errorf("%q: %v with %d bytes written, want ErrText and none", text, err, out.Len())
		}
	}
}

// chunk returns a chunk as a file holds it.
func chunk(kind string, data []byte) []byte {
	var out bytes.Buffer
	_ = putChunk(&out, kind, data) // a bytes.Buffer never fails
	return out.Bytes()
}

func packed(text string) []byte {
	var out bytes.Buffer
	z := zlib.NewWriter(&out)
	_, _ = io.WriteString(z, text) // a bytes.Buffer never fails
	_ = z.Close()
	return append([]byte("k\x00\x01\x00\x00\x00"), out.Bytes()...)
}

func TestCompressedTexts(t *testing.T) {
	const long = 100_000
	file := slices.Concat([]byte(signature), chunk(typeText, packed(strings.Repeat("z", long))), chunk(typeEnd, nil))
	got, err := PNGTexts(bytes.NewReader(file), long)
	if err != nil || len(got) != 1 || len(got[0].Value) != long || got[0].Keyword != "k" {
		t.Fatalf("%d texts, %v", len(got), err)
	}
	if _, err := PNGTexts(bytes.NewReader(file), long-1); !errors.Is(err, ErrTooLong) {
		t.Errorf("a packed text beyond the limit: %v", err)
	}
}

func TestDamagedPNG(t *testing.T) {
	whole := encoded(t, picture8(), someTexts)
	claim := func(length uint32) []byte {
		return slices.Concat([]byte(signature), binary.BigEndian.AppendUint32(nil, length), []byte(typeText))
	}
	flipped := slices.Clone(whole)
	flipped[bytes.Index(whole, []byte("schema"))] ^= 1
	for name, c := range map[string]struct {
		file []byte
		want error
	}{
		"empty":           {nil, ErrPNG},
		"no PNG":          {[]byte("GIF89a.."), ErrPNG},
		"cut short":       {whole[:len(whole)-20], ErrPNG},
		"wrong checksum":  {flipped, ErrPNG},
		"absurd length":   {claim(1 << 31), ErrPNG},
		"a long text":     {claim(maxChunkBytes), ErrTooLong},
		"no room":         {slices.Concat([]byte(signature), chunk(typeText, make([]byte, roomy+1))), ErrTooLong},
		"no keyword":      {slices.Concat([]byte(signature), chunk(typeText, []byte("abc"))), ErrPNG},
		"no translation":  {slices.Concat([]byte(signature), chunk(typeText, []byte("k\x00\x00\x00\x00"))), ErrPNG},
		"unknown method":  {slices.Concat([]byte(signature), chunk(typeText, []byte("k\x00\x01\x05\x00\x00x"))), ErrPNG},
		"no zlib":         {slices.Concat([]byte(signature), chunk(typeText, []byte("k\x00\x01\x00\x00\x00x"))), ErrPNG},
		"not UTF-8":       {slices.Concat([]byte(signature), chunk(typeText, []byte("k\x00\x00\x00\x00\x00\xff"))), ErrPNG},
		"skip beyond end": {slices.Concat([]byte(signature), binary.BigEndian.AppendUint32(nil, maxChunkBytes), []byte("IDAT....")), ErrPNG},
	} {
		if _, err := PNGTexts(bytes.NewReader(c.file), roomy); !errors.Is(err, c.want) {
			t.Errorf("%s: %v, want %v", name, err, c.want)
		}
	}
	got, err := PNGTexts(bytes.NewReader(whole[:len(whole)-20]), roomy)
	if err == nil || !slices.Equal(got, someTexts) {
		t.Errorf("cut after the texts: %q, %v, want the texts and an error", got, err)
	}
}

func FuzzPNGTexts(f *testing.F) {
	f.Add(encoded(f, picture8(), someTexts))
	f.Add(encoded(f, picture16(), nil))
	f.Add(slices.Concat([]byte(signature), chunk(typeText, packed("zz")), chunk(typeEnd, nil)))
	const limit = 1 << 12
	f.Fuzz(func(t *testing.T, file []byte) {
		texts, _ := PNGTexts(bytes.NewReader(file), limit)
		var total int
		var ours []Text
		for _, text := range texts {
			total += len(text.Value)
			if text.check() == nil {
				ours = append(ours, text)
			}
		}
		if total > limit {
			t.Errorf("%d bytes of text, limit %d", total, limit)
		}
		again, err := PNGTexts(bytes.NewReader(encoded(t, picture8(), ours)), roomy)
		if err != nil || !slices.Equal(again, ours) {
			t.Errorf("round trip of %q: %q, %v", ours, again, err)
		}
	})
}

func ExamplePNGTexts() {
	var file bytes.Buffer
	img := image.NewRGBA(image.Rect(0, 0, 1, 1))
	if err := EncodePNG(&file, img, []Text{{"Annulet scene", "schema = 1"}}); err != nil {
		fmt.Println(err)
		return
	}
	const limit = 1 << 20 // bytes of text
	texts, err := PNGTexts(&file, limit)
	fmt.Println(texts, err)
	// Output: [{Annulet scene schema = 1}] <nil>
}
