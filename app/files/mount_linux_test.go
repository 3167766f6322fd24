package files

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"syscall"
	"testing"
)

// smallDisk mounts a file system of 256 KiB in memory, or skips the test.
func smallDisk(t *testing.T) string {
	t.Helper()
	if os.Geteuid() != 0 {
		t.Skip("NOT RUN: only root can mount a small disk")
	}
	folder := t.TempDir()
	if err := syscall.Mount("tmpfs", folder, "tmpfs", 0, "size=256k"); err != nil {
		t.Skip("NOT RUN: this machine lets root mount nothing: ", err)
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(folder, 0); err != nil {
			t.Error(err)
		}
	})
	return folder
}

func TestFullDisk(t *testing.T) {
	folder := smallDisk(t)
	path := filepath.Join(folder, "image.png")
	if err := os.WriteFile(path, []byte(oldText), mode); err != nil {
		t.Fatal(err)
	}
	err := Write(t.Context(), path, mode, func(w io.Writer) error {
		const tooMuch = 1 << 20
		_, err := w.Write(make([]byte, tooMuch))
		return err
	})
	if !errors.Is(err, ErrDiskFull) {
		t.Errorf("%v, want ErrDiskFull", err)
	}
	holds(t, folder, map[string]string{"image.png": oldText})
	if err := Write(t.Context(), path, mode, fillNew); err != nil {
		t.Errorf("the space was not given back: %v", err)
	}
	holds(t, folder, map[string]string{"image.png": newText})
}

func TestReadOnlyDisk(t *testing.T) {
	folder := smallDisk(t)
	path := filepath.Join(folder, "image.png")
	if err := os.WriteFile(path, []byte(oldText), mode); err != nil {
		t.Fatal(err)
	}
	if err := syscall.Mount("", folder, "", syscall.MS_REMOUNT|syscall.MS_RDONLY, ""); err != nil {
		t.Skip("NOT RUN: no read-only mount here: ", err)
	}
	for _, p := range []string{path, filepath.Join(folder, "new.png")} {
		if err := CheckWritable(p); !errors.Is(err, ErrReadOnly) {
			t.Errorf("CheckWritable(%s): %v, want ErrReadOnly", p, err)
		}
		if err := Write(t.Context(), p, mode, fillNew); !errors.Is(err, ErrReadOnly) {
			t.Errorf("Write(%s): %v, want ErrReadOnly", p, err)
		}
	}
	holds(t, folder, map[string]string{"image.png": oldText})
}
