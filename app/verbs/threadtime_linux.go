package verbs

import (
	"time"

	"golang.org/x/sys/unix"
)

// threadTime is the processor time that the calling thread has used.
func threadTime() time.Duration {
	var u unix.Rusage
	if err := unix.Getrusage(unix.RUSAGE_THREAD, &u); err != nil {
		panic(err) // the arguments are constants
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}
