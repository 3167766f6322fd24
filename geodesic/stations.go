package geodesic

import "math"

// Station is a place with a static clock and ruler, and what can be said of
// it in closed form. Speeds are those of neutral test bodies in the static
// frame, in units of c; angles are in radians. What does not exist is NaN:
// nothing rests on or inside a horizon, and an opaque star says nothing of
// its inside. On the edge of a star or shell the outside's values hold.
//
// Bodies and light pass freely through a shell and a uniform star.
type Station struct {
	R            float64 // M
	ClockRate    float64 // √-g_tt
	RulerStretch float64 // √g_rr, proper over areal radial distance

	// OrbitSpeed is that of a circular geodesic, none within the photon
	// sphere and within a shell. InfallSpeed is that of a fall from rest at
	// infinity, √(1 - ClockRate²) as energy is conserved.
	OrbitSpeed, InfallSpeed float64

	// EscapeCone is the half angle, about the outward direction, of the cone
	// within which light reaches infinity; π if all does. Between the inside
	// of a transparent object smaller than its photon sphere and that sphere
	// light with b < b_c escapes outward or straight through the object, so
	// that the cone and its mirror image (EscapeMirrored) are open and a
	// belt across is trapped. EscapeFraction is the share of the sphere.
	EscapeCone     float64
	EscapeMirrored bool
	EscapeFraction float64

	// The angular radius of the disk that no light from infinity fills:
	// the shadow of a hole, or an opaque star's own disk, seen at rest, from
	// the circular geodesic, and in the fall from rest at infinity, this
	// also within a horizon (a charged hole's down to the inner one).
	// ShadowCentre is how far an orbit shifts the middle of its disk towards
	// the motion. Transparent objects have none.
	ShadowStatic, ShadowOrbit, ShadowCentre, ShadowInfall float64
}

// Pair is what two stations are to each other along one radius.
type Pair struct {
	// FrequencyRatio is a frequency received over the one sent, of radial
	// light, and FrequencyShift the same less 1, without cancellation. Light
	// for a larger radius goes outward, for a smaller one inward.
	FrequencyRatio, FrequencyShift float64

	// ProperDistance, M, between the areal radii at one static time, and its
	// excess over their difference; NaN if one is infinite.
	ProperDistance, ExcessRadius float64

	// LightTime is the coordinate time of radial light, M, |Δr*|; NaN if
	// infinite.
	LightTime float64
}

// edgeRounding is how near to the edge, relatively, a radius counts as on it:
// a few roundings of r and 1/r.
const edgeRounding = 1e-15

// place is where a radius lies.
type place int

const (
	nowhere place = iota // on or in a horizon, in an opaque star, no radius
	outside              // on the edge of a star or shell, or beyond the edge
	within               // in an object that light passes
)

func (s *Round) hasHorizon() bool { return s.inside == nil && s.end == Captured }

func (s *Round) onEdge(r float64) bool { return math.Abs(r*s.edge-1) <= edgeRounding }

func (s *Round) place(r float64) place {
	switch {
	case !(r >= 0):
		return nowhere
	case s.onEdge(r):
		if s.hasHorizon() {
			return nowhere
		}
		return outside
	case r*s.edge > 1:
		return outside
	case s.inside != nil:
		return within
	}
	return nowhere
}

// room is what stations ask of an interior; r1 <= r2 <= edge, M.
type room interface {
	depth(r float64) float64         // 1 - N²
	rise(r1, r2 float64) float64     // N²(r2) - N²(r1)
	orbitSpeed2(r float64) float64   // of a circular geodesic, NaN for none
	between(r1, r2 float64) interval // along a radius
}

// interval is a piece of a radius.
type interval struct{ radius, excess, time float64 }

func (i interval) plus(j interval) interval {
	return interval{i.radius + j.radius, i.excess + j.excess, i.time + j.time}
}

var _, _ room = (*flat)(nil), (*uniform)(nil)

func (s *Round) room() room { return s.inside.(room) }

// delta is r²A = r² - 2r + Q² at finite r outside, with the digits it has
// next to the horizon; 0 there.
func (s *Round) delta(r float64) float64 {
	if s.hasHorizon() && s.onEdge(r) {
		return 0
	}
	return max(math.FMA(r, r-2, s.charge2), 0)
}

// stationLapse is Lapse with delta taken exactly near the edge; NaN where
// nothing can stand.
func (s *Round) stationLapse(r float64) float64 {
	switch s.place(r) {
	case outside:
		if math.IsInf(r, 1) {
			return 1
		}
		return math.Sqrt(s.delta(r)) / r
	case within:
		return s.inside.Lapse(r)
	}
	return math.NaN()
}

