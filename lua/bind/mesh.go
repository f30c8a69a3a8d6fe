package bind

import (
	"fmt"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// form is a mesh as described. It is built when something asks for its size, its parts or its error.
type form struct {
	model.Mesh
	failure string // a file that does not load: why, with the line of the scene; frames that show the mesh carry it
	id      *model.MeshID
	serial  int // tells forms apart where fits are remembered; 0 until asked for
}

// How the forms are made, by kind.
var formMakers = []struct{ name, keys string }{
	model.MeshPlane:    {"mesh.plane", "width! depth"},
	model.MeshBox:      {"mesh.box", "width! height depth"},
	model.MeshSphere:   {"mesh.sphere", "radius! segments"},
	model.MeshCylinder: {"mesh.cylinder", "radius! height! segments"},
	model.MeshCone:     {"mesh.cone", "radius! top height! segments"},
	model.MeshDisk:     {"mesh.disk", "radius! segments"},
	model.MeshTorus:    {"mesh.torus", "radius! tube! segments"},
	model.MeshLathe:    {"mesh.lathe", "profile! segments crease"},
	model.MeshExtrude:  {"mesh.extrude", "outline! depth!"},
	model.MeshTestForm: {"mesh.test_form", "segments"},
	model.MeshRaw:      {"mesh.raw", "positions! triangles! normals uvs smooth"},
	model.MeshFile:     {"mesh.load", "unit up smooth"},
}

func meshCalls() []call {
	var all []call
	for kind, m := range formMakers {
		kind := model.MeshKind(kind)
		c := call{name: m.name, keys: m.keys, run: func(a *args) lua.LValue { return a.readForm(defaultForm(kind)) }}
		if kind == model.MeshFile {
			c.params = "path!"
			c.run = meshLoad
		}
		all = append(all, c)
	}
	return append(all, call{name: "mesh:with", change: true, run: meshWith})
}

// smoothDegrees is the default of the angles under which neighbouring faces are shaded as one: a regular twelve-sided
// prism, 30 degrees a side, is the first that reads as round.
const smoothDegrees = 30

// maxSegments bounds how finely a form is turned: at 1024 a circle that fills the largest picture strays from the true one by
// 8192·(1 - cos(π/1024)) = 0.04 pixels. maxLathe keeps a turned form, in triangles, to what a scene may hold several of.
const (
	maxSegments = 1024
	maxLathe    = 8_000_000
)

func defaultForm(kind model.MeshKind) *form {
	f := &form{Mesh: model.Mesh{Kind: kind}}
	switch kind {
	case model.MeshLathe:
		f.Crease = smoothDegrees
	case model.MeshRaw:
		f.Smooth = smoothDegrees
	case model.MeshFile:
		f.Smooth, f.Unit = smoothDegrees, 1
	}
	return f
}

// readForm reads the keys over what f holds.
func (a *args) readForm(f *form) lua.LValue {
	switch f.Kind {
	case model.MeshPlane:
		a.sizes(f, "width", "", "depth")
		f.Size[2] = orElse(f.Size[2], f.Size[0])
	case model.MeshBox:
		a.sizes(f, "width", "height", "depth")
		f.Size[1], f.Size[2] = orElse(f.Size[1], f.Size[0]), orElse(f.Size[2], f.Size[0])
	case model.MeshSphere, model.MeshDisk:
		a.sizes(f, "radius", "", "")
	case model.MeshCylinder:
		a.sizes(f, "radius", "height", "")
	case model.MeshCone:
		a.number("radius", &f.Size[0], length0OrMore())
		a.number("top", &f.Size[1], length0OrMore())
		a.number("height", &f.Size[2], lengthAbove0())
		if f.Size[0] == 0 && f.Size[1] == 0 {
			a.failf("radius and top are both 0: one of them must be > 0 metres")
		}
	case model.MeshTorus:
		a.sizes(f, "radius", "tube", "")
		if f.Size[1] >= f.Size[0] {
			a.failf("tube must be less than radius, %s metres, got %s", number(f.Size[0]), number(f.Size[1]))
		}
	case model.MeshLathe:
		a.outline("profile", "{radius, y}", &f.Profile)
		a.number("crease", &f.Crease, between(0, 180, "degrees"))
	case model.MeshExtrude:
		a.outline("outline", "{x, y}", &f.Profile)
		a.number("depth", &f.Depth, lengthAbove0())
	case model.MeshRaw:
		a.raw(f)
	case model.MeshFile:
		a.fileKeys(f)
	}
	if f.segmented() {
		a.integer("segments", &f.Segments, 3, maxSegments)
	}
	if n := 2 * len(f.Profile) * max(f.Segments, mesh.DefaultSegments); f.Kind == model.MeshLathe && n > maxLathe {
		a.failf("a profile of %d points in %d segments makes %d triangles, at most %d are accepted", len(f.Profile), max(f.Segments, mesh.DefaultSegments), n, maxLathe)
	}
	f.id, f.serial = nil, 0
	switch f.Kind {
	case model.MeshLathe, model.MeshExtrude, model.MeshRaw:
		// Whether these hold together shows only when they are built: then the line is still known.
		if _, err := a.env.Meshes.Get(f.Mesh); err != nil {
			a.failf("%s", strings.TrimPrefix(err.Error(), strings.TrimPrefix(formMakers[f.Kind].name, "mesh.")+": "))
		}
	}
	return a.env.push(a.l, f)
}

func (f *form) segmented() bool {
	return strings.Contains(formMakers[f.Kind].keys, "segments")
}

// sizes reads up to three lengths into Size; "" stands for none.
func (a *args) sizes(f *form, names ...string) {
	for i, n := range names {
		if n != "" {
			a.number(n, &f.Size[i], lengthAbove0())
		}
	}
}

func orElse(v, other float64) float64 {
	if v == 0 {
		return other
	}
	return v
}

// outline reads a list of {number, number}.
func (a *args) outline(name, shape string, dst *[][2]float64) {
	v := a.get(name)
	if v == lua.LNil {
		return
	}
	most := mesh.MaxProfile
	if name == "outline" {
		most = mesh.MaxOutline
	}
	points := a.list(name, v, "points "+shape, most)
	out := make([][2]float64, len(points))
	for i, p := range points {
		a.checkNumbers(fmt.Sprintf("%s point %d", name, i+1), p, out[i][:], shape, between(-maxLength, maxLength, "metres"))
	}
	*dst = out
}

// maxRaw is how many positions or triangles a mesh from tables may have; larger ones belong in a file.
const maxRaw = 1_000_000

func (a *args) raw(f *form) {
	r := model.RawMesh{}
	if f.Raw != nil {
		r = *f.Raw
	}
	if v := a.get("positions"); v != lua.LNil {
		list := a.list("positions", v, "points {x, y, z}", maxRaw)
		r.Positions = make([][3]float64, len(list))
		for i, p := range list {
			r.Positions[i] = a.checkPoint(fmt.Sprintf("position %d", i+1), p, between(-maxLength, maxLength, "metres"))
		}
	}
	if v := a.get("triangles"); v != lua.LNil {
		list := a.list("triangles", v, "triples {a, b, c}", maxRaw)
		r.Triangles = make([][3]uint32, len(list))
		for i, t := range list {
			r.Triangles[i] = a.triangle(i+1, t, len(r.Positions))
		}
	}
	if v := a.get("normals"); v != lua.LNil {
		list := a.list("normals", v, "directions {x, y, z}", maxRaw)
		r.Normals = make([][3]float64, len(list))
		for i, n := range list {
			r.Normals[i] = a.checkPoint(fmt.Sprintf("normal %d", i+1), n, limit{})
		}
	}
	if v := a.get("uvs"); v != lua.LNil {
		list := a.list("uvs", v, "pairs {u, v}", maxRaw)
		r.UVs = make([][2]float64, len(list))
		for i, p := range list {
			a.checkNumbers(fmt.Sprintf("uv %d", i+1), p, r.UVs[i][:], "{u, v}", limit{})
		}
	}
	for _, per := range []struct {
		name string
		n    int
	}{{"normals", len(r.Normals)}, {"uvs", len(r.UVs)}} {
		if per.n != 0 && per.n != len(r.Positions) {
			a.failf("%s must be one for each of the %d positions, got %d", per.name, len(r.Positions), per.n)
		}
	}
	a.number("smooth", &f.Smooth, between(0, 180, "degrees"))
	f.Raw = &r
}

// triangle reads three places in the list of positions, counted from 1 as Lua counts, and returns them counted from 0.
func (a *args) triangle(n int, v lua.LValue, positions int) (t [3]uint32) {
	var corners [3]float64
	a.checkNumbers(fmt.Sprintf("triangle %d", n), v, corners[:], "{a, b, c}", limit{})
	for i, c := range corners {
		if c != float64(int(c)) || c < 1 || c > float64(positions) {
			a.failf("triangle %d must name positions from 1 to %d, got %s", n, positions, number(c))
		}
		t[i] = uint32(c) - 1
	}
	return t
}

func meshWith(a *args) lua.LValue {
	f := *a.self.(*form)
	m := formMakers[f.Kind]
	b := a.changing(m.name, m.keys)
	if f.Kind == model.MeshFile && f.failure != "" {
		b.fileKeys(&f)
		f.serial = 0
		return a.env.push(a.l, &f)
	}
	return b.readForm(&f)
}

func (*form) kind() string    { return kindMesh }
func (f *form) maker() string { return formMakers[f.Kind].name }

// What a scene may read of any mesh, after its own keys.
var formFacts = []string{"low", "high", "slots", "failure"}

func (f *form) fields() []string { return append(namesOf(formMakers[f.Kind].keys), formFacts...) }

func (f *form) field(e *Env, l *lua.LState, name string) lua.LValue {
	switch name {
	case "low", "high":
		low, high := f.corners(e)
		if name == "low" {
			return pointTable(l, low)
		}
		return pointTable(l, high)
	case "slots":
		t := l.NewTable()
		for _, s := range f.slots(e) {
			t.Append(lua.LString(s))
		}
		return t
	case "failure":
		return unless(f.failure == "", lua.LString(f.failure))
	case "profile", "outline":
		t := l.CreateTable(len(f.Profile), 0)
		for _, p := range f.Profile {
			q := l.CreateTable(2, 0)
			q.Append(lua.LNumber(p[0]))
			q.Append(lua.LNumber(p[1]))
			t.Append(q)
		}
		return t
	case "crease":
		return lua.LNumber(f.Crease)
	case "smooth":
		return lua.LNumber(f.Smooth)
	case "unit":
		return lua.LNumber(f.Unit)
	case "up":
		if f.ZUp {
			return lua.LString("z")
		}
		return lua.LString("y")
	case "segments":
		return unless(f.Segments == 0, lua.LNumber(f.Segments))
	case "positions", "triangles", "normals", "uvs":
		return lua.LNil // as long as they were: a scene has the tables that it gave
	}
	return f.length(name)
}

// length is one of the lengths of a form, by its key.
func (f *form) length(name string) lua.LValue {
	switch {
	case f.Kind == model.MeshExtrude:
		return lua.LNumber(f.Depth)
	case name == "width" || name == "radius":
		return lua.LNumber(f.Size[0])
	case name == "depth" || (name == "height" && f.Kind == model.MeshCone):
		return lua.LNumber(f.Size[2])
	}
	return lua.LNumber(f.Size[1])
}

// build returns the built mesh, nil where its file did not load. The description was checked before; what fails then is the
// library's own limit, such as memory.
func (f *form) build(e *Env) (*mesh.Mesh, error) {
	if f.failure != "" {
		return nil, nil
	}
	return e.Meshes.Get(f.Mesh)
}

// corners are the mesh's lowest and highest coordinates, metres; 0 where there are none.
func (f *form) corners(e *Env) (low, high [3]float64) {
	m, err := f.build(e)
	if m == nil || err != nil {
		return low, high
	}
	box := m.Bounds()
	if box.Empty() {
		return low, high
	}
	wide := func(v geom.Vec3) [3]float64 { return [3]float64{float64(v.X), float64(v.Y), float64(v.Z)} }
	return wide(box.Min), wide(box.Max)
}

// slots are the names of the parts that may have a material of their own.
func (f *form) slots(e *Env) []string {
	m, err := f.build(e)
	if m == nil || err != nil {
		return nil
	}
	return m.SlotNames
}

// planSerial is a number that no other form has.
func (f *form) planSerial(e *Env) int {
	if f.serial == 0 {
		e.forms++
		f.serial = e.forms
	}
	return f.serial
}

// planID is the mesh's place in the plan.
func (f *form) planID(e *Env) model.MeshID {
	if f.id == nil {
		id := e.meshID(f.Mesh)
		f.id = &id
	}
	return *f.id
}
