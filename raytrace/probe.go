package raytrace

import (
	"context"
	"fmt"

	"annulet/geodesic"
)

// Reading is one crossing of one line of sight, in float64.
type Reading struct {
	Alpha, Beta float64 // screen coordinates as given
	Impact      float64 // b, M
	Order       int
	Surface     geodesic.Surface
	R           float64 // M; +Inf on the sky
	CosTheta    float64 // cosine of the polar angle from N; 0 on the disk plane
	RBound      float64 // relative bound on R; 0 on star and sky, where R is exact
	AngleBound  float64 // bound on the swept angle, radians; 0 on the disk plane, where it is exact
	Phi         float64 // radians
	Ell         float64 // Lz/E, M
	G, Mu       float64 // Mu is NaN on the sky
	Delay       float64 // M; NaN on the sky
	Intensity   float64 // as the plate has it, for a pixel of the field around this line of sight
}

// probeBlock is how many lines of sight are traced between looks at the
// context.
const probeBlock = 1024

// Probe traces lines of sight given by their screen coordinates (see Field)
// and returns their crossings with emitters, up to the first opaque one,
// line of sight by line of sight in path order.
func (v *View) Probe(ctx context.Context, at [][2]float64) ([]Reading, error) {
	b, err := v.newBench(nil)
	if err != nil {
		return nil, err
	}
	var readings []Reading
	for from := 0; from < len(at); from += probeBlock {
		if err := ctx.Err(); err != nil {
			return nil, fmt.Errorf("raytrace: probing: %w", err)
		}
		block := at[from:min(from+probeBlock, len(at))]
		b.screen = append(b.screen[:0], block...)
		if _, err := b.follow(geodesic.Want{Delay: true, Slope: v.Plan.Sky}); err != nil {
			return nil, err
		}
		b.shade()
		for k, p := range block {
			readings = b.read(k, p, readings)
		}
	}
	return readings, nil
}

// read appends the readings of ray k.
func (b *bench) read(k int, p [2]float64, readings []Reading) []Reading {
	through := 1.0 // share of the light that gets past what lies before
	for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
		s, lit, passes := b.look(j)
		if !lit {
			continue
		}
		s.intensity *= through
		through *= passes
		reading := Reading{
			Alpha: p[0], Beta: p[1], Impact: b.rays.Impact(k),
			Order:   int(b.at.Order[j]),
			Surface: b.at.Surface[j],
			R:       b.at.R[j], CosTheta: b.at.CosTheta[j], Phi: b.at.Phi[j],
			Ell: b.rays.Lambda[k] + 0, // not -0
			G:   s.g, Mu: s.mu,
			Delay: b.at.Delay[j], Intensity: s.intensity,
		}
		if reading.Surface == geodesic.Plane {
			reading.RBound = b.at.Bound[j]
		} else {
			reading.AngleBound = b.at.Bound[j]
		}
		readings = append(readings, reading)
		if through == 0 {
			break
		}
	}
	return readings
}
