package bvh

import "math"

// pair is the portable walk's node: the boxes of two children, 64 bytes. Rows 0 to 5 are lo.x, hi.x, lo.y, hi.y, lo.z, hi.z of both;
// row 6 holds the bits of the children: the index of a pair, or leafBit | first triangle << 3 | count-1.
type pair [8][2]float32

const leafBit = 1 << 31

// pairUp lays a binary tree out as pairs, depth first.
func pairUp(nodes []node) []pair {
	out := room[pair](len(nodes)/2 + 1)[:0]
	var lay func(children []node) uint32
	lay = func(children []node) uint32 {
		at := len(out)
		out = append(out, pair{})
		p := pair{}
		for i := range 2 {
			b, child := emptyBox(), uint32(leafBit)
			if i < len(children) {
				c := &children[i]
				b = c.b
				if c.count > 0 {
					child = leafBit | c.first<<3 | (c.count - 1)
				} else {
					child = lay(nodes[c.first : c.first+2])
				}
			}
			for k := range 3 {
				p[2*k][i], p[2*k+1][i] = b.lo[k], b.hi[k]
			}
			p[6][i] = math.Float32frombits(child)
		}
		out[at] = p
		return uint32(at)
	}
	lay(nodes[:1])
	return out
}
