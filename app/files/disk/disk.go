//go:build linux

// Package disk gives tests a file system of their own, which can be filled
// and made read-only. Only root can mount one; elsewhere the test is not run
// and says so.
package disk

import (
	"os"
	"syscall"
	"testing"
)

// Small mounts a file system in memory until the test ends. size is as the
// mount option takes it, see tmpfs(5).
func Small(t *testing.T, size string) (folder string) {
	t.Helper()
	if os.Geteuid() != 0 {
		t.Skip("NOT RUN: only root can mount a small disk")
	}
	folder = t.TempDir()
	if err := syscall.Mount("tmpfs", folder, "tmpfs", 0, "size="+size); err != nil {
		t.Skip("NOT RUN: this machine lets root mount nothing: ", err)
	}
	t.Cleanup(func() {
		if err := syscall.Unmount(folder, 0); err != nil {
			t.Error(err)
		}
	})
	return folder
}

// Resize gives the file system another size.
func Resize(t *testing.T, folder, size string) {
	t.Helper()
	remount(t, folder, 0, "size="+size)
}

// ReadOnly makes the file system read-only.
func ReadOnly(t *testing.T, folder string) {
	t.Helper()
	remount(t, folder, syscall.MS_RDONLY, "")
}

func remount(t *testing.T, folder string, flags uintptr, options string) {
	t.Helper()
	if err := syscall.Mount("", folder, "", syscall.MS_REMOUNT|flags, options); err != nil {
		t.Skip("NOT RUN: no remounting here: ", err)
	}
}
