package bind

import (
	"errors"
	"fmt"
	"io/fs"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

var units = []struct {
	name   string
	metres float64
}{{"m", 1}, {"cm", 0.01}, {"mm", 0.001}, {"inch", 0.0254}, {"foot", 0.3048}}

// fileKeys reads how a file is to be taken.
func (a *args) fileKeys(f *form) {
	switch v := a.get("unit").(type) {
	case *lua.LNilType:
	case lua.LString:
		var names []string
		for _, u := range units {
			names = append(names, u.name)
		}
		f.Unit = units[a.checkWord("unit", v, names)].metres
	default:
		f.Unit = a.checkNumber("unit", v, above0(maxLength, "metres to one unit of the file"))
	}
	up := 0
	if a.oneOf("up", []string{"y", "z"}, &up) {
		f.ZUp = up == 1
	}
	a.number("smooth", &f.Smooth, between(0, 180, "degrees"))
}

// meshLoad reads a mesh file. One that is missing or broken gives a mesh all the same, which fails the frames that show it
// and no others; the plan warns of it.
func meshLoad(a *args) lua.LValue {
	var path string
	a.text("path", &path)
	f := defaultForm(model.MeshFile)
	a.fileKeys(f)
	a.loadForm(f, path)
	return a.env.push(a.l, f)
}

func (a *args) loadForm(f *form, path string) {
	file, err := a.env.Files.Find(path)
	if err != nil {
		if !errors.Is(err, fs.ErrNotExist) {
			a.failf("%v", err)
		}
		a.formFails(f, err)
		return
	}
	f.File = file
	var m *mesh.Mesh
	if f.FileHash, err = a.env.hashOf(file); err == nil {
		m, err = a.env.Meshes.Get(f.Mesh)
	}
	if err != nil {
		a.formFails(f, err)
		return
	}
	for _, note := range m.Notes {
		a.env.warn(a.env.callSite(a.l), "mesh.load: "+note)
	}
}

// hashed is the hash of a mesh file, or why there is none.
type hashed struct {
	sum string
	err error
}

// hashOf hashes each mesh file once: a scene sees its files as they were when it first asked.
func (e *Env) hashOf(file string) (string, error) {
	h, ok := e.hashes[file]
	if !ok {
		h.sum, h.err = mesh.HashFile(file, e.Files.Read)
		e.hashes[file] = h
	}
	return h.sum, h.err
}

// formFails marks a mesh as one that did not load.
func (a *args) formFails(f *form, err error) {
	pos := a.env.callSite(a.l)
	f.failure = fmt.Sprintf("%smesh.load: %v", prefix(pos), err)
	f.FileHash = ""
	a.env.warn(pos, fmt.Sprintf("mesh.load: %v", err))
}
