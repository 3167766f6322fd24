package raytrace

import (
	"context"
	"fmt"
	"math"
	"testing"

	"annulet/scenes"
)

// roundScenes are a disk about every kind of object, from 6 M, 50 M and
// infinity.
func roundScenes() map[string]scenes.Scene {
	all := map[string]scenes.Scene{}
	for name, object := range map[string]scenes.Object{
		"hole":         {Kind: "black-hole"},
		"charged hole": {Kind: "black-hole", Charge: 0.6},
		"star":         {Kind: "star", Radius: 4, Interior: "opaque"},
		"clear star":   {Kind: "star", Radius: 4, Interior: "uniform"},
		"shell":        {Kind: "shell", Radius: 3.5},
	} {
		for _, radius := range []float64{6, 50, math.Inf(1)} {
			s := scene(70, 6.5, 60)
			s.Object = object
			s.Observer.Radius = radius
			all[fmt.Sprintf("%s from %g M", name, radius)] = s
		}
	}
	return all
}

// The main road and the path-by-path road show the same plate within their
// stated bounds, and the main road does not depend on the workers.
func TestSharedPlates(t *testing.T) {
	for name, s := range roundScenes() {
		v := view(t, s)
		shared := render(t, v, Options{Workers: 1})
		for _, workers := range []int{2, 7} {
			samePlate(t, fmt.Sprintf("%s, %d workers", name, workers), shared, render(t, view(t, s), Options{Workers: workers}))
		}
		exact := render(t, v, Options{PathByPath: true})
		most := shared.Paths / 1000 // rays integrated after all
		switch {
		case s.Object.Interior == "uniform" || s.Object.Kind == "shell":
			most = shared.Paths // those that pass through
		case s.Object.Kind == "star":
			most = shared.Paths / 20 // those that graze it
		}
		if exact.Integrated != exact.Paths || shared.Integrated > most {
			t.Errorf("%s: %d and %d of %d paths integrated", name, exact.Integrated, shared.Integrated, exact.Paths)
		}
		bound := shared.WorstBound + exact.WorstBound
		flipped, compared := 0, 0
		for n := range shared.Orders {
			a, b := shared.Layer(Radius, n), exact.Layer(Radius, n)
			for k := range a {
				x, y := float64(a[k]), float64(b[k])
				if math.IsNaN(x) != math.IsNaN(y) {
					flipped++ // astride a rim
					continue
				}
				if math.IsNaN(x) {
					continue
				}
				compared++
				if !(math.Abs(x/y-1) <= bound+1.2e-7) { // float32
					t.Errorf("%s: r = %g and %g, bound %g", name, x, y, bound)
				}
			}
		}
		if flipped > 2 || compared < 200 {
			t.Errorf("%s: %d pixels flipped, %d compared", name, flipped, compared)
		}
	}
}

// Traced once and shaded for another emitter, a plate is that of a render
// from scratch, bit for bit; what the traced field does not hold is refused.
func TestTraceOnceShadeMany(t *testing.T) {
	s := scene(75, 6, 64)
	s.Field.AutoWidth, s.Field.Width = false, 50
	v := view(t, s)
	traced, err := v.Trace(context.Background(), Options{})
	if err != nil {
		t.Fatal(err)
	}
	s.Emitters[0].Index, s.Emitters[0].Inner.Radius, s.Emitters[0].Outer = []float64{2}, 3, 17
	s.Emitters[0].Clockwise, s.Emitters[0].EmissionAngle = true, "darkened"
	other := view(t, s)
	other.Follow(v)
	if !traced.Serves(other, Options{}) {
		t.Fatal("a moved rim is not served")
	}
	shaded, err := traced.Shade(context.Background(), other, Options{Workers: 3})
	if err != nil {
		t.Fatal(err)
	}
	samePlate(t, "shaded", shaded, render(t, other, Options{}))
	s.Observer.Inclination = 74
	if turned := view(t, s); traced.Serves(turned, Options{}) {
		t.Error("another inclination is served")
	} else if _, err := traced.Shade(context.Background(), turned, Options{}); err == nil {
		t.Error("another inclination is shaded")
	}
}

// A plate that keeps fewer layers has the same values in those it keeps.
func TestFewerLayers(t *testing.T) {
	v := view(t, scene(60, 2, 40))
	all := render(t, v, Options{})
	few := render(t, v, Options{Layers: []Layer{Redshift}})
	none := render(t, v, Options{Layers: []Layer{}})
	for k := range all.Total {
		if all.Total[k] != few.Total[k] || all.Total[k] != none.Total[k] {
			t.Fatalf("total %g, %g and %g", all.Total[k], few.Total[k], none.Total[k])
		}
		if a, b := all.Layer(Redshift, 0)[k], few.Layer(Redshift, 0)[k]; a != b && a == a {
			t.Fatalf("g %g and %g", a, b)
		}
	}
	if few.Layer(Delay, 0) != nil || none.Layer(Redshift, 0) != nil || few.Layer(Redshift, 2) == nil {
		t.Error("the wrong layers are kept")
	}
}

// Orbits are kept while only inclination and field change.
func TestOrbitsAreKept(t *testing.T) {
	s := scene(30, 6, 20)
	v := view(t, s)
	render(t, v, Options{})
	table := v.Orbits.table
	s.Observer.Inclination, s.Field.AutoWidth, s.Field.Width = 50, false, 12
	w := view(t, s)
	w.Follow(v)
	render(t, w, Options{})
	if w.Orbits.table != table {
		t.Error("orbits were integrated anew for another inclination")
	}
	s.Observer.Radius = 100
	x := view(t, s)
	x.Follow(w)
	render(t, x, Options{})
	if x.Orbits.table == table {
		t.Error("orbits of another observer were used")
	}
	if v.Orbits.Build().Orbits == 0 {
		t.Error("no report")
	}
}

// BenchmarkFrame is a frame of 1000 x 1000 at 75 deg with changed
// inclination: traced and shaded, total only.
func BenchmarkFrame(b *testing.B) {
	s := scene(75, 6, 1000)
	s.Observer.Radius = 1000
	s.Field.AutoWidth, s.Field.Width = false, 44
	v, err := NewView(s)
	if err != nil {
		b.Fatal(err)
	}
	o := Options{Layers: []Layer{}}
	if _, err := v.Render(context.Background(), o); err != nil {
		b.Fatal(err)
	}
	b.Run("render", func(b *testing.B) {
		k := 0
		for b.Loop() {
			k++
			v.Observer.InclinationDeg = 75 + 0.01*float64(k%2)
			if _, err := v.Render(context.Background(), o); err != nil {
				b.Fatal(err)
			}
		}
		b.ReportMetric(float64(b.Elapsed().Milliseconds())/float64(b.N), "ms/frame")
	})
	traced, err := v.Trace(context.Background(), o)
	if err != nil {
		b.Fatal(err)
	}
	b.Run("shade", func(b *testing.B) {
		for b.Loop() {
			if _, err := traced.Shade(context.Background(), v, o); err != nil {
				b.Fatal(err)
			}
		}
		b.ReportMetric(float64(b.Elapsed().Milliseconds())/float64(b.N), "ms/frame")
	})
}
