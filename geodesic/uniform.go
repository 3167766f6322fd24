package geodesic

import "math"

// uniform is the inside of a star of constant density: Schwarzschild,
// Sitzungsber. Preuss. Akad. Wiss. 424 (1916), from memory:
//
//	√-g_tt = (3s - √h)/2,  g_rr = 1/h,  h = 1 - r²/a²,  s = √(1 - 2/R),  a² = R³/2.
//
// In isotropic coordinates, q ∝ tan(χ/2) with r = a sin χ, light sees the
// refractive index n ∝ 1/(1 + q²), Maxwell's fish-eye, so that its paths are
// circles, 1/q - q = 2 √(B²/b² - 1) cos φ with B = 2a/√(9s² - 1), and angle,
// radius and time are elementary. Source for the fish-eye: Born & Wolf,
// Principles of Optics, section 4.2.2, from memory; TestUniformInterior
// integrates the metric instead.
type uniform struct {
	a, s float64
	big  float64 // B, the largest b that has a turning point inside, M
	unit float64 // q = tan(χ/2)/unit
	edge float64 // q at the surface
}

func newUniform(r float64) *uniform {
	s := math.Sqrt(1 - 2/r)
	u := &uniform{a: math.Sqrt(r * r * r / 2), s: s}
	u.big = 2 * u.a / math.Sqrt(9*s*s-1)
	u.unit = math.Sqrt((3*s - 1) / (3*s + 1))
	u.edge = math.Sqrt((1-s)/(1+s)) / u.unit
	return u
}

// legs returns the sides of the right angle whose angle is the phase at r,
// √(B²/b² - 1) sin φ, taken from w so that it keeps its digits where it
// vanishes, and √(B²/b² - 1) cos φ.
func (f *uniform) legs(r, w float64) (sin, cos float64) {
	x := r / f.a
	q := x / (1 + math.Sqrt(1-x*x)) / f.unit
	return f.big * f.Lapse(r) * f.Ruler(r) * w, (1/q - q) / 2
}

func (f *uniform) Phase(b, r, w float64) float64 { return math.Atan2(f.legs(r, w)) }

func (f *uniform) PhaseSlope(b, r, w float64) float64 {
	sin, cos := f.legs(r, w)
	ratio := f.big / b
	return -cos * ratio * ratio / (b * (ratio*ratio - 1) * sin)
}

func (f *uniform) Radius(b, phi float64) float64 {
	d := math.Sqrt(max(f.big*f.big/(b*b)-1, 0)) * math.Cos(phi)
	q := math.Sqrt(d*d+1) - d // 1/q - q = 2d
	if d > 0 {
		q = 1 / (math.Sqrt(d*d+1) + d)
	}
	tan := q * f.unit
	return f.a * 2 * tan / (1 + tan*tan)
}

func (f *uniform) Time(b, phi float64) float64 {
	sin, cos := math.Sincos(phi)
	return f.big * math.Atan2(b*sin, f.big*cos)
}

func (f *uniform) TimeTo(b, r, w float64) float64 {
	sin, cos := f.legs(r, w)
	return f.big * math.Atan2(b*sin, f.big*cos)
}

func (f *uniform) Lapse(r float64) float64 {
	return (3*f.s - math.Sqrt(1-r*r/(f.a*f.a))) / 2
}

func (f *uniform) Ruler(r float64) float64 { return 1 / math.Sqrt(1-r*r/(f.a*f.a)) }

func (f *uniform) TortoiseBelow(r float64) float64 {
	x := r / f.a
	tan := x / (1 + math.Sqrt(1-x*x)) // tan(χ/2)
	return 2 * f.big * (math.Atan(f.edge) - math.Atan(tan/f.unit))
}
