//go:build !purego

package bvh

//go:noescape
func fillBinsWide(refs *ref, n int, t *binTable, from, scale *[4]float32)

//go:noescape
func boundWide(refs *ref, n int, bounds, centres *slab)

// sweepWide steps by strides in bytes, which may be negative.
//
//go:noescape
func sweepWide(first *slab, stride, n int, areas *float32, areaStride int)

func fillBins(refs []ref, t *binTable, from, scale *[4]float32) {
	if useWide {
		fillBinsWide(&refs[0], len(refs), t, from, scale)
		return
	}
	fillBinsPlain(refs, t, from, scale)
}

func bound(refs []ref, bounds, centres *slab) {
	if useWide {
		boundWide(&refs[0], len(refs), bounds, centres)
		return
	}
	boundPlain(refs, bounds, centres)
}

func sweep(row *[bins]slab, n int, left, right *[bins]float32) {
	if useWide {
		sweepWide(&row[0], 32, n, &left[0], 4)
		sweepWide(&row[n-1], -32, n, &right[n-1], -4)
		return
	}
	sweepPlain(row, n, left, right)
}
