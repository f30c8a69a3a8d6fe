package bvh

import "math"

// slab is a box during the build: {lo.x, lo.y, lo.z, _, -hi.x, -hi.y, -hi.z, _}, so that boxes are joined by minima alone. What stands in the
// fourth and eighth places means nothing.
type slab [8]float32

func emptySlab() slab {
	inf := float32(math.Inf(1))
	return slab{inf, inf, inf, inf, inf, inf, inf, inf}
}

// join grows b to hold o.
func (b *slab) join(o *slab) {
	if o[0] < b[0] {
		b[0] = o[0]
	}
	if o[1] < b[1] {
		b[1] = o[1]
	}
	if o[2] < b[2] {
		b[2] = o[2]
	}
	if o[4] < b[4] {
		b[4] = o[4]
	}
	if o[5] < b[5] {
		b[5] = o[5]
	}
	if o[6] < b[6] {
		b[6] = o[6]
	}
}

// area is half the surface, 0 for the empty box.
func (b *slab) area() float32 {
	x, y, z := max(0, 0-(b[0]+b[4])), max(0, 0-(b[1]+b[5])), max(0, 0-(b[2]+b[6]))
	return float32(x*y) + float32(y*z) + float32(z*x)
}

// ref is one triangle during the build: its box as in slab, its index in the fourth place. 32 bytes.
type ref struct {
	lo    [3]float32
	index uint32
	negHi [3]float32
	_     uint32
}

// centre is twice the middle of the box along an axis.
func (r *ref) centre(axis int) float32 { return r.lo[axis] - r.negHi[axis] }

func (r *ref) slab() slab {
	return slab{r.lo[0], r.lo[1], r.lo[2], 0, r.negHi[0], r.negHi[1], r.negHi[2], 0}
}

const bins = 16 // split candidates per axis at most

// binTable sorts refs by centre into bins along each axis.
type binTable struct {
	box   [3][bins]slab
	count [3][bins]int32
}

// reset empties the first n bins of each axis.
func (t *binTable) reset(n int) {
	for k := range 3 {
		for i := range n {
			t.box[k][i] = emptySlab()
		}
	}
	t.count = [3][bins]int32{}
}

// join adds what o holds in its first n bins.
func (t *binTable) join(o *binTable, n int) {
	for k := range 3 {
		for i := range n {
			t.box[k][i].join(&o.box[k][i])
			t.count[k][i] += o.count[k][i]
		}
	}
}

// binOf is the bin of a centre; everything that asks must round the same way.
func binOf(centre, from, scale float32) int32 { return int32((centre - from) * scale) }

// fillBinsPlain adds refs to t.
func fillBinsPlain(refs []ref, t *binTable, from, scale *[4]float32) {
	for i := range refs {
		r := &refs[i]
		b := r.slab()
		for k := range 3 {
			at := binOf(r.centre(k), from[k], scale[k]) & (bins - 1)
			t.count[k][at]++
			t.box[k][at].join(&b)
		}
	}
}

// boundPlain grows bounds by the boxes of refs and centres by their centres.
func boundPlain(refs []ref, bounds, centres *slab) {
	for i := range refs {
		b := refs[i].slab()
		bounds.join(&b)
		x, y, z := b[0]-b[4], b[1]-b[5], b[2]-b[6]
		centres.join(&slab{x, y, z, 0, -x, -y, -z, 0})
	}
}

// sweepPlain gives the areas of the first i+1 of n bins together (left) and of bins i to n-1 (right).
func sweepPlain(row *[bins]slab, n int, left, right *[bins]float32) {
	b := emptySlab()
	for i := range n {
		b.join(&row[i])
		left[i] = b.area()
	}
	b = emptySlab()
	for i := n - 1; i >= 0; i-- {
		b.join(&row[i])
		right[i] = b.area()
	}
}

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

// cut is a place to divide refs: those in bins below bin on axis go left. axis is -1 if there is no such place.
type cut struct {
	axis int
	bin  int32
	cost float32 // areas times tests, both sides
}

// bestCut reads the cheapest cut from t, which holds n refs in used bins along axes whose scale is positive.
func bestCut(t *binTable, n, used int, scale *[4]float32, c costs) cut {
	best := cut{axis: -1, cost: float32(math.Inf(1))}
	var left, right [bins]float32
	for k := range 3 {
		if !(scale[k] > 0) {
			continue
		}
		sweep(&t.box[k], used, &left, &right)
		count := 0
		for i := 1; i < used; i++ {
			count += int(t.count[k][i-1])
			if count == 0 || count == n {
				continue
			}
			if cost := float32(left[i-1]*c.tests(count)) + float32(right[i]*c.tests(n-count)); cost < best.cost {
				best = cut{k, int32(i), cost}
			}
		}
	}
	return best
}

// partition moves refs left of a cut to the front and returns their number.
func partition(refs []ref, axis int, from, scale float32, bin int32) int {
	i, j := 0, len(refs)
	for {
		for i < j && binOf(refs[i].centre(axis), from, scale) < bin {
			i++
		}
		for i < j && binOf(refs[j-1].centre(axis), from, scale) >= bin {
			j--
		}
		if i >= j {
			return i
		}
		refs[i], refs[j-1] = refs[j-1], refs[i]
		i++
		j--
	}
}
