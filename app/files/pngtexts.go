package files

import (
	"bytes"
	"compress/zlib"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
	"unicode/utf8"
)

// ErrPNG marks a file that is no PNG, or a damaged one.
var ErrPNG = errors.New("not a sound PNG")

// ErrTooLong marks texts longer than the reader's limit.
var ErrTooLong = errors.New("the texts are longer than the limit")

// PNGTexts returns the international texts of a PNG in file order, also those
// another program compressed. limit bounds, in bytes, the texts of a whole
// file, unpacked; memory stays within a small multiple of it whatever the
// file claims. Pixels are skipped, not decoded.
//
// On error, which wraps ErrPNG, ErrTooLong or what r said, the texts found
// before the damage are returned too.
func PNGTexts(r io.Reader, limit int) ([]Text, error) {
	start := make([]byte, len(signature))
	if err := fillFrom(r, start); err != nil {
		return nil, err
	}
	if string(start) != signature {
		return nil, fmt.Errorf("%w: it does not start like one", ErrPNG)
	}
	var texts []Text
	for {
		var head [lengthBytes + typeBytes]byte
		if err := fillFrom(r, head[:]); err != nil {
			return texts, err
		}
		length := int64(binary.BigEndian.Uint32(head[:lengthBytes]))
		kind := string(head[lengthBytes:])
		switch {
		case length > maxChunkBytes:
			return texts, fmt.Errorf("%w: a chunk claims %d bytes", ErrPNG, length)
		case kind == typeEnd:
			return texts, nil
		case kind != typeText:
			if _, err := io.CopyN(io.Discard, r, length+crcBytes); err != nil {
				return texts, short(err)
			}
			continue
		}
		t, err := readText(r, length, limit)
		if err != nil {
			return texts, err
		}
		limit -= max(int(length), len(t.Value)) // empty texts count too
		texts = append(texts, t)
	}
}

// readText reads data and CRC of an iTXt chunk of the given length.
func readText(r io.Reader, length int64, limit int) (Text, error) {
	if length > int64(limit) {
		return Text{}, fmt.Errorf("%w: a text of %d bytes where %d are left", ErrTooLong, length, limit)
	}
	data := make([]byte, length)
	if err := fillFrom(r, data); err != nil {
		return Text{}, err
	}
	var crc [crcBytes]byte
	if err := fillFrom(r, crc[:]); err != nil {
		return Text{}, err
	}
	if binary.BigEndian.Uint32(crc[:]) != checksum(typeText, data) {
		return Text{}, fmt.Errorf("%w: the checksum of a text does not fit", ErrPNG)
	}
	return parseText(data, limit)
}

// parseText takes the data of an iTXt chunk apart.
func parseText(data []byte, limit int) (Text, error) {
	keyword, rest, ok := bytes.Cut(data, []byte{0})
	const flagAndMethod = 2
	if !ok || len(rest) < flagAndMethod {
		return Text{}, fmt.Errorf("%w: a text chunk is cut short", ErrPNG)
	}
	compressed, method := rest[0], rest[1]
	_, rest, okTag := bytes.Cut(rest[flagAndMethod:], []byte{0})
	_, value, okTranslation := bytes.Cut(rest, []byte{0})
	if !okTag || !okTranslation {
		return Text{}, fmt.Errorf("%w: a text chunk is cut short", ErrPNG)
	}
	if compressed != 0 {
		const deflate = 0
		if compressed != 1 || method != deflate {
			return Text{}, fmt.Errorf("%w: a text is compressed in an unknown way", ErrPNG)
		}
		var err error
		if value, err = inflate(value, limit); err != nil {
			return Text{}, err
		}
	}
	if !utf8.Valid(value) {
		return Text{}, fmt.Errorf("%w: a text is not UTF-8", ErrPNG)
	}
	return Text{Keyword: fromLatin1(keyword), Value: string(value)}, nil
}

// inflate unpacks a zlib stream, but no more than limit bytes.
func inflate(packed []byte, limit int) ([]byte, error) {
	z, err := zlib.NewReader(bytes.NewReader(packed))
	if err != nil {
		return nil, fmt.Errorf("%w: a compressed text: %w", ErrPNG, err)
	}
	value, err := io.ReadAll(io.LimitReader(z, int64(limit)+1))
	if err != nil {
		return nil, fmt.Errorf("%w: a compressed text: %w", ErrPNG, err)
	}
	if len(value) > limit {
		return nil, fmt.Errorf("%w: a compressed text unpacks to more than %d bytes", ErrTooLong, limit)
	}
	return value, nil
}

// fromLatin1 returns the UTF-8 of a keyword, which PNG keeps in Latin-1, whose
// codes are Unicode's.
func fromLatin1(keyword []byte) string {
	runes := make([]rune, len(keyword))
	for i, b := range keyword {
		runes[i] = rune(b)
	}
	return string(runes)
}

func fillFrom(r io.Reader, p []byte) error {
	_, err := io.ReadFull(r, p)
	return short(err)
}

// short says that a file ends early, and passes other errors on.
func short(err error) error {
	if errors.Is(err, io.EOF) || errors.Is(err, io.ErrUnexpectedEOF) {
		return fmt.Errorf("%w: it ends early", ErrPNG)
	}
	return err
}
