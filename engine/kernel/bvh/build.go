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
// not finite, or no area are left out and never hit. An empty tree is fine. While it works it needs some 100 bytes a triangle besides the
// tree.
func Build(positions []geom.Vec3, triangles [][3]uint32, o BuildOptions) *Tree {
	parallel := o.Parallel
	if parallel == nil {
		parallel = func(n int, do func(i int)) {
			for i := range n {
				do(i)
			}
		}
	}
	t := &Tree{bounds: geom.EmptyBox()}
	refs := gather(positions, triangles, parallel)
	if len(refs) == 0 {
		return t
	}
	b := builder{refs: refs, nodes: room[node](2 * len(refs)), costs: pairCosts, parallel: parallel}
	if useWide {
		b.costs = wideCosts
	}
	bounds := b.split()
	t.bounds = geom.Box{
		Min: geom.Vec3{X: bounds[0], Y: bounds[1], Z: bounds[2]},
		Max: geom.Vec3{X: -bounds[4], Y: -bounds[5], Z: -bounds[6]},
	}
	if useWide {
		t.wide = widen(&b, positions, triangles)
		t.wide.bounds = t.bounds
		return t
	}
	t.tris = room[tri.Triangle](len(refs))
	eachPart(len(refs), parallel, func(_, from, to int) {
		for i := from; i < to; i++ {
			f := &triangles[refs[i].index]
			t.tris[i] = tri.Make(positions[f[0]], positions[f[1]], positions[f[2]], refs[i].index)
		}
	})
	t.pairs = pairUp(&b)
	return t
}

// partSize is how many triangles are worth a part of their own.
const partSize = 1 << 15

// eachPart divides n things into parts and calls do with each part's number and range.
func eachPart(n int, parallel func(n int, do func(i int)), do func(part, from, to int)) {
	parts := (n + partSize - 1) / partSize
	parallel(parts, func(i int) { do(i, i*partSize, min((i+1)*partSize, n)) })
}

// gather makes the refs of all triangles that can be hit, in their order.
func gather(positions []geom.Vec3, triangles [][3]uint32, parallel func(n int, do func(i int))) []ref {
	refs := room[ref](len(triangles))
	kept := make([]int, (len(triangles)+partSize-1)/partSize)
	eachPart(len(triangles), parallel, func(part, from, to int) {
		n := from
		for i := from; i < to; i++ {
			f := &triangles[i]
			if count := uint32(len(positions)); f[0] >= count || f[1] >= count || f[2] >= count {
				continue
			}
			a, b, c := positions[f[0]], positions[f[1]], positions[f[2]]
			if !tri.Solid(a, b, c) {
				continue
			}
			r := &refs[n]
			n++
			r.lo[0], r.negHi[0] = extent(a.X, b.X, c.X)
			r.lo[1], r.negHi[1] = extent(a.Y, b.Y, c.Y)
			r.lo[2], r.negHi[2] = extent(a.Z, b.Z, c.Z)
			r.index = uint32(i)
		}
		kept[part] = n - from
	})
	n := 0
	for part, k := range kept {
		if from := part * partSize; from != n {
			copy(refs[n:n+k], refs[from:from+k])
		}
		n += k
	}
	return refs[:n]
}

// extent is the least and the negative of the greatest of three numbers.
func extent(a, b, c float32) (lo, negHi float32) {
	if b < a {
		a, b = b, a
	}
	if c < a {
		a = c
	}
	if c > b {
		b = c
	}
	return a, -b
}

// node is a node of the binary tree from which the walks' layouts are made. Leaves have count > 0 and hold refs first to
// first+count-1; the children of others are nodes first and first+1, see builder.
type node struct {
	lo, hi       [3]float32
	first, count uint32
}

func (n *node) setBox(b *slab) {
	n.lo = [3]float32{b[0], b[1], b[2]}
	n.hi = [3]float32{-b[4], -b[5], -b[6]}
}

// area is half the surface of the node's box.
func (n *node) area() float32 {
	x, y, z := n.hi[0]-n.lo[0], n.hi[1]-n.lo[1], n.hi[2]-n.lo[2]
	return float32(x*y) + float32(y*z) + float32(z*x)
}

const (
	maxLeaf  = 8  // triangles a leaf holds at most
	maxDepth = 32 // below this, halves by number: at most 32 levels more
	binEnd   = 0.99999
)

