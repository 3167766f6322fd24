package measure

import (
	"context"
	"math"
	"testing"

	"annulet/raytrace"
	"annulet/raytrace/emit"
	"annulet/scenes"
)

// The flux of every order by two roads: integrated over the screen with a
// bound, and over the disk with the transfer Jacobian, which share nothing but
// the paths.
func TestFluxesByTwoRoads(t *testing.T) {
	d, err := scenes.Load("@first-light")
	if err != nil {
		t.Fatal(err)
	}
	s := d.Scene()
	s.Observer.Inclination = 60
	v, err := raytrace.NewView(s)
	if err != nil {
		t.Fatal(err)
	}
	orders, _, err := v.DiskFlux(v.Emitters[0].(*emit.Disk))
	if err != nil {
		t.Fatal(err)
	}
	rings, err := NewRings(context.Background(), v, nil, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if len(orders) != 3 || len(rings.Rings) != 3 {
		t.Fatalf("%d and %d orders", len(orders), len(rings.Rings))
	}
	for n, r := range rings.Rings {
		const onDisk = 1e-5 // relative, what DiskFlux settles at
		if off := math.Abs(orders[n] - r.Flux); !(off <= r.FluxBound+onDisk*r.Flux) || !(off <= 1e-4*r.Flux) {
			t.Errorf("order %d: %.9g on the disk, %.9g ± %.1e on the screen", n, orders[n], r.Flux, r.FluxBound)
		}
	}
}
