package raytrace

import (
	"cmp"
	"image"
	"slices"
)

// tilesOutward cuts a field into tiles of the given side and orders them
// from the middle outwards, so that an early preview shows the hole.
func tilesOutward(columns, rows, side int) []image.Rectangle {
	var tiles []image.Rectangle
	for y := 0; y < rows; y += side {
		for x := 0; x < columns; x += side {
			tiles = append(tiles, image.Rect(x, y, min(x+side, columns), min(y+side, rows)))
		}
	}
	// twice the distance from the middle, to stay in whole numbers
	far := func(t image.Rectangle) int {
		dx, dy := t.Min.X+t.Max.X-columns, t.Min.Y+t.Max.Y-rows
		return dx*dx + dy*dy
	}
	slices.SortStableFunc(tiles, func(a, b image.Rectangle) int { return cmp.Compare(far(a), far(b)) })
	return tiles
}
