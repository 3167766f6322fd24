package geodesic

import "math"

// SinCosDeg returns sine and cosine of an angle in degrees, exact at the
// multiples of 90.
func SinCosDeg(deg float64) (sin, cos float64) {
	switch math.Mod(math.Abs(deg), 360) {
	case 0:
		return 0, 1
	case 90:
		return math.Copysign(1, deg), 0
	case 180:
		return 0, -1
	case 270:
		return math.Copysign(1, -deg), 0
	}
	return math.Sincos(deg * math.Pi / 180)
}

// FirstPlaneAngle returns ψ_0, the swept angle at which a path with screen
// angle s first meets the disk plane; the later ones follow at steps of π.
// At an inclination of exactly 90 deg that is π for every s. The relation
// is that of Luminet, A&A 75, 228 (1979), from memory.
func FirstPlaneAngle(sinI, cosI, sinS float64) float64 {
	if cosI == 0 {
		return math.Pi
	}
	return math.Pi/2 + math.Atan(sinI/cosI*sinS)
}

// PlaneAzimuth returns the azimuth φ, relative to the observer's, of a path
// with screen angle s after sweeping psi; radians in (-π, π].
func PlaneAzimuth(sinI, cosI, cosS, sinS, psi float64) float64 {
	sinPsi, cosPsi := math.Sincos(psi)
	return math.Atan2(sinPsi*cosS, cosPsi*sinI-sinPsi*sinS*cosI)
}

// wrapped brings an angle into (-π, π].
func wrapped(phi float64) float64 {
	if phi > -math.Pi && phi <= math.Pi {
		return phi
	}
	phi = math.Remainder(phi, 2*math.Pi)
	if phi <= -math.Pi {
		phi = math.Pi
	}
	return phi
}
