package raytrace

import (
	"context"
	"fmt"
	"image"
	"runtime"
	"sync"
	"sync/atomic"

	"annulet/geodesic"

	"golang.org/x/sync/errgroup"
)

// Options is what the tile scheduler needs, and no more.
type Options struct {
	Workers  int            // goroutines; 0 means GOMAXPROCS
	TileSide int            // pixels; 0 means 32
	Report   func(Progress) // called from the workers, one call at a time; nil for none
}

// Progress says how far a render is.
type Progress struct {
	Tile             image.Rectangle // the tile just finished; row 0 at the bottom
	TilesDone, Tiles int
	PathsDone        int
}

// defaultTileSide is the side of a tile in pixels. Taste: its blocks of 1024
// rays stay in the second-level cache, and a cancelled render ends within
// about four milliseconds.
const defaultTileSide = 32

// Render traces and shades the whole field. Tiles are handed out from the
// middle of the field outwards, to any number of workers, with the same
// plate bit for bit. It stops within a tile when ctx ends, with an error
// that wraps ctx.Err().
func (v *View) Render(ctx context.Context, o Options) (*Plate, error) {
	if o.Workers <= 0 {
		o.Workers = runtime.GOMAXPROCS(0)
	}
	if o.TileSide <= 0 {
		o.TileSide = defaultTileSide
	}
	plate := newPlate(v.Field.Columns, v.Field.Rows, v.Plan.MaxOrder+1)
	tiles := tilesOutward(plate.Columns, plate.Rows, o.TileSide)
	var next atomic.Int64
	tally := tally{plate: plate, tiles: len(tiles), report: o.Report}
	group, ctx := errgroup.WithContext(ctx)
	for range min(o.Workers, len(tiles)) {
		group.Go(func() error {
			b, err := v.newBench()
			if err != nil {
				return err
			}
			for {
				k := int(next.Add(1)) - 1
				if k >= len(tiles) {
					return nil
				}
				if err := ctx.Err(); err != nil {
					return fmt.Errorf("raytrace: before tile %v: %w", tiles[k], err)
				}
				worst, err := b.fill(tiles[k], plate)
				if err != nil {
					return err
				}
				tally.add(tiles[k], worst)
			}
		})
	}
	if err := group.Wait(); err != nil {
		return nil, err
	}
	return plate, nil
}

// tally gathers what the tiles report; sums and maxima do not depend on the
// order in which they arrive.
type tally struct {
	mu     sync.Mutex
	plate  *Plate
	done   int
	tiles  int
	report func(Progress)
}

func (t *tally) add(tile image.Rectangle, worst bounds) {
	t.mu.Lock()
	defer t.mu.Unlock()
	t.done++
	t.plate.Paths += tile.Dx() * tile.Dy()
	t.plate.WorstBound = max(t.plate.WorstBound, worst.radius)
	t.plate.WorstAngle = max(t.plate.WorstAngle, worst.angle)
	if t.report != nil {
		t.report(Progress{Tile: tile, TilesDone: t.done, Tiles: t.tiles, PathsDone: t.plate.Paths})
	}
}

// bounds is the worst of the crossings shown: relative on r, and of swept
// angles in radians.
type bounds struct{ radius, angle float64 }

func (b bounds) worse(c bounds) bounds {
	return bounds{max(b.radius, c.radius), max(b.angle, c.angle)}
}

// fill traces one tile into the plate and returns the worst bounds of the
// crossings shown.
func (b *bench) fill(tile image.Rectangle, plate *Plate) (worst bounds, err error) {
	b.screen = b.view.Field.tileCenters(tile, b.screen[:0])
	if err := b.trace(); err != nil {
		return worst, err
	}
	k := 0
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		for column := tile.Min.X; column < tile.Max.X; column++ {
			worst = worst.worse(b.expose(k, row*plate.Columns+column, plate))
			k++
		}
	}
	return worst, nil
}

// expose writes ray k to a pixel of the plate, order by order, up to the
// first opaque emitter, and returns the worst bounds on the way. Where an
// order has several crossings its intensity is their sum and its other
// layers show the first one.
func (b *bench) expose(k, pixel int, plate *Plate) (worst bounds) {
	var total, sum float64 // of all orders, of the one in hand
	last := -1
	for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
		s, lit, opaque := b.look(j)
		if !lit {
			continue
		}
		total += s.intensity
		surface, order := b.at.Surface[j], int(b.at.Order[j])
		if surface == geodesic.Plane {
			worst.radius = max(worst.radius, b.at.Bound[j])
		} else {
			worst.angle = max(worst.angle, b.at.Bound[j])
		}
		layers := plate.layers[order*int(layerCount):]
		if order != last {
			last, sum = order, 0
			layers[Redshift][pixel] = float32(s.g)
			layers[Azimuth][pixel] = float32(b.at.Phi[j])
			if surface != geodesic.Sky { // infinitely far, without a time of its own
				layers[Radius][pixel] = float32(b.at.R[j])
				layers[Delay][pixel] = float32(b.at.Delay[j])
				layers[Mu][pixel] = float32(s.mu)
			}
		}
		sum += s.intensity
		layers[Intensity][pixel] = float32(sum)
		if opaque {
			break
		}
	}
	plate.Total[pixel] = float32(total)
	return worst
}