// depth is 1 - N², the squared speed of the fall from rest at infinity.
func (s *Round) depth(r float64) float64 {
	if s.place(r) == within {
		return s.room().depth(r)
	}
	u := 1 / r
	return u * (2 - s.charge2*u)
}

// fallSpeed is the speed of the fall from rest at infinity, within a horizon
// that of the falling observer against r: E = ν (1 - β cos a) there too.
func (s *Round) fallSpeed(r float64) float64 {
	if s.place(r) == nowhere {
		inner := s.charge2 * s.edge // r₋ = Q²/r₊
		if !(s.hasHorizon() && r > inner) {
			return math.NaN()
		}
	}
	return math.Sqrt(s.depth(r))
}

// orbit is the speed of a circular geodesic and its Lorentz factor.
func (s *Round) orbit(r float64) (v, gamma float64) {
	v, gamma = math.NaN(), math.NaN()
	switch p := s.PhotonSphere(); s.place(r) {
	case outside:
		if math.IsInf(r, 1) {
			return 0, 1
		}
		if r > p {
			d := s.delta(r)
			v = math.Sqrt((r - s.charge2) / d)
			// 1 - v² = (r² - 3r + 2Q²)/Δ, in factors
			gamma = math.Sqrt(d / ((r - p) * (r - 2*s.charge2/p)))
		}
	case within:
		if v2 := s.room().orbitSpeed2(r); v2 < 1 {
			v, gamma = math.Sqrt(v2), 1/math.Sqrt(1-v2)
		}
	}
	return v, gamma
}

// rim returns the impact parameter b of the edge of the dark disk of a hole
// or opaque star, and √(r² - b²A) at finite r, negative where the disk covers
// more than half the static sky.
//
// A star larger than its photon sphere is grazed with b = R/√A(R), all else
// covers b < b_c. With r_p the photon sphere, in factors:
//
//	r² - b_c²A = (r - r_p)² (r² + 2 r_p r - b_c² Q²/r_p²)/r²
//	r² - b²A   = (r - R) ((R-2)r² + R(R-2)r - 2R²)/(r ),  Q = 0
//
// the first for Q = 0 after Synge, MNRAS 131, 463 (1966), from memory.
func (s *Round) rim(r float64) (b, ahead float64) {
	p, edge := s.PhotonSphere(), s.Edge()
	if !s.hasHorizon() && edge > p {
		square := (r - edge) * ((edge-2)*r*(r+edge) - 2*edge*edge) / (r * (edge - 2))
		return edge * math.Sqrt(edge/(edge-2)), math.Sqrt(max(square, 0))
	}
	b = s.CriticalImpact()
	q := b * b * s.charge2 / (p * p)
	return b, (r - p) * math.Sqrt(r*(r+2*p)-q) / r
}

// Station returns the station at radius r, M; +Inf at infinity, 0 at the
// centre.
func (s *Round) Station(r float64) Station {
	none := math.NaN()
	at := Station{
		R: r, ClockRate: s.stationLapse(r),
		RulerStretch: none, OrbitSpeed: none, InfallSpeed: none,
		EscapeCone: none, EscapeFraction: none,
		ShadowStatic: none, ShadowOrbit: none, ShadowCentre: none, ShadowInfall: none,
	}
	where := s.place(r)
	switch where {
	case within:
		at.RulerStretch = s.inside.Ruler(r)
	case outside:
		at.RulerStretch = 1 / at.ClockRate
	}
	var gamma float64
	at.OrbitSpeed, gamma = s.orbit(r)
	beta := s.fallSpeed(r)
	if where != nowhere {
		at.InfallSpeed = beta
	}
	switch {
	case s.inside != nil && where != nowhere:
		s.escapeThrough(&at)
	case math.IsInf(r, 1):
		at.EscapeCone, at.EscapeFraction = math.Pi, 1
		at.ShadowStatic, at.ShadowOrbit, at.ShadowCentre, at.ShadowInfall = 0, 0, 0, 0
	case s.inside == nil && !math.IsNaN(beta):
		s.dark(&at, beta, gamma)
	}
	return at
}

// dark fills in what a dark disk means at a finite radius.
func (s *Round) dark(at *Station, beta, gamma float64) {
	r := at.R
	b, ahead := s.rim(r)
	// r sin a = b (1 - β cos a) in the falling frame, solved for a
	at.ShadowInfall = math.Atan2(b, ahead) - math.Atan2(b*beta, r)
	if math.IsNaN(at.ClockRate) {
		return
	}
	across := b * at.ClockRate // of r sin a at rest
	at.ShadowStatic = math.Atan2(across, ahead)
	at.EscapeCone = math.Atan2(across, -ahead)
	at.EscapeFraction = halfSine2(at.EscapeCone)
	if v := at.OrbitSpeed; !math.IsNaN(v) {
		// tan a' = tan a/γ, and the axis of the cone turns by
		// atan(γ v cos a): Penrose, Proc. Camb. Phil. Soc. 55, 137 (1959),
		// for the circle staying one, from memory
		at.ShadowOrbit = math.Atan2(across, gamma*ahead)
		at.ShadowCentre = math.Atan(gamma * v * ahead / r)
	}
}

