package main

import (
	"context"
	"errors"
	"slices"
	"testing"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// shelf is a job of two frames, each of which shows the same mesh from a file, the second one also another. read lists what is read.
func shelf(read *[]string) *job {
	reader := func(path string) ([]byte, error) {
		*read = append(*read, path)
		return []byte("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n"), nil
	}
	p := &model.Plan{
		Meshes: []model.Mesh{{Kind: model.MeshFile, File: "bowl.obj", Unit: 1}, {Kind: model.MeshFile, File: "jug.obj", Unit: 1}},
		Frames: []model.Frame{{Things: []model.Placement{{Mesh: 0}}}, {Things: []model.Placement{{Mesh: 0}, {Mesh: 1}}}},
	}
	return &job{plan: p, library: mesh.NewLibrary(reader)}
}

// TestReadMeshes: each mesh is read once and let go of, so that asking for it again reads it again.
func TestReadMeshes(t *testing.T) {
	var read []string
	j := shelf(&read)
	reasons, err := j.readMeshes(t.Context())
	if err != nil || !slices.Equal(reasons, []string{"", ""}) {
		t.Fatalf("got %q, %v", reasons, err)
	}
	if want := []string{"bowl.obj", "jug.obj"}; !slices.Equal(read, want) {
		t.Errorf("read %q, want %q", read, want)
	}
	for _, m := range j.plan.Meshes {
		if _, err := j.library.Get(m); err != nil {
			t.Error(err)
		}
	}
	if want := []string{"bowl.obj", "jug.obj", "bowl.obj", "jug.obj"}; !slices.Equal(read, want) {
		t.Errorf("read %q, want %q: a mesh was held", read, want)
	}
}

// TestReadMeshesStopped: after a signal no further mesh is read, and the status says so.
func TestReadMeshesStopped(t *testing.T) {
	var read []string
	j := shelf(&read)
	ctx, stop := context.WithCancelCause(t.Context())
	stop(errStopped)
	_, err := j.readMeshes(ctx)
	if !errors.Is(err, errStopped) || len(read) > 0 {
		t.Errorf("got %v after reading %q", err, read)
	}
	if got := statusOf(wrong(err)); got != statusStopped {
		t.Errorf("status %d, want %d", got, statusStopped)
	}
}
