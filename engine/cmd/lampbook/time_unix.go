//go:build !windows

package main

import "golang.org/x/sys/unix"

// processorSeconds returns the time that this process has used on all cores; 0 where the system does not say.
func processorSeconds() float64 {
	var u unix.Rusage
	if err := unix.Getrusage(unix.RUSAGE_SELF, &u); err != nil {
		return 0
	}
	return float64(u.Utime.Nano()+u.Stime.Nano()) / 1e9
}
