// Package ink draws lines and words on pixels: what lies over the image, and
// graphs. It imports no window toolkit.
//
// Coordinates are in pixels from the top left corner, y downwards; the middle
// of the first pixel is at 0.5, 0.5.
package ink
