package bind

import (
	"crypto/sha256"
	"encoding/binary"
	"path"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// Files is how a scene reads files. The host confines it to the folders that the scene may see.
type Files interface {
	// Find returns where a path written in the scene leads, slash-separated, as Read and the engine open it. The error says
	// what is wrong with the path and names it; where nothing is there, it wraps fs.ErrNotExist.
	Find(path string) (string, error)
	// Read returns the content of a file that Find gave, or of a file that such a file names.
	Read(file string) ([]byte, error)
}

// Meshes builds meshes from their descriptions, each once; *mesh.Library is one.
type Meshes interface {
	Get(model.Mesh) (*mesh.Mesh, error)
}

// Override is a value for a parameter from the command line.
type Override struct{ Name, Text string }

// Forced are settings from the command line; they win over the scene's. The zero value forces nothing.
type Forced struct {
	Width, Height int // pixels, [1, model.MaxSide]; 0 leaves the scene's
	Samples       int // [1, model.MaxSamples]; 0 leaves the scene's
	Formats       []model.Format
	Draft         bool // half the size and a quarter of the samples where they are not given above, and twice the noise
}

// Env collects the plan while a scene runs. The exported fields are set before Open and not changed after.
type Env struct {
	Scene     string                  // the scene's file name, as the user typed it, slash-separated
	Files     Files                   // required
	Meshes    Meshes                  // required
	Overrides []Override              // in the order given; the last of one name counts
	Forced    Forced                  // from the command line
	Shipped   func(chunk string) bool // whether a chunk is a module of the program's own; nil: none is
	Engine    func(work func())       // runs work of the engine that its meshes make long, apart from the scene's own; nil: it just runs
	Charge    func(steps int) bool    // counts work inside a binding and reports whether the scene may go on; nil: it always may

	plan      model.Plan
	settings  settings
	materials map[model.Material]model.MaterialID
	lights    map[model.Light]model.LightID
	meshes    map[model.Hash]model.MeshID
	params    map[string]int    // index into plan.Params
	names     map[string]int    // frame by lower-case name
	sheets    map[string]bool   // sheet names, lower case
	fits      map[string]fitted // cameras that fit things, by what was asked
	stages    map[string]*stage // the room that things take, by things
	metered   *float64          // exposure of the first frame that stated none
	paramPos  []model.Pos       // by index into plan.Params
	passes    bool              // a frame asks for passes
	forms     int               // meshes that were given a serial number
	hashes    map[string]hashed // of mesh files, by file
	warned    map[model.Warning]bool
	metas     map[string]*lua.LTable // metatables by kind of value
	fatal     error
}

// Fatal is the bug in a binding that ended the scene, if one did: the scene's pcall must not hide it.
func (e *Env) Fatal() error { return e.fatal }

// Seed is the scene's own seed for random numbers: the same wherever the scene's file stands.
func (e *Env) Seed() uint64 {
	sum := sha256.Sum256([]byte(e.stem()))
	return binary.LittleEndian.Uint64(sum[:])
}

// stem is the scene's file name without folder and ending.
func (e *Env) stem() string {
	base := path.Base(e.Scene)
	return strings.TrimSuffix(base, path.Ext(base))
}

// engine runs work that is long where meshes are large.
func (e *Env) engine(work func()) {
	if e.Engine == nil {
		work()
		return
	}
	e.Engine(work)
}

// start readies the tables of a new plan.
func (e *Env) start() {
	e.plan = model.Plan{Scene: e.Scene}
	e.settings = defaultSettings()
	e.materials = map[model.Material]model.MaterialID{}
	e.lights = map[model.Light]model.LightID{}
	e.meshes = map[model.Hash]model.MeshID{}
	e.params = map[string]int{}
	e.names = map[string]int{}
	e.sheets = map[string]bool{}
	e.fits = map[string]fitted{}
	e.stages = map[string]*stage{}
	e.hashes = map[string]hashed{}
	e.warned = map[model.Warning]bool{}
	e.metered, e.paramPos, e.passes, e.fatal = nil, nil, false, nil
	e.metas = map[string]*lua.LTable{}
}

// maxWarnings is more than anyone reads.
const maxWarnings = 1000

// warn adds a remark to the plan, once.
func (e *Env) warn(pos model.Pos, text string) {
	w := model.Warning{Pos: pos, Text: text}
	if e.warned[w] || len(e.warned) == maxWarnings {
		return
	}
	e.warned[w] = true
	e.plan.Warnings = append(e.plan.Warnings, w)
}

// materialID returns the index of the material in the plan, adding it where no equal one stands.
func (e *Env) materialID(m model.Material) model.MaterialID {
	id, ok := e.materials[m]
	if !ok {
		id = model.MaterialID(len(e.plan.Materials))
		e.plan.Materials = append(e.plan.Materials, m)
		e.materials[m] = id
	}
	return id
}

// lightID is materialID for lights.
func (e *Env) lightID(l model.Light) model.LightID {
	id, ok := e.lights[l]
	if !ok {
		id = model.LightID(len(e.plan.Lights))
		e.plan.Lights = append(e.plan.Lights, l)
		e.lights[l] = id
	}
	return id
}

// meshID is materialID for meshes.
func (e *Env) meshID(m model.Mesh) model.MeshID {
	key := model.MeshHash(m)
	id, ok := e.meshes[key]
	if !ok {
		id = model.MeshID(len(e.plan.Meshes))
		e.plan.Meshes = append(e.plan.Meshes, m)
		e.meshes[key] = id
	}
	return id
}
