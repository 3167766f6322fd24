package raytrace

import (
	"context"
	"image"
	"math"
	"slices"
	"sync"

	"annulet/geodesic"
)

// Radii is where the paths of a field cross the disk plane: radius and image
// order alone, the least that a picture needs. It is the tile renderer's own
// loop with everything else left out, to be timed and checked; its storage is
// used again.
type Radii struct {
	cut   [3]int // columns and rows of the field, side of a tile
	tiles []image.Rectangle
	at    []geodesic.Crossings // one block a tile, rays in rows from the bottom
}

// Equal says whether both hold the same crossings, bit for bit.
func (r *Radii) Equal(other *Radii) bool {
	return r.cut == other.cut && slices.EqualFunc(r.at, other.at, func(a, b geodesic.Crossings) bool {
		return slices.Equal(a.Start, b.Start) && slices.Equal(a.Order, b.Order) && slices.Equal(a.R, b.R)
	})
}

// Radii traces into r, which may be the zero Radii.
func (v *View) Radii(ctx context.Context, o Options, r *Radii) error {
	if cut := [3]int{v.Field.Columns, v.Field.Rows, o.tileSide()}; cut != r.cut {
		r.cut = cut
		r.tiles = tilesOutward(cut[0], cut[1], cut[2])
		r.at = make([]geodesic.Crossings, len(r.tiles))
	}
	want := geodesic.Want{NoPlace: true, NoKR: true}
	return v.onTiles(ctx, o, want, nil, r.tiles, func(b *bench, k int) (tileReport, error) {
		b.at, r.at[k] = r.at[k], b.at
		integrated, err := b.followTile(r.tiles[k], want)
		b.at, r.at[k] = r.at[k], b.at
		return tileReport{integrated: integrated}, err
	}, &Plate{})
}

// WorstError returns the largest relative difference of any radius below
// reach, M, from the closed form of a Schwarzschild hole, seen from a static
// observer, and how many crossings were compared. A crossing that the closed
// form does not have, or that is missing, counts as 1.
func (r *Radii) WorstError(ctx context.Context, v *View, reach float64, workers int) (worst float64, compared int, err error) {
	uObs := 1 / v.Observer.Radius
	sinI, cosI := geodesic.SinCosDeg(v.Observer.InclinationDeg)
	var mu sync.Mutex
	err = v.onTiles(ctx, Options{Workers: workers, PathByPath: true}, geodesic.Want{}, nil, r.tiles, func(b *bench, k int) (tileReport, error) {
		b.screen = v.Field.tileCenters(r.tiles[k], b.screen[:0])
		b.dirs = v.Field.directions(b.screen, b.dirs[:0])
		if err := b.aim(&b.rays); err != nil {
			return tileReport{}, err
		}
		off, n := 0.0, 0
		at := &r.at[k]
		for i := range b.screen {
			if !b.rays.Seen[i] {
				continue
			}
			closed := geodesic.NewClosedOrbit(b.rays.Impact(i))
			first := geodesic.FirstPlaneAngle(sinI, cosI, b.rays.SinS[i])
			j := at.Start[i]
			for order := 0; order <= v.Plan.MaxOrder; order++ {
				want := closed.RadiusAt(uObs, first+float64(order)*math.Pi)
				if !(want > 0 && want < reach) {
					continue
				}
				for j < at.Start[i+1] && int(at.Order[j]) < order {
					j++
				}
				n++
				if j == at.Start[i+1] || int(at.Order[j]) != order {
					off = 1
					continue
				}
				off = max(off, math.Abs(at.R[j]/want-1))
			}
		}
		mu.Lock()
		worst, compared = max(worst, off), compared+n
		mu.Unlock()
		return tileReport{}, nil
	}, &Plate{})
	return worst, compared, err
}
