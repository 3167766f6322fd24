package raytrace

import (
	"context"
	"fmt"
	"image"

	"annulet/geodesic"
	"annulet/raytrace/emit"
)

// Traced is the geometry of a whole field: where every path meets the disk
// plane, star or sky, whatever shines there. Tracing is dear and shading
// cheap: trace once, shade many.
type Traced struct {
	view   *View
	want   geodesic.Want
	tiles  []image.Rectangle
	blocks []block // one a tile
	around int     // pixels around each tile that its block holds
	direct int
}

// block is the traced geometry of one tile.
type block struct {
	rays   geodesic.Rays
	at     geodesic.Crossings
	pixels emit.Pixels
}

// Trace follows the paths of the whole field and keeps their crossings, about
// 150 bytes a pixel. Every crossing of the plane is kept, so that rims may
// move when shading. Emitters of the view say which columns are worked out:
// later ones may not read more, which Shade refuses.
func (v *View) Trace(ctx context.Context, o Options) (*Traced, error) {
	kept := keep(o.Layers)
	t := &Traced{view: v, want: v.want(kept)}
	t.want.NoKR = false // a rim may move within the ISCO
	t.tiles = tilesOutward(v.Field.Columns, v.Field.Rows, v.tileSide(o))
	t.blocks = make([]block, len(t.tiles))
	if v.Integrates(o) {
		t.around = halo
	}
	counts := &Plate{}
	err := v.onTiles(ctx, o, t.want, nil, t.tiles, func(b *bench, k int) (tileReport, error) {
		integrated, err := b.followTile(t.tiles[k].Inset(-t.around), t.want)
		t.blocks[k] = block{b.rays, b.at, b.pixels}
		b.rays, b.at, b.pixels = geodesic.Rays{}, geodesic.Crossings{}, emit.Pixels{}
		return tileReport{integrated: integrated}, err
	}, counts)
	if err != nil {
		return nil, err
	}
	t.direct = counts.Integrated
	return t, nil
}

// Shade turns the crossings into a plate for the emitters of v, a view that
// differs from the traced one in its emitters only.
func (t *Traced) Shade(ctx context.Context, v *View, o Options) (*Plate, error) {
	kept := keep(o.Layers)
	if !t.Serves(v, o) {
		return nil, fmt.Errorf("raytrace: the traced field does not serve these emitters: trace it anew")
	}
	plate := newPlate(v.Field.Columns, v.Field.Rows, v.Plan.MaxOrder+1, kept)
	a, err := v.areas(ctx, o)
	if err != nil {
		return nil, err
	}
	o.PathByPath = o.PathByPath || a == nil // nothing is traced: no orbits are needed
	err = v.onTiles(ctx, o, t.want, a, t.tiles, func(b *bench, k int) (tileReport, error) {
		b.screen = v.Field.tileCenters(t.tiles[k].Inset(-t.around), b.screen[:0])
		b.rays, b.at, b.pixels = t.blocks[k].rays, t.blocks[k].at, t.blocks[k].pixels
		b.shade()
		return b.exposeTile(t.tiles[k], t.around, plate)
	}, plate)
	if err != nil {
		return nil, err
	}
	plate.Integrated = t.direct
	if err := a.conclude(plate); err != nil {
		return nil, err
	}
	return plate, nil
}

// Serves says whether Shade can do v with these options.
func (t *Traced) Serves(v *View, o Options) bool {
	want := v.want(keep(o.Layers))
	if v.Integrates(o) && t.around == 0 {
		return false
	}
	return t.covers(v) && (t.want.Delay || !want.Delay) && (!t.want.NoPlace || want.NoPlace)
}

// covers says whether v looks along the traced paths, at nothing that they
// were not followed to.
func (t *Traced) covers(v *View) bool {
	p, q := t.view.Plan, v.Plan
	return t.view.Observer == v.Observer && t.view.Field == v.Field &&
		p.Tolerance == q.Tolerance && p.MaxOrder == q.MaxOrder &&
		(p.Plane || !q.Plane) && p.Sky == q.Sky && q.Reach <= p.Reach && sameSpacetime(t.view.Spacetime, v.Spacetime)
}

func sameSpacetime(a, b geodesic.Spacetime) bool {
	if x, ok := a.(*geodesic.Round); ok {
		y, ok := b.(*geodesic.Round)
		return ok && x.Same(y)
	}
	if x, ok := a.(geodesic.Straight); ok {
		y, ok := b.(geodesic.Straight)
		return ok && x.Same(y)
	}
	return a == b
}
