package bvh

import (
	"math"

	"lampbook/engine/kernel/geom"
)

// Rays of one pixel, or from one pixel to one light, run through nearly the same part of a tree. A shaft encloses them all; the
// nodes near the root that it crosses are found once, and every ray starts from those instead of from the root. Reshetov, Soupikov &
// Hurley 2005, "Multi-level ray tracing algorithm", section 3, has the idea; the shaft here is four planes along the axis on which all
// rays run the same way.

// leastBundle is the number of rays from which a shaft pays, by BenchmarkClosestHit.
const leastBundle = 8

// bundleBounds is what bundleEnds finds of the rays whose TMin is below TMax. The fourth components mean nothing.
type bundleBounds struct {
	orgMin, orgMax, endMin, endMax [4]float32 // of Org, and of Org + TMax·Dir where that is a number
	anyNegative, allNegative       uint32     // directions' signs, a bit for each axis
	live                           uint32     // how many they are
	some                           uint32     // the index of one of them
}

// bundleSpans is what bundleSpan finds: where the rays' lines cross two planes, and how far they lean.
type bundleSpans struct{ min0, max0, min1, max1, lean [4]float32 }

// shaft is all points with z in [z0, z1] between four planes: sides are x at least, x at most, y at least, y at most, each
// base + (z - z0)·slope. x, y and z are any three axes in cyclic order, named by the offsets of their rows in a wideNode. shaftMask
// knows the layout.
type shaft struct {
	rowX, rowY, rowZ uint64
	z0, z1           float32
	base, slope      [4]float32
	backward         bool // the rays run towards lower z
}

// What enclose finds.
const (
	scattered = iota // the rays share no way; walk from the root
	outside          // no ray reaches the bounds
	enclosed
)

// steepest is how much further than along the shaft a ray may run across it.
const steepest = 8

// enclose makes s the shaft of rays inside bounds. It is wide enough for every hit that package tri may find: a rounded hit lies within
// 12u·reach of its ray (see tri.Ray.Prepare) across the ray's longest axis, so within 12u·reach·(1 + steepest) across the shaft's axis, and
// the arithmetic here adds less than 16u·reach·(1 + steepest). reach is at most twice the largest coordinate, by which 128u is taken.
// slack, 1 or more, widens it for boxes that know less well where their contents are.
func (s *shaft) enclose(rays []geom.Ray, bounds geom.Box, slack float32) int {
	if strays(rays) {
		return scattered
	}
	var e bundleBounds
	bundleEnds(rays, &e)
	if e.live == 0 {
		return outside
	}
	lo := [3]float32{bounds.Min.X, bounds.Min.Y, bounds.Min.Z}
	hi := [3]float32{bounds.Max.X, bounds.Max.Y, bounds.Max.Z}
	d := rays[e.some].Dir
	axis, along := -1, float32(0)
	for k, c := range [3]float32{d.X, d.Y, d.Z} {
		if bit := uint32(1) << k; e.anyNegative&bit == e.allNegative&bit && c*c > along {
			axis, along = k, c*c
		}
	}
	if axis < 0 {
		return scattered
	}
	var reach float32
	for k := range 3 {
		reach = max(reach, abs32(lo[k]), abs32(hi[k]), abs32(e.orgMin[k]), abs32(e.orgMax[k]))
	}
	margin := float32(reach * 0x1p-17 * (1 + steepest) * slack)
	s.z0, s.z1 = lo[axis], hi[axis]
	s.backward = e.allNegative>>axis&1 == 1
	if !s.backward {
		s.z0, s.z1 = max(s.z0, e.orgMin[axis]), min(s.z1, e.endMax[axis])
	} else {
		s.z0, s.z1 = max(s.z0, e.endMin[axis]), min(s.z1, e.orgMax[axis])
	}
	s.z0, s.z1 = s.z0-margin, s.z1+margin
	if s.z0 > s.z1 {
		return outside
	}
	var p bundleSpans
	bundleSpan(rays, axis, s.z0, s.z1, &p)
	x, y := (axis+1)%3, (axis+2)%3
	if !(p.lean[x] <= steepest && p.lean[y] <= steepest) || !(s.z1-s.z0 < math.MaxFloat32) {
		return scattered
	}
	s.rowX, s.rowY, s.rowZ = uint64(x)*64, uint64(y)*64, uint64(axis)*64
	for i, ends := range [4][2]float32{{p.min0[x], p.min1[x]}, {p.max0[x], p.max1[x]}, {p.min0[y], p.min1[y]}, {p.max0[y], p.max1[y]}} {
		s.base[i] = ends[0] - margin
		if i&1 == 1 {
			s.base[i] = ends[0] + margin
		}
		s.slope[i] = (ends[1] - ends[0]) / (s.z1 - s.z0)
	}
	return enclosed
}

