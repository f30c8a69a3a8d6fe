//go:build darwin || freebsd

package main

import (
	"runtime"

	"golang.org/x/sys/unix"
)

// machineMemory returns the bytes of memory that the machine has; 0 where it does not say.
func machineMemory() int64 {
	name := "hw.physmem"
	if runtime.GOOS == "darwin" {
		name = "hw.memsize"
	}
	n, err := unix.SysctlUint64(name)
	if err != nil || n > mostMemory {
		return 0
	}
	return int64(n)
}
