package main

import (
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"regexp"
)

// The folders and files of a run, inside its own folder.
const (
	framesFolder = "frames"
	sheetsFolder = "sheets"
)

// runFolder is where a run goes. While it is open, no other run can write there.
type runFolder struct {
	dir  string
	lock *folderLock
}

// openFolder makes the folder with those that it holds, takes its lock and sweeps out what a killed run left half-written.
func openFolder(dir string) (*runFolder, error) {
	if err := makeFolder(dir); err != nil {
		return nil, err
	}
	lock, err := lockFolder(dir)
	if err != nil {
		return nil, err
	}
	f := &runFolder{dir, lock}
	for _, sub := range []string{framesFolder, sheetsFolder} {
		if err := makeFolder(f.path(sub)); err != nil {
			f.close()
			return nil, err
		}
	}
	for _, sub := range []string{".", framesFolder, sheetsFolder} {
		f.sweep(sub)
	}
	return f, nil
}

// path returns the place of a file of the run, whose name is slash-separated and relative to the run's folder.
func (f *runFolder) path(name string) string { return filepath.Join(f.dir, filepath.FromSlash(name)) }

// close lets other runs in.
func (f *runFolder) close() { f.lock.release() }

// makeFolder makes a folder with those above it. Where a file stands in the way, the user has named the wrong place.
func makeFolder(dir string) error {
	err := os.MkdirAll(dir, 0o777)
	if err == nil {
		return nil
	}
	for at := filepath.Clean(dir); ; at = filepath.Dir(at) {
		if info, statErr := os.Stat(at); statErr == nil && !info.IsDir() {
			return wrongf("%s: is a file, not a folder", at)
		} else if statErr == nil || at == filepath.Dir(at) {
			break
		}
	}
	return failed(fmt.Errorf("lampbook: %s: no folder can be made here: %w", dir, plainCause(err)))
}

// plainCause takes the operation and the path off an error of package os.
func plainCause(err error) error {
	var e *fs.PathError
	if errors.As(err, &e) {
		return e.Err
	}
	return err
}

// partName is how encode.WriteFile names a file until it is whole.
var partName = regexp.MustCompile(`^\..+\.part[0-9]+-[0-9]+$`)

// sweep removes the temporary files of a run that was killed. We hold the lock, so that no living run has any here.
func (f *runFolder) sweep(sub string) {
	entries, err := os.ReadDir(f.path(sub))
	if err != nil {
		return
	}
	for _, e := range entries {
		if e.Type().IsRegular() && partName.MatchString(e.Name()) {
			_ = os.Remove(filepath.Join(f.path(sub), e.Name()))
		}
	}
}
