//go:build !linux

package bvh

// room returns n zero values for a tree.
func room[T any](n int) []T { return make([]T, n) }
