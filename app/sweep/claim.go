package sweep

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strconv"
	"strings"
	"sync"
	"time"
)

// A claim is a file, made only if it is not there yet (an operation that
// every file system does as one), that says who is at work on a case. While
// its process lives it counts up the first line. A claim whose process is
// gone is never removed by others, which could hit a live one that has just
// taken its place: it is overtaken by a claim of the next generation,
// NAME.1 after NAME.0. The owner is who holds the highest generation.
//
// Whether a process of this very machine lives, the machine tells. One of
// another host lives as long as its count is seen to change; that is timed
// with this process's own monotonic clock, so that no two clocks must agree
// and none must go forwards.
const (
	claimsFolder = "claims"
	maxClaim     = 4096 // bytes read of one

	// beatEvery is how often a live claim counts.
	beatEvery = 5 * time.Second
	// staleAfter is how long a count of another host may stand still: file
	// systems shared by hosts keep old contents for up to a minute. Taste.
	staleAfter = 90 * time.Second
)

// claims are those of this process on one sweep.
type claims struct {
	dir     string
	me      identity
	timeout time.Duration // staleAfter

	mu    sync.Mutex
	held  map[string]*claim
	seen  map[string]sighting
	count int64
	stop  chan struct{}
	done  sync.WaitGroup
}

// claim is one that this process holds.
type claim struct {
	path       string // without the generation
	generation int
}

// sighting is when a count of somebody else's claim was first seen.
type sighting struct {
	text  string
	since time.Time // monotonic
}

// openClaims makes ready to claim; close ends that.
func openClaims(dir string) *claims {
	c := viewClaims(dir)
	c.done.Go(c.beat)
	return c
}

// viewClaims only looks at the claims of others.
func viewClaims(dir string) *claims {
	return &claims{
		dir: filepath.Join(dir, claimsFolder), me: self(), timeout: staleAfter,
		held: map[string]*claim{}, seen: map[string]sighting{}, stop: make(chan struct{}),
	}
}

// close gives up whatever is still held.
func (c *claims) close() {
	close(c.stop)
	c.done.Wait()
	for _, held := range c.held {
		held.remove()
	}
}

// beat counts all held claims up until close.
func (c *claims) beat() {
	tick := time.NewTicker(beatEvery)
	defer tick.Stop()
	for {
		select {
		case <-c.stop:
			return
		case <-tick.C:
		}
		c.mu.Lock()
		c.count++
		for _, held := range c.held {
			if f, err := os.OpenFile(held.file(), os.O_WRONLY, 0); err == nil { // else it is being removed
				_, _ = f.WriteAt([]byte(beatLine(c.count)), 0) // a beat missed is made good by the next
				_ = f.Close()
			}
		}
		c.mu.Unlock()
	}
}

// beatLine has the same length whatever the count.
func beatLine(n int64) string { return fmt.Sprintf("%020d\n", n) }

func (l *claim) file() string { return l.path + "." + strconv.Itoa(l.generation) }

// take claims a case; nil if somebody else is at work on it.
func (c *claims) take(name string) (*claim, error) {
	l := &claim{path: filepath.Join(c.dir, name)}
	for {
		top, err := c.highest(l.path)
		if err != nil {
			return nil, err
		}
		if top >= 0 && c.lives(l.path+"."+strconv.Itoa(top)) {
			return nil, nil
		}
		l.generation = top + 1
		f, err := os.OpenFile(l.file(), os.O_WRONLY|os.O_CREATE|os.O_EXCL, 0o666)
		if errors.Is(err, fs.ErrExist) {
			continue // somebody was quicker
		}
		if errors.Is(err, fs.ErrNotExist) { // the first claim, or the folder was swept up
			if err := os.MkdirAll(c.dir, 0o777); err != nil {
				return nil, err
			}
			continue
		}
		if err != nil {
			return nil, err
		}
		c.mu.Lock()
		_, err = f.WriteString(beatLine(c.count) + c.me.String() + "\n")
		c.held[name] = l
		c.mu.Unlock()
		if err = errors.Join(err, f.Close()); err != nil {
			c.release(name)
			return nil, err
		}
		return l, nil
	}
}

// release gives a case back.
func (c *claims) release(name string) {
	c.mu.Lock()
	l := c.held[name]
	delete(c.held, name)
	c.mu.Unlock()
	if l != nil {
		l.remove()
	}
}

// ours says whether nobody has overtaken the claim, which happens to a
// process that was stopped for minutes.
func (c *claims) ours(l *claim) bool {
	top, err := c.highest(l.path)
	return err == nil && top == l.generation
}

// remove takes away the claim and those it overtook, its own first: who sees
// an older one in between claims the case again, and finds its record.
func (l *claim) remove() {
	for g := l.generation; g >= 0; g-- {
		_ = os.Remove(l.path + "." + strconv.Itoa(g)) // an old one may be gone
	}
}

// highest returns the highest generation there is, -1 for none.
func (c *claims) highest(path string) (int, error) {
	for g := 0; ; g++ {
		_, err := os.Lstat(path + "." + strconv.Itoa(g))
		if errors.Is(err, fs.ErrNotExist) {
			return g - 1, nil
		}
		if err != nil {
			return 0, err
		}
	}
}

// busy says whether somebody is at work on a case.
func (c *claims) busy(name string) bool {
	path := filepath.Join(c.dir, name)
	top, err := c.highest(path)
	return err == nil && top >= 0 && c.lives(path+"."+strconv.Itoa(top))
}

// lives judges the claim of another, or of this, process.
func (c *claims) lives(file string) bool {
	text, err := readFile(file, maxClaim)
	if err != nil {
		return !errors.Is(err, fs.ErrNotExist)
	}
	lines := strings.SplitN(string(text), "\n", 3)
	if len(lines) == 3 {
		if who, ok := parseIdentity(lines[1]); ok && who.sameMachine(c.me) {
			return who.running()
		}
	}
	now := time.Now()
	c.mu.Lock()
	defer c.mu.Unlock()
	last, known := c.seen[file]
	if !known || last.text != string(text) {
		c.seen[file] = sighting{string(text), now}
		return true
	}
	return now.Sub(last.since) < c.timeout
}
