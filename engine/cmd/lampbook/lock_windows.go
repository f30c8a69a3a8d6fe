package main

import (
	"errors"
	"os"

	"golang.org/x/sys/windows"
)

// tryLock takes an exclusive lock without waiting. It locks one byte far behind the text, which others may still read.
func tryLock(f *os.File) error {
	at := &windows.Overlapped{OffsetHigh: 1}
	err := windows.LockFileEx(windows.Handle(f.Fd()), windows.LOCKFILE_EXCLUSIVE_LOCK|windows.LOCKFILE_FAIL_IMMEDIATELY, 0, 1, 0, at)
	if errors.Is(err, windows.ERROR_LOCK_VIOLATION) {
		return errLocked
	}
	return err
}

// removeLocked removes the file once it is closed: the system does not remove what is open.
func removeLocked(f *os.File) {
	_ = f.Close()
	_ = os.Remove(f.Name())
}
