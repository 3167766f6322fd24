// Package emit holds what shines, one file an emitter: it turns crossings
// into the light that the observer receives.
//
// Intensities are specific or bolometric, relative to the emitted intensity
// at r = 1 M in the gas frame. Between gas and observer specific intensity
// changes by g³, bolometric by g⁴ (Liouville's theorem for I_ν/ν³).
package emit
