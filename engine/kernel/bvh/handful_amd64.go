//go:build !purego

package bvh

import (
	"math/bits"
	"unsafe"

	"lampbook/engine/kernel/geom"
)

// Where a shaft crosses only a handful of triangles, as the rays of one pixel mostly do, no ray need walk: eight rays at a time are
// tested against each of them.

// handTriangle is one triangle of a handful, 64 bytes.
type handTriangle struct {
	corner [3][3]float32
	lo, hi [3]float32
	index  uint32 // with the top bit flipped
}

// handGroup is eight rays in rows. The assembly knows its layout by the G_ offsets.
type handGroup struct {
	org, slope        [3][8]float32 // along KX, KY, KZ; the third slope is -1/Dir[KZ]
	near, far, negInv [3][8]float32 // along x, y, z
	tMin, best        [8]float32    // best is -1 for rays that can hit nothing
	tie               [8]uint32     // with the top bit flipped
	u, v              [8]float32
	found             [8]uint32
}

// handful is the scratch space for one.
type handful struct {
	triangles [mostInHand]handTriangle
	groups    [readied / 8]handGroup
	boxes     wideNode
}

// mostInHand is how many triangles are a handful: with more, walking is cheaper. Measured with BenchmarkClosestHit.
const mostInHand = 24

// handfulWide tests n triangles against m groups of rays with the same axes.
//
//go:noescape
func handfulWide(triangles *handTriangle, n int, groups *handGroup, m int, kx, ky, kz int, l *lanes)

//go:noescape
func blockBoxesWide(b *block, n *wideNode)

// take collects from the first count places of an entrance the triangles whose boxes s crosses. It is false if they are too many, or if a
// place is not a leaf.
func (h *handful) take(t *wideTree, entrance *wideNode, count int, s *shaft) (n int, ok bool) {
	for i := range count {
		if entrance.child[i&7] < leafBit {
			return 0, false
		}
	}
	for i := range count {
		b := &t.blocks[entrance.child[i&7]&^leafBit]
		blockBoxesWide(b, &h.boxes)
		for m := shaftMask(&h.boxes, s); m != 0; m &= m - 1 {
			if n == mostInHand {
				return 0, false
			}
			h.triangles[n].set(b, &h.boxes, bits.TrailingZeros32(m)&7)
			n++
		}
	}
	return n, true
}

// set makes t the triangle at a place of a block.
func (t *handTriangle) set(b *block, boxes *wideNode, i int) {
	for k := range 3 {
		t.corner[0][k], t.corner[1][k], t.corner[2][k] = b.corner[0][k][i&7], b.corner[1][k][i&7], b.corner[2][k][i&7]
		t.lo[k], t.hi[k] = boxes.planes[2*k][i&7], boxes.planes[2*k+1][i&7]
	}
	t.index = b.index[i&7] ^ 1<<31
}

// group sorts rays into groups of eight, and fills the last one up with rays that can hit nothing. It is false if their axes differ.
func (h *handful) group(rays []wideRay) (axes *wideRay, ok bool) {
	for i := range rays {
		r := &rays[i]
		g, k := &h.groups[i/8&(readied/8-1)], i&7
		g.best[k], g.found[k] = -1, 0
		if r.signs < 0 {
			continue
		}
		if axes == nil {
			axes = r
		}
		if r.kz != axes.kz {
			return nil, false
		}
		x, y, z := r.kx/4&3, r.ky/4&3, r.kz/4&3
		g.org[0][k], g.org[1][k], g.org[2][k] = r.org[x], r.org[y], r.org[z]
		g.slope[0][k], g.slope[1][k], g.slope[2][k] = r.slope[x], r.slope[y], r.slope[3]
		g.near[0][k], g.near[1][k], g.near[2][k] = r.near[0], r.near[1], r.near[2]
		g.far[0][k], g.far[1][k], g.far[2][k] = r.far[0], r.far[1], r.far[2]
		g.negInv[0][k], g.negInv[1][k], g.negInv[2][k] = r.negInv[0], r.negInv[1], r.negInv[2]
		g.tMin[k], g.best[k], g.tie[k] = r.tMin, r.tMax, 1<<31
	}
	for i := len(rays); i&7 != 0; i++ {
		h.groups[i/8&(readied/8-1)].best[i&7] = -1
	}
	return axes, axes != nil
}

// closest improves hits of rays with the first n triangles. It is false, and does nothing, if the rays' axes differ.
func (h *handful) closest(n int, rays []wideRay, hits []Hit, placement uint32, l *lanes) bool {
	axes, ok := h.group(rays)
	if !ok {
		return false
	}
	for i := range rays {
		if b := &hits[i]; b.Placement != NoHit && rays[i].signs >= 0 {
			g := &h.groups[i/8&(readied/8-1)]
			g.best[i&7] = b.T
			if placement < b.Placement {
				g.tie[i&7] = 1<<31 - 1
			}
		}
	}
	handfulWide(&h.triangles[0], n, &h.groups[0], (len(rays)+7)/8, int(axes.kx/4), int(axes.ky/4), int(axes.kz/4), l)
	for i := range rays {
		if g, k := &h.groups[i/8&(readied/8-1)], i&7; g.found[k] != 0 {
			hits[i] = Hit{g.best[k], g.u[k], g.v[k], g.tie[k] ^ 1<<31, placement}
		}
	}
	return true
}

// occluded sets blocked for rays that meet one of the first n triangles. It is false, and does nothing, if the rays' axes differ.
func (h *handful) occluded(n int, rays []wideRay, blocked []bool, l *lanes) bool {
	axes, ok := h.group(rays)
	if !ok {
		return false
	}
	handfulWide(&h.triangles[0], n, &h.groups[0], (len(rays)+7)/8, int(axes.kx/4), int(axes.ky/4), int(axes.kz/4), l)
	for i := range rays {
		if h.groups[i/8&(readied/8-1)].found[i&7] != 0 {
			blocked[i] = true
		}
	}
	return true
}

// start says where rays begin: at a node, or with the first n of a handful of triangles if n is positive. Both are nothing where no ray hits.
func (t *wideTree) start(w *Walker, rays []geom.Ray) (entry unsafe.Pointer, n int) {
	root := unsafe.Pointer(&t.nodes[0])
	if len(rays) < leastBundle || !useBundles {
		return root, 0
	}
	x := &w.wide
	switch x.shaft.enclose(rays, t.bounds, 1) {
	case outside:
		return nil, 0
	case scattered:
		return root, 0
	}
	count := t.entrance(&x.entrance, &x.shaft)
	if count == 0 {
		return nil, 0
	}
	if n, ok := x.hand.take(t, &x.entrance, count, &x.shaft); ok {
		return nil, n
	}
	return unsafe.Pointer(&x.entrance), 0
}
