package verbs

import (
	"context"
	"image"
	"io"

	"annulet/app/files"
	"annulet/raytrace"
	"annulet/scenes"
)

// renderJob traces a scene and writes pictures of it.
type renderJob struct {
	s        streams
	view     *raytrace.View
	picture  picture // its tone has fixed limits afterwards
	document *scenes.Document
	options  raytrace.Options
	hold     int64 // holdBytes
}

// holdBytes is the most that plate and picture may take; larger images are
// rendered in strips. Taste.
const holdBytes = 512 << 20

// write makes the files. The plate that it returns tells counts and bounds;
// it may have no pixels.
func (j *renderJob) write(ctx context.Context, paths []string) (*raytrace.Plate, error) {
	if j.view.PlateBytes(j.options)+j.pictureBytes(j.view.Field.Rows) > j.hold {
		return j.writeStrips(ctx, paths)
	}
	plate, err := j.whole(ctx, j.view)
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
		if err := writeFile(ctx, path, func(w io.Writer) error { return encodePNG(w, img, j.document) }); err != nil {
			return nil, err
		}
	}
	return plate, nil
}

// pictureBytes is the memory of that many rows of the picture.
func (j *renderJob) pictureBytes(rows int) int64 {
	const components = 4
	return int64(components*j.picture.depth()/8) * int64(j.view.Field.Columns) * int64(rows)
}

func (j *renderJob) whole(ctx context.Context, view *raytrace.View) (*raytrace.Plate, error) {
	shown := newProgress(j.s.err)
	shown.begin(view.Field.Columns, view.Field.Rows)
	defer shown.end()
	o := j.options
	o.Report = shown.report
	return view.Render(ctx, o)
}

// pilotSide is the longer side of the small image from which a streamed one
// has its limits. Taste: a thousandth of its pixels, which the default limits
// leave out, is a thousand.
const pilotSide = 1000

// writeStrips renders in strips: the limits of the tone come from a pilot
// image of the same field.
func (j *renderJob) writeStrips(ctx context.Context, paths []string) (*raytrace.Plate, error) {
	f := j.view.Field
	const mebi = 1 << 20
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
	var counts *raytrace.Plate
	for _, path := range paths {
		shown := newProgress(j.s.err)
		shown.begin(f.Columns, f.Rows)
		o := j.options
		o.Report = shown.report
		err := writeFile(ctx, path, func(w io.Writer) error {
			rows, err := files.NewPNGRows(w, f.Columns, f.Rows, j.picture.depth(), pngTexts(j.document))
			if err != nil {
				return err
			}
			counts, err = j.view.Strips(ctx, o, true, func(strip raytrace.Strip) error {
				img, err := j.picture.paint(j.picture.values(strip.Plate), strip.Columns, strip.Rows)
				if err != nil {
					return err
				}
				return writePNGRows(rows, img)
			})
			if err != nil {
				return err
			}
			return rows.Close()
		})
		shown.end()
		if err != nil {
			return nil, err
		}
	}
	return counts, nil
}

// writePNGRows writes the rows of a picture that paint made, without its
// alpha: it is opaque.
func writePNGRows(to *files.PNGRows, img image.Image) error {
	pixels, stride, bytes := []uint8(nil), 0, 0 // of a component
	switch img := img.(type) {
	case *image.RGBA:
		pixels, stride, bytes = img.Pix, img.Stride, 1
	case *image.RGBA64:
		pixels, stride, bytes = img.Pix, img.Stride, 2
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
