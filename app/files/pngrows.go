package files

import (
	"bufio"
	"compress/zlib"
	"encoding/binary"
	"errors"
	"fmt"
	"io"
)

// ErrRows marks rows that do not add up to the picture announced.
var ErrRows = errors.New("rows do not fit the picture")

// PNGRows writes a PNG row by row, so that a picture of any height takes the
// memory of one row. Colour is RGB, 8 or 16 bits a component (PNG
// Specification, Third Edition, sections 9.2, 10 and 11.2.1).
type PNGRows struct {
	rows   int // still to come
	row    []byte
	above  []byte // the row before, for the filter
	pack   *zlib.Writer
	chunks *bufio.Writer
	out    io.Writer
	perRow int
}

const (
	colourRGB     = 2
	componentsRGB = 3
	filterUp      = 2 // each byte less the one above it: smooth images pack well
	// idatBytes is the size of an IDAT chunk. Taste: large enough that its
	// 12 bytes of frame do not count.
	idatBytes = 1 << 16
)

// NewPNGRows writes the head of a PNG of that many pixels, 8 or 16 bits a
// component, and the texts.
func NewPNGRows(w io.Writer, columns, rows, depth int, texts []Text) (*PNGRows, error) {
	if columns < 1 || rows < 1 || columns > maxChunkBytes || rows > maxChunkBytes || depth != 8 && depth != 16 {
		return nil, fmt.Errorf("PNG of %d x %d pixels with %d bits: %w", columns, rows, depth, ErrRows)
	}
	for _, t := range texts {
		if err := t.check(); err != nil {
			return nil, err
		}
	}
	if _, err := io.WriteString(w, signature); err != nil {
		return nil, err
	}
	var header [headerBytes]byte
	binary.BigEndian.PutUint32(header[0:], uint32(columns))
	binary.BigEndian.PutUint32(header[4:], uint32(rows))
	header[8], header[9] = byte(depth), colourRGB
	if err := putChunk(w, "IHDR", header[:]); err != nil {
		return nil, err
	}
	for _, t := range texts {
		if err := putChunk(w, typeText, t.data()); err != nil {
			return nil, err
		}
	}
	p := &PNGRows{rows: rows, out: w, perRow: columns * componentsRGB * depth / 8}
	p.above = make([]byte, p.perRow)
	p.row = make([]byte, 1+p.perRow)
	p.chunks = bufio.NewWriterSize(idat{w}, idatBytes)
	p.pack = zlib.NewWriter(p.chunks)
	return p, nil
}

// Write adds one row from the top down: RGB, big-endian if 16 bits, of
// exactly the length of a row.
func (p *PNGRows) Write(row []byte) error {
	if len(row) != p.perRow || p.rows == 0 {
		return fmt.Errorf("PNG: a row of %d bytes with %d rows to come: %w: a row has %d bytes", len(row), p.rows, ErrRows, p.perRow)
	}
	p.rows--
	p.row[0] = filterUp
	filtered := p.row[1:]
	for k, v := range row {
		filtered[k] = v - p.above[k]
	}
	copy(p.above, row)
	_, err := p.pack.Write(p.row)
	return err
}

// Close ends the PNG, with what is to be said only now; it fails if rows are
// missing.
func (p *PNGRows) Close(texts ...Text) error {
	for _, t := range texts {
		if err := t.check(); err != nil {
			return err
		}
	}
	if p.rows != 0 {
		return fmt.Errorf("PNG: %d rows are missing: %w", p.rows, ErrRows)
	}
	if err := p.pack.Close(); err != nil {
		return err
	}
	if err := p.chunks.Flush(); err != nil {
		return err
	}
	for _, t := range texts {
		if err := putChunk(p.out, typeText, t.data()); err != nil {
			return err
		}
	}
	return putChunk(p.out, typeEnd, nil)
}

// idat wraps every write into a chunk of compressed pixels.
type idat struct{ w io.Writer }

func (c idat) Write(p []byte) (int, error) {
	if err := putChunk(c.w, "IDAT", p); err != nil {
		return 0, err
	}
	return len(p), nil
}

// putChunk writes one chunk.
func putChunk(w io.Writer, kind string, data []byte) error {
	var word [4]byte
	binary.BigEndian.PutUint32(word[:], uint32(len(data)))
	if _, err := w.Write(append(word[:], kind...)); err != nil {
		return err
	}
	if _, err := w.Write(data); err != nil {
		return err
	}
	binary.BigEndian.PutUint32(word[:], checksum(kind, data))
	_, err := w.Write(word[:])
	return err
}
