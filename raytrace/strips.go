package raytrace

import (
	"context"
	"image"

	"golang.org/x/sync/errgroup"

	"annulet/geodesic/guard"
)

// Strip is one row of tiles of an image too large to be held whole.
type Strip struct {
	*Plate       // Rows is that of the strip
	FirstRow int // of the image; row 0 is at the bottom
}

// stripPlates is how many strips are in memory: one that is rendered, one
// that is taken.
const stripPlates = 2

// Strips renders the field one row of tiles at a time, from the bottom up or
// from the top down, and gives every strip to take. The next strip is
// rendered meanwhile, into the memory of the last but one: StripBytes in all,
// however many rows there are. A strip has the values that Render gives these
// pixels, bit for bit. The returned plate has no pixels, only the counts and
// bounds of the whole.
func (v *View) Strips(ctx context.Context, o Options, topDown bool, take func(Strip) error) (*Plate, error) {
	kept := keep(o.Layers)
	want := v.want(kept)
	whole := &Plate{Columns: v.Field.Columns, Rows: v.Field.Rows, Orders: v.Plan.MaxOrder + 1}
	side := v.tileSide(o)
	strips := (whole.Rows + side - 1) / side
	tiles := strips * ((whole.Columns + side - 1) / side)
	report := o.Report
	done := 0
	o.Report = nil
	if report != nil {
		o.Report = func(p Progress) {
			p.TilesDone, p.Tiles, p.PathsDone = p.TilesDone+done, tiles, p.PathsDone+whole.Paths
			report(p)
		}
	}
	a, err := v.areas(ctx, o)
	if err != nil {
		return nil, err
	}
	group, ctx := errgroup.WithContext(ctx)
	ready := make(chan Strip)
	free := make(chan *Plate, stripPlates)
	group.Go(guard.Work(func() error {
		for s := range ready {
			if err := take(s); err != nil {
				return err
			}
			free <- s.Plate
		}
		return nil
	}))
	group.Go(guard.Work(func() error {
		defer close(ready)
		for k := range strips {
			row := k
			if topDown {
				row = strips - 1 - k
			}
			from, to := row*side, min((row+1)*side, whole.Rows)
			var plate *Plate
			if k < stripPlates {
				plate = newPlate(whole.Columns, min(side, whole.Rows), whole.Orders, kept)
			} else {
				select {
				case plate = <-free:
				case <-ctx.Done():
					return ctx.Err()
				}
			}
			plate = plate.emptied(to - from)
			plate.firstRow = from
			rows := tileRow(whole.Columns, from, to, side)
			if err := v.onTiles(ctx, o, want, a, rows, func(b *bench, k int) (tileReport, error) {
				return b.renderTile(rows[k], want, plate)
			}, plate); err != nil {
				return err
			}
			done += len(rows)
			whole.Tally(plate)
			whole.rows = append(whole.rows, plate.rows...)
			select {
			case ready <- Strip{Plate: plate, FirstRow: from}:
			case <-ctx.Done():
				return ctx.Err()
			}
		}
		return nil
	}))
	if err := group.Wait(); err != nil {
		return nil, err
	}
	if err := a.conclude(whole); err != nil {
		return nil, err
	}
	return whole, nil
}

// StripBytes is the memory of Strips' plates.
func (v *View) StripBytes(o Options) int64 {
	return stripPlates * plateBytes(v.Field.Columns, min(v.tileSide(o), v.Field.Rows), v.Plan.MaxOrder+1, keep(o.Layers))
}

// PlateBytes is the memory of the plate that Render makes.
func (v *View) PlateBytes(o Options) int64 {
	return plateBytes(v.Field.Columns, v.Field.Rows, v.Plan.MaxOrder+1, keep(o.Layers))
}

func plateBytes(columns, rows, orders int, kept layerSet) int64 {
	values := int64(1)
	for _, yes := range kept {
		if yes {
			values += int64(orders)
		}
	}
	const float32Bytes = 4
	return float32Bytes * values * int64(columns) * int64(rows)
}

// tileRow cuts the rows from (inclusive) to (exclusive) into tiles.
func tileRow(columns, from, to, side int) []image.Rectangle {
	var tiles []image.Rectangle
	for x := 0; x < columns; x += side {
		tiles = append(tiles, image.Rect(x, from, min(x+side, columns), to))
	}
	return tiles
}