// builder divides refs. Node 0 is the root; the children of a node whose refs are divided at i are nodes 2i-1 and 2i. No two nodes are
// divided at the same place, so subtrees can be built at the same time and come out the same.
type builder struct {
	refs     []ref
	nodes    []node
	costs    costs
	parallel func(n int, do func(i int))
}

// job is a subtree to be built.
type job struct {
	at              uint32 // its root
	first, n, depth int
	bounds, centres slab
}

// split builds the binary tree and returns its bounds: first the upper part, where one node's refs are binned in parts, then
// the subtrees below it.
func (b *builder) split() slab {
	root := job{n: len(b.refs), bounds: emptySlab(), centres: emptySlab()}
	parts := make([][2]slab, (root.n+partSize-1)/partSize)
	eachPart(root.n, b.parallel, func(part, from, to int) {
		p := [2]slab{emptySlab(), emptySlab()}
		bound(b.refs[from:to], &p[0], &p[1])
		parts[part] = p
	})
	for i := range parts {
		root.bounds.join(&parts[i][0])
		root.centres.join(&parts[i][1])
	}
	small := max(partSize/4, root.n/64)
	var jobs []job
	upper := []job{root}
	var table binTable
	for len(upper) > 0 {
		j := upper[len(upper)-1]
		upper = upper[:len(upper)-1]
		if j.n <= small {
			jobs = append(jobs, j)
			continue
		}
		left, right, divided := b.divide(&j, &table)
		if divided {
			upper = append(upper, right, left)
		}
	}
	b.parallel(len(jobs), func(i int) {
		var table binTable
		b.descend(jobs[i], &table)
	})
	return root.bounds
}

// descend builds the subtree of j.
func (b *builder) descend(j job, table *binTable) {
	for {
		left, right, divided := b.divide(&j, table)
		if !divided {
			return
		}
		b.descend(right, table)
		j = left
	}
}

// divide makes the node of j: a leaf, or two children.
func (b *builder) divide(j *job, table *binTable) (left, right job, divided bool) {
	nd := &b.nodes[j.at]
	nd.setBox(&j.bounds)
	refs := b.refs[j.first : j.first+j.n]
	best := cut{axis: -1, cost: float32(math.Inf(1))}
	var from, scale [4]float32
	if j.n > 1 && j.depth < maxDepth {
		used := min(bins, 4+j.n/16)
		for k := range 3 {
			from[k] = j.centres[k]
			if d := -j.centres[4+k] - from[k]; d > 0 && d < math.MaxFloat32 {
				if s := float32(used) * binEnd / d; s < math.MaxFloat32 {
					scale[k] = s
				}
			}
		}
		table.reset(used)
		b.fill(refs, table, used, &from, &scale)
		best = bestCut(table, j.n, used, &scale, b.costs)
	}
	area := j.bounds.area()
	if j.n == 1 || j.n <= maxLeaf && (best.axis < 0 || area*b.costs.tests(j.n) <= best.cost+float32(b.costs.step*area)) {
		nd.first, nd.count = uint32(j.first), uint32(j.n)
		return left, right, false
	}
	mid := j.n / 2
	if best.axis >= 0 {
		mid = partition(refs, best.axis, from[best.axis], scale[best.axis], best.bin)
	}
	if mid == 0 || mid == j.n { // only where a centre overflows
		mid = j.n / 2
	}
	at := uint32(2*(j.first+mid) - 1)
	nd.first, nd.count = at, 0
	left = job{at: at, first: j.first, n: mid, depth: j.depth + 1, bounds: emptySlab(), centres: emptySlab()}
	right = job{at: at + 1, first: j.first + mid, n: j.n - mid, depth: j.depth + 1, bounds: emptySlab(), centres: emptySlab()}
	bound(refs[:mid], &left.bounds, &left.centres)
	bound(refs[mid:], &right.bounds, &right.centres)
	return left, right, true
}

// fill bins refs, in parts if there are many.
func (b *builder) fill(refs []ref, table *binTable, used int, from, scale *[4]float32) {
	if len(refs) <= 2*partSize {
		fillBins(refs, table, from, scale)
		return
	}
	tables := make([]binTable, (len(refs)+partSize-1)/partSize)
	eachPart(len(refs), b.parallel, func(part, lo, hi int) {
		tables[part].reset(used)
		fillBins(refs[lo:hi], &tables[part], from, scale)
	})
	for i := range tables {
		table.join(&tables[i], used)
	}
}
