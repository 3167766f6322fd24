package raytrace

import (
	"context"
	"errors"
	"fmt"
	"image"
	"runtime"
	"sync"
	"sync/atomic"

	"annulet/geodesic"
	"annulet/geodesic/guard"

	"golang.org/x/sync/errgroup"
)

// Options is what the tile scheduler needs, and no more.
type Options struct {
	Workers  int            // goroutines; 0 means GOMAXPROCS
	TileSide int            // pixels; 0 means 32
	Report   func(Progress) // called from the workers, one call at a time; nil for none
	// Layers are those the plate keeps beside the total; nil means all,
	// an empty list none.
	Layers []Layer
	// PathByPath integrates every ray instead of sharing orbits.
	PathByPath bool
	// Centres samples pixels at their middles only, quicker, and tells no
	// fluxes.
	Centres bool
}

// Progress says how far a render is.
type Progress struct {
	Tile             image.Rectangle // the tile just finished; row 0 at the bottom
	TilesDone, Tiles int
	PathsDone        int
}

// defaultTileSide is the side of a tile in pixels. Taste: its blocks of 1024
// rays stay in the second-level cache, and a cancelled render ends within
// about four milliseconds even path by path.
const defaultTileSide = 32

// areaTileSide is that where pixels are integrated over. Method: a halo adds
// 6 % of a tile.
const areaTileSide = 64

// ErrMemory: a plate would be too large to be held whole; Strips renders it.
var ErrMemory = errors.New("the image is too large to be held whole")

// plateLimit bounds the plate that Render makes, in bytes. Taste: more than
// a careless request should take, less than a usual machine has.
const plateLimit = 8 << 30

// Render traces and shades the whole field. Tiles are handed out from the
// middle of the field outwards, to any number of workers, with the same
// plate bit for bit. It stops within a tile when ctx ends, with an error
// that wraps ctx.Err().
func (v *View) Render(ctx context.Context, o Options) (*Plate, error) {
	kept := keep(o.Layers)
	if need := v.PlateBytes(o); need > plateLimit {
		return nil, fmt.Errorf("raytrace: %w: %.4g GiB for %d x %d pixels and the layers asked for, more than %d GiB",
			ErrMemory, float64(need)/(1<<30), v.Field.Columns, v.Field.Rows, plateLimit>>30)
	}
	plate := newPlate(v.Field.Columns, v.Field.Rows, v.Plan.MaxOrder+1, kept)
	a, err := v.areas(ctx, o)
	if err != nil {
		return nil, err
	}
	if err := v.render(ctx, o, a, plate); err != nil {
		return nil, err
	}
	return plate, nil
}

// areas returns what the integration over pixels needs, nil for their
// middles.
func (v *View) areas(ctx context.Context, o Options) (*areas, error) {
	if !v.Integrates(o) {
		return nil, nil
	}
	return v.newAreas(ctx, o)
}

// render fills a plate of the whole field.
func (v *View) render(ctx context.Context, o Options, a *areas, plate *Plate) error {
	want := v.want(keep(o.Layers))
	tiles := tilesOutward(plate.Columns, plate.Rows, v.tileSide(o))
	err := v.onTiles(ctx, o, want, a, tiles, func(b *bench, k int) (tileReport, error) {
		return b.renderTile(tiles[k], want, plate)
	}, plate)
	if err != nil {
		return err
	}
	return a.conclude(plate)
}

func (o Options) tileSide() int {
	if o.TileSide > 0 {
		return o.TileSide
	}
	return defaultTileSide
}

func (v *View) tileSide(o Options) int {
	if o.TileSide == 0 && v.Integrates(o) {
		return areaTileSide
	}
	return o.tileSide()
}

func (o Options) workers() int {
	if o.Workers > 0 {
		return o.Workers
	}
	return runtime.GOMAXPROCS(0)
}

// tileReport is what a finished tile adds to the plate's tally.
type tileReport struct {
	worst      bounds
	integrated int // paths, one by one
	paths      int // beside those of the pixels' middles
	light      fluxes
}

// onTiles does work for every tile, shared among goroutines, and tallies on
// the plate.
func (v *View) onTiles(ctx context.Context, o Options, want geodesic.Want, a *areas, tiles []image.Rectangle, work func(b *bench, k int) (tileReport, error), plate *Plate) error {
	var table *geodesic.OrbitTable
	if !o.PathByPath {
		var err error
		if table, err = v.shared(ctx, o.workers(), want.Delay); err != nil {
			return err
		}
	}
	var light []fluxes
	if a != nil {
		light = make([]fluxes, len(tiles))
	}
	var next atomic.Int64
	tally := tally{plate: plate, tiles: len(tiles), report: o.Report}
	group, ctx := errgroup.WithContext(ctx)
	for range min(o.workers(), len(tiles)) {
		group.Go(guard.Work(func() error {
			b, err := v.newBench(table)
			if err == nil && a != nil {
				b.mosaic, err = a.newMosaic(table)
			}
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
				report, err := work(b, k)
				if err != nil {
					return err
				}
				if light != nil {
					light[k] = report.light
				}
				tally.add(tiles[k], report)
			}
		}))
	}
	err := group.Wait()
	plate.rows = inRows(tiles[:len(light)], light)
	return err
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

