//go:build !amd64 || purego

package bvh

func fillBins(refs []ref, t *binTable, from, scale *[4]float32) { fillBinsPlain(refs, t, from, scale) }

func bound(refs []ref, bounds, centres *slab) { boundPlain(refs, bounds, centres) }

func sweep(row *[bins]slab, n int, left, right *[bins]float32) { sweepPlain(row, n, left, right) }
