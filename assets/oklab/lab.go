package oklab

import "math"

// RGB holds the linear-light components of a colour in the sRGB primaries.
type RGB struct{ R, G, B float64 }

// Inside reports whether a display can show the colour: all three components
// are in [0, 1].
func (c RGB) Inside() bool {
	in := func(v float64) bool { return v >= 0 && v <= 1 }
	return in(c.R) && in(c.G) && in(c.B)
}

// Lab is a colour in OKLab: lightness L, then a and b.
type Lab struct{ L, A, B float64 }

// FromHue returns the colour of the given lightness, chroma and hue (rad).
func FromHue(lightness, chroma, hue float64) Lab {
	return Lab{lightness, chroma * math.Cos(hue), chroma * math.Sin(hue)}
}

// Distance returns ΔE, the Euclidean distance in OKLab.
func (c Lab) Distance(d Lab) float64 {
	return math.Sqrt((c.L-d.L)*(c.L-d.L) + (c.A-d.A)*(c.A-d.A) + (c.B-d.B)*(c.B-d.B))
}

// The two matrices each way, as Ottosson prints them: M1 takes linear sRGB to
// the responses of the cones, M2 the cube roots of those to Lab.
var (
	conesFromRGB = matrix{
		{0.4122214708, 0.5363325363, 0.0514459929},
		{0.2119034982, 0.6806995451, 0.1073969566},
		{0.0883024619, 0.2817188376, 0.6299787005},
	}
	labFromRoots = matrix{
		{0.2104542553, 0.7936177850, -0.0040720468},
		{1.9779984951, -2.4285922050, 0.4505937099},
		{0.0259040371, 0.7827717662, -0.8086757660},
	}
	rootsFromLab = matrix{
		{1, 0.3963377774, 0.2158037573},
		{1, -0.1055613458, -0.0638541728},
		{1, -0.0894841775, -1.2914855480},
	}
	rgbFromCones = matrix{
		{4.0767416621, -3.3077115913, 0.2309699292},
		{-1.2684380046, 2.6097574011, -0.3413193965},
		{-0.0041960863, -0.7034186147, 1.7076147010},
	}
)

type matrix [3][3]float64

func (m matrix) apply(x, y, z float64) (float64, float64, float64) {
	return m[0][0]*x + m[0][1]*y + m[0][2]*z,
		m[1][0]*x + m[1][1]*y + m[1][2]*z,
		m[2][0]*x + m[2][1]*y + m[2][2]*z
}

// Lab returns the colour in OKLab.
func (c RGB) Lab() Lab {
	l, m, s := conesFromRGB.apply(c.R, c.G, c.B)
	light, a, b := labFromRoots.apply(math.Cbrt(l), math.Cbrt(m), math.Cbrt(s))
	return Lab{light, a, b}
}

// RGB returns the colour in linear light; components outside [0, 1] mean that
// no sRGB display can show it.
func (c Lab) RGB() RGB {
	l, m, s := rootsFromLab.apply(c.L, c.A, c.B)
	red, green, blue := rgbFromCones.apply(l*l*l, m*m*m, s*s*s)
	return RGB{red, green, blue}
}
