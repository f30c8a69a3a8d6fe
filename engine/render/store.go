package render

import (
	"sync"
	"sync/atomic"

	"lampbook/engine/kernel/bvh"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// defaultStore bounds the meshes and hierarchies that an engine keeps for casts to come, in bytes: 2 GiB.
const defaultStore = 2 << 30

// store builds meshes with their hierarchies, each once, and forgets those that have not been asked for longest when it holds more
// than most. What a cast has taken stays with the cast.
type store struct {
	mu     sync.Mutex
	source *mesh.Library
	most   int64 // bytes
	held   int64 // bytes
	clock  int64 // counts calls of get
	built  map[model.Hash]*builtMesh
	keys   map[meshRef]model.Hash // a plan does not change, so each of its meshes is hashed once
}

// meshRef names a mesh of a plan.
type meshRef struct {
	plan *model.Plan
	id   model.MeshID
}

// builtMesh is a mesh with its hierarchy, or why there is none.
type builtMesh struct {
	model model.Mesh
	mesh  *mesh.Mesh
	tree  *bvh.Tree
	err   error
	bytes int64
	used  int64 // the store's clock at the last get
}

// get returns a mesh of a plan with its hierarchy, built at first asking on so many goroutines.
func (s *store) get(p *model.Plan, id model.MeshID, threads int) (*mesh.Mesh, *bvh.Tree, error) {
	s.mu.Lock()
	defer s.mu.Unlock()
	ref := meshRef{p, id}
	key, ok := s.keys[ref]
	if !ok {
		key = model.MeshHash(p.Meshes[id])
		s.keys[ref] = key
	}
	b := s.built[key]
	if b == nil {
		b = &builtMesh{model: p.Meshes[id]}
		b.mesh, b.err = s.source.Get(b.model)
		if b.err == nil {
			b.tree = bvh.Build(b.mesh.Positions, b.mesh.Triangles, bvh.BuildOptions{Parallel: parallel(threads)})
			b.bytes = int64(b.tree.Bytes()) + b.mesh.Bytes()
		}
		s.built[key] = b
		s.held += b.bytes
	}
	s.clock++
	b.used = s.clock
	s.shed(b)
	return b.mesh, b.tree, b.err
}

// shed forgets meshes until what is held is within bounds, the longest unused first, but not the one just asked for.
func (s *store) shed(keep *builtMesh) {
	for s.held > s.most {
		var oldest model.Hash
		var found *builtMesh
		for key, b := range s.built {
			if b != keep && b.bytes > 0 && (found == nil || b.used < found.used) {
				oldest, found = key, b
			}
		}
		if found == nil {
			return
		}
		delete(s.built, oldest)
		s.source.Forget(found.model)
		s.held -= found.bytes
	}
}

// parallel returns an executor that shares its calls out among so many goroutines.
func parallel(threads int) func(n int, do func(i int)) {
	if threads <= 1 {
		return nil
	}
	return func(n int, do func(i int)) {
		var next atomic.Int64
		var group sync.WaitGroup
		for range min(threads, n) {
			group.Go(func() {
				for {
					i := int(next.Add(1)) - 1
					if i >= n {
						return
					}
					do(i)
				}
			})
		}
		group.Wait()
	}
}
