//go:build !purego

package bvh

import (
	"math"
	"math/bits"

	"lampbook/engine/kernel/geom"
)

// Rays of one pixel, or from one pixel to one light, run through nearly the same part of a tree. A shaft encloses them all; the
// nodes near the root that it crosses are found once, and every ray starts from those instead of from the root. Reshetov, Soupikov &
// Hurley 2005, "Multi-level ray tracing algorithm", section 3, has the idea; the shaft here is four planes along the axis on which all
// rays run the same way.

// leastBundle is the number of rays from which a shaft pays, measured with BenchmarkClosestHit.
const leastBundle = 8

// bundleBounds is what bundleEnds finds of the rays whose TMin is below TMax. The fourth components mean nothing.
type bundleBounds struct {
	orgMin, orgMax, endMin, endMax [4]float32 // of Org, and of Org + TMax·Dir where that is a number
	anyNegative, allNegative       uint32     // directions' signs, a bit for each axis
	live                           uint32
	_                              uint32
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
}

//go:noescape
func bundleEnds(rays *geom.Ray, n int, e *bundleBounds)

//go:noescape
func bundleSpan(rays *geom.Ray, n int, axis int, z0, z1 float32, s *bundleSpans)

// shaftMask tells which boxes of a node the shaft may cross.
//
//go:noescape
func shaftMask(n *wideNode, s *shaft) uint32

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
// the arithmetic here adds less than 16u·reach·(1 + steepest).
func (s *shaft) enclose(rays []geom.Ray, bounds geom.Box) int {
	var e bundleBounds
	bundleEnds(&rays[0], len(rays), &e)
	if e.live == 0 {
		return outside
	}
	lo := [3]float32{bounds.Min.X, bounds.Min.Y, bounds.Min.Z}
	hi := [3]float32{bounds.Max.X, bounds.Max.Y, bounds.Max.Z}
	d := rays[0].Dir
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
	margin := 2 * reach * 0x1p-18 * (1 + steepest)
	s.z0, s.z1 = lo[axis], hi[axis]
	if e.allNegative>>axis&1 == 0 {
		s.z0, s.z1 = max(s.z0, e.orgMin[axis]), min(s.z1, e.endMax[axis])
	} else {
		s.z0, s.z1 = max(s.z0, e.endMin[axis]), min(s.z1, e.orgMax[axis])
	}
	s.z0, s.z1 = s.z0-margin, s.z1+margin
	if s.z0 > s.z1 {
		return outside
	}
	var p bundleSpans
	bundleSpan(&rays[0], len(rays), axis, s.z0, s.z1, &p)
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

func abs32(x float32) float32 { return math.Float32frombits(math.Float32bits(x) &^ (1 << 31)) }

// mostOpened bounds the work for one bundle.
const mostOpened = 24

// entrance fills n with up to eight nodes and leaves of t that together hold all that s crosses. It is false if there is nothing.
func (t *wideTree) entrance(n *wideNode, s *shaft) bool {
	var from [8]struct{ node, place uint32 }
	var child [8]uint32
	count := 0
	add := func(i int, node uint32, place uint32) {
		from[i&7] = struct{ node, place uint32 }{node, place}
		child[i&7] = t.nodes[node].child[place&7]
	}
	for m := shaftMask(&t.nodes[0], s); m != 0; m &= m - 1 {
		add(count, 0, uint32(bits.TrailingZeros32(m)))
		count++
	}
	opened := 0
	for again := true; again && opened < mostOpened; {
		again = false
		for i := 0; i < count && opened < mostOpened; i++ {
			c := child[i&7]
			if c >= leafBit {
				continue
			}
			opened++
			m := shaftMask(&t.nodes[c], s)
			k := bits.OnesCount32(m)
			if k == 0 {
				count--
				from[i&7], child[i&7] = from[count&7], child[count&7]
				i--
				continue
			}
			if count+k > 9 {
				continue
			}
			again = true
			add(i, c, uint32(bits.TrailingZeros32(m)))
			for m &= m - 1; m != 0; m &= m - 1 {
				add(count, c, uint32(bits.TrailingZeros32(m)))
				count++
			}
		}
	}
	for i := range 8 {
		if i < count {
			src := &t.nodes[from[i].node]
			for r := range 6 {
				n.planes[r][i] = src.planes[r][from[i].place&7]
			}
			n.child[i] = child[i]
			continue
		}
		for r := range 3 {
			n.planes[2*r][i], n.planes[2*r+1][i] = inf, -inf
		}
	}
	return count > 0
}
