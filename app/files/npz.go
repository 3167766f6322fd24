package files

import (
	"archive/zip"
	"encoding/binary"
	"fmt"
	"hash/crc32"
	"io"
	"math"
	"strings"
)

// NPZ writes NumPy's archive of arrays: a zip file with one member NAME.npy
// an array. Members are stored as they are, not compressed: float images
// hardly shrink. The bytes depend on the arrays alone.
//
// Source of the format: NumPy Enhancement Proposal 1, version 1.0 of .npy.
type NPZ struct {
	zip *zip.Writer
	err error
}

// NewNPZ begins an archive.
func NewNPZ(w io.Writer) *NPZ { return &NPZ{zip: zip.NewWriter(w)} }

// Float32 adds an array of that shape in C order: the last index runs
// fastest. values must have as many entries as the shape says. Numbers are
// little-endian.
func (n *NPZ) Float32(name string, values []float32, shape ...int) error {
	return n.add(name, "<f4", 4, len(values), shape, func(block []byte, from int) {
		for k := range len(block) / 4 {
			binary.LittleEndian.PutUint32(block[4*k:], math.Float32bits(values[from+k]))
		}
	})
}

// Float64 is Float32 for float64.
func (n *NPZ) Float64(name string, values []float64, shape ...int) error {
	return n.add(name, "<f8", 8, len(values), shape, func(block []byte, from int) {
		for k := range len(block) / 8 {
			binary.LittleEndian.PutUint64(block[8*k:], math.Float64bits(values[from+k]))
		}
	})
}

// Text adds a UTF-8 text as an array of bytes; in Python it is
// bytes(file["NAME"]).decode().
func (n *NPZ) Text(name, text string) error {
	return n.add(name, "|u1", 1, len(text), []int{len(text)}, func(block []byte, from int) {
		copy(block, text[from:])
	})
}

// Close ends the archive; without it the file is none.
func (n *NPZ) Close() error {
	if n.err != nil {
		return n.err
	}
	return n.zip.Close()
}

// npzBlock is how many bytes are put in order at a time. Method.
const npzBlock = 1 << 16

func (n *NPZ) add(name, kind string, size, count int, shape []int, put func(block []byte, from int)) (err error) {
	if n.err != nil {
		return n.err
	}
	defer func() { n.err = err }()
	header, err := npyHeader(kind, count, shape)
	if err != nil {
		return fmt.Errorf("array %s: %w", name, err)
	}
	// Sizes and sum stand before the data, which readers of streams need;
	// two passes over the values are cheap.
	block := make([]byte, npzBlock)
	pour := func(to io.Writer) error {
		if _, err := to.Write(header); err != nil {
			return err
		}
		for from := 0; from < count; from += npzBlock / size {
			part := block[:min(npzBlock, (count-from)*size)]
			put(part, from)
			if _, err := to.Write(part); err != nil {
				return err
			}
		}
		return nil
	}
	sum := crc32.NewIEEE()
	if err := pour(sum); err != nil {
		return err
	}
	total := uint64(len(header)) + uint64(count)*uint64(size)
	w, err := n.zip.CreateRaw(&zip.FileHeader{
		Name: name + ".npy", Method: zip.Store, CRC32: sum.Sum32(),
		CompressedSize64: total, UncompressedSize64: total,
	})
	if err != nil {
		return err
	}
	return pour(w)
}

// npyHeader is padded so that the data begins at a multiple of 64 bytes.
func npyHeader(kind string, count int, shape []int) ([]byte, error) {
	size := 1
	var dims strings.Builder
	for _, d := range shape {
		size *= d
		fmt.Fprintf(&dims, "%d, ", d)
	}
	if size != count || len(shape) == 0 {
		return nil, fmt.Errorf("%d values for the shape %v", count, shape)
	}
	text := fmt.Sprintf("{'descr': '%s', 'fortran_order': False, 'shape': (%s), }", kind, strings.TrimRight(dims.String(), " "))
	const preamble = 10 // magic, version, length
	length := (preamble+len(text)+1+63)/64*64 - preamble
	if length > math.MaxUint16 {
		return nil, fmt.Errorf("a shape of %d dimensions", len(shape))
	}
	header := append([]byte("\x93NUMPY\x01\x00"), byte(length), byte(length>>8))
	header = append(header, text...)
	for len(header) < preamble+length-1 {
		header = append(header, ' ')
	}
	return append(header, '\n'), nil
}
