package output

import (
	"bytes"
	"encoding/binary"
	"fmt"
	"image"
	"io"

	"golang.org/x/image/tiff"
)

// WriteTIFF writes a picture, 16 bits a component if img has them, whose
// description holds the scene. The library's encoder writes no texts: its
// directory of tags is copied to the end of the file with two more. Source:
// TIFF 6.0 (Adobe, 1992).
func WriteTIFF(w io.Writer, img image.Image, p Provenance) error { return WriteTIFFAt(w, img, p, 0) }

// WriteTIFFAt is WriteTIFF with a resolution, pixels an inch; 0 leaves the
// library's 72.
func WriteTIFFAt(w io.Writer, img image.Image, p Provenance, dpi float64) error {
	var file bytes.Buffer
	if err := tiff.Encode(&file, img, &tiff.Options{Compression: tiff.Deflate, Predictor: true}); err != nil {
		return err
	}
	texts := []tiffText{
		{tiffDescription, p.Scene},
		{tiffSoftware, "Annulet " + p.Version + " " + p.JSON()},
	}
	if dpi > 0 {
		if err := setResolution(file.Bytes(), dpi); err != nil {
			return err
		}
	}
	whole, err := withTexts(file.Bytes(), texts)
	if err != nil {
		return err
	}
	_, err = w.Write(whole)
	return err
}

// setResolution overwrites the resolution along both axes.
func setResolution(file []byte, dpi float64) error {
	const xResolution, yResolution, rational, parts = 282, 283, 5, 1000
	order := binary.LittleEndian
	at := int(order.Uint32(file[4:])) + 2
	set := 0
	for ; at+tiffEntry <= len(file); at += tiffEntry {
		tag, kind, value := order.Uint16(file[at:]), order.Uint16(file[at+2:]), int(order.Uint32(file[at+8:]))
		if (tag == xResolution || tag == yResolution) && kind == rational && value+8 <= len(file) {
			order.PutUint32(file[value:], uint32(dpi*parts+0.5))
			order.PutUint32(file[value+4:], parts)
			if set++; set == 2 {
				return nil
			}
		}
	}
	return fmt.Errorf("the TIFF encoder wrote no resolution")
}

type tiffText struct {
	tag   uint16
	value string
}

const (
	tiffDescription = 270
	tiffSoftware    = 305
	tiffASCII       = 2
	tiffEntry       = 12 // bytes
)

// withTexts adds ASCII tags to a little-endian TIFF with one directory.
func withTexts(file []byte, texts []tiffText) ([]byte, error) {
	order := binary.LittleEndian
	if len(file) < 8 || string(file[:4]) != "II*\x00" {
		return nil, fmt.Errorf("the TIFF encoder wrote another kind of file than expected")
	}
	at := int(order.Uint32(file[4:]))
	if at+2 > len(file) {
		return nil, fmt.Errorf("the TIFF encoder wrote no directory")
	}
	n := int(order.Uint16(file[at:]))
	entries := file[at+2:]
	if len(entries) < n*tiffEntry {
		return nil, fmt.Errorf("the TIFF encoder wrote a short directory")
	}
	added := make([][]byte, 0, len(texts))
	for _, t := range texts { // values first, at even offsets
		if len(file)%2 == 1 {
			file = append(file, 0)
		}
		entry := order.AppendUint16(nil, t.tag)
		entry = order.AppendUint16(entry, tiffASCII)
		entry = order.AppendUint32(entry, uint32(len(t.value)+1))
		entry = order.AppendUint32(entry, uint32(len(file)))
		added = append(added, entry)
		file = append(append(file, t.value...), 0)
	}
	if len(file)%2 == 1 {
		file = append(file, 0)
	}
	order.PutUint32(file[4:], uint32(len(file)))
	directory := order.AppendUint16(nil, uint16(n+len(texts)))
	for k := range n { // in ascending order of tags
		entry := entries[k*tiffEntry : (k+1)*tiffEntry]
		for len(added) > 0 && order.Uint16(added[0]) < order.Uint16(entry) {
			directory = append(directory, added[0]...)
			added = added[1:]
		}
		directory = append(directory, entry...)
	}
	for _, entry := range added {
		directory = append(directory, entry...)
	}
	directory = append(directory, 0, 0, 0, 0) // no further picture
	return append(file, directory...), nil
}
