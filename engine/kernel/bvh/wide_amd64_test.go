//go:build !purego

package bvh

import (
	"testing"

	"lampbook/engine/kernel/geom"

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

// So must the bundles' bounds and masks.
func TestBundleLoopsAgree(t *testing.T) {
	if !haveWide {
		t.Skip("this machine has no vector walk, or LAMPBOOK_WALK=portable")
	}
	enclosedSome := 0
	rapid.Check(t, func(t *rapid.T) {
		m := drawMesh(t)
		tree := buildFor(true, m, BuildOptions{})
		if len(tree.wide.nodes) == 0 {
			return
		}
		seed := rapid.Uint64().Draw(t, "seed")
		rays := []geom.Ray{aimAt(m, seed, 0)}
		for i := range rapid.IntRange(0, 20).Draw(t, "rays") {
			r := rays[0]
			if rapid.IntRange(0, 9).Draw(t, "stray") == 0 {
				r = aimAt(m, seed, uint64(i))
			}
			r.Dir.X += 0.01 * float32(i) * r.Dir.Z
			rays = append(rays, r)
		}
		var a, b bundleBounds
		bundleEndsPlain(rays, &a)
		bundleEndsWide(&rays[0], len(rays), &b)
		a.some, b.some = 0, 0 // any of them will do
		for _, v := range []*[4]float32{&a.orgMin, &a.orgMax, &a.endMin, &a.endMax, &b.orgMin, &b.orgMax, &b.endMin, &b.endMax} {
			v[3] = 0
		}
		a.anyNegative, b.anyNegative, a.allNegative, b.allNegative = a.anyNegative&7, b.anyNegative&7, a.allNegative&7, b.allNegative&7
		if a != b {
			t.Fatalf("bounds %+v and %+v", a, b)
		}
		var s shaft
		if s.enclose(rays, tree.bounds, 1) != enclosed {
			return
		}
		enclosedSome++
		for i := range tree.wide.nodes {
			if p, f := shaftMaskPlain(&tree.wide.nodes[i], &s), shaftMaskWide(&tree.wide.nodes[i], &s); p != f {
				t.Fatalf("node %d: masks %b and %b", i, p, f)
			}
		}
	})
	if enclosedSome < 20 {
		t.Errorf("only %d shafts", enclosedSome)
	}
}
