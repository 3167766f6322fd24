package sweep

import (
	"errors"
	"os"
	"path/filepath"
	"testing"

	"annulet/app/files"
	"annulet/app/files/disk"
)

// A disk that fills up in the middle of the sweep ends it with that reason
// and no case damaged; with room again it goes on to the same bytes.
func TestDiskFillsUp(t *testing.T) {
	want := undisturbed(t)
	folder := disk.Small(t, "1m")
	dir := filepath.Join(folder, "sweep")
	if err := work(t.Context(), dir, 0); !errors.Is(err, files.ErrDiskFull) {
		t.Fatalf("%v, want ErrDiskFull", err)
	}
	m, err := Load(dir)
	if err != nil {
		t.Fatal(err)
	}
	_, count := Survey(dir, m, false)
	if count[Failed] != 0 || count[Done] == 0 || count[Done]+count[Waiting] != 24 {
		t.Errorf("on the full disk: %v", count)
	}
	disk.Resize(t, folder, "32m")
	if err := work(t.Context(), dir, 0); err != nil {
		t.Fatal(err)
	}
	same(t, contents(t, dir), want)
}

// A target that turns read-only ends the sweep with that reason, whether it
// begins or goes on.
func TestReadOnlyTarget(t *testing.T) {
	folder := disk.Small(t, "8m")
	dir := filepath.Join(folder, "sweep")
	m, _, err := Begin(t.Context(), dir, trial())
	if err != nil {
		t.Fatal(err)
	}
	before := contents(t, dir)
	disk.ReadOnly(t, folder)
	for name, run := range map[string]func() error{
		"going on": func() error { return work(t.Context(), dir, 0) },
		"another":  func() error { return work(t.Context(), filepath.Join(folder, "b"), 0) },
		"merging":  func() error { _, _, err := Merge(t.Context(), dir, m); return err },
	} {
		if err := run(); !errors.Is(err, files.ErrReadOnly) && !errors.Is(err, os.ErrPermission) && !isReadOnly(err) {
			t.Errorf("%s: %v, want read-only", name, err)
		}
	}
	same(t, contents(t, dir), before)
}
