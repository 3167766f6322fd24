package raytrace

import (
	"annulet/geodesic"
	"annulet/raytrace/emit"
)

// bench is one goroutine's scratch: the blocks that travel from lines of
// sight to light.
type bench struct {
	view   *View
	tracer geodesic.Tracer
	dirs   []geodesic.Direction
	rays   geodesic.Rays
	at     geodesic.Crossings
	lights []emit.Light // one an emitter
}

func (v *View) newBench() (*bench, error) {
	tracer, err := v.Spacetime.Tracer(v.Observer, v.Plan)
	if err != nil {
		return nil, err
	}
	return &bench{view: v, tracer: tracer, lights: make([]emit.Light, len(v.Emitters))}, nil
}

// trace follows the block of b.dirs and shades its crossings.
func (b *bench) trace(want geodesic.Want) error {
	v := b.view
	if err := v.Spacetime.Aim(v.Observer, v.Field.Parallel, b.dirs, &b.rays); err != nil {
		return err
	}
	b.tracer.Cross(&b.rays, want, &b.at)
	for e, emitter := range v.Emitters {
		emitter.Shade(&b.rays, &b.at, &b.lights[e])
	}
	return nil
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
