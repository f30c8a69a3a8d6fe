package encode

import "sync"

// ditherSide is the side of the threshold matrix, in pixels, a power of two.
const ditherSide = 64

// ditherMatrix returns the thresholds of ordered dither: row by row, each value of ((0 ... n-1) + 1/2)/n - 1/2 once, n = ditherSide²,
// so all within ±1/2 without reaching it. Thresholds that are near in value are far apart in the plane, so that the pattern has no
// low frequencies that an eye could pick up. It is made by void and cluster (Ulichney 1993, "The void-and-cluster method for dither
// array generation") in integers, so that it is the same everywhere.
//
// Every channel takes the same threshold: a neutral pixel stays neutral.
var ditherMatrix = sync.OnceValue(func() *[ditherSide * ditherSide]float32 {
	const n = ditherSide * ditherSide
	rank := voidAndCluster()
	m := new([n]float32)
	for i, r := range rank {
		m[i] = float32((float32(r)+0.5)/n) - 0.5
	}
	return m
})

// voidAndCluster ranks the places of the matrix, 0 first.
func voidAndCluster() []int {
	const n = ditherSide * ditherSide
	f := newField()
	// 1. A tenth of the places, scattered by a fixed linear congruence, then moved from clusters into voids until nothing moves.
	state, start := uint32(1), n/10
	for placed := 0; placed < start; {
		state = state*1664525 + 1013904223 // Numerical Recipes, 2nd ed., section 7.1
		if i := int(state >> 20); i < n && !f.on[i] {
			f.flip(i)
			placed++
		}
	}
	for {
		c := f.tightest()
		f.flip(c)
		v := f.largestVoid()
		f.flip(v)
		if v == c {
			break
		}
	}
	rank := make([]int, n)
	// 2. Ranks below the start: take the tightest clusters away again, on a copy.
	g := f.clone()
	for r := start - 1; r >= 0; r-- {
		c := g.tightest()
		g.flip(c)
		rank[c] = r
	}
	// 3. Ranks above: fill the largest void each time. The energy of the ones also orders the last half, since the kernel sums
	// to a constant over the torus: the tightest cluster of zeros is the largest void of ones.
	for r := start; r < n; r++ {
		v := f.largestVoid()
		f.flip(v)
		rank[v] = r
	}
	return rank
}

// field is a binary pattern on a torus and, at each place, how crowded the neighbourhood is.
type field struct {
	on     []bool
	energy []int64
	kernel []int64 // by offset (dy, dx) modulo the side
}

func newField() *field {
	const n = ditherSide * ditherSide
	f := &field{on: make([]bool, n), energy: make([]int64, n), kernel: make([]int64, n)}
	for dy := range ditherSide {
		for dx := range ditherSide {
			x, y := min(dx, ditherSide-dx), min(dy, ditherSide-dy)
			// A bell that falls by a factor of 4/5 for each unit of squared distance: the Gaussian with
			// sigma = 1.5 of the paper (exp(-1/4.5) = 0.80), in integers.
			e := int64(1) << 40
			for range x*x + y*y {
				e = e * 4 / 5
				if e == 0 {
					break
				}
			}
			f.kernel[dy*ditherSide+dx] = e
		}
	}
	return f
}

func (f *field) clone() *field {
	return &field{append([]bool(nil), f.on...), append([]int64(nil), f.energy...), f.kernel}
}

// flip changes place i and adds its kernel to, or takes it from, the energy everywhere.
func (f *field) flip(i int) {
	sign := int64(1)
	if f.on[i] {
		sign = -1
	}
	f.on[i] = !f.on[i]
	const mask = ditherSide - 1
	cx, cy := i%ditherSide, i/ditherSide
	for y := range ditherSide {
		row := f.kernel[((y-cy)&mask)*ditherSide:]
		for x := range ditherSide {
			f.energy[y*ditherSide+x] += sign * row[(x-cx)&mask]
		}
	}
}

// tightest returns the place that is on and most crowded, the first of equals.
func (f *field) tightest() int {
	best := -1
	for i, e := range f.energy {
		if f.on[i] && (best < 0 || e > f.energy[best]) {
			best = i
		}
	}
	return best
}

// largestVoid returns the place that is off and least crowded, the first of equals.
func (f *field) largestVoid() int {
	best := -1
	for i, e := range f.energy {
		if !f.on[i] && (best < 0 || e < f.energy[best]) {
			best = i
		}
	}
	return best
}
