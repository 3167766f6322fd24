//go:build !linux

package verbs

import "time"

var processBegan = time.Now()

// threadTime is wall time: this system is not asked for that of a thread.
func threadTime() time.Duration { return time.Since(processBegan) }