func (t *tally) add(tile image.Rectangle, r tileReport) {
	t.mu.Lock()
	defer t.mu.Unlock()
	t.done++
	t.plate.Paths += tile.Dx()*tile.Dy() + r.paths
	t.plate.Integrated += r.integrated
	t.plate.WorstBound = max(t.plate.WorstBound, r.worst.radius)
	t.plate.WorstAngle = max(t.plate.WorstAngle, r.worst.angle)
	if t.report != nil {
		t.report(Progress{Tile: tile, TilesDone: t.done, Tiles: t.tiles, PathsDone: t.plate.Paths})
	}
}

// bounds is the worst of the crossings shown: relative on r, and of swept
// angles in radians.
type bounds struct{ radius, angle float64 }

// followTile traces the pixel centres of a tile, and of a halo around it
// for pixels as areas.
func (b *bench) followTile(tile image.Rectangle, want geodesic.Want) (integrated int, err error) {
	b.screen = b.view.Field.tileCenters(tile.Inset(-b.around()), b.screen[:0])
	return b.follow(want)
}

// renderTile traces and shades a tile onto the plate.
func (b *bench) renderTile(tile image.Rectangle, want geodesic.Want, plate *Plate) (tileReport, error) {
	integrated, err := b.followTile(tile, want)
	if err != nil {
		return tileReport{}, err
	}
	b.shade()
	report, err := b.exposeTile(tile, b.around(), plate)
	report.integrated = integrated
	return report, err
}

// around is how many pixels around a tile are followed with it.
func (b *bench) around() int {
	if b.mosaic == nil {
		return 0
	}
	return halo
}

// exposeTile writes the shaded block, which holds that many pixels around the
// tile, to its pixels.
func (b *bench) exposeTile(tile image.Rectangle, around int, plate *Plate) (report tileReport, err error) {
	stride := tile.Dx() + 2*around
	for row := tile.Min.Y; row < tile.Max.Y; row++ {
		k := (row-tile.Min.Y+around)*stride + around
		for column := tile.Min.X; column < tile.Max.X; column++ {
			b.expose(k, (row-plate.firstRow)*plate.Columns+column, plate, &report.worst)
			k++
		}
	}
	if b.mosaic != nil {
		report.light, err = b.mosaic.integrate(b, tile, plate)
		report.paths = len(b.screen) - tile.Dx()*tile.Dy() + b.mosaic.paths
	}
	if err == nil {
		err = plate.finite(tile)
	}
	return report, err
}

// expose writes ray k to a pixel of the plate, order by order, up to the
// first opaque emitter; light from behind a translucent one is dimmed by it.
// Where an order has several crossings its intensity is their sum and its
// other layers show the first one.
func (b *bench) expose(k, pixel int, plate *Plate, worst *bounds) {
	var total, sum float64 // of all orders, of the one in hand
	through := 1.0         // share of the light that gets past what lies before
	last := -1
	for j := b.at.Start[k]; j < b.at.Start[k+1]; j++ {
		s, lit, passes := b.look(j)
		if !lit {
			continue
		}
		s.intensity *= through
		through *= passes
		total += s.intensity
		surface, order := b.at.Surface[j], int(b.at.Order[j])
		if surface == geodesic.Plane {
			worst.radius = max(worst.radius, b.at.Bound[j])
		} else {
			worst.angle = max(worst.angle, b.at.Bound[j])
		}
		layers := plate.layers[order*int(layerCount):][:layerCount]
		if order != last {
			last, sum = order, 0
			b.describe(j, pixel, s, layers)
		}
		sum += s.intensity
		set(layers[Intensity], pixel, sum)
		if through == 0 {
			break
		}
	}
	plate.Total[pixel] = float32(total)
}

// describe writes the layers other than intensity that are kept.
func (b *bench) describe(j int32, pixel int, s sight, layers [][]float32) {
	set(layers[Redshift], pixel, s.g)
	if layers[Azimuth] != nil {
		layers[Azimuth][pixel] = float32(b.at.Phi[j])
	}
	if b.at.Surface[j] == geodesic.Sky { // infinitely far, without a time of its own
		return
	}
	set(layers[Radius], pixel, b.at.R[j])
	set(layers[Mu], pixel, s.mu)
	if layers[Delay] != nil {
		layers[Delay][pixel] = float32(b.at.Delay[j])
	}
}

// set writes a pixel of a layer that is kept.
func set(layer []float32, pixel int, x float64) {
	if layer != nil {
		layer[pixel] = float32(x)
	}
}
