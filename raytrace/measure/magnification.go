package measure

import (
	"errors"
	"fmt"
	"math"
	"slices"

	"annulet/geodesic"
)

// PointImage is one image of a point at infinity.
type PointImage struct {
	Order         int     // image order n = ⌈ψ/π⌉ - 1
	Angle         float64 // radians, from the direction ahead; on the far side of the object for odd orders
	G             float64 // ν_obs/ν at infinity
	Magnification float64 // solid angle of the image over that of the source, ≥ 0
}

// ErrMagnification says that a point has no magnification here.
var ErrMagnification = errors.New("magnification")

// Magnification returns the images, up to an order, of a point at infinity
// that lies at the angle offset, in (0, π), from the point straight behind
// the object, and the sum of their magnifications. The bolometric flux of an
// image is that of the point times Magnification times G⁴. The observer must
// not orbit: around a moving one the sky is not symmetric.
//
// Every image is root-found on traced paths. Two images of a star or shell
// that are nearer to each other than a fan of some thousand paths can tell
// may be missed; those of a hole never are.
func Magnification(s *geodesic.Round, o geodesic.Observer, offset float64, maxOrder int) (images []PointImage, total float64, err error) {
	if o.Motion == geodesic.Orbit || math.IsInf(o.Radius, 1) {
		return nil, 0, fmt.Errorf("measure: %w: the observer must be static or falling, at a finite radius", ErrMagnification)
	}
	if !(offset > 0 && offset < math.Pi) {
		return nil, 0, fmt.Errorf("measure: %w: offset %v rad: want more than 0 and less than π", ErrMagnification, offset)
	}
	f, err := newFan(s, o, maxOrder)
	if err != nil {
		return nil, 0, err
	}
	angles := fanAngles(o.Radius)
	swept, err := f.sweep(angles)
	if err != nil {
		return nil, 0, err
	}
	for n := range maxOrder + 1 {
		target := float64(n+1)*math.Pi - offset
		if n%2 == 1 {
			target = float64(n)*math.Pi + offset
		}
		for k := 1; k < len(angles); k++ {
			if (swept[k-1] < target) == (swept[k] < target) {
				continue
			}
			image, err := f.image(angles[k-1], angles[k], target)
			if err != nil {
				return nil, 0, err
			}
			image.Order = n
			images = append(images, image)
			total += image.Magnification
		}
	}
	return images, total, nil
}

// fan traces paths in one plane, by their angle from the direction ahead.
type fan struct {
	spacetime     *geodesic.Round
	observer      geodesic.Observer
	tracer        geodesic.Tracer
	dirs          []geodesic.Direction
	rays          geodesic.Rays
	before, after geodesic.Rays
	at            geodesic.Crossings
}

// fanTolerance is that of the paths. Method: near the tightest that the
// tracer takes.
const fanTolerance = 1e-12

func newFan(s *geodesic.Round, o geodesic.Observer, maxOrder int) (*fan, error) {
	// seen from the plane z = 0, a path to the right has azimuth ψ
	o.InclinationDeg, o.AzimuthDeg = 90, 0
	t, err := s.Tracer(o, geodesic.Plan{Tolerance: fanTolerance, MaxOrder: maxOrder, Sky: true})
	if err != nil {
		return nil, fmt.Errorf("measure: %w", err)
	}
	return &fan{spacetime: s, observer: o, tracer: t}, nil
}

// fanAngles are the angles at which images are looked for: even in their
// logarithm around the object, from a thousandth of M on, and even beyond.
func fanAngles(r float64) []float64 {
	const near, even, smallest = 1024, 1024, 1e-3
	angles := []float64{0}
	first := smallest / max(1, r)
	for k := range near {
		angles = append(angles, first*math.Pow(1/first, float64(k)/near))
	}
	for k := range even + 1 {
		angles = append(angles, math.Pi*float64(k)/even)
	}
	slices.Sort(angles)
	return slices.Compact(angles)
}

// aim fills rays with the lines of sight at the angles moved by turn.
func (f *fan) aim(rays *geodesic.Rays, turn float64, angles ...float64) error {
	f.dirs = f.dirs[:0]
	for _, a := range angles {
		sin, cos := math.Sincos(a + turn)
		f.dirs = append(f.dirs, geodesic.Direction{Alpha: sin, Ahead: cos})
	}
	return f.spacetime.Aim(f.observer, false, f.dirs, rays)
}

// sweep returns the swept angles from the observer to infinity, +Inf for
// paths that do not get there.
func (f *fan) sweep(angles []float64) ([]float64, error) {
	if err := f.aim(&f.rays, 0, angles...); err != nil {
		return nil, err
	}
	f.tracer.Cross(&f.rays, geodesic.Want{Slope: true}, &f.at)
	swept := make([]float64, len(angles))
	for k := range swept {
		swept[k] = math.Inf(1)
		for j := f.at.Start[k]; j < f.at.Start[k+1]; j++ {
			if f.at.Surface[j] == geodesic.Sky {
				middle := (float64(f.at.Order[j]) + 0.5) * math.Pi
				swept[k] = f.at.Phi[j] + 2*math.Pi*math.Round((middle-f.at.Phi[j])/(2*math.Pi))
			}
		}
	}
	return swept, nil
}

// image finds the angle between lo and hi whose path sweeps target, by
// halving, and the magnification sin a/(sin ψ dψ/da) there.
func (f *fan) image(lo, hi, target float64) (PointImage, error) {
	swept, err := f.sweep([]float64{hi})
	if err != nil {
		return PointImage{}, err
	}
	up := swept[0] >= target
	for range 100 {
		mid := (lo + hi) / 2
		if mid <= lo || mid >= hi {
			break
		}
		if swept, err = f.sweep([]float64{mid}); err != nil {
			return PointImage{}, err
		}
		if (swept[0] >= target) == up {
			hi = mid
		} else {
			lo = mid
		}
	}
	// the two differ in the last bit; one may not get there
	a := hi
	swept, err = f.sweep([]float64{a})
	if err == nil && math.IsInf(swept[0], 1) {
		a = lo
		_, err = f.sweep([]float64{a})
	}
	if err != nil {
		return PointImage{}, err
	}
	const turn = 1e-5 // radians; a central difference of a sine is right to turn²/6
	if err := f.aim(&f.before, -turn, a); err != nil {
		return PointImage{}, err
	}
	if err := f.aim(&f.after, turn, a); err != nil {
		return PointImage{}, err
	}
	// Lambda is -b on the right and b on the left: no fold at the axis
	rate := (f.before.Lambda[0] - f.after.Lambda[0]) / (2 * turn)
	bend := math.Abs(rate * f.at.Slope[len(f.at.Slope)-1])
	return PointImage{
		Angle: a, G: f.rays.GObs[0],
		Magnification: math.Sin(a) / (bend * math.Abs(math.Sin(target))),
	}, nil
}
