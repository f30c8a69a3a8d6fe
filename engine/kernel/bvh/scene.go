package bvh

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/tri"
)

// Mask says which rays see a placement.
type Mask uint8

// Kinds of rays. A placement takes part in a cast if its mask and the cast's have a bit in common.
const (
	SeenByCamera Mask = 1 << iota
	CastsShadow
)

// Placement stands a tree in the world. Many placements may share one tree.
type Placement struct {
	Tree            *Tree
	WorldFromObject geom.Affine // a map that flattens space hides the placement
	Mask            Mask
}

// NoHit is the Placement of a ray that hits nothing.
const NoHit = ^uint32(0)

var inf = float32(math.Inf(1))

// Hit is what a ray meets first: the point (1-U-V)·a + U·b + V·c of a triangle, at T lengths of the ray's direction.
// A miss has Placement NoHit, Triangle 0, T +Inf, U and V 0.
type Hit struct {
	T, U, V   float32
	Triangle  uint32 // index into the triangles given to Build
	Placement uint32 // index into the placements given to NewScene
}

// Scene is a set of placements, ready for casting.
type Scene struct{ placed []placed }

// placed is a placement that can be hit.
type placed struct {
	tree            *Tree
	objectFromWorld affine32
	identity        bool
	mask            Mask
	index           uint32
}

// affine32 holds the rows of a map, rounded to float32 once.
type affine32 struct{ x, y, z, t geom.Vec3 }

func (a *affine32) ray(r geom.Ray) geom.Ray {
	r.Org = geom.Vec3{X: a.x.Dot(r.Org) + a.t.X, Y: a.y.Dot(r.Org) + a.t.Y, Z: a.z.Dot(r.Org) + a.t.Z}
	r.Dir = geom.Vec3{X: a.x.Dot(r.Dir), Y: a.y.Dot(r.Dir), Z: a.z.Dot(r.Dir)}
	return r
}

// NewScene places trees. Placements with an empty tree, no mask or a map that cannot be undone are never hit.
func NewScene(placements []Placement) *Scene {
	s := &Scene{}
	for i, p := range placements {
		if p.Tree == nil || p.Tree.bounds.Empty() || p.Mask == 0 {
			continue
		}
		inv, ok := p.WorldFromObject.Inverse()
		if !ok {
			continue
		}
		a := affine32{inv.X.Narrow(), inv.Y.Narrow(), inv.Z.Narrow(), inv.T.Narrow()}
		if !a.x.Finite() || !a.y.Finite() || !a.z.Finite() || !a.t.Finite() {
			continue
		}
		s.placed = append(s.placed, placed{p.Tree, a, p.WorldFromObject == geom.Identity(), p.Mask, uint32(i)})
	}
	return s
}

// Walker is the scratch space of one goroutine. The zero value works.
type Walker struct {
	pairs pairStack
	wide  wideScratch
	moved []geom.Ray // rays in object space
}

// Closest finds for each ray the nearest hit among placements of the mask. Both slices have the same length. Rays' t counts in lengths of
// Dir and is the same in world and object space.
func (s *Scene) Closest(w *Walker, mask Mask, rays []geom.Ray, hits []Hit) {
	hits = hits[:len(rays)]
	for i := range hits {
		hits[i] = Hit{T: inf, Placement: NoHit}
	}
	for i := range s.placed {
		if p := &s.placed[i]; p.mask&mask != 0 {
			p.tree.closest(w, w.move(p, rays), hits, p.index)
		}
	}
}

// Occluded reports for each ray whether anything of the mask is hit between its TMin and TMax. Both slices have the same length.
func (s *Scene) Occluded(w *Walker, mask Mask, rays []geom.Ray, blocked []bool) {
	blocked = blocked[:len(rays)]
	clear(blocked)
	for i := range s.placed {
		if p := &s.placed[i]; p.mask&mask != 0 {
			p.tree.occluded(w, w.move(p, rays), blocked)
		}
	}
}

// move returns the rays in p's object space, untouched where that is the world's.
func (w *Walker) move(p *placed, rays []geom.Ray) []geom.Ray {
	if p.identity {
		return rays
	}
	w.moved = w.moved[:0]
	for i := range rays {
		w.moved = append(w.moved, p.objectFromWorld.ray(rays[i]))
	}
	return w.moved
}

// closest improves hits with what rays, in object space, meet in t.
func (t *Tree) closest(w *Walker, rays []geom.Ray, hits []Hit, placement uint32) {
	if len(rays) == 0 {
		return
	}
	if len(t.wide.nodes) > 0 {
		t.wide.closest(w, rays, hits, placement)
		return
	}
	for i := range rays {
		var ready tri.Ray
		if !ready.Prepare(rays[i], t.bounds) {
			continue
		}
		h := &hits[i]
		best := tri.Best{T: ready.TMax}
		if h.Placement != NoHit {
			best.T = h.T
			if placement < h.Placement { // a tie counts
				best.Index = ^uint32(0)
			}
		}
		if walkClosest(t.pairs, t.tris, &w.pairs, &ready, &best); best.Found {
			*h = Hit{best.T, best.U, best.V, best.Index, placement}
		}
	}
}

// occluded sets blocked for rays, in object space, that meet anything in t.
func (t *Tree) occluded(w *Walker, rays []geom.Ray, blocked []bool) {
	if len(rays) == 0 {
		return
	}
	if len(t.wide.nodes) > 0 {
		t.wide.occluded(w, rays, blocked)
		return
	}
	for i := range rays {
		var ready tri.Ray
		if !blocked[i] && ready.Prepare(rays[i], t.bounds) {
			blocked[i] = walkOccluded(t.pairs, t.tris, &w.pairs, &ready)
		}
	}
}
