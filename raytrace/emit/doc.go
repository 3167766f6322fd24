// Package emit holds what shines, one file an emitter: it turns crossings
// into the light that the observer receives.
//
// Intensities are specific or bolometric and relative: on a disk to the
// emitted intensity at r = 1 M in the gas frame, on a star to that of the
// surface around its caps or, if it is dark there, of the hottest cap; on the
// sky to white of an image or grid, or to the mean brightness of a star
// field. Between gas and observer specific intensity changes by g³,
// bolometric by g⁴ (Liouville's theorem for I_ν/ν³).
package emit
