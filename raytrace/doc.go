// Package raytrace turns a scene into an image: field -> paths -> crossings
// -> plate, in tiles, by any number of workers, with the same result bit for
// bit.
//
// Rays travel in blocks; an interface is called once a block, and the inner
// loops are those of geodesic and emit. Screen coordinates alpha, beta are
// as in package geodesic. Row 0 of every layer is the bottom row; pixel
// centres are at (k + 1/2).
package raytrace
