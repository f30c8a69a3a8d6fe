package bvh

import "math"

// pair is the portable walk's node: the boxes of two children, 64 bytes. Rows 0 to 5 are lo.x, hi.x, lo.y, hi.y, lo.z, hi.z of both;
// row 6 holds the bits of the children: the index of a pair, or leafBit | first triangle << 3 | count-1.
type pair [8][2]float32

const leafBit = 1 << 31

// pairUp lays a binary tree out as pairs, depth first. A tree that is a single leaf gets a pair with an empty second place.
func pairUp(b *builder) []pair {
	inner := 0
	for i := range b.nodes {
		if n := &b.nodes[i]; n.count == 0 && n.first > 0 {
			inner++
		}
	}
	p := pairer{b.nodes, room[pair](max(inner, 1))[:0]}
	if b.nodes[0].count > 0 {
		p.pairs = append(p.pairs, pair{})
		p.pairs[0].set(0, &b.nodes[0], p.lay(0))
		p.pairs[0].set(1, &node{lo: [3]float32{inf, inf, inf}, hi: [3]float32{-inf, -inf, -inf}}, leafBit)
		return p.pairs
	}
	p.lay(0)
	return p.pairs
}

type pairer struct {
	nodes []node
	pairs []pair
}

// lay appends the subtree of a node and returns the child that stands for it.
func (p *pairer) lay(at uint32) uint32 {
	n := &p.nodes[at]
	if n.count > 0 {
		return leafBit | n.first<<3 | (n.count - 1)
	}
	dst := len(p.pairs)
	p.pairs = append(p.pairs, pair{})
	for i := range uint32(2) {
		child := p.lay(n.first + i)
		p.pairs[dst].set(i, &p.nodes[n.first+i], child)
	}
	return uint32(dst)
}

func (p *pair) set(i uint32, n *node, child uint32) {
	for k := range 3 {
		p[2*k][i&1], p[2*k+1][i&1] = n.lo[k], n.hi[k]
	}
	p[6][i&1] = math.Float32frombits(child)
}
