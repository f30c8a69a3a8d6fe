package tri

import (
	"math"

	"lampbook/engine/kernel/geom"
)

// Margins of the box tests, see Prepare. With u = 2^-24, half a unit in the last place of 1:
const (
	marginReach  = 0x1p-19 // 32u of the farthest distance in play
	marginOrigin = 0x1p-22 // 4u of the origin's largest coordinate, so that adding the margin survives its own rounding
	flattest     = 0x1p-40 // a direction's component counts as at least this part of the largest one in a box test
	smallest     = 0x1p-126
)

// Ray is a ray made ready for boxes and triangles. The fourth component of each row is 0.
type Ray struct {
	Org [4]float32

	// Box tests: planes nearer to the origin are met at (plane - Near)·Inv, the others at (plane - Far)·Inv. Near and Far
	// are the origin moved by a margin, so that a box counts as thicker than it is; Inv is 1 / direction, never 0, NaN or
	// infinite.
	Near, Far, Inv [4]float32

	// Triangle tests: KZ is the axis on which the direction is longest, KX and KY the next two in cyclic order. Shear holds
	// Dir[KX]/Dir[KZ], Dir[KY]/Dir[KZ] and 1/Dir[KZ].
	KX, KY, KZ uint32
	Shear      [3]float32

	TMin, TMax float32 // 0 <= TMin <= TMax
}

// Prepare fills p for walking through triangles inside bounds. It is false for rays that can hit nothing: a TMax not above
// TMin, a direction of length zero, or anything not finite (TMax may be +Inf). A TMin below 0 counts as 0.
//
// Why the margin is wide enough: a hit means that the sheared and rounded vertices surround the origin, so some point P of
// the true triangle, relative to the origin, lies beside the ray's point Q at the same depth with
// |P - Q| <= u·(2|P| + 4|Q| + 6·extent) on each of the other axes, at most 12u·reach where reach is the distance to the farthest
// corner of bounds. The two plane distances that a box test compares carry 3u each, another 6u·reach. 32u covers both
// and leaves room for the second-order terms.
func (p *Ray) Prepare(r geom.Ray, bounds geom.Box) bool {
	tMin := max(r.TMin, 0)
	if !(tMin < r.TMax) || !r.Org.Finite() || !r.Dir.Finite() {
		return false
	}
	org := [3]float32{r.Org.X, r.Org.Y, r.Org.Z}
	dir := [3]float32{r.Dir.X, r.Dir.Y, r.Dir.Z}
	ax, ay, az := abs(dir[0]), abs(dir[1]), abs(dir[2])
	kz, longest := uint32(2), az
	if ax >= ay && ax >= az {
		kz, longest = 0, ax
	} else if ay >= az {
		kz, longest = 1, ay
	}
	if longest == 0 {
		return false
	}
	lo := [3]float32{bounds.Min.X, bounds.Min.Y, bounds.Min.Z}
	hi := [3]float32{bounds.Max.X, bounds.Max.Y, bounds.Max.Z}
	var reach, far float32
	for k := range 3 {
		reach = max(reach, abs(lo[k]-org[k]), abs(hi[k]-org[k]))
		far = max(far, abs(org[k]))
	}
	margin := float32(reach*marginReach) + float32(far*marginOrigin)
	least := max(longest*flattest, smallest)
	for k := range 3 {
		d := float32(math.Copysign(float64(max(abs(dir[k]), least)), float64(dir[k])))
		m := float32(math.Copysign(float64(margin), float64(dir[k])))
		p.Org[k], p.Near[k], p.Far[k], p.Inv[k] = org[k], org[k]+m, org[k]-m, 1/d
	}
	kx := next(kz)
	ky := next(kx)
	p.KX, p.KY, p.KZ = kx, ky, kz
	p.Shear = [3]float32{dir[kx] / dir[kz], dir[ky] / dir[kz], 1 / dir[kz]}
	p.TMin, p.TMax = tMin, r.TMax
	return true
}

// next is the next axis in cyclic order.
func next(k uint32) uint32 { return (k + 1) % 3 }

func abs(x float32) float32 { return math.Float32frombits(math.Float32bits(x) &^ (1 << 31)) }
