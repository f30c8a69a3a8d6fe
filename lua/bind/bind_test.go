package bind

import (
	"fmt"
	"io/fs"
	"slices"
	"strings"
	"testing"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// memFiles is a folder in memory.
type memFiles map[string]string

func (m memFiles) Find(path string) (string, error) {
	if strings.HasPrefix(path, "/") {
		return "", fmt.Errorf("%s: only files beside the scene are read", path)
	}
	if _, ok := m[path]; !ok {
		return "", fmt.Errorf("%s: %w", path, fs.ErrNotExist)
	}
	return path, nil
}

func (m memFiles) Read(file string) ([]byte, error) {
	content, ok := m[file]
	if !ok {
		return nil, fmt.Errorf("%s: %w", file, fs.ErrNotExist)
	}
	return []byte(content), nil
}

// workshop is what the test scenes may read.
var workshop = memFiles{
	"products.csv":    "\ufeffarticle;name;height\n0012;\"bowl; wide\";11,5\n\n0013;jug;\n",
	"products.json":   "[\n {\"name\": \"bowl\", \"height\": 11.5, \"glaze\": null},\n {\"name\": \"jug\", \"tags\": [1, 2]}\n]\n",
	"shapes/jug.obj":  "mtllib jug.mtl\nv 0 0 0\nv 1 0 0\nv 0 1 0\nv 0 0 1\nusemtl body\nf 1 2 3\nusemtl foot\nf 1 3 4\n",
	"shapes/jug.mtl":  "newmtl body\nKd 0.2 0.3 0.4\nNs 10\nnewmtl foot\nKd 0.1 0.1 0.1\n",
	"shapes/bad.obj":  "v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 9\n",
	"shapes/bare.obj": "v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n",
}

// newEnv makes an Env over the workshop.
func newEnv() *Env {
	return &Env{Scene: "scenes/test.lua", Files: workshop, Meshes: mesh.NewLibrary(workshop.read)}
}

// read resolves names that a mesh file gives relative to its own folder.
func (m memFiles) read(path string) ([]byte, error) { return m.Read(path) }

// newState opens the language in a fresh state.
func newState(t testing.TB, e *Env) *lua.LState {
	l := lua.NewState(lua.Options{RegistrySize: 4096, RegistryMaxSize: 1 << 20, RegistryGrowStep: 4096, CallStackSize: 1024})
	t.Cleanup(l.Close)
	Open(l, e)
	return l
}

// run runs a scene under an Env.
func run(t testing.TB, l *lua.LState, source string) error {
	t.Helper()
	fn, err := l.Load(strings.NewReader(source), "scenes/test.lua")
	if err != nil {
		t.Fatalf("the test's own scene does not compile: %v", err)
	}
	l.Push(fn)
	return l.PCall(0, lua.MultRet, nil)
}

// plan runs a scene to its end.
func plan(t testing.TB, e *Env, source string) (*model.Plan, error) {
	t.Helper()
	if err := run(t, newState(t, e), source); err != nil {
		return nil, err
	}
	return e.Finish()
}

// mustPlan is plan for scenes that are right.
func mustPlan(t testing.TB, source string) *model.Plan {
	t.Helper()
	p, err := plan(t, newEnv(), source)
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// message is the error's text without the script library's stack.
func message(err error) string {
	if err == nil {
		return ""
	}
	var api *lua.ApiError
	if a, ok := err.(*lua.ApiError); ok {
		api = a
		return api.Object.String()
	}
	return err.Error()
}

// valueIn runs "return …" and gives the value in the userdata.
func valueIn[T value](t testing.TB, source string) T {
	t.Helper()
	e := newEnv()
	l := newState(t, e)
	if err := run(t, l, "return "+source); err != nil {
		t.Fatalf("%s: %v", source, message(err))
	}
	v, ok := valueOf[T](l.Get(-1))
	if !ok {
		t.Fatalf("%s gives %s", source, describe(l.Get(-1)))
	}
	return v
}

func TestGlobals(t *testing.T) {
	want := []string{"camera", "cm", "color", "data", "frame", "geometric", "inch", "light", "material", "mesh", "mm", "param", "place",
		"random", "rig", "settings", "sheet", "steps", "sweep", "turntable"}
	if got := Globals(); !slices.Equal(got, want) {
		t.Errorf("Globals() = %v, want %v (the tables of the design page that step 1 holds)", got, want)
	}
}

func TestNearest(t *testing.T) {
	known := []string{"diffuse", "specular", "ambient", "emission", "shininess"}
	for _, c := range []struct{ name, want string }{
		{"shinyness", "shininess"}, {"Diffuse", "diffuse"}, {"specualr", "specular"}, {"ambeint", "ambient"},
		{"roughness", ""}, {"x", ""}, {"", ""}, {"diffs", ""}, {"ambnt", ""},
	} {
		if got := Nearest(c.name, known); got != c.want {
			t.Errorf("Nearest(%q) = %q, want %q", c.name, got, c.want)
		}
	}
	if d := distance("ca", "abc", 9); d != 3 {
		t.Errorf("distance(ca, abc) = %d, want 3 (optimal string alignment edits no letter twice)", d)
	}
}
