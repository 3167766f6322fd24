package desk

import (
	"sync"

	"fyne.io/fyne/v2"

	"annulet/app/desk/imaging"
)

// news is what work has to tell the window: the latest of each kind.
type news struct {
	frame       *imaging.Frame
	found       *finding
	measured    *measured
	done, tiles int  // of a long trace; tiles is 0 for no news
	keep        bool // it is time to keep unsaved work
}

// funnel carries news to the window's thread. However fast it comes, at most
// one call waits in the toolkit's queue; older news of a kind is overtaken.
type funnel struct {
	deliver func(news) // on the window's thread

	mu     sync.Mutex
	latest news
	dirty  bool
}

// put adds news from any goroutine.
func (f *funnel) put(add func(*news)) {
	f.mu.Lock()
	defer f.mu.Unlock()
	add(&f.latest)
	if !f.dirty {
		f.dirty = true
		fyne.Do(f.flush)
	}
}

func (f *funnel) flush() {
	f.mu.Lock()
	latest := f.latest
	f.latest, f.dirty = news{}, false
	f.mu.Unlock()
	f.deliver(latest)
}
