package scenes

import (
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
)

// OnlyBelow refuses a scene that names a file outside the folder dir, which
// must exist; symbolic links are followed on both sides. The assignments are
// those the document was changed by: a file that one of them names has no
// place in the text. Errors are of type *Error. It judges the file system as
// it is now: whoever may change folders while the scene is at work can still
// lead it elsewhere.
func (d *Document) OnlyBelow(dir string, set ...Assignment) error {
	root, err := realPath(dir)
	if err == nil {
		var info os.FileInfo
		if info, err = os.Stat(root); err == nil && !info.IsDir() {
			err = errors.New("not a folder")
		}
	}
	if err != nil {
		return unreadable(dir, err)
	}
	for _, e := range d.source().entries {
		k, _ := findKey(e.section, e.key)
		if !k.File || e.value.text == "" {
			continue
		}
		path, err := realPath(FilePath(d.Dir(), e.value.text))
		if err == nil && below(root, path) {
			continue
		}
		refusal := &Error{File: d.name, Key: e.address.String(), Problem: "names a file outside the folder that files are confined to",
			Found: d.source().excerptOf(e.value.span), Allowed: "files below " + quoteFound(root), Err: err}
		given := slices.IndexFunc(set, func(a Assignment) bool {
			target, err := parsePath(a.Path)
			return err == nil && target == e.address
		})
		if given >= 0 {
			refusal.File, refusal.Setting, refusal.Key = "", set[given].Path, set[given].Path
		} else {
			refusal.locate(d.text, e.value.span.from)
		}
		return refusal
	}
	return nil
}

// FilePath returns the path of a file that a scene in the folder names.
func FilePath(folder, file string) string {
	if filepath.IsAbs(file) {
		return file
	}
	return filepath.Join(folder, file)
}

// below says whether a path lies in a folder; both real ones.
func below(folder, path string) bool {
	relative, err := filepath.Rel(folder, path)
	return err == nil && filepath.IsLocal(relative)
}

// realPath returns the absolute path without symbolic links. The last parts
// of path need not exist, but a link must not lead nowhere.
func realPath(path string) (string, error) {
	if !filepath.IsAbs(path) {
		folder, err := os.Getwd()
		if err != nil {
			return "", err
		}
		path = folder + string(filepath.Separator) + path // not cleaned: .. behind a link is that of where it leads
	}
	real, err := filepath.EvalSymlinks(path)
	if !errors.Is(err, fs.ErrNotExist) {
		return real, err
	}
	if _, err := os.Lstat(path); err == nil {
		return "", errors.New("a symbolic link that leads nowhere")
	}
	cut := strings.LastIndexByte(filepath.ToSlash(path), '/')
	folder, last := path[:cut], path[cut+1:]
	if folder == "" || last == ".." {
		return "", err
	}
	if real, err = realPath(folder); err != nil {
		return "", err
	}
	return filepath.Join(real, last), nil
}
