package verbs

import (
	"context"
	"fmt"
	"image"
	"io"
	"path/filepath"
	"slices"
	"strings"

	"annulet/app/files"
	"annulet/app/output"
	"annulet/raytrace"
	"annulet/scenes"
)

// renderJob traces a scene and writes what is asked for.
type renderJob struct {
	s        streams
	view     *raytrace.View
	picture  picture          // its tone has fixed limits afterwards
	data     []raytrace.Layer // that FITS and NPZ hold
	document *scenes.Document
	options  raytrace.Options
	hold     int64  // holdBytes
	audit    string // its summary, if one was run
}

// holdBytes is the most that plate and picture may take; larger images are
// rendered in strips. Taste.
const holdBytes = 512 << 20

// format is that of a file, by its extension.
type format string

const (
	formatPNG  format = ".png"
	formatTIFF format = ".tiff"
	formatFITS format = ".fits"
	formatNPZ  format = ".npz"
)

const formatWords = ".png, .tiff, .fits, .npz"

// formatOf returns "" for an extension that cannot be written.
func formatOf(path string) format {
	switch f := format(strings.ToLower(filepath.Ext(path))); f {
	case ".tif":
		return formatTIFF
	case formatPNG, formatTIFF, formatFITS, formatNPZ:
		return f
	}
	return ""
}

// holds says whether a format holds the numbers of the plate.
func (f format) holds() bool { return f == formatFITS || f == formatNPZ }

// write makes the files. The plate that it returns tells counts and bounds;
// it may have no pixels.
func (j *renderJob) write(ctx context.Context, paths []string) (*raytrace.Plate, error) {
	numbers := slices.ContainsFunc(paths, func(path string) bool { return formatOf(path).holds() })
	j.options.Layers = j.picture.layers()
	if numbers {
		j.options.Layers = append(j.options.Layers, j.data...)
	}
	several := numbers && len(j.view.Frequencies()) > 1
	if need := j.need(several); need > j.hold {
		if several {
			return nil, refuse("-o: %d frequencies need their whole images in memory, %d MiB; allowed: %d MiB, or one field.frequency",
				len(j.view.Frequencies()), need/mebi, j.hold/mebi)
		}
		for _, path := range paths {
			if f := formatOf(path); f == formatNPZ || f == formatTIFF {
				return nil, refuse("-o %s: this format needs the whole image in memory, %d MiB; allowed: %d MiB, or .png and .fits, which are written in strips",
					path, need/mebi, j.hold/mebi)
			}
		}
		return j.writeStrips(ctx, paths)
	}
	plate, spectrum, err := j.whole(ctx, several)
	if err != nil {
		return nil, err
	}
	values := j.picture.values(plate)
	j.picture.tone = j.picture.tone.Fixed(values)
	img, err := j.picture.paint(values, plate.Columns, plate.Rows)
	if err != nil {
		return nil, err
	}
	for _, path := range paths {
		if err := j.writeOne(ctx, path, plate, spectrum, img); err != nil {
			return nil, err
		}
	}
	return plate, nil
}

const mebi = 1 << 20

func (j *renderJob) provenance(plate *raytrace.Plate) output.Provenance {
	p := output.NewProvenance(j.document, Version, plate)
	p.Audit = j.audit
	return p
}

// writeOne writes the whole plate, or the picture of it, as one file.
func (j *renderJob) writeOne(ctx context.Context, path string, plate *raytrace.Plate, spectrum []*raytrace.Plate, img image.Image) error {
	p := j.provenance(plate)
	switch formatOf(path) {
	case formatFITS:
		return files.WriteAt(ctx, path, newFileMode, func(w io.WriterAt) error {
			s, err := j.fitsSink(w)
			if err == nil {
				err = s.take(raytrace.Strip{Plate: plate})
			}
			for k := 0; k < len(spectrum) && err == nil; k++ {
				err = s.takeFrequency(k, spectrum[k])
			}
			if err == nil {
				err = s.close(plate)
			}
			return err
		})
	case formatNPZ:
		return writeFile(ctx, path, func(w io.Writer) error { return output.WriteNPZ(w, plate, j.view, spectrum, j.data, p) })
	case formatTIFF:
		return writeFile(ctx, path, func(w io.Writer) error { return output.WriteTIFF(w, img, p) })
	}
	return writeFile(ctx, path, func(w io.Writer) error { return files.EncodePNG(w, img, p.PNGTexts()) })
}

// pictureBytes is the memory of that many rows of the picture.
func (j *renderJob) pictureBytes(rows int) int64 {
	const components = 4
	return int64(components*j.picture.depth()/8) * int64(j.view.Field.Columns) * int64(rows)
}

// need is the memory of plate and picture; with several frequencies, of the
// total at each, and of all of them together as an array.
func (j *renderJob) need(several bool) int64 {
	need := j.view.PlateBytes(j.options) + j.pictureBytes(j.view.Field.Rows)
	if several {
		pixels := int64(j.view.Field.Columns) * int64(j.view.Field.Rows)
		const float32Bytes = 4
		need += 2 * float32Bytes * pixels * int64(len(j.view.Frequencies()))
	}
	return need
}

