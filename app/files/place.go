package files

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"syscall"
)

var (
	// ErrNoFolder: the folder that should hold the file does not exist.
	ErrNoFolder = errors.New("the folder does not exist")
	// ErrReadOnly: folder, file or file system does not let us write.
	ErrReadOnly = errors.New("writing is not allowed there")
	// ErrIsFolder: the path names a folder.
	ErrIsFolder = errors.New("this is a folder, not a file")
	// ErrDiskFull: no space, or no quota, is left.
	ErrDiskFull = errors.New("the disk is full")
)

// CheckWritable tells, before long work starts, whether Write could make a
// file at path, with Write's errors. It leaves nothing behind and no file
// changed. Free space is not checked: how much is needed is not known yet.
func CheckWritable(path string) error {
	target, err := examine(path)
	if err != nil || target.direct {
		return err
	}
	return describe(path, unfinished.tryCreate(target.path))
}

// place is where a path leads.
type place struct {
	path   string      // with symbolic links followed
	exists bool        // as an ordinary file
	mode   fs.FileMode // its permission bits
	direct bool        // a device or pipe
}

// examine follows path and refuses what cannot be written. Its errors name
// the path.
func examine(path string) (place, error) {
	if path == "" {
		return place{}, errors.New("a file name is empty")
	}
	info, err := os.Stat(path)
	if errors.Is(err, fs.ErrNotExist) {
		return examineNew(path)
	}
	if err != nil {
		return place{}, describe(path, err)
	}
	switch {
	case info.IsDir():
		return place{}, fmt.Errorf("%s: %w", path, ErrIsFolder)
	case !info.Mode().IsRegular():
		return place{path: path, direct: true}, nil
	}
	real, err := filepath.EvalSymlinks(path)
	if err != nil {
		return place{}, describe(path, err)
	}
	// A file its owner made read-only is not replaced, though the folder
	// would allow it. Opening changes neither contents nor times.
	file, err := os.OpenFile(real, os.O_WRONLY, 0)
	if err != nil {
		return place{}, describe(path, err)
	}
	if err := file.Close(); err != nil {
		return place{}, describe(path, err)
	}
	return place{path: real, exists: true, mode: info.Mode().Perm()}, nil
}

// examineNew is examine for a path at which nothing is found.
func examineNew(path string) (place, error) {
	if os.IsPathSeparator(path[len(path)-1]) {
		return place{}, fmt.Errorf("%s: %w", path, ErrIsFolder)
	}
	if link, err := os.Readlink(path); err == nil {
		return place{}, fmt.Errorf("%s is a link to %s: %w", path, link, fs.ErrNotExist)
	}
	folder := filepath.Dir(path)
	info, err := os.Stat(folder)
	switch {
	case errors.Is(err, fs.ErrNotExist) || errors.Is(err, syscall.ENOTDIR):
		return place{}, fmt.Errorf("%s: folder %s: %w", path, folder, ErrNoFolder)
	case err != nil:
		return place{}, describe(path, err)
	case !info.IsDir():
		return place{}, fmt.Errorf("%s: %s is no folder: %w", path, folder, ErrNoFolder)
	}
	return place{path: path}, nil
}

// describe names the path and, where the system's error has a meaning of
// ours, says it. It passes nil on.
func describe(path string, err error) error {
	meaning := func(ours error) error { return fmt.Errorf("%s: %w (%w)", path, ours, err) }
	switch {
	case err == nil:
		return nil
	case errors.Is(err, syscall.ENOSPC), errors.Is(err, syscall.EDQUOT):
		return meaning(ErrDiskFull)
	case errors.Is(err, fs.ErrPermission), errors.Is(err, syscall.EROFS):
		return meaning(ErrReadOnly)
	case errors.Is(err, syscall.ENOTDIR):
		return meaning(ErrNoFolder)
	}
	return fmt.Errorf("%s: %w", path, err)
}
