// Package oklab measures colours as the eye does: the sRGB transfer
// function and the OKLab space, in which equal distances are meant to look
// equally different.
//
// Conventions: linear and encoded sRGB components run over [0, 1] with the
// white point D65; L runs from 0 (black) to 1 (white); a grows towards red, b
// towards yellow; hues are in radians from +a towards +b.
//
// Sources: IEC 61966-2-1:1999 for sRGB; B. Ottosson, "A perceptual color
// space for image processing" (2020), with the matrices of its 2021 revision,
// for OKLab. The digits of both are from memory; the tests check that white
// is (1, 0, 0), that both directions agree and that the inverse is one.
package oklab
