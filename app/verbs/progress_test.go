package verbs

import (
	"bytes"
	"strings"
	"sync"
	"testing"
	"time"

	"annulet/raytrace"
)

func TestProgressLines(t *testing.T) {
	var b bytes.Buffer
	p := newProgress(&b)
	p.begin(8, 6)
	for k := range 10 {
		p.report(raytrace.Progress{TilesDone: k + 1, Tiles: 10})
	}
	p.end()
	if got, want := b.String(), "render: 8 x 6 pixels\n"; got != want {
		t.Errorf("within %v it said %q, want %q", lineEvery, got, want)
	}
	p.next = time.Time{}
	p.report(raytrace.Progress{TilesDone: 5, Tiles: 10, PathsDone: 99})
	if got := b.String(); !strings.HasSuffix(got, "render: 50 %, 5 of 10 tiles, 99 paths\n") {
		t.Errorf("it said %q", got)
	}
}

func TestProgressBar(t *testing.T) {
	var b bytes.Buffer
	p := &progress{w: &b, bar: true}
	p.begin(8, 6)
	var reports sync.WaitGroup
	for k := range 10 {
		reports.Go(func() { p.report(raytrace.Progress{TilesDone: k + 1, Tiles: 10}) })
	}
	reports.Wait()
	p.end()
	got := b.String()
	if !strings.Contains(got, "100 %") || !strings.HasSuffix(got, "\r") || strings.Contains(got, "\n") {
		t.Errorf("bar %q", got)
	}
}
