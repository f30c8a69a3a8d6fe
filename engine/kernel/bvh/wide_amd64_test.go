//go:build !purego

package bvh

import (
	"testing"

	"pgregory.net/rapid"
)

// wrote reports whether a walk in assembly has left its marks in w.
func (w *Walker) wrote() bool { return w.wide.rays != [readied]wideRay{} && w.wide.lanes.stack[0] != 0 }

// The builder's loops in assembly must count and bound as the plain ones do.
func TestBuildLoopsAgree(t *testing.T) {
	if !haveWide {
		t.Skip("this machine has no vector walk, or LAMPBOOK_WALK=portable")
	}
	rapid.Check(t, func(t *rapid.T) {
		m := drawMesh(t)
		refs := gather(m.positions, m.triangles, func(n int, do func(i int)) {
			for i := range n {
				do(i)
			}
		})
		if len(refs) == 0 {
			return
		}
		plain, fast := [2]slab{emptySlab(), emptySlab()}, [2]slab{emptySlab(), emptySlab()}
		boundPlain(refs, &plain[0], &plain[1])
		boundWide(&refs[0], len(refs), &fast[0], &fast[1])
		equal := func(a, b *slab) bool {
			for _, k := range []int{0, 1, 2, 4, 5, 6} {
				if a[k] != b[k] {
					return false
				}
			}
			return true
		}
		if !equal(&plain[0], &fast[0]) || !equal(&plain[1], &fast[1]) {
			t.Fatalf("bounds %v and %v", plain, fast)
		}
		used := rapid.IntRange(4, bins).Draw(t, "bins")
		var from, scale [4]float32
		for k := range 3 {
			from[k] = plain[1][k]
			if d := -plain[1][4+k] - from[k]; d > 0 {
				scale[k] = float32(used) * binEnd / d
			}
		}
		var a, b binTable
		a.reset(used)
		b.reset(used)
		fillBinsPlain(refs, &a, &from, &scale)
		fillBinsWide(&refs[0], len(refs), &b, &from, &scale)
		for k := range 3 {
			if a.count[k] != b.count[k] {
				t.Fatalf("axis %d: counts %v and %v", k, a.count[k], b.count[k])
			}
			for i := range used {
				if !equal(&a.box[k][i], &b.box[k][i]) {
					t.Fatalf("axis %d, bin %d: %v and %v", k, i, a.box[k][i], b.box[k][i])
				}
			}
			var left, right, leftFast, rightFast [bins]float32
			sweepPlain(&a.box[k], used, &left, &right)
			sweepWide(&b.box[k][0], 32, used, &leftFast[0], 4)
			sweepWide(&b.box[k][used-1], -32, used, &rightFast[used-1], -4)
			if left != leftFast || right != rightFast {
				t.Fatalf("axis %d: areas %v %v and %v %v", k, left, right, leftFast, rightFast)
			}
		}
	})
}
