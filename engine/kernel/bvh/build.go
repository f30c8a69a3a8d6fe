package bvh

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/tri"
)

// BuildOptions tunes Build. The zero value builds on the calling goroutine.
type BuildOptions struct {
	// Parallel calls do(0) to do(n-1), in any order, on as many goroutines as it likes, and returns when all are done. The
	// tree is the same whatever it does. nil: one after the other.
	Parallel func(n int, do func(i int))
}

// useWide says that Build lays trees out for the vector walk. Tests switch it off to compare.
var useWide = haveWide

// Tree is the hierarchy over one mesh's triangles. It keeps copies of the corners and does not refer to the mesh.
type Tree struct {
	bounds geom.Box

	// One of two layouts, for the walk that this machine has.
	pairs []pair
	tris  []tri.Triangle
	wide  wideTree
}

// Bounds returns the box around all triangles that can be hit; empty if there are none.
func (t *Tree) Bounds() geom.Box { return t.bounds }

// Bytes returns the memory that the tree holds, in bytes.
func (t *Tree) Bytes() int {
	return len(t.pairs)*64 + len(t.tris)*48 + len(t.wide.nodes)*256 + len(t.wide.blocks)*320
}

// Build makes the hierarchy over triangles, each three indices into positions. Triangles with an index out of range, a corner that is
// not finite, or no area are left out and never hit. An empty tree is fine.
func Build(positions []geom.Vec3, triangles [][3]uint32, o BuildOptions) *Tree {
	refs := make([]ref, 0, len(triangles))
	bounds, centres := emptyBox(), emptyBox()
	for i, f := range triangles {
		n := uint32(len(positions))
		if f[0] >= n || f[1] >= n || f[2] >= n {
			continue
		}
		a, b, c := positions[f[0]], positions[f[1]], positions[f[2]]
		if !tri.Solid(a, b, c) {
			continue
		}
		r := ref{
			lo: [3]float32{min(a.X, b.X, c.X), min(a.Y, b.Y, c.Y), min(a.Z, b.Z, c.Z)},
			hi: [3]float32{max(a.X, b.X, c.X), max(a.Y, b.Y, c.Y), max(a.Z, b.Z, c.Z)},
			id: uint32(i),
		}
		refs = append(refs, r)
		bounds.join(&r.lo, &r.hi)
		m := r.centre()
		centres.join(&m, &m)
	}
	t := &Tree{bounds: geom.EmptyBox()}
	if len(refs) == 0 {
		return t
	}
	t.bounds = geom.Box{
		Min: geom.Vec3{X: bounds.lo[0], Y: bounds.lo[1], Z: bounds.lo[2]},
		Max: geom.Vec3{X: bounds.hi[0], Y: bounds.hi[1], Z: bounds.hi[2]},
	}
	b := builder{refs: refs, costs: pairCosts}
	if useWide {
		b.costs = wideCosts
	}
	b.nodes = append(b.nodes, node{})
	b.split(0, 0, len(refs), bounds, centres, 0)
	if useWide {
		t.wide = widen(b.nodes, refs, positions, triangles)
		t.wide.bounds = t.bounds
		return t
	}
	t.tris = room[tri.Triangle](len(refs))
	for i := range refs {
		f := triangles[refs[i].id]
		t.tris[i] = tri.Make(positions[f[0]], positions[f[1]], positions[f[2]], refs[i].id)
	}
	t.pairs = pairUp(b.nodes)
	return t
}

// ref is one triangle during the build.
type ref struct {
	lo [3]float32
	id uint32
	hi [3]float32
	_  uint32
}

// centre is twice the middle of the triangle's box.
func (r *ref) centre() [3]float32 {
	return [3]float32{r.lo[0] + r.hi[0], r.lo[1] + r.hi[1], r.lo[2] + r.hi[2]}
}

type box struct{ lo, hi [3]float32 }

func emptyBox() box {
	inf := float32(math.Inf(1))
	return box{[3]float32{inf, inf, inf}, [3]float32{-inf, -inf, -inf}}
}

func (b *box) join(lo, hi *[3]float32) {
	for k := range 3 {
		if lo[k] < b.lo[k] {
			b.lo[k] = lo[k]
		}
		if hi[k] > b.hi[k] {
			b.hi[k] = hi[k]
		}
	}
}

