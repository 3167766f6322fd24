package raytrace

import (
	"image"
	"math"

	"annulet/geodesic"
)

// Field is the part of the sky that is imaged, in square pixels.
//
// On a parallel field the screen coordinates α, β are in M. A perspective
// field is the gnomonic projection on the plane that touches the unit sphere
// in the direction of the centre: α, β are coordinates in that plane, in
// radians there (a direction at angle a from the centre lies at tan a).
type Field struct {
	Parallel      bool       // else perspective
	Width         float64    // of the whole field on the screen: M, or radians
	Center        [2]float64 // α, β of its middle
	Columns, Rows int
}

// Pitch returns the side of a pixel in screen coordinates.
func (f Field) Pitch() float64 { return f.Width / float64(f.Columns) }

// PixelCenter returns the screen coordinates of the centre of a pixel; row 0
// is the bottom row.
func (f Field) PixelCenter(column, row int) (alpha, beta float64) {
	pitch := f.Pitch()
	alpha = f.Center[0] + (float64(column)+0.5-float64(f.Columns)/2)*pitch
	beta = f.Center[1] + (float64(row)+0.5-float64(f.Rows)/2)*pitch
	return alpha, beta
}

// direction turns screen coordinates into a line of sight.
func (f Field) direction(alpha, beta float64) geodesic.Direction {
	if f.Parallel {
		return geodesic.Direction{Alpha: alpha, Beta: beta}
	}
	ahead := 1 / math.Sqrt(1+alpha*alpha+beta*beta)
	return geodesic.Direction{Alpha: alpha * ahead, Beta: beta * ahead, Ahead: ahead}
}

// aimTile appends the lines of sight of a tile's pixel centres, row by row.
func (f Field) aimTile(tile image.Rectangle, dirs []geodesic.Direction) []geodesic.Direction {
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		for column := tile.Min.X; column < tile.Max.X; column++ {
			dirs = append(dirs, f.direction(f.PixelCenter(column, row)))
		}
	}
	return dirs
}

// coarsened is the same field in pixels k times as wide, anchored at the
// bottom left corner; a last column or row may reach over the edge.
func (f Field) coarsened(k int) Field {
	pitch := f.Pitch()
	columns, rows := (f.Columns+k-1)/k, (f.Rows+k-1)/k
	f.Center[0] += float64(columns*k-f.Columns) * pitch / 2
	f.Center[1] += float64(rows*k-f.Rows) * pitch / 2
	f.Width = float64(columns*k) * pitch
	f.Columns, f.Rows = columns, rows
	return f
}
