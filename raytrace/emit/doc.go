// Package emit holds what shines, one file an emitter: it turns crossings
// into the light that the observer receives.
//
// Intensities are specific, bolometric or of a line. Most are relative: on a
// disk to the emitted intensity at r = 1 M in the gas frame, or in the unit of
// its table; on a star to that of the surface around its caps or, if it is
// dark there, of the hottest cap; on the sky to white of an image or grid, or
// to the mean brightness of a star field. Blackbodies and disks scaled to a
// total flux shine in W m⁻² Hz⁻¹ sr⁻¹, accretion disks of known rate and all
// light in W m⁻² sr⁻¹. Between gas and observer specific intensity changes by
// g³, bolometric by g⁴ (Liouville's theorem for I_ν/ν³), the energy of a
// narrow line by g⁴ and its photons by g³. A cosmological redshift z is one
// more factor 1/(1+z) for intensities, which Light.G does not hold.
//
// Emission angles μ are those in the gas frame; every angle law sends out the
// same flux. Not included: returning radiation, scattering, the thickness of
// disks.
package emit
