package oklab

import "math"

// The sRGB transfer function: a straight toe, then a power law.
// Source: IEC 61966-2-1:1999, section 5.2.
const (
	toeSlope   = 12.92
	toeLinear  = 0.0031308 // end of the toe, linear light
	toeEncoded = 0.04045   // end of the toe, encoded
	powOffset  = 0.055
	powGamma   = 2.4
)

// Encode returns the sRGB code value in [0, 1] of linear light in [0, 1].
func Encode(linear float64) float64 {
	if linear <= toeLinear {
		return toeSlope * linear
	}
	return (1+powOffset)*math.Pow(linear, 1/powGamma) - powOffset
}

// Decode returns the linear light in [0, 1] of an sRGB code value in [0, 1].
func Decode(encoded float64) float64 {
	if encoded <= toeEncoded {
		return encoded / toeSlope
	}
	return math.Pow((encoded+powOffset)/(1+powOffset), powGamma)
}