// strays reports, from three of them, that rays have no axis on which all run the same way. Most scattered bundles end here.
func strays(rays []geom.Ray) bool {
	all, any := uint32(7), uint32(0)
	for _, i := range [3]int{0, len(rays) / 2, len(rays) - 1} {
		r := &rays[i]
		if r.TMin < r.TMax {
			signs := math.Float32bits(r.Dir.X)>>31 | math.Float32bits(r.Dir.Y)>>31<<1 | math.Float32bits(r.Dir.Z)>>31<<2
			all, any = all&signs, any|signs
		}
	}
	return any&^all == 7
}

func abs32(x float32) float32 { return math.Float32frombits(math.Float32bits(x) &^ (1 << 31)) }

// bundleEndsPlain finds the bounds of rays.
func bundleEndsPlain(rays []geom.Ray, e *bundleBounds) {
	*e = bundleBounds{
		orgMin: [4]float32{inf, inf, inf}, orgMax: [4]float32{-inf, -inf, -inf},
		endMin: [4]float32{inf, inf, inf}, endMax: [4]float32{-inf, -inf, -inf},
		allNegative: 7,
	}
	for i := range rays {
		r := &rays[i]
		if !(r.TMin < r.TMax) {
			continue
		}
		e.live++
		e.some = uint32(i)
		org, dir := [3]float32{r.Org.X, r.Org.Y, r.Org.Z}, [3]float32{r.Dir.X, r.Dir.Y, r.Dir.Z}
		signs := uint32(0)
		for k := range 3 {
			end := org[k] + float32(dir[k]*r.TMax)
			grow(&e.orgMin[k], &e.orgMax[k], org[k])
			grow(&e.endMin[k], &e.endMax[k], end)
			signs |= math.Float32bits(dir[k]) >> 31 << k
		}
		e.anyNegative |= signs
		e.allNegative &= signs
	}
}

// bundleSpanPlain finds where rays cross the planes z0 and z1 of an axis.
func bundleSpanPlain(rays []geom.Ray, axis int, z0, z1 float32, s *bundleSpans) {
	*s = bundleSpans{
		min0: [4]float32{inf, inf, inf}, max0: [4]float32{-inf, -inf, -inf},
		min1: [4]float32{inf, inf, inf}, max1: [4]float32{-inf, -inf, -inf},
	}
	for i := range rays {
		r := &rays[i]
		if !(r.TMin < r.TMax) {
			continue
		}
		org, dir := [3]float32{r.Org.X, r.Org.Y, r.Org.Z}, [3]float32{r.Dir.X, r.Dir.Y, r.Dir.Z}
		for k := range 3 {
			slope := dir[k] / dir[axis]
			grow(&s.min0[k], &s.max0[k], org[k]+float32(slope*(z0-org[axis])))
			grow(&s.min1[k], &s.max1[k], org[k]+float32(slope*(z1-org[axis])))
			if a := abs32(slope); a > s.lean[k] {
				s.lean[k] = a
			}
		}
	}
}

// grow makes [lo, hi] hold x, which is passed over if it is NaN.
func grow(lo, hi *float32, x float32) {
	if x < *lo {
		*lo = x
	}
	if x > *hi {
		*hi = x
	}
}

// shaftMaskPlain tells which boxes of a node the shaft may cross.
func shaftMaskPlain(n *wideNode, s *shaft) uint32 {
	x, y, z := s.rowX/32, s.rowY/32, s.rowZ/32
	mask := uint32(0)
	for i := range 8 {
		near, far := max(n.planes[z][i], s.z0), min(n.planes[z+1][i], s.z1)
		if near > far {
			continue
		}
		near, far = near-s.z0, far-s.z0
		least := func(k int) float32 { return s.base[k] + min(float32(near*s.slope[k]), float32(far*s.slope[k])) }
		most := func(k int) float32 { return s.base[k] + max(float32(near*s.slope[k]), float32(far*s.slope[k])) }
		if least(0) <= n.planes[x+1][i] && most(1) >= n.planes[x][i] && least(2) <= n.planes[y+1][i] && most(3) >= n.planes[y][i] {
			mask |= 1 << i
		}
	}
	return mask
}
