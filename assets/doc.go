// Package assets holds what Annulet brings along for the eye: colour maps of
// its own and its icon.
//
// Every map is a curve through OKLab cut into steps of equal ΔE, so equal
// differences of a value look equally different wherever they lie, and its
// lightness is monotone (on either side of the centre for a diverging map),
// so that it survives grey printing and the common colour-vision
// deficiencies. Colours are sRGB (IEC 61966-2-1), opaque.
//
// The tables are written by mapgen, the icon by icongen; both run through
// go generate. Icongen embeds the icon it replaces, so icon.png must be there.
package assets

//go:generate go run ./mapgen tables.go
//go:generate go run ./icongen icon.svg icon.png