// escapeThrough fills in the escape cone about an object that light passes.
func (s *Round) escapeThrough(at *Station) {
	at.EscapeCone, at.EscapeFraction = math.Pi, 1
	p := s.PhotonSphere()
	if s.Edge() >= p || at.R >= p {
		return // what turns does so outside the barrier
	}
	across := s.CriticalImpact() * at.ClockRate // r sin a of b_c
	var along float64
	if s.place(at.R) == outside {
		_, ahead := s.rim(at.R) // keeps its digits next to the photon sphere
		along = -ahead
	} else if across < at.R {
		along = math.Sqrt((at.R - across) * (at.R + across))
	} else {
		return // no light here has b > b_c
	}
	at.EscapeCone = math.Atan2(across, along)
	at.EscapeMirrored = true
	at.EscapeFraction = 2 * halfSine2(at.EscapeCone)
}

// halfSine2 is (1 - cos a)/2, the share of the sphere in a cone.
func halfSine2(a float64) float64 {
	sin := math.Sin(a / 2)
	return sin * sin
}

// Pair returns what a station at radius from is to one at radius to, M, where
// the sender and the receiver of the light move as said, along circles or
// inward from rest at infinity. Light that falls inward reaches a falling
// receiver within a horizon too.
func (s *Round) Pair(from, to float64, sender, receiver Motion) Pair {
	var p Pair
	p.FrequencyRatio, p.FrequencyShift = s.frequency(from, to, sender, receiver)
	span := s.between(min(from, to), max(from, to))
	p.ProperDistance, p.ExcessRadius, p.LightTime = span.radius+span.excess, span.excess, span.time
	return p
}

// frequency returns ν_to/ν_from and the same less 1. Radial light of energy
// E has, in the frames named,
//
//	static ν = E/N,  orbit ν = γE/N,
//	infall ν = E/(1 + β) if it goes inward, E (1 + β)/N² outward.
//
// At one radius light has no direction, so a fall meets only its like.
func (s *Round) frequency(from, to float64, sender, receiver Motion) (ratio, shift float64) {
	if from == to && sender != receiver && (sender == Infall || receiver == Infall) {
		return math.NaN(), math.NaN()
	}
	sent, logSent := s.perEnergy(from, sender, to > from)
	got, logGot := s.perEnergy(to, receiver, to > from)
	ratio = got / sent
	if sender != Static || receiver != Static || math.IsNaN(ratio) {
		return ratio, math.Expm1(logGot - logSent)
	}
	rise := s.rise(min(from, to), max(from, to)) // of N²
	if from < to {
		rise = -rise
	}
	n := s.stationLapse(to)
	return ratio, rise / (n * n * (1 + ratio))
}

// perEnergy is ν/E of radial light and its logarithm; NaN where nobody moves
// so.
func (s *Round) perEnergy(r float64, m Motion, outward bool) (x, log float64) {
	n := s.stationLapse(r)
	logLapse := math.Log(n)
	if d := s.depth(r); d < 0.5 && s.place(r) != nowhere {
		logLapse = math.Log1p(-d) / 2
	}
	switch m {
	case Static:
		return 1 / n, -logLapse
	case Orbit:
		v, gamma := s.orbit(r)
		return gamma / n, -math.Log1p(-v*v)/2 - logLapse
	case Infall:
		beta := s.fallSpeed(r)
		if outward {
			return (1 + beta) / (n * n), math.Log1p(beta) - 2*logLapse
		}
		return 1 / (1 + beta), -math.Log1p(beta)
	}
	return math.NaN(), math.NaN()
}

// rise is N²(r2) - N²(r1) of two stations, r1 <= r2, without cancellation.
func (s *Round) rise(r1, r2 float64) float64 {
	if s.place(r1) == within {
		edge := s.Edge()
		if s.place(r2) == within {
			return s.room().rise(r1, r2)
		}
		return s.room().rise(r1, edge) + s.rise(edge, r2)
	}
	if math.IsInf(r2, 1) {
		return s.depth(r1)
	}
	return (r2 - r1) / r1 / r2 * (2 - s.charge2*(1/r1+1/r2))
}

