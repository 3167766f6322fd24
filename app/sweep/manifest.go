package sweep

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"slices"

	"annulet/app/files"
)

// Manifest says what a sweep is. It is written once, before the first case,
// and again with the states when the sweep is merged.
type Manifest struct {
	Format   int       `json:"annulet_sweep"` // 1
	Version  string    `json:"version"`       // of the program that began it
	Name     string    `json:"scene_name"`    // "@first-light", or the file's absolute path
	Scene    string    `json:"scene"`         // the file's text
	Axes     []Axis    `json:"vary,omitempty"`
	Products []string  `json:"products"`
	Cases    []Listing `json:"cases"`
}

// Listing is a case and, once merged, what became of it.
type Listing struct {
	Case
	State  State         `json:"state"`
	Reason string        `json:"reason,omitempty"`
	Files  []FileSummary `json:"files,omitempty"`
}

const (
	manifestName   = "manifest.json"
	manifestFormat = 1
	// maxManifest bounds what is read: a million cases with checksums.
	maxManifest = 1 << 30
)

var (
	// ErrNoSweep: the folder holds no sweep.
	ErrNoSweep = errors.New("no sweep here: there is no " + manifestName)
	// ErrDamaged: the manifest cannot be understood.
	ErrDamaged = errors.New(manifestName + " is damaged; give the command that began the sweep again: it is written anew, and cases that are done stay done")
	// ErrOther: the folder holds another sweep.
	ErrOther = errors.New("the folder holds another sweep")
)

// Load reads the manifest of a sweep.
func Load(dir string) (*Manifest, error) {
	path := filepath.Join(dir, manifestName)
	text, err := readFile(path, maxManifest)
	if errors.Is(err, fs.ErrNotExist) {
		return nil, fmt.Errorf("%s: %w", dir, ErrNoSweep)
	}
	if err != nil {
		return nil, err
	}
	return decode(path, text)
}

// decode reads a manifest's text; path is for errors.
func decode(path string, text []byte) (*Manifest, error) {
	m := new(Manifest)
	if err := json.Unmarshal(text, m); err != nil {
		return nil, fmt.Errorf("%s: %w (%v)", path, ErrDamaged, err)
	}
	if err := m.check(path); err != nil {
		return nil, err
	}
	return m, nil
}

func (m *Manifest) check(path string) error {
	switch {
	case m.Format > manifestFormat:
		return fmt.Errorf("%s: written by a later version, format %d; this one reads %d", path, m.Format, manifestFormat)
	case m.Format != manifestFormat || len(m.Cases) == 0 || len(m.Cases) > maxValues || len(m.Products) == 0:
		return fmt.Errorf("%s: %w", path, ErrDamaged)
	}
	sets := make([][]Setting, len(m.Cases))
	for k, c := range m.Cases {
		sets[k] = c.Set
	}
	for k, c := range Named(sets) {
		if c.Name != m.Cases[k].Name { // which would be the name of a file
			return fmt.Errorf("%s: case %d is named %q, want %q: %w", path, k, m.Cases[k].Name, c.Name, ErrDamaged)
		}
	}
	return nil
}

// Begin writes the manifest of a sweep that starts, or finds the same sweep
// begun already. A damaged manifest is written anew. It returns the manifest
// to work by, and whether it was there.
func Begin(ctx context.Context, dir string, m *Manifest) (*Manifest, bool, error) {
	m.Format = manifestFormat
	for k := range m.Cases {
		m.Cases[k].State = Waiting
	}
	if err := os.MkdirAll(dir, 0o777); err != nil {
		return nil, false, err
	}
	old, err := Load(dir)
	var entries []os.DirEntry
	if errors.Is(err, ErrNoSweep) {
		if entries, err = os.ReadDir(dir); err != nil {
			return nil, false, err
		}
		old, err = Load(dir) // another process may have begun it before the listing
	}
	switch {
	case err == nil:
		if why := old.differs(m); why != "" {
			return nil, false, fmt.Errorf("%s: %w: %s; choose another folder", dir, ErrOther, why)
		}
		return old, true, nil
	case errors.Is(err, ErrNoSweep):
		if !looksLikeSweep(entries) {
			return nil, false, fmt.Errorf("%s: the folder is not empty, and holds no sweep", dir)
		}
	case !errors.Is(err, ErrDamaged):
		return nil, false, err
	}
	return m, false, m.write(ctx, dir)
}

// looksLikeSweep says whether a folder without a manifest is what a sweep
// that died at once leaves.
func looksLikeSweep(entries []os.DirEntry) bool {
	return !slices.ContainsFunc(entries, func(e os.DirEntry) bool {
		return e.Name() != recordsFolder && e.Name() != claimsFolder && e.Name()[0] != '.'
	})
}

// differs says how two sweeps differ; "" if they are the same.
func (m *Manifest) differs(other *Manifest) string {
	switch {
	case m.Version != other.Version:
		return fmt.Sprintf("it was begun by version %s, this is %s", m.Version, other.Version)
	case m.Scene != other.Scene:
		return "its scene is another one"
	case !slices.Equal(m.Products, other.Products):
		return fmt.Sprintf("its products are %v", m.Products)
	case !slices.EqualFunc(m.Cases, other.Cases, func(a, b Listing) bool {
		return a.Name == b.Name && slices.Equal(a.Set, b.Set)
	}):
		return "its cases are others"
	}
	return ""
}

func (m *Manifest) write(ctx context.Context, dir string) error {
	text, err := json.MarshalIndent(m, "", " ")
	if err != nil {
		return err
	}
	return files.Write(ctx, filepath.Join(dir, manifestName), 0o666, func(w io.Writer) error {
		_, err := w.Write(append(text, '\n'))
		return err
	})
}

// readFile reads a file of at most limit bytes.
func readFile(path string, limit int64) ([]byte, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	defer f.Close()
	text, err := io.ReadAll(io.LimitReader(f, limit+1))
	if err == nil && int64(len(text)) > limit {
		err = fmt.Errorf("%s: longer than %d bytes", path, limit)
	}
	return text, err
}
