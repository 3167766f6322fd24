package raytrace

import (
	"fmt"
	"math"

	"annulet/geodesic"
)

// Track is one light path in its own plane, from the observer on.
type Track struct {
	Impact float64   // b, M
	Psi, R []float64 // swept angle in radians, rising, and radius in M
	// Disk are the swept angles at which the path meets the disk plane, by
	// order; beyond the path's end they have no meaning.
	Disk []float64
}

// trackOrder is how far a track is followed: (trackOrder+1) half turns.
const trackOrder = 9

// Walk returns the path along a line of sight, stepping through at least
// perTurn points a half turn; an empty track where there is no path. The
// radius at a swept angle is where the path meets a disk plane turned to that
// angle, as it would for an observer of another inclination.
func (v *View) Walk(alpha, beta float64, perTurn int) (Track, error) {
	var seen geodesic.Rays
	dirs := []geodesic.Direction{v.Field.direction(alpha, beta)}
	if err := v.Spacetime.Aim(v.Observer, v.Field.IsParallel(), dirs, &seen); err != nil {
		return Track{}, fmt.Errorf("raytrace: %w", err)
	}
	if !seen.Seen[0] {
		return Track{}, nil
	}
	t := Track{Impact: seen.B[0]}
	sinI, cosI := geodesic.SinCosDeg(v.Observer.InclinationDeg)
	for n := range v.Plan.MaxOrder + 1 {
		t.Disk = append(t.Disk, geodesic.FirstPlaneAngle(sinI, cosI, seen.SinS[0])+float64(n)*math.Pi)
	}
	// The same path upwards on the screen, where an inclination of i meets
	// the plane at 90 deg + i.
	turned := geodesic.Rays{
		Lambda: []float64{0}, Eta: []float64{t.Impact * t.Impact}, B: []float64{t.Impact},
		CosS: []float64{0}, SinS: []float64{1},
		KR: seen.KR, GObs: seen.GObs, Seen: []bool{true},
	}
	orders := make([][]float64, trackOrder+1) // by order: radius at each step
	psis := make([]float64, perTurn)
	for k := range perTurn {
		o := v.Observer
		degrees := 180 * (float64(k) + 0.5) / float64(perTurn)
		psis[k] = degrees * math.Pi / 180
		o.InclinationDeg = math.Mod(degrees+90, 180)
		plan := geodesic.Plan{Tolerance: v.Plan.Tolerance, MaxOrder: trackOrder, Plane: true}
		tracer, err := v.Spacetime.Tracer(o, plan)
		if err != nil {
			return Track{}, fmt.Errorf("raytrace: %w", err)
		}
		var at geodesic.Crossings
		tracer.Cross(&turned, geodesic.Want{NoPlace: true, NoKR: true}, &at)
		for n := range orders {
			orders[n] = append(orders[n], math.NaN())
		}
		for j, r := range at.R {
			orders[at.Order[j]][k] = r
		}
	}
	for n, radii := range orders {
		for k, r := range radii {
			if !math.IsNaN(r) {
				t.Psi = append(t.Psi, psis[k]+float64(n)*math.Pi)
				t.R = append(t.R, r)
			}
		}
	}
	return t, nil
}

// At returns the radius after a swept angle, M, between the points linear in
// 1/r; NaN outside them.
func (t Track) At(psi float64) float64 {
	for k := 1; k < len(t.Psi); k++ {
		if psi >= t.Psi[k-1] && psi <= t.Psi[k] {
			share := (psi - t.Psi[k-1]) / (t.Psi[k] - t.Psi[k-1])
			return 1 / ((1-share)/t.R[k-1] + share/t.R[k])
		}
	}
	return math.NaN()
}

// First returns the first swept angle, NaN for an empty track.
func (t Track) First() float64 {
	if len(t.Psi) == 0 {
		return math.NaN()
	}
	return t.Psi[0]
}
