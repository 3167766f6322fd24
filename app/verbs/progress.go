package verbs

import (
	"fmt"
	"io"
	"os"
	"strings"
	"sync"
	"time"

	"golang.org/x/term"

	"annulet/raytrace"
)

// Tastes: a bar moves often enough to look alive, a log stays readable.
const (
	barEvery  = 100 * time.Millisecond
	lineEvery = 3 * time.Second
	barWidth  = 30 // characters
)

// progress shows how far a render is: a bar on a terminal, else a line every
// few seconds. It is safe for concurrent use.
type progress struct {
	w     io.Writer
	bar   bool
	every time.Duration

	mu    sync.Mutex
	most  int       // tiles done; reports may overtake each other
	next  time.Time // when to show again
	drawn bool
}

// newProgress returns what will show progress on w.
func newProgress(w io.Writer) *progress {
	p := &progress{w: w, every: lineEvery}
	if f, ok := w.(*os.File); ok && term.IsTerminal(int(f.Fd())) {
		p.bar, p.every = true, barEvery
	}
	return p
}

// begin says what is begun, where a log would otherwise stay silent at first.
func (p *progress) begin(columns, rows int) {
	p.next = time.Now().Add(p.every)
	if !p.bar {
		fmt.Fprintf(p.w, "render: %d x %d pixels\n", columns, rows)
	}
}

// report takes one step of the renderer.
func (p *progress) report(r raytrace.Progress) {
	p.mu.Lock()
	defer p.mu.Unlock()
	now := time.Now()
	if r.TilesDone <= p.most || now.Before(p.next) {
		return
	}
	p.most, p.next = r.TilesDone, now.Add(p.every)
	percent := 100 * r.TilesDone / max(r.Tiles, 1)
	if !p.bar {
		fmt.Fprintf(p.w, "render: %d %%, %d of %d tiles, %d paths\n", percent, r.TilesDone, r.Tiles, r.PathsDone)
		return
	}
	full := barWidth * r.TilesDone / max(r.Tiles, 1)
	fmt.Fprintf(p.w, "\r[%s%s] %3d %%", strings.Repeat("=", full), strings.Repeat(" ", barWidth-full), percent)
	p.drawn = true
}

// end takes the bar away.
func (p *progress) end() {
	p.mu.Lock()
	defer p.mu.Unlock()
	if p.drawn {
		fmt.Fprintf(p.w, "\r%s\r", strings.Repeat(" ", barWidth+len("[] 100 %")))
	}
	p.drawn = false
}
