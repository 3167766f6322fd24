package verbs

import (
	"context"
	"io"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"github.com/spf13/pflag"

	"annulet/app/files"
	"annulet/raytrace"
	"annulet/scenes"
)

// addSet adds the flag that overrides keys of a scene.
func addSet(f *pflag.FlagSet, set *[]string) {
	f.StringArrayVar(set, "set", nil, "override a key of the scene, `KEY=VALUE`; repeatable")
}

// loadScene reads a scene file or a built-in scene, and overrides keys of it.
// Whatever is wrong is the request's fault.
func (s streams) loadScene(path string, set []string) (*scenes.Document, error) {
	d, err := scenes.Load(path)
	if err != nil {
		return nil, usage{err}
	}
	var assignments []scenes.Assignment
	for _, text := range set {
		key, value, ok := strings.Cut(text, "=")
		if !ok {
			return nil, refuse("--set %q: allowed: KEY=VALUE, as in observer.inclination=75deg", text)
		}
		assignments = append(assignments, scenes.Assignment{
			Path: strings.TrimSpace(key), Value: strings.TrimSpace(value),
		})
	}
	if err := d.SetAll(assignments...); err != nil {
		return nil, usage{err}
	}
	if err := s.confine(d, assignments...); err != nil {
		return nil, usage{err}
	}
	return d, nil
}

// confine refuses a scene that names a file where --only-below allows none.
func (s streams) confine(d *scenes.Document, set ...scenes.Assignment) error {
	if s.onlyBelow == nil || *s.onlyBelow == "" {
		return nil
	}
	return d.OnlyBelow(*s.onlyBelow, set...)
}

// checkWritable refuses a path at which no file can be made.
func checkWritable(path string) error {
	if err := files.CheckWritable(path); err != nil {
		return usage{err}
	}
	return nil
}

// checkFiles refuses names of -o before any work is done: those whose kind is
// refused, that come twice, that are the scene, or that cannot be written.
func checkFiles(paths []string, scenePath string, kind func(path string) error) error {
	var seen []string
	for _, path := range paths {
		if err := kind(path); err != nil {
			return err
		}
		clean := filepath.Clean(path)
		if slices.Contains(seen, clean) {
			return refuse("-o %s comes twice", path)
		}
		seen = append(seen, clean)
		if same(path, scenePath) {
			return refuse("-o %s would overwrite the scene", path)
		}
		if err := checkWritable(path); err != nil {
			return err
		}
	}
	return nil
}

// same says whether two names mean one existing file.
func same(a, b string) bool {
	infoA, errA := os.Stat(a)
	infoB, errB := os.Stat(b)
	return errA == nil && errB == nil && os.SameFile(infoA, infoB)
}

// screenUnit returns the unit in which people give screen coordinates of a
// field, and how much of the library's it is: M, or degrees of the tangent
// plane, which the library wants in radians.
func screenUnit(f raytrace.Field) (perUnit float64, unit string) {
	if f.IsParallel() {
		return 1, "M"
	}
	return math.Pi / 180, "deg"
}

// newFileMode is that of new files, before the umask.
const newFileMode fs.FileMode = 0o666

// writeFile makes a whole file or none.
func writeFile(ctx context.Context, path string, fill func(io.Writer) error) error {
	return files.Write(ctx, path, newFileMode, fill)
}
