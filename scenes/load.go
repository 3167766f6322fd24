package scenes

import (
	"errors"
	"fmt"
	"io"
	"io/fs"
	"os"
	"strings"
)

// Load reads and checks a scene file, or the built-in scene when path starts
// with @. Errors are of type *Error; those of the system are wrapped in it.
func Load(path string) (*Document, error) {
	if strings.HasPrefix(path, "@") {
		return loadBuiltIn(path)
	}
	file, err := os.Open(path)
	if err != nil {
		return nil, unreadable(path, err)
	}
	defer file.Close()
	info, err := file.Stat()
	switch {
	case err != nil:
		return nil, unreadable(path, err)
	case info.IsDir():
		return nil, &Error{File: path, Problem: "is a directory", Allowed: "a scene file"}
	case info.Size() > maxBytes:
		return nil, tooLarge(path, info.Size())
	}
	// A pipe has no size, and a file may grow.
	text, err := io.ReadAll(io.LimitReader(file, maxBytes+1))
	if err != nil {
		return nil, unreadable(path, err)
	}
	return Parse(path, text)
}

// unreadable wraps an error of the system and keeps the path out of its text.
func unreadable(path string, err error) *Error {
	reason := err
	var pathError *fs.PathError
	if errors.As(err, &pathError) {
		reason = pathError.Err
	}
	return &Error{File: path, Problem: "cannot be read: " + reason.Error(), Err: err}
}

// tooLarge refuses a file of that many bytes, or more.
func tooLarge(name string, size int64) *Error {
	return &Error{File: name, Problem: fmt.Sprintf("too large for a scene file: %d bytes", size),
		Allowed: fmt.Sprintf("at most %d bytes", maxBytes)}
}
