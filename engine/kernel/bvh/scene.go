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
type Scene struct {
	placed   []placed // in the order of their index
	overview overview
}

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
	var boxes []geom.Box
	var reliances []float64
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
		boxes = append(boxes, p.WorldFromObject.Box(p.Tree.bounds))
		reliances = append(reliances, reliance(p.WorldFromObject, inv))
	}
	s.overview = oversee(boxes, reliances)
	return s
}

// Walker is the scratch space of one goroutine. The zero value works.
type Walker struct {
	pairs pairStack
	wide  wideScratch
	moved []geom.Ray // rays in object space
	shaft shaft
	todo  []uint32
	found []uint32 // places in Scene.placed
}

// few is how many placements are tried one by one where rays share no shaft. With more, each ray gets a shaft of its own.
const few = 4

// Closest finds for each ray the nearest hit among placements of the mask. Both slices have the same length. Rays' t counts in lengths of
// Dir and is the same in world and object space. A TMin below 0 counts as 0; rays whose TMax is not above TMin, and rays that are
// not finite, hit nothing.
//
// It is fastest if rays are many and run through the same part of the scene, such as all camera rays of a pixel.
func (s *Scene) Closest(w *Walker, mask Mask, rays []geom.Ray, hits []Hit) {
	hits = hits[:len(rays)]
	for i := range hits {
		hits[i] = Hit{T: inf, Placement: NoHit}
	}
	if len(rays) == 0 {
		return
	}
	if w.look(s, rays) {
		for _, k := range w.found {
			if p := &s.placed[k]; p.mask&mask != 0 {
				p.tree.closest(w, w.move(p, rays), hits, p.index)
			}
		}
		return
	}
	for i := range rays {
		if !w.look(s, rays[i:i+1]) {
			w.lookAtAll(s)
		}
		for _, k := range w.found {
			if p := &s.placed[k]; p.mask&mask != 0 {
				p.tree.closest(w, w.move(p, rays[i:i+1]), hits[i:i+1], p.index)
			}
		}
	}
}

// Occluded reports for each ray whether anything of the mask is hit between its TMin and TMax. Both slices have the same length. What is
// said at Closest of rays holds here.
func (s *Scene) Occluded(w *Walker, mask Mask, rays []geom.Ray, blocked []bool) {
	blocked = blocked[:len(rays)]
	clear(blocked)
	if len(rays) == 0 {
		return
	}
	if w.look(s, rays) {
		for _, k := range w.found {
			if p := &s.placed[k]; p.mask&mask != 0 {
				p.tree.occluded(w, w.move(p, rays), blocked)
			}
		}
		return
	}
	for i := range rays {
		if !w.look(s, rays[i:i+1]) {
			w.lookAtAll(s)
		}
		for _, k := range w.found {
			if p := &s.placed[k]; p.mask&mask != 0 {
				p.tree.occluded(w, w.move(p, rays[i:i+1]), blocked[i:i+1])
			}
		}
	}
}

// look sets w.found to what rays may meet, near things first, or is false if they have to be cast one by one.
func (w *Walker) look(s *Scene, rays []geom.Ray) bool {
	if len(s.placed) > 1 {
		var ok bool
		if w.found, ok = s.overview.crossed(rays, &w.shaft, &w.todo, w.found[:0]); ok {
			return true
		}
		if len(s.placed) > few {
			return false
		}
	}
	w.lookAtAll(s)
	return true
}

// lookAtAll sets w.found to all placements.
func (w *Walker) lookAtAll(s *Scene) {
	w.found = w.found[:0]
	for k := range s.placed {
		w.found = append(w.found, uint32(k))
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
