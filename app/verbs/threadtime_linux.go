package verbs

import (
	"time"

	"golang.org/x/sys/unix"
)

// threadTime is the processor time that the calling thread has used.
func threadTime() time.Duration {
	var t unix.Timespec
	if err := unix.ClockGettime(unix.CLOCK_THREAD_CPUTIME_ID, &t); err != nil {
		panic(err) // the arguments are constants
	}
	return time.Duration(t.Nano())
}
