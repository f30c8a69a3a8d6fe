package bvh

import (
	"math"
	"math/bits"

	"lampbook/engine/kernel/geom"
)

// overview is the level above the trees: a hierarchy of eight-wide nodes over the boxes of placements in the world. It is asked with shafts,
// not with rays: once for all rays of a pixel.
type overview struct {
	bounds geom.Box
	slack  float32 // see reliance
	nodes  []wideNode
	order  []uint32 // places in Scene.placed; leaves are leafBit | first << 3 | count-1
	boxes  []geom.Box
	always []uint32 // those whose maps stretch space too much for their boxes to be relied on
}

// mostSlack is the reliance from which a placement's box is not used.
const mostSlack = 64

// reliance is the factor by which a map and its inverse, each rounded, can magnify rounding errors: the product of their norms, 1 or more. A ray
// moved into object space is off by less than 8u·|inverse|·(reach + |translation|) there, and its hits by another 36u of the distances
// there; back in the world that is below 128u·reach times this.
func reliance(a, inv geom.Affine) float64 { return math.Max(1, norm(a)*norm(inv)) }

// norm is the largest sum of absolute values of a row.
func norm(a geom.Affine) float64 {
	row := func(v geom.Vec3d) float64 { return math.Abs(v.X) + math.Abs(v.Y) + math.Abs(v.Z) }
	return max(row(a.X), row(a.Y), row(a.Z))
}

// oversee builds the overview of placements whose boxes and reliances are given.
func oversee(boxes []geom.Box, reliances []float64) overview {
	v := overview{bounds: geom.EmptyBox(), slack: 1, boxes: boxes}
	var refs []ref
	for i, b := range boxes {
		if !(reliances[i] <= mostSlack) || !b.Min.Finite() || !b.Max.Finite() {
			v.always = append(v.always, uint32(i))
			continue
		}
		v.slack = max(v.slack, float32(reliances[i]))
		v.bounds = v.bounds.Union(b)
		refs = append(refs, ref{lo: [3]float32{b.Min.X, b.Min.Y, b.Min.Z}, negHi: [3]float32{-b.Max.X, -b.Max.Y, -b.Max.Z}, index: uint32(i)})
	}
	if len(refs) == 0 {
		return v
	}
	b := builder{refs: refs, nodes: make([]node, 2*len(refs)), costs: costs{block: 1, step: 1}, parallel: func(n int, do func(i int)) {
		for i := range n {
			do(i)
		}
	}}
	b.split()
	for _, r := range b.refs {
		v.order = append(v.order, r.index)
	}
	v.lay(&b, span{to: len(refs)}, true)
	return v
}

// lay appends the nodes of s and returns the child that stands for it.
func (v *overview) lay(b *builder, s span, root bool) uint32 {
	if b.leaf(s) && !root {
		return leafBit | uint32(s.from)<<3 | uint32(s.to-s.from-1)
	}
	at := len(v.nodes)
	v.nodes = append(v.nodes, wideNode{})
	n := wideNode{}
	kids, count := b.open(s)
	for i := range 8 {
		if i >= count {
			n.clear(i)
			continue
		}
		n.set(i, &b.nodes[kids[i].at])
		n.child[i] = v.lay(b, kids[i], false)
	}
	v.nodes[at] = n
	return uint32(at)
}

// mostSorted is how many placements are worth sorting by insertion.
const mostSorted = 64

// sort puts near things first, by where their boxes begin along the shaft. It only saves work.
func (v *overview) sort(found []uint32, s *shaft) {
	if len(found) > mostSorted {
		return
	}
	begin := func(k uint32) float32 {
		b := &v.boxes[k]
		lo, hi := [3]float32{b.Min.X, b.Min.Y, b.Min.Z}, [3]float32{b.Max.X, b.Max.Y, b.Max.Z}
		if axis := s.rowZ / 64; s.backward {
			return -hi[axis]
		} else {
			return lo[axis]
		}
	}
	for i := 1; i < len(found); i++ {
		k := found[i]
		at := begin(k)
		j := i
		for ; j > 0 && begin(found[j-1]) > at; j-- {
			found[j] = found[j-1]
		}
		found[j] = k
	}
}

// crossed appends to out what rays may meet: all that their shaft crosses. It is false, and appends nothing, if they share no shaft.
func (v *overview) crossed(rays []geom.Ray, s *shaft, stack *[]uint32, out []uint32) ([]uint32, bool) {
	if len(v.nodes) == 0 {
		return append(out, v.always...), true
	}
	switch s.enclose(rays, v.bounds, v.slack) {
	case scattered:
		return out, false
	case outside:
		return append(out, v.always...), true
	}
	out = append(out, v.always...)
	todo := append((*stack)[:0], 0)
	for len(todo) > 0 {
		n := &v.nodes[todo[len(todo)-1]]
		todo = todo[:len(todo)-1]
		for m := shaftMask(n, s); m != 0; m &= m - 1 {
			c := n.child[bits.TrailingZeros32(m)&7]
			if c < leafBit {
				todo = append(todo, c)
				continue
			}
			out = append(out, v.order[c&^leafBit>>3:][:c&7+1]...)
		}
	}
	*stack = todo
	v.sort(out, s)
	return out, true
}
