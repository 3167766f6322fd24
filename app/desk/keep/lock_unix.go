//go:build unix

package keep

import (
	"os"
	"syscall"
)

// canTell says whether a lock tells that a process has ended.
const canTell = true

// tryLock takes a lock that the system releases when the process ends,
// however it ends; false if another process has it.
func tryLock(f *os.File) bool {
	return syscall.Flock(int(f.Fd()), syscall.LOCK_EX|syscall.LOCK_NB) == nil
}
