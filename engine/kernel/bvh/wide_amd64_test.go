//go:build !purego

package bvh

import (
	"testing"
	"unsafe"

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

// The assembly knows the structs by offsets; those must be the compiler's.
func TestLayouts(t *testing.T) {
	var r wideRay
	var l lanes
	var g handGroup
	var h handTriangle
	var s shaft
	var b bundleBounds
	for _, tt := range []struct {
		field     string
		got, want uintptr
	}{
		{"wideRay.slope", unsafe.Offsetof(r.slope), 64}, {"wideRay.signs", unsafe.Offsetof(r.signs), 92},
		{"wideRay.tMax", unsafe.Offsetof(r.tMax), 100}, {"wideRay", unsafe.Sizeof(r), 128},
		{"lanes.vs", unsafe.Offsetof(l.vs), 96}, {"lanes.edges", unsafe.Offsetof(l.edges), 320}, {"lanes.nodes", unsafe.Offsetof(l.nodes), 416},
		{"lanes.best", unsafe.Offsetof(l.best), 440}, {"lanes.found", unsafe.Offsetof(l.found), 456}, {"lanes.stack", unsafe.Offsetof(l.stack), 512},
		{"handGroup.near", unsafe.Offsetof(g.near), 192}, {"handGroup.tMin", unsafe.Offsetof(g.tMin), 480}, {"handGroup.tie", unsafe.Offsetof(g.tie), 544},
		{"handGroup.found", unsafe.Offsetof(g.found), 640}, {"handGroup", unsafe.Sizeof(g), 672},
		{"handTriangle.lo", unsafe.Offsetof(h.lo), 36}, {"handTriangle.index", unsafe.Offsetof(h.index), 60}, {"handTriangle", unsafe.Sizeof(h), 64},
		{"wideNode.child", unsafe.Offsetof(wideNode{}.child), 192}, {"wideNode", unsafe.Sizeof(wideNode{}), 256},
		{"block.index", unsafe.Offsetof(block{}.index), 288}, {"block", unsafe.Sizeof(block{}), 320},
		{"shaft.z0", unsafe.Offsetof(s.z0), 24}, {"shaft.slope", unsafe.Offsetof(s.slope), 48},
		{"bundleBounds.anyNegative", unsafe.Offsetof(b.anyNegative), 64}, {"bundleBounds.some", unsafe.Offsetof(b.some), 76},
		{"ref.negHi", unsafe.Offsetof(ref{}.negHi), 16}, {"ref", unsafe.Sizeof(ref{}), 32}, {"binTable.count", unsafe.Offsetof(binTable{}.count), 1536},
		{"Hit.Placement", unsafe.Offsetof(Hit{}.Placement), 16}, {"Hit", unsafe.Sizeof(Hit{}), 20}, {"Ray", unsafe.Sizeof(geom.Ray{}), 32},
	} {
		if tt.got != tt.want {
			t.Errorf("%s: %d, the assembly says %d", tt.field, tt.got, tt.want)
		}
	}
}

// A pixel's rays at a small mesh must take the way of eight at a time, or TestWalksAgree does not test it.
func TestHandfulRuns(t *testing.T) {
	if !haveWide {
		t.Skip("this machine has no vector walk, or LAMPBOOK_WALK=portable")
	}
	s := one(true, bowl(500))
	var w Walker
	hits := make([]Hit, 64)
	ran := false
	rays := pixelRays(s.placed[0].tree.Bounds(), 24, 64)
	for i := 0; i < len(rays); i += 64 {
		s.Closest(&w, SeenByCamera, rays[i:i+64], hits)
		ran = ran || w.wide.hand.groups[0].found != [8]uint32{}
	}
	if !ran {
		t.Error("no bundle of 576 was tested against a handful of triangles")
	}
}
