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
	R           float64 // M
	RBound      float64 // relative bound on R
	Phi         float64 // radians
	Ell         float64 // Lz/E, M
	G, Mu       float64
	Delay       float64 // M
	Intensity   float64 // relative to that emitted at r = 1 M
}

// probeBlock is how many lines of sight are traced between looks at the
// context.
const probeBlock = 1024

// Probe traces lines of sight given by their screen coordinates (see Field)
// and returns their crossings with emitters, up to the first opaque one,
// line of sight by line of sight in path order.
func (v *View) Probe(ctx context.Context, at [][2]float64) ([]Reading, error) {
	b, err := v.newBench()
	if err != nil {
		return nil, err
	}
	var readings []Reading
	for from := 0; from < len(at); from += probeBlock {
		if err := ctx.Err(); err != nil {
			return nil, fmt.Errorf("raytrace: probing: %w", err)
		}
		block := at[from:min(from+probeBlock, len(at))]
		b.dirs = b.dirs[:0]
		for _, p := range block {
			b.dirs = append(b.dirs, v.Field.direction(p[0], p[1]))
		}
		if err := b.trace(geodesic.Want{Delay: true}); err != nil {
			return nil, err
		}
		for k, p := range block {
			readings = b.read(k, p, readings)
		}
	}
	return readings, nil
}

// read appends the readings of ray k.
func (b *bench) read(k int, p [2]float64, readings []Reading) []Reading {
	for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
		s, lit, opaque := b.look(j)
		if !lit {
			continue
		}
		readings = append(readings, Reading{
			Alpha: p[0], Beta: p[1], Impact: b.rays.Impact(k),
			Order: int(b.at.Order[j]),
			R:     b.at.R[j], RBound: b.at.Bound[j], Phi: b.at.Phi[j],
			Ell: b.rays.Lambda[k], G: s.g, Mu: s.mu,
			Delay: b.at.Delay[j], Intensity: s.intensity,
		})
		if opaque {
			break
		}
	}
	return readings
}
