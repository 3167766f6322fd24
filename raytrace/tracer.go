package raytrace

import (
	"annulet/geodesic"
	"annulet/raytrace/emit"
)

// bench is one goroutine's scratch: the blocks that travel from lines of
// sight to light.
type bench struct {
	view          *View
	tracer        geodesic.Tracer
	sharing       *geodesic.SharedTracer // the tracer if orbits are shared, else nil
	screen        [][2]float64           // α, β of the block's lines of sight
	dirs          []geodesic.Direction
	rays          geodesic.Rays
	at            geodesic.Crossings
	before, after geodesic.Rays // to either side of each ray, see cover
	folded        []int         // rays next to a fold, see unfold
	beside        geodesic.Crossings
	pixels        emit.Pixels
	lights        []emit.Light // one an emitter
	mosaic        *mosaic      // for pixels as areas; nil for their middles
}

// newBench returns scratch that follows paths by the table's orbits, or one
// by one if that is nil.
func (v *View) newBench(table *geodesic.OrbitTable) (*bench, error) {
	b := &bench{view: v, lights: make([]emit.Light, len(v.Emitters))}
	var err error
	if s, ok := v.Spacetime.(sharer); ok && table != nil {
		b.sharing, err = s.SharedTracer(v.Observer, v.Plan, table)
		b.tracer = b.sharing
	} else {
		b.tracer, err = v.Spacetime.Tracer(v.Observer, v.Plan)
	}
	return b, err
}

// want is what the emitters and the kept layers read.
func (v *View) want(kept layerSet) geodesic.Want {
	want := geodesic.Want{Delay: kept[Delay], Slope: v.Plan.Sky, NoPlace: !kept[Azimuth], NoKR: true}
	for _, e := range v.Emitters {
		reads := e.Reads()
		want.Delay = want.Delay || reads.Delay
		want.NoPlace = want.NoPlace && !reads.Place
		want.NoKR = want.NoKR && !reads.KR
	}
	return want
}

// follow traces the block of b.screen to its crossings and returns how many
// of its rays were integrated one by one.
func (b *bench) follow(want geodesic.Want) (integrated int, err error) {
	v := b.view
	b.dirs = v.Field.directions(b.screen, b.dirs[:0])
	if err := b.aim(&b.rays); err != nil {
		return 0, err
	}
	integrated = len(b.screen)
	if b.sharing != nil {
		integrated = -b.sharing.Direct()
	}
	b.tracer.Cross(&b.rays, want, &b.at)
	if b.sharing != nil {
		integrated += b.sharing.Direct()
	}
	if v.Plan.Sky {
		err = b.cover()
	}
	return integrated, err
}

// shade lights the crossings of the block.
func (b *bench) shade() {
	for e, emitter := range b.view.Emitters {
		emitter.Shade(&b.rays, &b.at, &b.pixels, &b.lights[e])
	}
}

// aim turns the lines of sight of b.dirs into rays.
func (b *bench) aim(rays *geodesic.Rays) error {
	v := b.view
	return v.Spacetime.Aim(v.Observer, v.Field.IsParallel(), b.dirs, rays)
}

// sight is the light of all emitters at one crossing.
type sight struct {
	intensity, g, mu float64
}

// look sums the emitters at crossing j. G and Mu are those of the first lit
// one; passes is the share of the light from behind that gets through them
// all.
func (b *bench) look(j int32) (s sight, lit bool, passes float64) {
	passes = 1
	for e := range b.lights {
		l := &b.lights[e]
		if !l.Lit[j] {
			continue
		}
		if !lit {
			s.g, s.mu = l.G[j], l.Mu[j]
		}
		s.intensity += l.Intensity[j]
		lit = true
		passes *= l.Passes[j]
	}
	return s, lit, passes
}
