// Package measure reads numbers off plates and paths.
//
// Lengths are in M and angles in radians; image orders as in package
// geodesic. Fluxes are integrals of the intensity over the screen, in M² of
// its unit on a parallel field, in sr on an angular one.
//
// What is known of whole images of disks and spots (NewRings, NewLine,
// NewSpectrum, LightCurve) is integrated on patches between circles of the
// disk and screen angles, so that every image order is resolved, whatever the
// field and its pixels. What is known of an Image (Estimate, Visibility,
// Blurred) is read off its pixels. Every bound is of the numbers, not of the
// model: it is what a grid twice as coarse changes, or a fit of lower degree.
//
// What has no answer is an error that wraps ErrCannot and says why.
package measure
