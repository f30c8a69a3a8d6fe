package main

import (
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
)

// lockName is the file in a run's folder whose lock its run holds.
const lockName = ".lampbook-lock"

// errLocked is what tryLock returns where another process holds the lock.
var errLocked = errors.New("locked")

// folderLock keeps a second run out of a folder. The system lets go of it when the process ends, however it ends.
type folderLock struct{ file *os.File }

// lockFolder takes the lock of a run's folder, or says which process holds it.
func lockFolder(dir string) (*folderLock, error) {
	path := filepath.Join(dir, lockName)
	for {
		file, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE, 0o666)
		if err != nil {
			return nil, fmt.Errorf("lampbook: %s: no file can be written here: %w", dir, plainCause(err))
		}
		if err := tryLock(file); err != nil {
			holder, _ := os.ReadFile(path)
			file.Close()
			if errors.Is(err, errLocked) {
				return nil, fmt.Errorf("%s: another run is writing here (%s); wait for it, or give another --out", dir, strings.TrimSpace(string(holder)))
			}
			return nil, fmt.Errorf("%s: %w", path, err)
		}
		// The holder before us may have removed the file between our opening and our locking it: then what we hold is no longer there.
		held, errHeld := file.Stat()
		there, errThere := os.Stat(path)
		if errHeld != nil || errThere != nil || !os.SameFile(held, there) {
			file.Close()
			continue
		}
		lock := &folderLock{file}
		if err := lock.sign(); err != nil {
			lock.release()
			return nil, err
		}
		return lock, nil
	}
}

// sign writes who holds the lock.
func (l *folderLock) sign() error {
	if err := l.file.Truncate(0); err != nil {
		return err
	}
	_, err := l.file.WriteAt([]byte(fmt.Sprintf("process %d\n", os.Getpid())), 0)
	return err
}

// release removes the file and lets go of the lock.
func (l *folderLock) release() {
	removeLocked(l.file)
}
