// Package overlay draws what may lie over the image: the critical curve, the
// images of rims, contours, a scale bar, north and east, and the beam. It
// imports no window toolkit.
//
// Line styles tell the curves apart, not colours: the critical curve is
// dash-dotted, rims of order 0 are solid, of order 1 dashed, of higher orders
// dotted.
package overlay
