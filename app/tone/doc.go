// Package tone turns one layer of a plate, float32 values with a unit, into a
// picture: limits, then a curve, then a colour map.
//
// A value v becomes a position x in [0, 1] of the map: 0 at the low limit, 1
// at the high one, clamped beyond them. The curve says how x moves between:
// in proportion to v (linear), to its square root above the low limit, or to
// its logarithm.
//
// Row 0 of a layer is the BOTTOM row of the picture; row 0 of an image.Image
// is the top. The flip happens here and nowhere else.
//
// Limits follow from the values and the Tone alone: same layer, same picture.
package tone
