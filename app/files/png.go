package files

import (
	"bytes"
	"encoding/binary"
	"errors"
	"fmt"
	"hash/crc32"
	"image"
	"image/png"
	"io"
	"math"
	"strings"
	"unicode/utf8"
)

// ErrText marks a text that PNG cannot hold.
var ErrText = errors.New("not a text for PNG")

// Text is one entry of a PNG's international text. Keyword has 1 to 79
// printable ASCII characters, without a space at either end or two in a row;
// Value is UTF-8 without NUL.
type Text struct{ Keyword, Value string }

// The layout of a PNG file. Source: Portable Network Graphics Specification
// (Third Edition), W3C 2025, sections 5.2, 5.3, 11.2.1 and 11.3.3.4.
const (
	signature     = "\x89PNG\r\n\x1a\n"
	lengthBytes   = 4
	typeBytes     = 4
	crcBytes      = 4
	headerBytes   = 13 // of an IHDR chunk's data
	maxChunkBytes = 1<<31 - 1
	maxKeyword    = 79
	typeText      = "iTXt"
	typeEnd       = "IEND"

	// beforeTexts is where texts go in: after the signature and IHDR.
	beforeTexts = len(signature) + lengthBytes + typeBytes + headerBytes + crcBytes
)

// EncodePNG writes img as a PNG, with 16 bits a component for the 16-bit
// types of package image (RGBA64, NRGBA64, Gray16) and 8 otherwise, and the
// texts, uncompressed and in order, ahead of the pixels. The bytes depend on
// nothing but the arguments. The error wraps ErrText if a text does not fit,
// and then nothing was written.
func EncodePNG(w io.Writer, img image.Image, texts []Text) error {
	return EncodePNGAt(w, img, texts, 0)
}

// EncodePNGAt is EncodePNG with a resolution, pixels an inch; 0 for none.
func EncodePNGAt(w io.Writer, img image.Image, texts []Text, dpi float64) error {
	var chunks bytes.Buffer
	if dpi > 0 { // section 11.3.4.3: pixels a metre along both axes
		const inch, metre = 0.0254, 1
		perMetre := binary.BigEndian.AppendUint32(nil, uint32(math.Round(dpi/inch)))
		if err := putChunk(&chunks, "pHYs", append(append(perMetre, perMetre...), metre)); err != nil {
			return err
		}
	}
	for _, t := range texts {
		if err := t.check(); err != nil {
			return err
		}
		if err := putChunk(&chunks, typeText, t.data()); err != nil {
			return err
		}
	}
	encoder := png.Encoder{CompressionLevel: png.DefaultCompression}
	splice := &splice{w: w, at: beforeTexts, insert: chunks.Bytes()}
	if err := encoder.Encode(splice, img); err != nil {
		return fmt.Errorf("PNG: %w", err)
	}
	return nil
}

func (t Text) check() error {
	refuse := func(why string) error {
		return fmt.Errorf("PNG text with keyword %q: %w: %s", t.Keyword, ErrText, why)
	}
	k := t.Keyword
	switch {
	case len(k) < 1 || len(k) > maxKeyword:
		return refuse("the keyword must have 1 to 79 characters")
	case strings.ContainsFunc(k, func(r rune) bool { return r < ' ' || r > '~' }):
		return refuse("the keyword must be printable ASCII")
	case strings.TrimSpace(k) != k || strings.Contains(k, "  "):
		return refuse("the keyword has a space at an end or two in a row")
	case !utf8.ValidString(t.Value):
		return refuse("the value is not UTF-8")
	case strings.ContainsRune(t.Value, 0):
		return refuse("the value holds NUL")
	case len(t.data()) > maxChunkBytes:
		return refuse("the value is longer than a chunk can be")
	}
	return nil
}

// data returns the data of the iTXt chunk: keyword, NUL, compression flag and
// method, language tag, NUL, translated keyword, NUL, text. The flag is 0,
// not compressed; tag and translation are empty.
func (t Text) data() []byte {
	const between = "\x00" + "\x00\x00" + "\x00" + "\x00"
	return []byte(t.Keyword + between + t.Value)
}

// checksum returns the CRC of a chunk's type and data.
func checksum(kind string, data []byte) uint32 {
	return crc32.Update(crc32.ChecksumIEEE([]byte(kind)), crc32.IEEETable, data)
}

// splice passes bytes on to w and inserts some after the first few.
type splice struct {
	w      io.Writer
	at     int // bytes still to pass before the insertion
	insert []byte
}

func (s *splice) Write(p []byte) (int, error) {
	head := min(s.at, len(p))
	n, err := s.w.Write(p[:head])
	s.at -= n
	if err != nil || s.at > 0 {
		return n, err
	}
	if s.insert != nil {
		if _, err := s.w.Write(s.insert); err != nil {
			return n, err
		}
		s.insert = nil
	}
	rest, err := s.w.Write(p[head:])
	return n + rest, err
}
