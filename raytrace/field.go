package raytrace

import (
	"image"
	"math"

	"annulet/geodesic"
)

// Projection says what the screen coordinates of a field are.
type Projection uint8

// The projections.
const (
	// Parallel: α, β are the components of L/E, in M.
	Parallel Projection = iota
	// Perspective is the gnomonic projection on the plane that touches the
	// unit sphere in the direction of the centre: α, β are coordinates in
	// that plane, in radians there (a direction at angle a from the centre
	// lies at tan a).
	Perspective
	// AllSky is equirectangular and holds every direction: α is the
	// longitude to the right and β the latitude up, in radians, with the
	// centre ahead. It covers 2π by π whatever Width and Center say, and its
	// pixels are square if there are twice as many columns as rows.
	AllSky
)

// Field is the part of the sky that is imaged.
type Field struct {
	Projection    Projection
	Width         float64    // of the whole field on the screen: M, or radians
	Center        [2]float64 // α, β of its middle
	Columns, Rows int
}

// IsParallel reports whether screen coordinates are lengths, in M; else they
// are angles, in radians.
func (f Field) IsParallel() bool { return f.Projection == Parallel }

// Pitch returns the width of a pixel in screen coordinates; pixels are
// square but for an all-sky field with another number of rows than half its
// columns.
func (f Field) Pitch() float64 {
	across, _ := f.Pitches()
	return across
}

// Pitches returns the width and height of a pixel in screen coordinates.
func (f Field) Pitches() (across, up float64) {
	if f.Projection == AllSky {
		return 2 * math.Pi / float64(f.Columns), math.Pi / float64(f.Rows)
	}
	pitch := f.Width / float64(f.Columns)
	return pitch, pitch
}

// PixelCenter returns the screen coordinates of the centre of a pixel; row 0
// is the bottom row.
func (f Field) PixelCenter(column, row int) (alpha, beta float64) {
	across, up := f.Pitches()
	alpha = (float64(column) + 0.5 - float64(f.Columns)/2) * across
	beta = (float64(row) + 0.5 - float64(f.Rows)/2) * up
	if f.Projection == AllSky {
		return alpha, beta
	}
	return f.Center[0] + alpha, f.Center[1] + beta
}

// SolidAngle returns the exact solid angle of a pixel, sr; on a parallel
// field its area, M².
func (f Field) SolidAngle(column, row int) float64 {
	across, up := f.Pitches()
	x, y := f.PixelCenter(column, row)
	switch f.Projection {
	case Parallel:
		return across * up
	case AllSky: // Δλ (sin β₂ - sin β₁)
		return across * 2 * math.Cos(y) * math.Sin(up/2)
	}
	left, right, bottom, top := x-across/2, x+across/2, y-up/2, y+up/2
	return tangentTriangle(across*up, left, bottom, right, bottom, right, top) +
		tangentTriangle(across*up, left, bottom, right, top, left, top)
}

// tangentTriangle is the solid angle of a triangle in the plane that touches
// the unit sphere, triple being twice its area; without cancellation for
// small ones: Van Oosterom & Strackee, IEEE Trans. Biomed. Eng. 30, 125
// (1983), from memory.
func tangentTriangle(triple, ax, ay, bx, by, cx, cy float64) float64 {
	a := math.Sqrt(1 + ax*ax + ay*ay)
	b := math.Sqrt(1 + bx*bx + by*by)
	c := math.Sqrt(1 + cx*cx + cy*cy)
	dot := func(px, py, qx, qy float64) float64 { return 1 + px*qx + py*qy }
	return 2 * math.Atan2(triple, a*b*c+dot(ax, ay, bx, by)*c+dot(ax, ay, cx, cy)*b+dot(bx, by, cx, cy)*a)
}

// direction turns screen coordinates into a line of sight.
func (f Field) direction(alpha, beta float64) geodesic.Direction {
	switch f.Projection {
	case Parallel:
		return geodesic.Direction{Alpha: alpha, Beta: beta}
	case AllSky:
		sinA, cosA := math.Sincos(alpha)
		sinB, cosB := math.Sincos(beta)
		return geodesic.Direction{Alpha: sinA * cosB, Beta: sinB, Ahead: cosA * cosB}
	}
	ahead := 1 / math.Sqrt(1+alpha*alpha+beta*beta)
	return geodesic.Direction{Alpha: alpha * ahead, Beta: beta * ahead, Ahead: ahead}
}

// tileCenters appends the screen coordinates of a tile's pixel centres, row
// by row.
func (f *Field) tileCenters(tile image.Rectangle, at [][2]float64) [][2]float64 {
	first := len(at)
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		_, beta := f.PixelCenter(0, row)
		for column := tile.Min.X; column < tile.Max.X; column++ {
			at = append(at, [2]float64{0, beta})
		}
	}
	columns := tile.Dx()
	for k := range columns { // every row has the same α
		alpha, _ := f.PixelCenter(tile.Min.X+k, 0)
		for i := first + k; i < len(at); i += columns {
			at[i][0] = alpha
		}
	}
	return at
}

// directions appends the lines of sight of screen coordinates.
func (f *Field) directions(screen [][2]float64, to []geodesic.Direction) []geodesic.Direction {
	if f.Projection == Parallel {
		for _, p := range screen {
			to = append(to, geodesic.Direction{Alpha: p[0], Beta: p[1]})
		}
		return to
	}
	for _, p := range screen {
		to = append(to, f.direction(p[0], p[1]))
	}
	return to
}

// coarsened is the same field in pixels k times as wide, anchored at the
// bottom left corner; a last column or row may reach over the edge. An
// all-sky field stays the whole sky, in fewer pixels.
func (f Field) coarsened(k int) Field {
	pitch := f.Pitch()
	columns, rows := (f.Columns+k-1)/k, (f.Rows+k-1)/k
	if f.Projection != AllSky {
		f.Center[0] += float64(columns*k-f.Columns) * pitch / 2
		f.Center[1] += float64(rows*k-f.Rows) * pitch / 2
		f.Width = float64(columns*k) * pitch
	}
	f.Columns, f.Rows = columns, rows
	return f
}
