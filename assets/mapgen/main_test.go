package main

import (
	"math"
	"testing"

	"annulet/assets"
)

// TestTablesAreCurrent compares the committed tables with fresh ones.
// Floating point may differ by architecture, hence a code of tolerance.
func TestTablesAreCurrent(t *testing.T) {
	fresh := map[string]table{}
	for name, cut := range map[string]func() (table, error){
		"ember":  func() (table, error) { return sequential(emberAnchors) },
		"shift":  func() (table, error) { return diverging(shiftAnchors) },
		"tarn":   func() (table, error) { return sequential(tarnAnchors) },
		"wheel":  func() (table, error) { return sequential(wheelAnchors) },
		"orders": func() (table, error) { return discrete(orderAnchors) },
	} {
		made, err := cut()
		if err != nil {
			t.Fatalf("%s: %v", name, err)
		}
		fresh[name] = made
	}
	if len(fresh) != len(assets.Names()) {
		t.Fatalf("%d tables for %d maps", len(fresh), len(assets.Names()))
	}
	for name, want := range fresh {
		m, ok := assets.Lookup(name)
		if !ok {
			t.Fatalf("assets has no map %s", name)
		}
		for k, w := range want {
			c := m.At(float64(k) / (entries - 1))
			for i, got := range []uint16{c.R, c.G, c.B} {
				if !(math.Abs(float64(got)-float64(w[i])) <= 1) {
					t.Fatalf("%s, entry %d is stale: run go generate ./assets", name, k)
				}
			}
		}
	}
}

func TestRefusesColoursOutsideTheGamut(t *testing.T) {
	const tooVivid = 0.4 // chroma; no sRGB colour reaches it
	if _, err := sequential([]anchor{{0.1, 0, 0}, {0.5, tooVivid, 0}, {0.9, 0, 0}}); err == nil {
		t.Error("a colour outside sRGB passes")
	}
}

func TestRunWantsOneName(t *testing.T) {
	if err := run(nil); err == nil {
		t.Error("run without a file name passes")
	}
}
