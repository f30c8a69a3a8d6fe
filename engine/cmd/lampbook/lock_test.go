package main

import (
	"fmt"
	"os"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"testing"
)

func TestLockNamesItsHolder(t *testing.T) {
	dir := t.TempDir()
	first, err := lockFolder(dir)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := lockFolder(dir); err == nil || !strings.Contains(err.Error(), fmt.Sprintf("process %d", os.Getpid())) {
		t.Errorf("second lock: error %v, want one that names process %d", err, os.Getpid())
	}
	first.release()
	if _, err := os.Stat(filepath.Join(dir, lockName)); !os.IsNotExist(err) {
		t.Errorf("the lock's file is left: %v", err)
	}
	again, err := lockFolder(dir)
	if err != nil {
		t.Fatalf("after the release: %v", err)
	}
	again.release()
}

// A file without a living holder, as a killed run leaves it, is in nobody's way.
func TestStaleLockFile(t *testing.T) {
	dir := t.TempDir()
	if err := os.WriteFile(filepath.Join(dir, lockName), []byte("process 999999999\nand more"), 0o666); err != nil {
		t.Fatal(err)
	}
	lock, err := lockFolder(dir)
	if err != nil {
		t.Fatal(err)
	}
	defer lock.release()
	if text, err := os.ReadFile(filepath.Join(dir, lockName)); err != nil || string(text) != fmt.Sprintf("process %d\n", os.Getpid()) {
		t.Errorf("lock says %q, %v; want our process alone", text, err)
	}
}

// However many try at once, one at a time holds the lock.
func TestLockIsExclusive(t *testing.T) {
	dir := t.TempDir()
	var group sync.WaitGroup
	var holders, most, held int
	var mu sync.Mutex
	for range 8 {
		group.Go(func() {
			for range 50 {
				lock, err := lockFolder(dir)
				if err != nil {
					continue
				}
				mu.Lock()
				holders++
				held++
				most = max(most, holders)
				mu.Unlock()
				runtime.Gosched()
				mu.Lock()
				holders--
				mu.Unlock()
				lock.release()
			}
		})
	}
	group.Wait()
	if held == 0 || most != 1 {
		t.Errorf("locks taken %d times, by up to %d at once; want some, by one", held, most)
	}
}
