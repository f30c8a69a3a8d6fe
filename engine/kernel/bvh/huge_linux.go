package bvh

import (
	"syscall"
	"unsafe"
)

// room returns n zero values for a tree. A walk jumps about in them, so the system is asked for pages of 2 MiB, which spare it most
// address look-ups. It is a wish: where it is refused, the memory is as good as any.
func room[T any](n int) []T {
	const page = 2 << 20
	out := make([]T, n)
	size := uintptr(n) * unsafe.Sizeof(*new(T))
	if size < 2*page {
		return out
	}
	at := uintptr(unsafe.Pointer(&out[0]))
	first := (at + page - 1) &^ (page - 1)
	last := (at + size) &^ (page - 1)
	inner := unsafe.Slice((*byte)(unsafe.Add(unsafe.Pointer(&out[0]), first-at)), last-first)
	_ = syscall.Madvise(inner, syscall.MADV_HUGEPAGE)
	return out
}
