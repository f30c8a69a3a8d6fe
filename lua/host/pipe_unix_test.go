//go:build unix

package host

import "syscall"

// makePipe makes a named pipe.
func makePipe(path string) error { return syscall.Mkfifo(path, 0o644) }
