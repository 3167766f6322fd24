package output

import (
	"archive/zip"
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"strings"
	"testing"
)

// hostile are files that claim what they should not.
func hostile(t *testing.T) map[string][]byte {
	t.Helper()
	var bomb bytes.Buffer
	z := zip.NewWriter(&bomb)
	w, err := z.Create(sceneMember + ".npy")
	if err != nil {
		t.Fatal(err)
	}
	if _, err := w.Write([]byte("\x93NUMPY\x01\x00\x10\x00{'descr': '|u1'}")); err != nil {
		t.Fatal(err)
	}
	zeros := make([]byte, 1<<20)
	for range 1024 { // a gigabyte in a megabyte
		if _, err := w.Write(zeros); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	card := func(text string) string { return fmt.Sprintf("%-80s", text) }
	header := func(cards ...string) string {
		text := strings.Join(cards, "") + card("END")
		return text + strings.Repeat(" ", (2880-len(text)%2880)%2880)
	}
	simple := header(card("SIMPLE  =                    T"), card("BITPIX  =                    8"), card("NAXIS   =                    0"))
	long := binary.BigEndian.AppendUint32([]byte("\x89PNG\r\n\x1a\n"), 0x7fffffff)
	tiff := []byte("II*\x00\x08\x00\x00\x00\x01\x00\x0e\x01\x02\x00\xff\xff\xff\x7f\x00\x00\x00\x00")
	return map[string][]byte{
		"zip bomb":         bomb.Bytes(),
		"PNG chunk":        append(long, "iTXtAnnulet scene"...),
		"TIFF text":        tiff,
		"TIFF directory":   []byte("II*\x00\xff\xff\xff\xff"),
		"FITS axis":        []byte(simple + header(card("XTENSION= 'BINTABLE'"), card("BITPIX  =                    8"), card("NAXIS   =                    2"), card("NAXIS1  =  9000000000000000000"), card("NAXIS2  =                    1"), card("TTYPE1  = 'TEXT    '"), card("EXTNAME = 'SCENE   '"))),
		"FITS no end":      []byte(simple + strings.Repeat(card("COMMENT"), 36*200)),
		"FITS many units":  []byte(strings.Repeat(simple, 1001)),
		"FITS axes":        []byte(header(card("SIMPLE  =                    T"), card("BITPIX  =                   64"), card("NAXIS   =                  999"), card("NAXIS1  =                 9999"))),
		"CSV of one line":  []byte("# " + strings.Repeat("x", 6<<20)),
		"text":             []byte("schema = 1\n"),
		"JSON without end": []byte(`{"scene": "` + strings.Repeat("x", 9<<20)),
		"JSON nested":      []byte(`{"scene": ` + strings.Repeat("[", 9<<20)),
		"JSON of others":   []byte(`{"rows": [], "scene": ""}`),
		"empty":            nil,
		"zip without data": []byte("PK\x03\x04"),
	}
}

// The directory of a zip is not held whatever its length.
func TestRecoverManyMembers(t *testing.T) {
	var file bytes.Buffer
	z := zip.NewWriter(&file)
	name := strings.Repeat("x", 200)
	for k := range 20_000 {
		if _, err := z.Create(fmt.Sprint(name, k)); err != nil {
			t.Fatal(err)
		}
	}
	if err := z.Close(); err != nil {
		t.Fatal(err)
	}
	if _, err := recoverFrom(bytes.NewReader(file.Bytes()), int64(file.Len())); !errors.Is(err, ErrDamaged) {
		t.Errorf("%v, want ErrDamaged", err)
	}
}
