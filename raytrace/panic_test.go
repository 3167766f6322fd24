package raytrace

import (
	"errors"
	"testing"

	"annulet/geodesic/guard"
	"annulet/scenes"
)

// A defect that shows in a worker's goroutine fails the image, not the
// program.
func TestPanicOfAWorker(t *testing.T) {
	d, err := scenes.Load("@first-light")
	if err != nil {
		t.Fatal(err)
	}
	if err := d.Set("field.pixels", "[16, 16]"); err != nil {
		t.Fatal(err)
	}
	view, err := NewView(d.Scene())
	if err != nil {
		t.Fatal(err)
	}
	_, err = view.Render(t.Context(), Options{Workers: 2, Report: func(Progress) { panic("no light") }})
	var p *guard.Panic
	if !errors.As(err, &p) || p.Value != "no light" {
		t.Errorf("%v, want the panic", err)
	}
}
