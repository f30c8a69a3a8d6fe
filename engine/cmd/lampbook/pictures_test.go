package main

import "testing"

func TestShortened(t *testing.T) {
	for _, test := range []struct {
		scene  string
		assets []string
		given  string
		want   string
	}{
		{"shelf.lua", nil, "shelf.lua:7: mesh.load: meshes/jug.obj:4: no", "shelf.lua:7: mesh.load: meshes/jug.obj:4: no"},
		{"a/shelf.lua", nil, "a/shelf.lua:7: mesh.load: a/data/jug.obj:4: no", "shelf.lua:7: mesh.load: data/jug.obj:4: no"},
		{"../x/shelf.lua", nil, "../x/shelf.lua:7: mesh.load: ../x/jug.obj:4: no", "shelf.lua:7: mesh.load: jug.obj:4: no"},
		{"/home/kiln/shelf.lua", nil, "no such file beside the scene, in /home/kiln, nor in --assets; did you mean jar.obj?", "no such file beside the scene, nor in --assets; did you mean jar.obj?"},
		{"/home/kiln/shelf.lua", nil, "no such file beside the scene, in /home/kiln", "no such file beside the scene"},
		{"x/shelf.lua", []string{"/srv/meshes/"}, "x/shelf.lua:7: mesh.load: /srv/meshes/jug.obj:4: no", "shelf.lua:7: mesh.load: meshes/jug.obj:4: no"},
		{"/a/shelf.lua", []string{"/a/parts"}, "/a/shelf.lua:7: mesh.load: /a/parts/jug.obj:4: no", "shelf.lua:7: mesh.load: parts/jug.obj:4: no"},
	} {
		if got := shortened(foldersOf(test.scene, test.assets), test.given); got != test.want {
			t.Errorf("scene %s: got %q, want %q", test.scene, got, test.want)
		}
	}
}
