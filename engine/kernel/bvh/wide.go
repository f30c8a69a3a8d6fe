package bvh

import (
	"math"

	"lampbook/engine/kernel/geom"
)

// wideNode is the vector walk's node: the boxes of eight children in rows, 256 bytes. Rows 0 to 5 are lo.x, hi.x, lo.y, hi.y, lo.z, hi.z.
// An empty place has lo above hi. child is the index of a node, or leafBit | index of a block.
type wideNode struct {
	planes [6][8]float32
	child  [8]uint32
	_      [8]uint32
}

// block holds the triangles of one leaf in rows: corner, axis, triangle. Places without a triangle have corners of NaN, which nothing hits.
// 320 bytes.
type block struct {
	corner [3][3][8]float32
	index  [8]uint32
}

// wideTree is the layout of a tree for vector walks.
type wideTree struct {
	bounds geom.Box
	nodes  []wideNode
	blocks []block
}

// span is a binary node and the refs below it: from to to-1.
type span struct {
	at       uint32
	from, to int
}

// halves gives the children of an inner node.
func (b *builder) halves(s span) (left, right span) {
	at := b.nodes[s.at].first
	mid := int(at+1) / 2
	return span{at, s.from, mid}, span{at + 1, mid, s.to}
}

func (b *builder) leaf(s span) bool { return b.nodes[s.at].count > 0 }

// open gives the up to eight children of a wide node in place of binary node s: again and again the inner one with the largest surface
// is replaced by its two.
func (b *builder) open(s span) (kids [8]span, count int) {
	var areas [8]float32 // -1 for leaves
	put := func(i int, s span) {
		kids[i&7], areas[i&7] = s, -1
		if n := &b.nodes[s.at]; n.count == 0 {
			areas[i&7] = n.area()
		}
	}
	put(0, s)
	for count = 1; count < 8; count++ {
		widest := 0
		for i := 1; i < count; i++ {
			if areas[i] > areas[widest] {
				widest = i
			}
		}
		if b.leaf(kids[widest]) {
			break
		}
		left, right := b.halves(kids[widest])
		put(widest, left)
		put(count, right)
	}
	return kids, count
}

// widener lays a binary tree out in wide nodes and blocks.
type widener struct {
	*builder
	tree      wideTree
	positions []geom.Vec3
	triangles [][3]uint32
}

// place is where the next node and the next block go.
type place struct{ node, block uint32 }

// widen lays the tree out depth first, its subtrees at the same time: first the upper nodes, then, once the subtrees' sizes are
// known, those.
func widen(b *builder, positions []geom.Vec3, triangles [][3]uint32) wideTree {
	w := widener{builder: b, positions: positions, triangles: triangles}
	small := max(partSize/4, len(b.refs)/64)
	upper, below := []span{{to: len(b.refs)}}, []span{}
	for i := 0; i < len(upper); i++ {
		kids, count := b.open(upper[i])
		for _, k := range kids[:count] {
			if k.to-k.from > small {
				upper = append(upper, k)
			} else {
				below = append(below, k)
			}
		}
	}
	starts := make([]place, len(below)+1)
	b.parallel(len(below), func(i int) { w.size(below[i], &starts[i]) })
	next := place{node: uint32(len(upper))}
	for i := range starts {
		size := starts[i]
		starts[i] = next
		next.node, next.block = next.node+size.node, next.block+size.block
	}
	w.tree.nodes, w.tree.blocks = room[wideNode](int(next.node)), room[block](int(next.block))
	nextUpper, nextBelow := uint32(1), 0
	for i := range upper {
		n := &w.tree.nodes[i]
		kids, count := b.open(upper[i])
		for k := range 8 {
			if k >= count {
				n.clear(k)
				continue
			}
			n.set(k, &b.nodes[kids[k].at])
			switch {
			case kids[k].to-kids[k].from > small:
				n.child[k] = nextUpper
				nextUpper++
			case b.leaf(kids[k]):
				n.child[k] = leafBit | starts[nextBelow].block
				nextBelow++
			default:
				n.child[k] = starts[nextBelow].node
				nextBelow++
			}
		}
	}
	b.parallel(len(below), func(i int) {
		next := starts[i]
		w.lay(below[i], &next)
	})
	return w.tree
}

// size adds the numbers of nodes and blocks below and at s.
func (w *widener) size(s span, sum *place) {
	if w.leaf(s) {
		sum.block++
		return
	}
	sum.node++
	kids, count := w.open(s)
	for _, k := range kids[:count] {
		w.size(k, sum)
	}
}

// lay writes what size counts, from next on, and returns the child that stands for s.
func (w *widener) lay(s span, next *place) uint32 {
	if w.leaf(s) {
		at := next.block
		next.block++
		w.tree.blocks[at].fill(w.refs[s.from:s.to], w.positions, w.triangles)
		return leafBit | at
	}
	at := next.node
	next.node++
	n := &w.tree.nodes[at]
	kids, count := w.open(s)
	for i := range 8 {
		if i >= count {
			n.clear(i)
			continue
		}
		n.set(i, &w.nodes[kids[i].at])
		n.child[i] = w.lay(kids[i], next)
	}
	return at
}

// set gives place i the box of b.
func (n *wideNode) set(i int, b *node) {
	for k := range 3 {
		n.planes[2*k][i&7], n.planes[2*k+1][i&7] = b.lo[k], b.hi[k]
	}
}

// clear makes place i one that nothing hits.
func (n *wideNode) clear(i int) {
	for k := range 3 {
		n.planes[2*k][i&7], n.planes[2*k+1][i&7] = inf, -inf
	}
}

// fill makes b the block of up to eight refs.
func (b *block) fill(refs []ref, positions []geom.Vec3, triangles [][3]uint32) {
	for i := range 8 {
		if i >= len(refs) {
			nan := float32(math.NaN())
			for c := range 3 {
				b.corner[c][0][i], b.corner[c][1][i], b.corner[c][2][i] = nan, nan, nan
			}
			b.index[i] = math.MaxUint32
			continue
		}
		f := &triangles[refs[i].index]
		for c := range 3 {
			p := &positions[f[c]]
			b.corner[c][0][i], b.corner[c][1][i], b.corner[c][2][i] = p.X, p.Y, p.Z
		}
		b.index[i] = refs[i].index
	}
}
