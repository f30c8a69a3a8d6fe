package mesh

import (
	"errors"
	"fmt"
	"math"

	"lampbook/engine/model"
)

// Limits of one mesh. They keep a slip of the finger, or a hostile file, from eating the machine.
const (
	MaxSegments  = 4096       // around a round form
	MaxTriangles = 50_000_000 // in one mesh
	MaxOutline   = 10_000     // points of an extruded outline, every pair of whose edges is compared
	MaxProfile   = 100_000    // points of a turned profile
	MaxFileBytes = 2 << 30    // of one file
	MaxSlots     = 65_535     // materials of one mesh
)

// DefaultSegments is how many segments a round form has where Segments is 0. A circle that fills 480 pixels then strays from
// the true one by 240·(1 - cos(π/96)) = 0.13 pixels, which the pixel filter hides.
const DefaultSegments = 96

// maxClipTests bounds the work of cutting the concave polygons of one mesh: some two seconds. A spiral of
// 40 000 corners passes.
const maxClipTests = 300_000_000

// Sizes and coordinates stay where float32 cross products, squared, neither overflow nor vanish: metres.
const (
	minSize       = 1e-9
	maxCoordinate = 1e9
)

// Reader gives the content of a file. Paths are slash-separated, as model.Mesh.File is; a file that another names is asked for
// relative to the folder of the first. The caller decides what may be read.
type Reader func(path string) ([]byte, error)

// PosError is a mistake at a place in a mesh or material file.
type PosError struct {
	File string // as the reader was asked for it
	Line int    // 1-based; 0 where no line is at fault
	Err  error
}

// Error reads "file:line: what".
func (e *PosError) Error() string {
	if e.Line == 0 {
		return fmt.Sprintf("%s: %v", e.File, e.Err)
	}
	return fmt.Sprintf("%s:%d: %v", e.File, e.Line, e.Err)
}

// Unwrap returns what went wrong there.
func (e *PosError) Unwrap() error { return e.Err }

// Build makes the triangles of m. read is asked for files only if m is of kind MeshFile, and may be nil otherwise.
// An error says what was given and what is accepted; a mistake inside a file is a *PosError.
// Equal descriptions and files give equal bits on every machine.
func Build(m model.Mesh, read Reader) (*Mesh, error) {
	kind, ok := kinds[m.Kind]
	if !ok {
		return nil, fmt.Errorf("mesh kind %d is not known", m.Kind)
	}
	if kind.round {
		if m.Segments == 0 {
			m.Segments = DefaultSegments
		}
		if m.Segments < 3 || m.Segments > MaxSegments {
			return nil, fmt.Errorf("%s: segments must be 3 to %d, got %d", kind.name, MaxSegments, m.Segments)
		}
	}
	out, err := kind.build(m, read)
	if err != nil {
		var at *PosError
		if errors.As(err, &at) {
			return nil, err
		}
		return nil, fmt.Errorf("%s: %w", kind.name, err)
	}
	return out, nil
}

// builder says how a kind of mesh is made.
type builder struct {
	name  string
	round bool // Segments counts
	build func(model.Mesh, Reader) (*Mesh, error)
}

var kinds = map[model.MeshKind]builder{
	model.MeshPlane:    {"plane", false, plane},
	model.MeshBox:      {"box", false, box},
	model.MeshSphere:   {"sphere", true, sphere},
	model.MeshCylinder: {"cylinder", true, cylinder},
	model.MeshCone:     {"cone", true, cone},
	model.MeshDisk:     {"disk", true, disk},
	model.MeshTorus:    {"torus", true, torus},
	model.MeshLathe:    {"lathe", true, lathe},
	model.MeshExtrude:  {"extrude", false, extrude},
	model.MeshTestForm: {"test form", true, testForm},
	model.MeshRaw:      {"raw", false, raw},
	model.MeshFile:     {"file", false, file},
}

// sized checks name, value pairs that must be sizes in metres.
func sized(pairs ...any) error {
	for i := 0; i < len(pairs); i += 2 {
		if v := pairs[i+1].(float64); !(v >= minSize && v <= maxCoordinate) {
			return fmt.Errorf("%s must be > 0 (%v to %v metres), got %v", pairs[i], minSize, maxCoordinate, v)
		}
	}
	return nil
}

// placed reports whether every coordinate is finite and within ±maxCoordinate metres.
func placed(coordinates ...float64) bool {
	for _, c := range coordinates {
		if !(math.Abs(c) <= maxCoordinate) {
			return false
		}
	}
	return true
}

// angle checks that a is an angle of 0 to 180 degrees.
func angle(name string, a float64) error {
	if !(a >= 0 && a <= 180) {
		return fmt.Errorf("%s must be 0 to 180 degrees, got %v", name, a)
	}
	return nil
}
