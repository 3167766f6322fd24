package files

import (
	"errors"
	"io"
	"os"
	"path/filepath"
	"testing"

	"annulet/app/files/disk"
)

func TestFullDisk(t *testing.T) {
	folder := disk.Small(t, "256k")
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
	folder := disk.Small(t, "256k")
	path := filepath.Join(folder, "image.png")
	if err := os.WriteFile(path, []byte(oldText), mode); err != nil {
		t.Fatal(err)
	}
	disk.ReadOnly(t, folder)
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
