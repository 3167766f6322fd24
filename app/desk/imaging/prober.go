package imaging

import (
	"context"
	"errors"
	"sync"

	"annulet/raytrace"
)

// Spot is one pixel of the picture under the pointer.
type Spot struct {
	Order       Order // whose picture it is
	Column, Row int   // row 0 at the bottom
}

// Found is what a line of sight meets.
type Found struct {
	Spot        Spot
	Alpha, Beta float64 // M, or radians on an angular field
	Impact      float64 // b, M; NaN when not known
	Readings    []raytrace.Reading
	Err         error
}

// Probe traces the centre of one pixel in float64.
type Probe func(ctx context.Context, spot Spot) Found

// Prober answers for the pixel under the pointer; the latest wins.
type Prober struct {
	probe Probe
	show  func(Found)

	mu     sync.Mutex
	spot   *Spot // nil when the pointer has left
	cancel context.CancelFunc
	wake   chan struct{}
}

// NewProber returns a prober; Run starts it. Show is called from one goroutine.
func NewProber(probe Probe, show func(Found)) *Prober {
	return &Prober{probe: probe, show: show, wake: make(chan struct{}, 1)}
}

// Ask replaces whatever was asked before and not yet answered; nil asks for
// nothing.
func (p *Prober) Ask(s *Spot) {
	p.mu.Lock()
	p.spot = s
	if p.cancel != nil {
		p.cancel()
	}
	p.mu.Unlock()
	wake(p.wake)
}

// Run works until ctx ends.
func (p *Prober) Run(ctx context.Context) {
	for {
		select {
		case <-ctx.Done():
			return
		case <-p.wake:
		}
		probing, cancel := context.WithCancel(ctx)
		p.mu.Lock()
		spot := p.spot
		p.cancel = cancel
		p.mu.Unlock()
		if spot != nil {
			found := p.probe(probing, *spot)
			if probing.Err() == nil && !errors.Is(found.Err, context.Canceled) {
				p.show(found)
			}
		}
		cancel()
	}
}
