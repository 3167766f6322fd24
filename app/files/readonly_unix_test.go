//go:build unix

package files

import (
	"errors"
	"os"
	"path/filepath"
	"testing"
)

func TestReadOnlyFolderAndFile(t *testing.T) {
	if os.Geteuid() == 0 {
		t.Skip("permissions do not bind root; TestReadOnlyDisk stands in where it can mount")
	}
	folder, path := withOld(t)
	const readFile, readFolder, all = 0o444, 0o555, 0o755
	refused := func(p string) {
		t.Helper()
		if err := CheckWritable(p); !errors.Is(err, ErrReadOnly) {
			t.Errorf("CheckWritable(%s): %v, want ErrReadOnly", p, err)
		}
		if err := Write(t.Context(), p, mode, fillNew); !errors.Is(err, ErrReadOnly) {
			t.Errorf("Write(%s): %v, want ErrReadOnly", p, err)
		}
	}
	if err := os.Chmod(path, readFile); err != nil {
		t.Fatal(err)
	}
	refused(path)
	if err := os.Chmod(folder, readFolder); err != nil {
		t.Fatal(err)
	}
	refused(filepath.Join(folder, "new.png"))
	if err := os.Chmod(folder, all); err != nil { // for the cleanup
		t.Fatal(err)
	}
	holds(t, folder, map[string]string{"image.png": oldText})
}
