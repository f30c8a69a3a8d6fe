package mesh

import (
	"crypto/sha256"
	"encoding/json"

	"lampbook/engine/model"
)

// Library builds each distinct mesh once. Single-threaded; the meshes that it gives may be shared.
type Library struct {
	read   Reader
	built  map[meshKey]builtMesh
	tables map[*model.RawMesh]model.Hash // a plan does not change, so its tables are hashed once
}

// meshKey is equal for equal descriptions.
type meshKey struct{ rest, tables model.Hash }

// builtMesh is a mesh, or why there is none.
type builtMesh struct {
	mesh *Mesh
	err  error
}

// NewLibrary returns an empty library that reads files by read, which may be nil if no mesh is a file.
func NewLibrary(read Reader) *Library {
	return &Library{read: read, built: map[meshKey]builtMesh{}, tables: map[*model.RawMesh]model.Hash{}}
}

// Get returns the mesh of a description, built the first time it is asked for. Descriptions are one if every field of theirs is
// equal, a file's path included. A mistake is remembered too, and returned every time.
func (l *Library) Get(m model.Mesh) (*Mesh, error) {
	key, ok := l.key(m)
	if !ok {
		return Build(m, l.read) // a number that is not finite: Build says which
	}
	b, ok := l.built[key]
	if !ok {
		b.mesh, b.err = Build(m, l.read)
		l.built[key] = b
	}
	return b.mesh, b.err
}

// Forget lets go of a mesh; the next Get builds it anew.
func (l *Library) Forget(m model.Mesh) {
	if key, ok := l.key(m); ok {
		delete(l.built, key)
	}
}

// key hashes a description. ok is false if it has no canonical encoding.
func (l *Library) key(m model.Mesh) (key meshKey, ok bool) {
	if m.Raw != nil {
		if key.tables, ok = l.tables[m.Raw]; !ok {
			if key.tables, ok = sum(m.Raw); !ok {
				return key, false
			}
			l.tables[m.Raw] = key.tables
		}
		m.Raw = nil
	}
	key.rest, ok = sum(m)
	return key, ok
}

// sum hashes the canonical encoding of package model, which has none for a number that is not finite.
func sum(v any) (model.Hash, bool) {
	text, err := json.Marshal(v)
	if err != nil {
		return model.Hash{}, false
	}
	return sha256.Sum256(text), true
}
