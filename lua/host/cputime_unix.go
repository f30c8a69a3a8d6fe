//go:build unix

package host

import (
	"syscall"
	"time"
)

// processorTime is what the process has used, all threads together. Unlike the clock it does not run while others have the machine.
func processorTime() time.Duration {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		return time.Since(programStart)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

var programStart = time.Now()
