//go:build !windows

package main

import (
	"errors"
	"os"

	"golang.org/x/sys/unix"
)

// tryLock takes an exclusive lock without waiting.
func tryLock(f *os.File) error {
	err := unix.Flock(int(f.Fd()), unix.LOCK_EX|unix.LOCK_NB)
	if errors.Is(err, unix.EWOULDBLOCK) {
		return errLocked
	}
	return err
}

// removeLocked removes the file while the lock is still held, so that nobody can lock a file that is about to go.
func removeLocked(f *os.File) {
	_ = os.Remove(f.Name())
	_ = f.Close()
}
