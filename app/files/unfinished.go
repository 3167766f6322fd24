package files

import (
	"errors"
	"io/fs"
	"os"
	"sync"
)

// ErrAbandoned is what Write returns once Abandon was called.
var ErrAbandoned = errors.New("abandoned because the program ends")

// Abandon removes the temporary files of every Write still under way, and
// makes these and all later ones fail with ErrAbandoned. It is the last act
// of a program that must exit at once, as on a second Ctrl-C; the first
// should cancel the contexts and let Write clean up.
func Abandon() error { return unfinished.abandon() }

// unfinished knows the temporary files of this process.
var unfinished register

type register struct {
	mu        sync.Mutex
	files     map[*os.File]bool // true for those that have no name yet
	abandoned bool
	named     bool // always: files without a name could get none here
}

// create opens a new temporary file beside target, for writing.
func (r *register) create(target string, mode fs.FileMode) (*os.File, error) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.abandoned {
		return nil, ErrAbandoned
	}
	name := temporaryFor(target)
	var file *os.File
	unnamed := false
	if !r.named {
		file, unnamed = createUnnamed(name, mode)
	}
	if !unnamed {
		var err error
		if file, err = os.OpenFile(name, os.O_WRONLY|os.O_CREATE|os.O_EXCL, mode); err != nil {
			return nil, err
		}
	}
	if r.files == nil {
		r.files = map[*os.File]bool{}
	}
	r.files[file] = unnamed
	return file, nil
}

// finish closes a temporary file and gives it the target's name. On error
// the file still has to be dropped.
func (r *register) finish(file *os.File, target string) error {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.abandoned {
		return ErrAbandoned
	}
	if r.files[file] {
		if err := giveName(file); err != nil {
			return err
		}
		r.files[file] = false
	}
	if err := file.Close(); err != nil {
		return err
	}
	if err := os.Rename(file.Name(), target); err != nil {
		return err
	}
	delete(r.files, file)
	return nil
}

// drop closes and removes a temporary file.
func (r *register) drop(file *os.File) error {
	r.mu.Lock()
	defer r.mu.Unlock()
	delete(r.files, file)
	return discard(file)
}

func (r *register) abandon() error {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.abandoned = true
	var err error
	for file, unnamed := range r.files {
		if !unnamed {
			err = errors.Join(err, os.Remove(file.Name()))
		}
	}
	clear(r.files)
	return err
}

// discard closes and removes a file that may be closed or removed already.
func discard(file *os.File) error {
	closed, removed := file.Close(), os.Remove(file.Name())
	if errors.Is(closed, os.ErrClosed) {
		closed = nil
	}
	if errors.Is(removed, fs.ErrNotExist) {
		removed = nil
	}
	return errors.Join(closed, removed)
}

// tryCreate makes a temporary file beside target, with a name, and removes it.
// Where a file without a name can get none, all later ones have names: long
// work must not end there.
func (r *register) tryCreate(target string) error {
	const mode = 0o600
	file, err := r.create(target, mode)
	if err != nil {
		return err
	}
	r.mu.Lock()
	if r.files[file] && giveName(file) != nil {
		r.named = true
	}
	again := r.named && r.files[file]
	r.mu.Unlock()
	if err := r.drop(file); err != nil || !again {
		return err
	}
	return r.tryCreate(target) // with a name from the start
}
