package raytrace

import (
	"context"
	"math"
	"testing"

	"annulet/geodesic"
	"annulet/scenes"
)

// A track lies on the closed form's orbit and passes through the crossings
// that Probe finds.
func TestWalkFollowsTheOrbit(t *testing.T) {
	d, err := scenes.Parse("walk.toml", []byte("schema = 1\n[observer]\nradius = \"40 M\"\ninclination = \"50 deg\"\n[[emitter]]\ninner = \"horizon\"\nouter = \"60 M\"\n"))
	if err != nil {
		t.Fatal(err)
	}
	v, err := NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	for _, at := range [][2]float64{{5, 2}, {-3, 1}, {0.1, -5.3}, {9, -9}} {
		const perTurn = 90
		track, err := v.Walk(at[0], at[1], perTurn)
		if err != nil {
			t.Fatal(err)
		}
		orbit := geodesic.NewClosedOrbit(track.Impact)
		if len(track.Psi) < perTurn/4 {
			t.Errorf("%v: only %d points", at, len(track.Psi))
		}
		// the tolerance is on u = 1/r; errors grow near the critical curve
		limit := v.Plan.Tolerance * (1 + 1/math.Abs(geodesic.CriticalDistance(track.Impact)))
		for k, psi := range track.Psi {
			want := orbit.RadiusAt(1./40, psi)
			if !(math.Abs(1/track.R[k]-1/want) <= limit) {
				t.Errorf("%v: r = %.10g M at %.4f rad, closed form %.10g", at, track.R[k], psi, want)
			}
			if k > 0 && psi <= track.Psi[k-1] {
				t.Errorf("%v: swept angles fall from %g to %g", at, track.Psi[k-1], psi)
			}
		}
		readings, err := v.Probe(context.Background(), [][2]float64{at})
		if err != nil {
			t.Fatal(err)
		}
		for _, r := range readings {
			if want := orbit.RadiusAt(1./40, track.Disk[r.Order]); !(math.Abs(r.R/want-1) <= 1e-7) {
				t.Errorf("%v: order %d crosses at %.10g M, the track says %.10g", at, r.Order, r.R, want)
			}
		}
	}
}

// Edge-on every path meets the plane behind the object, after half a turn,
// in the lower half of the screen too.
func TestWalkEdgeOn(t *testing.T) {
	d, err := scenes.Parse("walk.toml", []byte("schema = 1\n[observer]\ninclination = 90\n[[emitter]]\n"))
	if err != nil {
		t.Fatal(err)
	}
	v, err := NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	for _, beta := range []float64{7, -7} {
		track, err := v.Walk(3, beta, 4)
		if err != nil {
			t.Fatal(err)
		}
		for n, psi := range track.Disk {
			if want := math.Pi * float64(n+1); psi != want {
				t.Errorf("beta = %g: order %d crosses after %g rad, want %g", beta, n, psi, want)
			}
		}
	}
}
