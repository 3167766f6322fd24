package imaging

import (
	"image"

	"golang.org/x/image/draw"
)

// fit returns the image at columns × rows pixels. Pixels of a coarse picture
// are k times as wide and share the bottom left corner with the fine ones; the
// last ones may reach over the right and upper edge.
func fit(coarse *image.RGBA, k, columns, rows int) *image.RGBA {
	if k == 1 {
		return coarse
	}
	size := coarse.Bounds().Size().Mul(k)
	out := image.NewRGBA(image.Rect(0, 0, columns, rows))
	draw.ApproxBiLinear.Scale(out, image.Rect(0, rows-size.Y, size.X, rows), coarse, coarse.Bounds(), draw.Src, nil)
	return out
}
