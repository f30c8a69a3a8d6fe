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
	tMin := r.TMin
	if tMin <= 0 {
		tMin = 0 // also where it is -0
	}
	if !(tMin < r.TMax) || !r.Org.Finite() || !r.Dir.Finite() {
		return false
	}
	ax, ay, az := abs(r.Dir.X), abs(r.Dir.Y), abs(r.Dir.Z)
	longest := larger(ax, larger(ay, az))
	if longest == 0 {
		return false
	}
	lo, hi := bounds.Min, bounds.Max
	reach := larger(larger(larger(abs(lo.X-r.Org.X), abs(hi.X-r.Org.X)), larger(abs(lo.Y-r.Org.Y), abs(hi.Y-r.Org.Y))),
		larger(abs(lo.Z-r.Org.Z), abs(hi.Z-r.Org.Z)))
	far := larger(abs(r.Org.X), larger(abs(r.Org.Y), abs(r.Org.Z)))
	margin := float32(reach*marginReach) + float32(far*marginOrigin)
	least := larger(longest*flattest, smallest)
	mx, my, mz := signed(margin, r.Dir.X), signed(margin, r.Dir.Y), signed(margin, r.Dir.Z)
	p.Org = [4]float32{r.Org.X, r.Org.Y, r.Org.Z}
	p.Near = [4]float32{r.Org.X + mx, r.Org.Y + my, r.Org.Z + mz}
	p.Far = [4]float32{r.Org.X - mx, r.Org.Y - my, r.Org.Z - mz}
	p.Inv = [4]float32{1 / signed(larger(ax, least), r.Dir.X), 1 / signed(larger(ay, least), r.Dir.Y), 1 / signed(larger(az, least), r.Dir.Z)}
	switch {
	case ax >= ay && ax >= az:
		p.KX, p.KY, p.KZ = 1, 2, 0
		p.Shear = [3]float32{r.Dir.Y / r.Dir.X, r.Dir.Z / r.Dir.X, 1 / r.Dir.X}
	case ay >= az:
		p.KX, p.KY, p.KZ = 2, 0, 1
		p.Shear = [3]float32{r.Dir.Z / r.Dir.Y, r.Dir.X / r.Dir.Y, 1 / r.Dir.Y}
	default:
		p.KX, p.KY, p.KZ = 0, 1, 2
		p.Shear = [3]float32{r.Dir.X / r.Dir.Z, r.Dir.Y / r.Dir.Z, 1 / r.Dir.Z}
	}
	p.TMin, p.TMax = tMin, r.TMax
	return true
}

func abs(x float32) float32 { return math.Float32frombits(math.Float32bits(x) &^ (1 << 31)) }

// signed is the magnitude m >= +0 with the sign of s.
func signed(m, s float32) float32 {
	return math.Float32frombits(math.Float32bits(m) | math.Float32bits(s)&(1<<31))
}

// larger is the maximum of two values >= +0, which integers order as floats do. The built-in max must think of NaN and -0.
func larger(a, b float32) float32 {
	return math.Float32frombits(max(math.Float32bits(a), math.Float32bits(b)))
}