// whole returns the plate, and where several frequencies are asked for that of
// each. Each is traced anew: integrating over pixels takes most of the time, and
// a trace that is kept would save 8 % of it for 200 bytes a pixel.
func (j *renderJob) whole(ctx context.Context, several bool) (plate *raytrace.Plate, spectrum []*raytrace.Plate, err error) {
	shown := newProgress(j.s.err)
	shown.begin(j.view.Field.Columns, j.view.Field.Rows)
	defer shown.end()
	o := j.options
	o.Report = shown.report
	if plate, err = j.view.Render(ctx, o); err != nil || !several {
		return plate, nil, err
	}
	spectrum = []*raytrace.Plate{plate}
	o.Layers = []raytrace.Layer{} // the total alone
	for k := range j.view.Frequencies()[1:] {
		tuned, err := j.view.WithFrequency(k + 1)
		if err != nil {
			return nil, nil, err
		}
		tuned.Follow(j.view)
		at, err := tuned.Render(ctx, o)
		if err != nil {
			return nil, nil, err
		}
		spectrum = append(spectrum, at)
	}
	return plate, spectrum, nil
}

// pilotSide is the longer side of the small image from which a streamed one
// has its limits. Taste: a thousandth of its pixels, which the default limits
// leave out, is a thousand.
const pilotSide = 1000

// writeStrips renders in strips, all files in one pass: the limits of the
// tone come from a pilot image of the same field.
func (j *renderJob) writeStrips(ctx context.Context, paths []string) (*raytrace.Plate, error) {
	f := j.view.Field
	// strips of plate and picture, the pilot, and what the program needs anyway
	need := j.view.StripBytes(j.options) + 4*int64(f.Columns)*int64(j.picture.depth()) + programBytes
	j.s.note("render: %d x %d pixels would need %d MiB at once; in strips about %d MiB",
		f.Columns, f.Rows, (j.view.PlateBytes(j.options)+j.pictureBytes(f.Rows))/mebi, need/mebi)
	coarse := (max(f.Columns, f.Rows) + pilotSide - 1) / pilotSide
	pilot, err := j.view.Coarsened(coarse).Render(ctx, j.options)
	if err != nil {
		return nil, err
	}
	j.picture.tone = j.picture.tone.Fixed(j.picture.values(pilot))
	j.s.note("render: the limits of the colours are those of a pilot of %d x %d pixels", pilot.Columns, pilot.Rows)
	shown := newProgress(j.s.err)
	shown.begin(f.Columns, f.Rows)
	defer shown.end()
	j.options.Report = shown.report
	return j.into(ctx, paths, nil)
}

// sink takes strips.
type sink struct {
	take          func(raytrace.Strip) error
	takeFrequency func(k int, plate *raytrace.Plate) error // nil for pictures
	close         func(counts *raytrace.Plate) error
}

// into opens the files that are left, one within the other, and renders when
// all are open; so all of them appear, or the last ones do not.
func (j *renderJob) into(ctx context.Context, paths []string, sinks []sink) (counts *raytrace.Plate, err error) {
	if len(paths) == 0 {
		return j.view.Strips(ctx, j.options, true, func(strip raytrace.Strip) error {
			for _, s := range sinks {
				if err := s.take(strip); err != nil {
					return err
				}
			}
			return nil
		})
	}
	onward := func(s sink, err error) error {
		if err == nil {
			counts, err = j.into(ctx, paths[1:], append(sinks, s))
		}
		if err == nil {
			err = s.close(counts)
		}
		return err
	}
	if formatOf(paths[0]) == formatFITS {
		err = files.WriteAt(ctx, paths[0], newFileMode, func(w io.WriterAt) error { return onward(j.fitsSink(w)) })
	} else {
		err = writeFile(ctx, paths[0], func(w io.Writer) error { return onward(j.pngSink(w)) })
	}
	return counts, err
}

func (j *renderJob) fitsSink(w io.WriterAt) (sink, error) {
	f, err := output.NewFITS(w, j.view, j.document.Scene(), j.data, j.provenance(nil))
	return sink{
		take:          func(s raytrace.Strip) error { return f.Put(s.Plate, s.FirstRow) },
		takeFrequency: func(k int, plate *raytrace.Plate) error { return f.PutFrequency(k, plate) },
		close:         func(counts *raytrace.Plate) error { return f.Close(j.provenance(counts)) },
	}, err
}

func (j *renderJob) pngSink(w io.Writer) (sink, error) {
	rows, err := files.NewPNGRows(w, j.view.Field.Columns, j.view.Field.Rows, j.picture.depth(), nil)
	return sink{
		take: func(s raytrace.Strip) error {
			img, err := j.picture.paint(j.picture.values(s.Plate), s.Columns, s.Rows)
			if err != nil {
				return err
			}
			return writePNGRows(rows, img)
		},
		close: func(counts *raytrace.Plate) error {
			return rows.Close(j.provenance(counts).PNGTexts()...)
		},
	}, err
}

// writePNGRows writes the rows of a picture that paint made, without its
// alpha: it is opaque.
func writePNGRows(to *files.PNGRows, img image.Image) error {
	var pixels []uint8
	var stride, bytes int // bytes of a component
	switch img := img.(type) {
	case *image.RGBA:
		pixels, stride, bytes = img.Pix, img.Stride, 1
	case *image.RGBA64:
		pixels, stride, bytes = img.Pix, img.Stride, 2
	default:
		return fmt.Errorf("a picture of type %T", img)
	}
	columns := img.Bounds().Dx()
	row := make([]byte, 3*bytes*columns)
	for y := range img.Bounds().Dy() {
		from := pixels[y*stride:]
		for x := range columns {
			copy(row[3*bytes*x:3*bytes*(x+1)], from[4*bytes*x:])
		}
		if err := to.Write(row); err != nil {
			return err
		}
	}
	return nil
}
