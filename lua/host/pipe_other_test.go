//go:build !unix

package host

import "errors"

// makePipe makes a named pipe where the system has them among its files.
func makePipe(string) error { return errors.ErrUnsupported }
