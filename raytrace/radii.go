package raytrace

import (
	"context"
	"image"
	"math"
	"sync"

	"annulet/geodesic"
)

// Radii is where the paths of a field cross the disk plane: radius and image
// order alone, the least that a picture needs. It is the tile renderer's own
// loop with everything else left out, to be timed and checked; its storage is
// used again.
type Radii struct {
	tiles []image.Rectangle
	at    []geodesic.Crossings // one block a tile, rays in rows from the bottom
}

// Radii traces into r, which may be the zero Radii or one of a field of the
// same size.
func (v *View) Radii(ctx context.Context, o Options, r *Radii) error {
	tiles := tilesOutward(v.Field.Columns, v.Field.Rows, o.tileSide())
	if len(r.tiles) != len(tiles) {
		r.at = make([]geodesic.Crossings, len(tiles))
	}
	r.tiles = tiles
	want := geodesic.Want{NoPlace: true, NoKR: true}
	return v.onTiles(ctx, o, want, tiles, func(b *bench, k int) (tileReport, error) {
		b.at, r.at[k] = r.at[k], b.at
		integrated, err := b.followTile(tiles[k], want)
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
	sinI, cosI := math.Sincos(v.Observer.InclinationDeg * math.Pi / 180)
	var mu sync.Mutex
	err = v.onTiles(ctx, Options{Workers: workers, PathByPath: true}, geodesic.Want{}, r.tiles, func(b *bench, k int) (tileReport, error) {
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
