package imaging

import (
	"image"

	"golang.org/x/image/draw"
	"golang.org/x/image/math/f64"

	"annulet/raytrace"
)

// fit returns the image at columns × rows pixels. Pixels of a coarse picture
// are k times as wide and share the bottom left corner with the fine ones; the
// last ones may reach over the right and upper edge.
func fit(coarse *image.RGBA, k, columns, rows int) *image.RGBA {
	if k == 1 && coarse.Rect.Dx() == columns && coarse.Rect.Dy() == rows {
		return coarse
	}
	size := coarse.Bounds().Size().Mul(k)
	out := image.NewRGBA(image.Rect(0, 0, columns, rows))
	draw.ApproxBiLinear.Scale(out, image.Rect(0, rows-size.Y, size.X, rows), coarse, coarse.Bounds(), draw.Src, nil)
	return out
}

// magnify returns the part of an image of one field that another shows, each
// pixel a rectangle of one colour. Around the image it is transparent.
func magnify(m *image.RGBA, k int, of, shown raytrace.Field) *image.RGBA {
	out := image.NewRGBA(image.Rect(0, 0, shown.Columns, shown.Rows))
	scale := float64(k) * of.Pitch() / shown.Pitch() // pixels shown per pixel
	left := of.Center[0] - of.Pitch()*float64(of.Columns)/2 - (shown.Center[0] - shown.Pitch()*float64(shown.Columns)/2)
	bottom := of.Center[1] - of.Pitch()*float64(of.Rows)/2 - (shown.Center[1] - shown.Pitch()*float64(shown.Rows)/2)
	x := left / shown.Pitch()
	y := float64(shown.Rows) - bottom/shown.Pitch() - scale*float64(m.Rect.Dy())
	draw.NearestNeighbor.Transform(out, f64.Aff3{scale, 0, x, 0, scale, y}, m, m.Bounds(), draw.Src, nil)
	return out
}
