package windowtest

import (
	"bufio"
	"image"
	"io"
	"os"
	"regexp"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"
)

// patience is how long a line may take to come, on a machine that is busy
// with other things. Not a statement about speed.
const patience = 60 * time.Second

// line is one line of the program's log.
type line struct {
	at     time.Time
	text   string
	word   string            // "settled", "preview", …
	fields map[string]string // key=value, quotes removed
}

func (l line) number(t *testing.T, key string) float64 {
	t.Helper()
	v, err := strconv.ParseFloat(l.fields[key], 64)
	if err != nil {
		t.Fatalf("%s in %q: %v", key, l.text, err)
	}
	return v
}

// logbook collects the log as it comes.
type logbook struct {
	mu    sync.Mutex
	more  *sync.Cond
	lines []line
	ended bool

	process *os.Process // that writes it
	read    int         // lines before this one have been waited for
}

func newLogbook(r io.Reader) *logbook {
	b := &logbook{}
	b.more = sync.NewCond(&b.mu)
	go func() {
		for s := bufio.NewScanner(r); s.Scan(); {
			b.add(parse(s.Text()))
		}
		b.mu.Lock()
		b.ended = true
		b.mu.Unlock()
		b.more.Broadcast()
	}()
	return b
}

func (b *logbook) add(l line) {
	b.mu.Lock()
	b.lines = append(b.lines, l)
	b.mu.Unlock()
	b.more.Broadcast()
}

var pair = regexp.MustCompile(`(\w+)=("(?:[^"\\]|\\.)*"|\S+)`)

func parse(text string) line {
	l := line{at: time.Now(), text: text, fields: map[string]string{}}
	rest, ours := strings.CutPrefix(text, "annulet: ")
	if !ours {
		return l
	}
	l.word, _, _ = strings.Cut(rest, " ")
	for _, m := range pair.FindAllStringSubmatch(rest, -1) {
		value := m[2]
		if plain, err := strconv.Unquote(value); err == nil {
			value = plain
		}
		l.fields[m[1]] = value
	}
	return l
}

// now forgets the lines so far: the next wait looks at later ones only.
func (b *logbook) now() {
	b.mu.Lock()
	b.read = len(b.lines)
	b.mu.Unlock()
}

// wait returns the first line since the last wait that suits.
func (b *logbook) wait(t *testing.T, what string, suits func(line) bool) line {
	t.Helper()
	deadline := time.Now().Add(patience)
	alarm := time.AfterFunc(patience, b.more.Broadcast)
	defer alarm.Stop()
	b.mu.Lock()
	defer b.mu.Unlock()
	for from := b.read; ; {
		for ; from < len(b.lines); from++ {
			if suits(b.lines[from]) {
				b.read = from + 1
				return b.lines[from]
			}
		}
		if b.ended || !time.Now().Before(deadline) {
			var all []string
			for _, l := range b.lines {
				all = append(all, l.text)
			}
			t.Fatalf("never seen: %s (program ended: %v). Log:\n%s", what, b.ended, strings.Join(all, "\n"))
		}
		b.more.Wait()
	}
}

func word(w string) func(line) bool { return func(l line) bool { return l.word == w } }

// settledAt suits a settled picture at that inclination.
func settledAt(inclination string) func(line) bool {
	return func(l line) bool { return l.word == "settled" && l.fields["inclination"] == inclination }
}

// picture suits any picture.
func picture(l line) bool { return l.word == "settled" || l.word == "preview" }

// placesOf holds where things are, by "key=… entry" and the like.
type placesOf map[string]string

// places waits for the window and returns where things are in it.
func (b *logbook) places(t *testing.T) (placesOf, line) {
	t.Helper()
	p := placesOf{}
	shown := b.wait(t, "the window", func(l line) bool {
		if l.word == "place" {
			p.add(strings.TrimPrefix(l.text, "annulet: place "))
		}
		return l.word == "window"
	})
	return p, shown
}

// add takes in a line such as "key=a entry=… slider=…" or "say="b" word=…".
func (p placesOf) add(text string) {
	var name []string
	for _, m := range pair.FindAllStringSubmatch(text, -1) {
		switch m[1] {
		case "key", "say", "option":
			name = append(name, m[0])
		default:
			p[strings.Join(append(slices.Clone(name), m[1]), " ")] = m[2]
		}
	}
}

func (p placesOf) of(t *testing.T, name string) image.Rectangle {
	t.Helper()
	text, ok := p[name]
	if !ok {
		t.Fatalf("nobody said where %s is", name)
	}
	return rectangle(t, text)
}

// end waits until the program has ended.
func (b *logbook) end(t *testing.T) {
	t.Helper()
	deadline := time.AfterFunc(patience, b.more.Broadcast)
	defer deadline.Stop()
	b.mu.Lock()
	defer b.mu.Unlock()
	for from := time.Now(); !b.ended; b.more.Wait() {
		if time.Since(from) > patience {
			t.Fatal("the program does not end")
		}
	}
}
