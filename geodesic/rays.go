package geodesic

// Surface says what a path met.
type Surface uint8

// The surfaces. The whole disk plane counts; rims are cut when shading.
const (
	Plane Surface = iota // the disk plane
	Star                 // the opaque surface of a star
	Sky                  // infinity
)

// Rays is a block of light paths as they reach the observer, planar: every
// slice has one entry a ray.
type Rays struct {
	Lambda     []float64 // Lz/E, M
	Eta        []float64 // Q/E², M²
	B          []float64 // impact parameter √(Lambda² + Eta), M
	CosS, SinS []float64 // screen angle, counter-clockwise from +α; on the axis λ and η do not hold it
	KR         []float64 // k^r/E at the observer: > 0 for light on its way out, whose path is traced inward first
	GObs       []float64 // ν_obs/E, the observer's share of the redshift factor
	Seen       []bool    // false for a line of sight along which no path exists
}

// Len returns the number of rays.
func (r *Rays) Len() int { return len(r.Lambda) }

// Resize makes room for n rays, keeping the storage it has.
func (r *Rays) Resize(n int) {
	r.Lambda = resized(r.Lambda, n)
	r.Eta = resized(r.Eta, n)
	r.B = resized(r.B, n)
	r.CosS = resized(r.CosS, n)
	r.SinS = resized(r.SinS, n)
	r.KR = resized(r.KR, n)
	r.GObs = resized(r.GObs, n)
	r.Seen = resized(r.Seen, n)
}

// Impact returns the impact parameter b of ray k, M.
func (r *Rays) Impact(k int) float64 { return r.B[k] }

// Crossings is where a block of rays meets surfaces. Ray k owns the entries
// Start[k] to Start[k+1] of the other slices, in the order of its path.
type Crossings struct {
	Start    []int32   // length rays + 1
	Surface  []Surface // what was met
	Order    []uint8   // image order n = ⌈ψ/π⌉ - 1
	R        []float64 // circumferential radius, M; +Inf on the sky
	CosTheta []float64 // cosine of the polar angle from the disk axis; 0 on the plane
	Phi      []float64 // azimuth about the disk axis, radians in (-π, π]
	KR       []float64 // k^r/E of the light as it leaves the crossing: > 0 outward
	Delay    []float64 // t_obs - t_em - r*(r_obs), M, NaN on the sky; empty unless wanted
	// Slope: on the plane dr/db at fixed screen angle; on star and sky
	// dψ/db, 1/M; empty unless wanted.
	Slope []float64
	Bound []float64 // on the plane the relative bound on R; on star and sky that on ψ, radians
}

// Reset empties the crossings, keeping the storage, for a block of n rays.
func (c *Crossings) Reset(n int) {
	c.Start = append(resized(c.Start, n+1)[:0], 0)
	c.Surface = c.Surface[:0]
	c.Order = c.Order[:0]
	c.R = c.R[:0]
	c.CosTheta = c.CosTheta[:0]
	c.Phi = c.Phi[:0]
	c.KR = c.KR[:0]
	c.Delay = c.Delay[:0]
	c.Slope = c.Slope[:0]
	c.Bound = c.Bound[:0]
}

// Want says which columns of Crossings a caller will read: the costly Delay
// and Slope only if asked for, CosTheta with Phi and KR unless spared.
type Want struct {
	Delay, Slope  bool
	NoPlace, NoKR bool
}

func resized[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// Plan is what a tracer must deliver.
type Plan struct {
	Tolerance float64 // per path, relative
	MaxOrder  int     // highest image order followed, 0 to 9
	Plane     bool    // crossings of the disk plane
	Sky       bool    // where escaping paths come from
	// Reach is the radius, M, beyond which nothing lies on the plane: there
	// crossings may be interpolated with any bound. 0 means infinity.
	Reach float64
}

// Tracer follows blocks of rays. It keeps scratch: one a goroutine.
type Tracer interface {
	// Cross finds where every ray meets the wanted surfaces.
	Cross(rays *Rays, want Want, out *Crossings)
}

// Spacetime turns directions into rays and makes tracers for them.
type Spacetime interface {
	// Aim fills rays from the observer's lines of sight. Parallel says
	// how Direction is meant.
	Aim(o Observer, parallel bool, dirs []Direction, rays *Rays) error
	// Tracer returns a new tracer for paths of this observer.
	Tracer(o Observer, plan Plan) (Tracer, error)
}
