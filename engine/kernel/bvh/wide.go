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

// widen lays a binary tree out in wide nodes, depth first: a node's children are found by opening the binary node with the largest
// surface until there are eight.
func widen(nodes []node, refs []ref, positions []geom.Vec3, triangles [][3]uint32) wideTree {
	var w wideTree
	inner, leaves := 0, 0
	for i := range nodes {
		if nodes[i].count > 0 {
			leaves++
		} else {
			inner++
		}
	}
	w.nodes, w.blocks = room[wideNode](inner + 1)[:1], room[block](leaves)[:0]
	var lay func(at uint32, src *node)
	lay = func(at uint32, src *node) {
		var kids [8]*node
		count := 1
		kids[0] = src
		for count < 8 {
			widest, area := -1, float32(-1)
			for i, k := range kids[:count] {
				if k.count == 0 {
					if a := k.b.area(); a > area {
						widest, area = i, a
					}
				}
			}
			if widest < 0 {
				break
			}
			f := kids[widest].first
			kids[widest], kids[count] = &nodes[f], &nodes[f+1]
			count++
		}
		first := uint32(len(w.nodes))
		inner := uint32(0)
		for _, k := range kids[:count] {
			if k.count == 0 {
				w.nodes = append(w.nodes, wideNode{})
			}
		}
		n := wideNode{}
		for i := range 8 {
			b := emptyBox()
			if i < count {
				b = kids[i].b
				if k := kids[i]; k.count > 0 {
					n.child[i] = leafBit | uint32(len(w.blocks))
					w.blocks = append(w.blocks, makeBlock(refs[k.first:k.first+k.count], positions, triangles))
				} else {
					n.child[i] = first + inner
					inner++
				}
			}
			for k := range 3 {
				n.planes[2*k][i], n.planes[2*k+1][i] = b.lo[k], b.hi[k]
			}
		}
		w.nodes[at] = n
		for i, k := range kids[:count] {
			if k.count == 0 {
				lay(n.child[i], k)
			}
		}
	}
	lay(0, &nodes[0])
	return w
}

func makeBlock(refs []ref, positions []geom.Vec3, triangles [][3]uint32) block {
	var b block
	for i := range refs {
		f := &triangles[refs[i].id]
		for c := range 3 {
			p := &positions[f[c]]
			b.corner[c][0][i], b.corner[c][1][i], b.corner[c][2][i] = p.X, p.Y, p.Z
		}
		b.index[i] = refs[i].id
	}
	for i := len(refs); i < 8; i++ {
		for c := range 3 {
			for k := range 3 {
				b.corner[c][k][i] = float32(math.NaN())
			}
		}
		b.index[i] = math.MaxUint32
	}
	return b
}
