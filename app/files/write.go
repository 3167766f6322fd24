package files

import (
	"bufio"
	"context"
	"crypto/rand"
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"syscall"
)

// Temporary files are hidden and tell whose they are.
const (
	temporaryPrefix = ".annulet-"
	temporarySuffix = ".tmp"
)

// bufferBytes gathers small writes, such as the rows of a CSV. Method.
const bufferBytes = 1 << 16

// Write makes the file at path hold what fill writes, or leaves everything as
// it was. mode holds the permission bits of a new file, before the umask; a
// file that is replaced keeps its own. Symbolic links are followed. fill runs
// once, on this goroutine, and its writes fail once ctx is done.
//
// When Write returns nil, contents and name have been handed to the disk. Any
// other outcome, including a panic of fill (which goes on) and the end of ctx
// at any moment before the file takes its name, leaves the old file or none.
// What is neither file nor folder, such as /dev/stdout or a pipe, is written
// to directly.
//
// Errors name the path and wrap ErrNoFolder, ErrReadOnly, ErrIsFolder or
// ErrDiskFull where one of these is the cause, else what fill, the system or
// ctx said.
func Write(ctx context.Context, path string, mode fs.FileMode, fill func(io.Writer) error) error {
	return write(ctx, path, mode,
		func(file *os.File) error { return pour(ctx, file, fill) },
		func(target string) error { return writeDirect(ctx, target, fill) })
}

// WriteAt is Write for formats that are not written from front to back. What
// is neither file nor folder is refused.
func WriteAt(ctx context.Context, path string, mode fs.FileMode, fill func(io.WriterAt) error) error {
	return write(ctx, path, mode,
		func(file *os.File) error { return fill(atWhileLive{ctx, file}) },
		func(string) error { return errors.New("this format can only be written to a file") })
}

// write fills an ordinary file, or hands what is neither file nor folder to
// direct.
func write(ctx context.Context, path string, mode fs.FileMode, fill func(*os.File) error, direct func(target string) error) error {
	if err := ctx.Err(); err != nil {
		return fmt.Errorf("%s: not written: %w", path, err)
	}
	target, err := examine(path)
	if err != nil {
		return err
	}
	if target.direct {
		return describe(path, direct(target.path))
	}
	if target.exists {
		mode = target.mode
	}
	return describe(path, replace(ctx, target, mode, fill))
}

// atWhileLive passes writes on until ctx ends.
type atWhileLive struct {
	ctx context.Context
	w   io.WriterAt
}

func (l atWhileLive) WriteAt(p []byte, offset int64) (int, error) {
	if err := l.ctx.Err(); err != nil {
		return 0, err
	}
	return l.w.WriteAt(p, offset)
}

// replace is Write for an ordinary file.
func replace(ctx context.Context, target place, mode fs.FileMode, fill func(*os.File) error) (err error) {
	file, err := unfinished.create(target.path, mode)
	if err != nil {
		return err
	}
	done := false
	defer func() { // also while a panic passes
		if !done {
			err = errors.Join(err, unfinished.drop(file))
		}
	}()
	if target.exists { // its mode, whatever the umask
		if err := file.Chmod(mode); err != nil {
			return err
		}
	}
	if err := fill(file); err != nil {
		return err
	}
	if err := file.Sync(); err != nil {
		return err
	}
	if err := ctx.Err(); err != nil {
		return err
	}
	if err := unfinished.finish(file, target.path); err != nil {
		return err
	}
	done = true
	return syncFolder(filepath.Dir(target.path))
}

func writeDirect(ctx context.Context, path string, fill func(io.Writer) error) error {
	file, err := os.OpenFile(path, os.O_WRONLY, 0)
	if err != nil {
		return err
	}
	return errors.Join(pour(ctx, file, fill), file.Close())
}

// pour runs fill into w through a buffer, until ctx ends.
func pour(ctx context.Context, w io.Writer, fill func(io.Writer) error) error {
	buffered := bufio.NewWriterSize(w, bufferBytes)
	if err := fill(whileLive{ctx, buffered}); err != nil {
		return err
	}
	if err := ctx.Err(); err != nil { // fill may have overlooked it
		return err
	}
	return buffered.Flush()
}

// whileLive passes writes on until ctx ends.
type whileLive struct {
	ctx context.Context
	w   io.Writer
}

func (l whileLive) Write(p []byte) (int, error) {
	if err := l.ctx.Err(); err != nil {
		return 0, err
	}
	return l.w.Write(p)
}

// IsTemporary says whether a file of that name is what a killed Write left.
func IsTemporary(name string) bool {
	return strings.HasPrefix(name, temporaryPrefix) && strings.HasSuffix(name, temporarySuffix)
}

// temporaryFor returns a fresh hidden name in the folder of path.
func temporaryFor(path string) string {
	return filepath.Join(filepath.Dir(path), temporaryPrefix+rand.Text()+temporarySuffix)
}

// syncFolder hands the new name to the disk, where folders can be synced.
func syncFolder(folder string) error {
	dir, err := os.Open(folder)
	if err != nil {
		// A folder one may write in but not list: its name cannot be
		// synced, but the file is in place.
		if errors.Is(err, fs.ErrPermission) {
			return nil
		}
		return err
	}
	err = dir.Sync()
	if errors.Is(err, syscall.EINVAL) || errors.Is(err, errors.ErrUnsupported) {
		err = nil // the file system syncs no folders
	}
	return errors.Join(err, dir.Close())
}
