package files

import (
	"io/fs"
	"os"
	"path/filepath"
	"strconv"

	"golang.org/x/sys/unix"
)

// procFiles is where the kernel shows what a process has open.
const procFiles = "/proc/self/fd"

// createUnnamed opens a file in the folder of name that has no name yet, so
// that nothing is left of it when the process is killed. ok is false where the
// file system or the kernel has no such files. See open(2), O_TMPFILE.
func createUnnamed(name string, mode fs.FileMode) (file *os.File, ok bool) {
	if _, err := os.Stat(procFiles); err != nil {
		return nil, false
	}
	fd, err := unix.Open(filepath.Dir(name), unix.O_TMPFILE|unix.O_RDWR|unix.O_CLOEXEC, uint32(mode.Perm()))
	if err != nil {
		return nil, false
	}
	return os.NewFile(uintptr(fd), name), true
}

// giveName gives an unnamed file its name.
func giveName(file *os.File) error {
	from := filepath.Join(procFiles, strconv.FormatUint(uint64(file.Fd()), 10))
	if err := unix.Linkat(unix.AT_FDCWD, from, unix.AT_FDCWD, file.Name(), unix.AT_SYMLINK_FOLLOW); err != nil {
		return &os.LinkError{Op: "linkat", Old: from, New: file.Name(), Err: err}
	}
	return nil
}
