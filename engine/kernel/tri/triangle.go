package tri

import (
	"math"

	"lampbook/engine/kernel/geom"
)

// Triangle is three corners, each with a spare fourth component so that an axis index needs no bounds check. A[3] holds the
// bits of the triangle's index. 48 bytes.
type Triangle struct{ A, B, C [4]float32 }

// Make returns the triangle with its index.
func Make(a, b, c geom.Vec3, index uint32) Triangle {
	return Triangle{
		A: [4]float32{a.X, a.Y, a.Z, math.Float32frombits(index)},
		B: [4]float32{b.X, b.Y, b.Z},
		C: [4]float32{c.X, c.Y, c.Z},
	}
}

// Index is the index given to Make.
func (t *Triangle) Index() uint32 { return math.Float32bits(t.A[3]) }

// Solid reports whether the corners are finite and span an area: cross products of their differences, in float64, are not
// all zero. Only solid triangles belong in a hierarchy.
func Solid(a, b, c geom.Vec3) bool {
	if !a.Finite() || !b.Finite() || !c.Finite() {
		return false
	}
	ad, bd, cd := a.Wide(), b.Wide(), c.Wide()
	return bd.Sub(ad).Cross(cd.Sub(ad)) != geom.Vec3d{}
}

// Best is the nearest hit so far. Index decides ties: a hit at the same T replaces it only with a lower Index. A search
// starts with T at the ray's TMax and Index 0, so that nothing at TMax itself counts.
type Best struct {
	T, U, V float32 // point = (1-U-V)·A + U·B + V·C
	Index   uint32
	Found   bool
}
