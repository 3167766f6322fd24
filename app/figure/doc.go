// Package figure draws figures for papers.
//
// A drawing is made once, on a sheet in millimetres from the upper left
// corner, and then written by any of four backends: PDF and SVG, where lines
// are lines, text is text in an embedded font and a picture is one image; PNG
// and TIFF at a chosen resolution. The same drawing gives the same bytes.
//
// Axes: where the scene tells what M is on the sky, offsets in µas with east
// to the left, and M on the opposite sides; else M, or degrees.
package figure
