// Package curves tells where lines lie that are drawn over an image: the
// critical curve, the images of rims, and lines of equal value. The window's
// overlay and the figures draw the same ones. Places are screen coordinates
// of the image's field, see raytrace.Field.
package curves
