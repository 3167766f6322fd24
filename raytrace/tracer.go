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
	screen        [][2]float64 // α, β of the block's lines of sight
	dirs          []geodesic.Direction
	rays          geodesic.Rays
	at            geodesic.Crossings
	before, after geodesic.Rays // to either side of each ray, see cover
	folded        []int         // rays next to a fold, see unfold
	beside        geodesic.Crossings
	pixels        emit.Pixels
	lights        []emit.Light // one an emitter
}

func (v *View) newBench() (*bench, error) {
	tracer, err := v.Spacetime.Tracer(v.Observer, v.Plan)
	if err != nil {
		return nil, err
	}
	return &bench{view: v, tracer: tracer, lights: make([]emit.Light, len(v.Emitters))}, nil
}

// trace follows the block of b.screen and shades its crossings.
func (b *bench) trace() error {
	v := b.view
	b.dirs = b.dirs[:0]
	for _, p := range b.screen {
		b.dirs = append(b.dirs, v.Field.direction(p[0], p[1]))
	}
	if err := b.aim(&b.rays); err != nil {
		return err
	}
	b.tracer.Cross(&b.rays, geodesic.Want{Delay: true, Slope: v.Plan.Sky}, &b.at)
	if v.Plan.Sky {
		if err := b.cover(); err != nil {
			return err
		}
	}
	for e, emitter := range v.Emitters {
		emitter.Shade(&b.rays, &b.at, &b.pixels, &b.lights[e])
	}
	return nil
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
// one; opaque says that the path ends here.
func (b *bench) look(j int32) (s sight, lit, opaque bool) {
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
		opaque = opaque || l.Opaque[j]
	}
	return s, lit, opaque
}
