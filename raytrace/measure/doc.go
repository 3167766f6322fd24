// Package measure reads numbers off plates and paths.
//
// Lengths are in M and angles in radians; image orders as in package
// geodesic.
package measure
