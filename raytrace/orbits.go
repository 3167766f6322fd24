package raytrace

import (
	"context"
	"sync"

	"annulet/geodesic"
)

// sharer is a spacetime whose paths share orbits.
type sharer interface {
	SharedOrbits(ctx context.Context, share geodesic.Share) (*geodesic.OrbitTable, error)
	Holds(table *geodesic.OrbitTable, share geodesic.Share) bool
	SharedTracer(o geodesic.Observer, plan geodesic.Plan, table *geodesic.OrbitTable) (*geodesic.SharedTracer, error)
}

var _ sharer = (*geodesic.Round)(nil) // breaks the build, not the picture

// Orbits keeps the shared orbits of the last observer, so that views which
// follow one another, while a hand drags the inclination or a field moves,
// integrate them once. It is safe for concurrent use; the zero Orbits is
// empty.
type Orbits struct {
	mu    sync.Mutex
	table *geodesic.OrbitTable
}

// Build reports on the orbits kept; the zero Build if there are none.
func (o *Orbits) Build() geodesic.Build {
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.table == nil {
		return geodesic.Build{}
	}
	return o.table.Build()
}

// shared returns the table that the view's paths share, made now if the last
// one does not hold it; nil where sharing does not pay.
func (v *View) shared(ctx context.Context, workers int, delay bool) (*geodesic.OrbitTable, error) {
	s, ok := v.Spacetime.(sharer)
	if !ok || v.Orbits == nil {
		return nil, nil
	}
	share := geodesic.Share{
		Observer: v.Observer, Tolerance: v.Plan.Tolerance, MaxOrder: v.Plan.MaxOrder,
		Outward: v.Field.Projection == AllSky || v.Field.Projection == Perspective && v.Observer.Motion != geodesic.Static,
		Delay:   delay, Workers: workers,
	}
	o := v.Orbits
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.table != nil && s.Holds(o.table, share) {
		return o.table, nil
	}
	table, err := s.SharedOrbits(ctx, share)
	if err == nil && table != nil {
		o.table = table
	}
	return table, err
}
