package geodesic

import "math"

// Surface says what a path met.
type Surface uint8

// Plane is the whole disk plane; rims are cut when shading.
const Plane Surface = 0

// Rays is a block of light paths as they leave the observer, planar: every
// slice has one entry a ray.
type Rays struct {
	Lambda     []float64 // Lz/E, in M
	Eta        []float64 // Q/E², in M²; b² = Lambda² + Eta
	CosS, SinS []float64 // screen angle, counter-clockwise from +α
	SignR      []int8    // first leg traced: -1 inward, +1 outward, 0 no such path
	GObs       []float64 // ν_obs/E, the observer's share of the redshift factor
}

// Len returns the number of rays.
func (r *Rays) Len() int { return len(r.Lambda) }

// Resize makes room for n rays, keeping the storage it has.
func (r *Rays) Resize(n int) {
	r.Lambda = resized(r.Lambda, n)
	r.Eta = resized(r.Eta, n)
	r.CosS = resized(r.CosS, n)
	r.SinS = resized(r.SinS, n)
	r.SignR = resized(r.SignR, n)
	r.GObs = resized(r.GObs, n)
}

// Impact returns the impact parameter b of ray k, in M.
func (r *Rays) Impact(k int) float64 {
	return math.Sqrt(r.Lambda[k]*r.Lambda[k] + r.Eta[k])
}

// Crossings is where a block of rays meets surfaces. Ray k owns the entries
// Start[k] to Start[k+1] of the other slices, in the order of its path.
type Crossings struct {
	Start   []int32   // length rays + 1
	Surface []Surface // what was met
	Order   []uint8   // image order n = ⌈ψ/π⌉ - 1
	R       []float64 // circumferential radius, M
	Phi     []float64 // azimuth in the disk plane, radians in (-π, π]
	KR      []float64 // k^r/E of the light as it leaves the crossing: > 0 outward
	Delay   []float64 // t_obs - t_em - r*(r_obs), M; empty unless wanted
	DrDb    []float64 // slope of R with b at fixed screen angle; empty unless wanted
	Bound   []float64 // relative bound on R
}

// Reset empties the crossings, keeping the storage, for a block of n rays.
func (c *Crossings) Reset(n int) {
	c.Start = append(resized(c.Start, n+1)[:0], 0)
	c.Surface = c.Surface[:0]
	c.Order = c.Order[:0]
	c.R = c.R[:0]
	c.Phi = c.Phi[:0]
	c.KR = c.KR[:0]
	c.Delay = c.Delay[:0]
	c.DrDb = c.DrDb[:0]
	c.Bound = c.Bound[:0]
}

// Want says which columns of Crossings a caller will read.
type Want struct {
	Delay, DrDb bool
}

func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// Observer is a static observer.
type Observer struct {
	Radius         float64 // M, > 2; +Inf at infinity
	InclinationDeg float64 // [0, 180], from the disk axis
	AzimuthDeg     float64 // of the observer in the disk plane
}

// Direction is one line of sight, in the way its field names it.
type Direction struct {
	// Alpha and Beta: on a parallel field the components of L/E in M; on
	// an angular field the components of the unit vector that looks along
	// the line of sight, to the right and up.
	Alpha, Beta float64
	// Ahead is the third component of that unit vector, towards the
	// centre; 0 on a parallel field.
	Ahead float64
}

// Plan is what a tracer must deliver.
type Plan struct {
	Tolerance float64 // per path, relative
	MaxOrder  int     // highest image order followed
}

// Tracer follows blocks of rays. It keeps scratch: one a goroutine.
type Tracer interface {
	// Cross finds where every ray meets the wanted surfaces.
	Cross(rays *Rays, want Want, out *Crossings)
}

// Spacetime turns directions into rays and makes tracers for them.
type Spacetime interface {
	// Aim fills rays from the observer's lines of sight. Parallel says
	// how Direction is meant. A line of sight along which no path exists
	// gets SignR 0.
	Aim(o Observer, parallel bool, dirs []Direction, rays *Rays) error
	// Tracer returns a new tracer for paths of this observer.
	Tracer(o Observer, plan Plan) (Tracer, error)
}
