package verbs

import (
	"context"
	"io"
	"io/fs"
	"strings"

	"github.com/spf13/pflag"

	"annulet/app/files"
	"annulet/scenes"
)

// addSet adds the flag that overrides keys of a scene.
func addSet(f *pflag.FlagSet, set *[]string) {
	f.StringArrayVar(set, "set", nil, "override a key of the scene, `KEY=VALUE`; repeatable")
}

// loadScene reads a scene file or a built-in scene, and overrides keys of it.
// Whatever is wrong is the request's fault.
func loadScene(path string, set []string) (*scenes.Document, error) {
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
	return d, nil
}

// checkWritable refuses a path at which no file can be made.
func checkWritable(path string) error {
	if err := files.CheckWritable(path); err != nil {
		return usage{err}
	}
	return nil
}

// newFileMode is that of new files, before the umask.
const newFileMode fs.FileMode = 0o666

// writeFile makes a whole file or none.
func writeFile(ctx context.Context, path string, fill func(io.Writer) error) error {
	return files.Write(ctx, path, newFileMode, fill)
}