// between measures from r1 to r2, r1 <= r2; NaN where there is no such
// length or time. A length may begin at a horizon.
func (s *Round) between(r1, r2 float64) interval {
	none := interval{math.NaN(), math.NaN(), math.NaN()}
	switch where := s.place(r1); {
	case math.IsInf(r2, 1) || math.IsNaN(r2):
		return none
	case where == within:
		edge := s.Edge()
		if s.place(r2) == within {
			return s.room().between(r1, r2)
		}
		return s.room().between(r1, edge).plus(s.exterior(edge, max(edge, r2)))
	case where == nowhere && !(s.hasHorizon() && s.onEdge(r1)):
		return none
	case where == nowhere:
		i := s.exterior(r1, r2)
		i.time = math.NaN()
		return i
	}
	return s.exterior(r1, r2)
}

// exterior measures from r1 to r2, r1 <= r2, outside. With y = r - 1 = e cosh x, e² = 1 - Q², the
// proper length ∫ r dr/√Δ is x + e sinh x, and the excess over r is
// x - e exp(-x); its differences, and those of r*, are taken without
// cancellation. For Q = 0 the length is √(r(r-2)) + 2 ln(√r + √(r-2)).
func (s *Round) exterior(r1, r2 float64) interval {
	if r1 == r2 || s.hasHorizon() && s.onEdge(r2) {
		return interval{}
	}
	e2 := 1 - s.charge2
	e := math.Sqrt(e2)
	y1, y2, d := r1-1, r2-1, r2-r1
	delta1 := s.delta(r1)
	root1, root2 := math.Sqrt(delta1), math.Sqrt(s.delta(r2))
	w1, w2 := y1+root1, y2+root2
	g := d * (1 + (y1+y2)/(root1+root2)) // w2 - w1
	excess := math.Log1p(g/w1) + e2*g/(w1*w2)

	gap1 := delta1 / (y1 + e) // r1 - r₊
	time := d + math.Log1p(d*(y1+y2)/delta1) + (1+e2)/(2*e)*math.Log1p(2*e*d/(gap1*(y2+e)))
	return interval{d, excess, time}
}

// A shell's inside: flat, one clock rate. No body orbits in it.

func (f *flat) depth(float64) float64 { return 2 / f.radius }

func (f *flat) rise(_, _ float64) float64 { return 0 }

func (f *flat) orbitSpeed2(float64) float64 { return math.NaN() }

func (f *flat) between(r1, r2 float64) interval {
	return interval{r2 - r1, 0, (r2 - r1) / f.lapse}
}

// A uniform star's inside: a slice is a sphere of radius a, r = a sin χ.

func (f *uniform) depth(r float64) float64 {
	compact := 2 / math.Cbrt(2*f.a*f.a) // 2/R
	x2 := r / f.a * (r / f.a)
	below := (3*compact/(1+f.s) - x2/(1+math.Sqrt(1-x2))) / 2 // 1 - N
	return below * (2 - below)
}

func (f *uniform) rise(r1, r2 float64) float64 {
	x1, x2 := r1/f.a, r2/f.a
	c1, c2 := math.Sqrt(1-x1*x1), math.Sqrt(1-x2*x2)
	return (f.Lapse(r1) + f.Lapse(r2)) * (x2 - x1) * (x2 + x1) / (2 * (c1 + c2))
}

// orbitSpeed2 is r N'/N.
func (f *uniform) orbitSpeed2(r float64) float64 {
	x2 := r / f.a * (r / f.a)
	return x2 / (2 * f.Lapse(r) * math.Sqrt(1-x2))
}

func (f *uniform) between(r1, r2 float64) interval {
	if r1 == r2 {
		return interval{}
	}
	x1, x2, dx := r1/f.a, r2/f.a, (r2-r1)/f.a
	c1, c2 := math.Sqrt(1-x1*x1), math.Sqrt(1-x2*x2)
	half := math.Asin(dx*(x1+x2)/(x2*c1+x1*c2)) / 2 // (χ2 - χ1)/2
	sin := math.Sin(half)
	middle := (math.Asin(x1) + math.Asin(x2)) / 2
	// χ - sin χ between the ends
	excess := f.a * (2*lessSine(half) + 4*sin*halfSine2(middle))

	q1, q2 := x1/(1+c1)/f.unit, x2/(1+c2)/f.unit
	rise := sin / (f.unit * math.Sqrt((1+c1)*(1+c2)) / 2) // q2 - q1
	time := 2 * f.big * math.Atan2(rise, 1+q1*q2)
	return interval{r2 - r1, excess, time}
}

// lessSine is x - sin x, by its series, for |x| < 1.
func lessSine(x float64) float64 {
	x2 := x * x
	sum := 1.0
	for k := 14.0; k >= 4; k -= 2 { // x³/3! - x⁵/5! + ...
		sum = 1 - sum*x2/(k*(k+1))
	}
	return x * x2 / 6 * sum
}
