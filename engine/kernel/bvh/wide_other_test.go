//go:build !amd64 || purego

package bvh

// wrote is false: there is no assembly here.
func (w *Walker) wrote() bool { return false }
