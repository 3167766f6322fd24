package raytrace

import (
	"context"
	"sync"

	"annulet/geodesic"
)

// sharer is a spacetime whose paths share orbits.
type sharer interface {
	SharedOrbits(ctx context.Context, share geodesic.Share) (*geodesic.OrbitTable, error)
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

// tableFor returns a table for the share, from the last one if that holds it.
// It is nil where sharing does not pay.
func (o *Orbits) tableFor(ctx context.Context, object *geodesic.Round, share geodesic.Share) (*geodesic.OrbitTable, error) {
	o.mu.Lock()
	defer o.mu.Unlock()
	if o.table != nil && o.table.Holds(object, share) {
		return o.table, nil
	}
	table, err := object.SharedOrbits(ctx, share)
	if err == nil && table != nil {
		o.table = table
	}
	return table, err
}
