package emit

import "math"

// AngleLaw is how intensity depends on the cosine mu of the emission angle in
// the gas frame. Every law sends out the same flux, ∫ I μ dμ = 1/2.
type AngleLaw uint8

// The laws.
const (
	Isotropic AngleLaw = iota
	// Darkened towards the limb, I ∝ 1 + 2.06 μ: an atmosphere of free
	// electrons. Chandrasekhar, Radiative Transfer (1950), from memory.
	Darkened
	// Brightened towards the limb, I ∝ ln(1 + 1/μ): a thin layer of hot
	// scatterers above; as used for disks by Haardt, ApJ 413, 680 (1993),
	// from memory.
	Brightened
)

const (
	darkening = 2.06
	// leastMu keeps the logarithm finite along the surface.
	leastMu = 1e-12
)

// Intensity returns I(mu) relative to that of an isotropic emitter of the
// same flux.
func (l AngleLaw) Intensity(mu float64) float64 {
	switch l {
	case Darkened:
		return (1 + darkening*mu) / (1 + darkening*2/3)
	case Brightened:
		return math.Log1p(1 / max(mu, leastMu))
	}
	return 1
}
