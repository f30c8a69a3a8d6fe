package mesh

import (
	"math"
	"slices"

	"lampbook/engine/kernel/geom"
)

// welder numbers distinct keys in the order in which they are first seen: a hash table with linear probing that stores
// keys by value. The numbering does not depend on the hash.
type welder struct {
	keys  [][3]uint32
	table []uint32 // 1 + the number of a key; 0 is free; a power of two long, at most half full
}

// id returns the number of a key, and whether it is new.
func (w *welder) id(key [3]uint32) (id uint32, fresh bool) {
	if 2*len(w.keys) >= len(w.table) {
		w.grow()
	}
	mask := uint32(len(w.table) - 1)
	for at := hash3(key) & mask; ; at = (at + 1) & mask {
		n := w.table[at]
		if n == 0 {
			w.keys = append(w.keys, key)
			w.table[at] = uint32(len(w.keys))
			return uint32(len(w.keys) - 1), true
		}
		if w.keys[n-1] == key {
			return n - 1, false
		}
	}
}

// reserve makes room for n keys, so that the table need not grow to hold them.
func (w *welder) reserve(n int) {
	w.keys = slices.Grow(w.keys, n)
	for size := 1024; ; size *= 2 {
		if size > 2*n {
			w.resize(size)
			return
		}
	}
}

// grow doubles the table.
func (w *welder) grow() { w.resize(max(1024, 2*len(w.table))) }

func (w *welder) resize(size int) {
	w.table = make([]uint32, size)
	mask := uint32(len(w.table) - 1)
	for i, key := range w.keys {
		at := hash3(key) & mask
		for w.table[at] != 0 {
			at = (at + 1) & mask
		}
		w.table[at] = uint32(i + 1)
	}
}

// hash3 mixes three words. Source: the 64-bit finaliser of MurmurHash3 (Appleby, public domain).
func hash3(k [3]uint32) uint32 {
	h := uint64(k[0]) | uint64(k[1])<<32
	h ^= uint64(k[2]) * 0x9e3779b97f4a7c15
	h ^= h >> 33
	h *= 0xff51afd7ed558ccd
	h ^= h >> 33
	h *= 0xc4ceb9fe1a85ec53
	h ^= h >> 33
	return uint32(h)
}

// positionKey is equal for equal positions; both zeros are one.
func positionKey(p geom.Vec3) [3]uint32 {
	return [3]uint32{math.Float32bits(p.X + 0), math.Float32bits(p.Y + 0), math.Float32bits(p.Z + 0)}
}