// area is half the surface, 0 for the empty box.
func (b *box) area() float32 {
	x, y, z := b.hi[0]-b.lo[0], b.hi[1]-b.lo[1], b.hi[2]-b.lo[2]
	if x < 0 {
		return 0
	}
	return x*y + y*z + z*x
}

// node is a node of the binary tree from which the walks' layouts are made. Leaves have count > 0 and hold refs first to
// first+count-1; the children of others are nodes first and first+1.
type node struct {
	b            box
	first, count uint32
}

const (
	maxLeaf  = 8  // triangles a leaf holds at most
	bins     = 16 // split candidates per axis
	maxDepth = 32 // below this, halves by number: at most 32 levels more
	binEnd   = 0.99999
)

// costs tells the surface-area heuristic what a walk's steps cost.
type costs struct {
	block int     // triangles tested together
	step  float32 // cost of a binary node relative to one such test
}

var (
	pairCosts = costs{block: 1, step: 1.5}
	wideCosts = costs{block: 8, step: 0.3}
)

// tests is the number of tests that n triangles need.
func (c costs) tests(n int) float32 { return float32((n + c.block - 1) / c.block) }

type builder struct {
	refs  []ref
	nodes []node
	costs costs
}

type bin struct {
	b box
	n int
}

// split makes the subtree over refs[first:first+n] at node at.
func (bd *builder) split(at uint32, first, n int, bounds, centres box, depth int) {
	bd.nodes[at].b = bounds
	refs := bd.refs[first : first+n]
	axis, cut, cost := -1, 0, float32(math.Inf(1))
	var scale [3]float32
	var table [3][bins]bin
	if n > 1 && depth < maxDepth {
		for k := range 3 {
			if d := centres.hi[k] - centres.lo[k]; d > 0 {
				scale[k] = bins * binEnd / d
			}
		}
		for k := range 3 {
			for i := range bins {
				table[k][i].b = emptyBox()
			}
		}
		for i := range refs {
			m := refs[i].centre()
			for k := range 3 {
				b := &table[k][int((m[k]-centres.lo[k])*scale[k])&(bins-1)]
				b.n++
				b.b.join(&refs[i].lo, &refs[i].hi)
			}
		}
		for k := range 3 {
			if !(scale[k] > 0) {
				continue
			}
			var right [bins]float32
			acc, count := emptyBox(), 0
			for i := bins - 1; i > 0; i-- {
				acc.join(&table[k][i].b.lo, &table[k][i].b.hi)
				count += table[k][i].n
				right[i] = acc.area() * bd.costs.tests(count)
			}
			acc, count = emptyBox(), 0
			for i := 1; i < bins; i++ {
				acc.join(&table[k][i-1].b.lo, &table[k][i-1].b.hi)
				count += table[k][i-1].n
				if count == 0 || count == n {
					continue
				}
				if c := acc.area()*bd.costs.tests(count) + right[i]; c < cost {
					axis, cut, cost = k, i, c
				}
			}
		}
	}
	area := bounds.area()
	if n <= maxLeaf && (axis < 0 || area*bd.costs.tests(n) <= cost+bd.costs.step*area) {
		bd.nodes[at].first, bd.nodes[at].count = uint32(first), uint32(n)
		return
	}
	mid := n / 2
	if axis >= 0 {
		mid = 0
		for i := range refs {
			m := refs[i].lo[axis] + refs[i].hi[axis]
			if int((m-centres.lo[axis])*scale[axis])&(bins-1) < cut {
				refs[i], refs[mid] = refs[mid], refs[i]
				mid++
			}
		}
	}
	left := uint32(len(bd.nodes))
	bd.nodes = append(bd.nodes, node{}, node{})
	bd.nodes[at].first = left
	for side, part := range [2][]ref{refs[:mid], refs[mid:]} {
		b, c := emptyBox(), emptyBox()
		for i := range part {
			b.join(&part[i].lo, &part[i].hi)
			m := part[i].centre()
			c.join(&m, &m)
		}
		bd.split(left+uint32(side), first+side*mid, len(part), b, c, depth+1)
	}
}
