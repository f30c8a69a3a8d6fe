package bvh

import "math/bits"

// mostOpened bounds the work for one bundle.
const mostOpened = 24

// entrance fills n with up to eight nodes and leaves of t that together hold all that s crosses, and returns their number.
func (t *wideTree) entrance(n *wideNode, s *shaft) int {
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
	return count
}
