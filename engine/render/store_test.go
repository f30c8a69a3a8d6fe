package render

import (
	"testing"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// TestStoreForgets asks for more meshes than a store may hold: it stays within bounds, and builds what it forgot anew.
func TestStoreForgets(t *testing.T) {
	p := &model.Plan{}
	for i := range 20 {
		p.Meshes = append(p.Meshes, model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1 + float64(i)}, Segments: 64})
	}
	e := NewEngine(mesh.NewLibrary(nil))
	first, tree, err := e.meshes.get(p, 0, 2)
	if err != nil || tree.Bounds().Empty() {
		t.Fatalf("a ball gives %v", err)
	}
	if again, same, _ := e.meshes.get(p, 0, 1); again != first || same != tree {
		t.Error("a mesh that is held is built again")
	}
	e.meshes.most = 4 * e.meshes.held
	for id := range p.Meshes {
		if _, _, err := e.meshes.get(p, model.MeshID(id), 1); err != nil {
			t.Fatal(err)
		}
		if e.meshes.held > e.meshes.most {
			t.Fatalf("after mesh %d the store holds %d bytes of %d", id, e.meshes.held, e.meshes.most)
		}
	}
	if n := len(e.meshes.built); n < 2 || n > 4 {
		t.Errorf("%d meshes are held, want about 4", n)
	}
	if again, _, err := e.meshes.get(p, 0, 1); err != nil || again == first {
		t.Errorf("a forgotten mesh comes back as it was: %v", err)
	}
	// One that is too large by itself is served all the same.
	e.meshes.most = 1
	if _, tree, err := e.meshes.get(p, 7, 1); err != nil || tree.Bounds().Empty() {
		t.Errorf("a mesh larger than the store gives %v", err)
	}
}
