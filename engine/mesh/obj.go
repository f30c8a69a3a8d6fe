package mesh

import (
	"fmt"
	"math"
	"strconv"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// readOBJ reads the polygons of an OBJ file. read gives its material libraries.
//
// Source: the Object file format of Alias/Wavefront (version 3.0). Read are v, vt, vn, f (also by its old name fo), s, usemtl and
// mtllib. A face may stand before the vertices that it names. Weights and colours behind a vertex' coordinates are ignored, and so
// are groups, points, lines, curves and whatever else is no surface; free-form surfaces and calls of other programs are refused,
// since leaving them out would show another thing than the file holds. Unknown statements are skipped.
//
// Slots are the materials of usemtl, in the order of their first face; one that no library describes is a matt grey, if any is described.
// Normals are those given; faces without are smoothed within their smoothing group, at any angle, or else, in no group, with
// neighbours in no group under m.Smooth degrees. Faces of more than three corners are cut by clipping ears.
func readOBJ(data []byte, m model.Mesh, read Reader) (*Mesh, error) {
	lines, err := newLineReader(m.File, data)
	if err != nil {
		return nil, err
	}
	o := objReader{
		model: m, libraries: newLibraries(m.File, read), described: map[string]model.Material{},
		slotOf: map[string]uint16{}, slotNow: -1, out: &Mesh{},
	}
	for {
		keyword, rest, ok := lines.next()
		if !ok {
			break
		}
		o.line = lines.line
		if err := o.statement(keyword, rest); err != nil {
			if at, ok := err.(*PosError); ok {
				return nil, at
			}
			return nil, &PosError{m.File, o.line, err}
		}
	}
	if err := o.finish(); err != nil {
		return nil, err
	}
	return o.out, nil
}

// objReader holds what has been read so far.
type objReader struct {
	model     model.Mesh
	libraries *libraries
	described map[string]model.Material
	line      int

	positions []geom.Vec3 // in metres, Y up
	uvs       [][2]float32
	normals   []geom.Vec3 // unit; zero where the file gives a zero vector
	ahead     [3]reference

	corners     welder   // distinct corners: 1 + index of position, texture coordinate (0 none) and normal (0 none)
	recent      []uint32 // by position: 1 + the number of the corner that named it last; 0 none
	face        []uint32
	polygons    []polygon
	polyCorners []uint32 // of the polygons, one after the other
	runs        []run
	out         *Mesh

	material string
	slotNow  int // slot of material; -1 if no face has used it
	slotOf   map[string]uint16
	group    uint32

	undrawn int    // points, lines and curves
	unknown string // where the first unknown statement stands, and its keyword
	values  [7]float64
}

// reference is an index into what may yet follow in the file.
type reference struct{ index, line int }

// polygon is a face of more than three corners, whose triangles have a place but are not yet cut.
type polygon struct {
	triangle, corner, n int // its first triangle, its first in polyCorners, how many corners
	line                int
}

// run is a stretch of triangles with one slot and one smoothing group.
type run struct {
	triangle int // the first
	slot     uint16
	group    uint32
}

// passedOver are the statements of the format that have no bearing on polygons.
var passedOver = map[string]bool{
	"g": true, "o": true, "mg": true, "vp": true, "bevel": true, "c_interp": true, "d_interp": true, "lod": true, "usemap": true, "maplib": true,
	"shadow_obj": true, "trace_obj": true, "ctech": true, "stech": true, "cstype": true, "deg": true, "bmat": true, "step": true,
	"parm": true, "trim": true, "hole": true, "scrv": true, "sp": true, "end": true, "con": true,
}

// statement takes one statement.
func (o *objReader) statement(keyword, rest []byte) error {
	switch string(keyword) {
	case "v":
		return o.position(rest)
	case "vt":
		return o.textureCoordinate(rest)
	case "vn":
		return o.normal(rest)
	case "f", "fo":
		return o.addFace(rest)
	case "usemtl":
		o.material, o.slotNow = string(rest), -1
		if slot, ok := o.slotOf[o.material]; ok {
			o.slotNow = int(slot)
		}
	case "s":
		return o.smoothingGroup(rest)
	case "mtllib":
		return o.library(rest)
	case "l", "p", "curv", "curv2":
		o.undrawn++
	case "surf", "bzp", "bsp":
		return fmt.Errorf("%s: free-form surfaces are not read: polygons (f) are accepted", keyword)
	case "call", "csh":
		return fmt.Errorf("%s: a mesh file may not call other files or programs", keyword)
	default:
		if o.unknown == "" && !passedOver[string(keyword)] {
			o.unknown = fmt.Sprintf("line %d begins with %s", o.line, quote(keyword))
		}
	}
	return nil
}

func (o *objReader) position(rest []byte) error {
	n, err := numbers(rest, o.values[:3])
	if err != nil {
		return fmt.Errorf("v: %w", err)
	}
	if n < 3 {
		return fmt.Errorf("v: 3 coordinates are needed, got %d", n)
	}
	if len(o.positions) >= 3*MaxTriangles {
		return fmt.Errorf("v: more than %d positions", 3*MaxTriangles)
	}
	x, y, z := o.values[0]*o.model.Unit, o.values[1]*o.model.Unit, o.values[2]*o.model.Unit
	if !placed(x, y, z) {
		return fmt.Errorf("v: coordinates must be within ±%v metres, got %v, %v, %v", maxCoordinate, x, y, z)
	}
	o.positions = append(o.positions, o.upright(geom.Vec3{X: float32(x), Y: float32(y), Z: float32(z)}))
	return nil
}

// upright turns the file's up axis to +Y, by a quarter turn about x.
func (o *objReader) upright(v geom.Vec3) geom.Vec3 {
	if o.model.ZUp {
		return geom.Vec3{X: v.X, Y: v.Z, Z: -v.Y}
	}
	return v
}

func (o *objReader) textureCoordinate(rest []byte) error {
	o.values[1] = 0
	n, err := numbers(rest, o.values[:2])
	if err != nil {
		return fmt.Errorf("vt: %w", err)
	}
	if n < 1 {
		return fmt.Errorf("vt: 1 to 3 coordinates are needed, got none")
	}
	u, v := float32(o.values[0]), float32(o.values[1])
	if math.IsInf(float64(u), 0) || math.IsInf(float64(v), 0) {
		return fmt.Errorf("vt: coordinates must be within ±%v, got %v, %v", float32(math.MaxFloat32), o.values[0], o.values[1])
	}
	o.uvs = append(o.uvs, [2]float32{u, v})
	return nil
}

func (o *objReader) normal(rest []byte) error {
	n, err := numbers(rest, o.values[:3])
	if err != nil {
		return fmt.Errorf("vn: %w", err)
	}
	if n < 3 {
		return fmt.Errorf("vn: 3 components are needed, got %d", n)
	}
	unit, _ := unitNormal(o.values[0], o.values[1], o.values[2])
	o.normals = append(o.normals, o.upright(unit))
	return nil
}

func (o *objReader) smoothingGroup(rest []byte) error {
	word, _ := field(rest)
	if len(word) == 0 || string(word) == "off" {
		o.group = 0
		return nil
	}
	g, err := strconv.ParseUint(string(word), 10, 32)
	if err != nil {
		return fmt.Errorf("s: a group number (0 to %d) or off is needed, got %s", uint32(math.MaxUint32), quote(word))
	}
	o.group = uint32(g)
	return nil
}

func (o *objReader) library(rest []byte) error {
	found, err := o.libraries.find(rest)
	if err != nil {
		return err
	}
	for _, l := range found {
		if err := readMTL(l.path, l.data, o.described); err != nil {
			return err
		}
	}
	return nil
}

// addFace reads the corners of a face and makes room for its triangles.
func (o *objReader) addFace(rest []byte) error {
	o.face = o.face[:0]
	form := -1 // which of texture coordinate (1) and normal (2) the corners name
	for {
		var word []byte
		if word, rest = field(rest); len(word) == 0 {
			break
		}
		key, err := o.corner(word)
		if err != nil {
			return fmt.Errorf("f: corner %s: %w", quote(word), err)
		}
		has := 0
		if key[1] != 0 {
			has |= 1
		}
		if key[2] != 0 {
			has |= 2
		}
		if form >= 0 && has != form {
			return fmt.Errorf("f: corner %s: every corner of a face must have the same form, v, v/vt, v//vn or v/vt/vn", quote(word))
		}
		form = has
		id := o.cornerID(key)
		if id >= 3*MaxTriangles {
			return fmt.Errorf("f: more than %d different corners", 3*MaxTriangles)
		}
		o.face = append(o.face, id)
	}
	n := len(o.face)
	if n < 3 {
		return fmt.Errorf("f: at least 3 corners are needed, got %d", n)
	}
	first := len(o.out.Triangles)
	if first+n-2 > MaxTriangles {
		return fmt.Errorf("f: more than %d triangles", MaxTriangles)
	}
	if err := o.beginRun(first); err != nil {
		return err
	}
	if n == 3 {
		o.out.Triangles = append(o.out.Triangles, [3]uint32{o.face[0], o.face[1], o.face[2]})
		return nil
	}
	o.polygons = append(o.polygons, polygon{first, len(o.polyCorners), n, o.line})
	o.polyCorners = append(o.polyCorners, o.face...)
	for range n - 2 {
		o.out.Triangles = append(o.out.Triangles, [3]uint32{})
	}
	return nil
}

// cornerID numbers the distinct corners. Most faces name a position as the face before did, which needs no look into the table.
func (o *objReader) cornerID(key [3]uint32) uint32 {
	for len(o.recent) < len(o.positions) {
		o.recent = append(o.recent, 0)
	}
	if int(key[0]) > len(o.recent) {
		id, _ := o.corners.id(key)
		return id
	}
	recent := &o.recent[key[0]-1]
	if *recent == 0 || o.corners.keys[*recent-1] != key {
		id, _ := o.corners.id(key)
		*recent = id + 1
	}
	return *recent - 1
}

// beginRun notes the slot and the smoothing group of the triangles from first on.
func (o *objReader) beginRun(first int) error {
	if o.slotNow < 0 {
		if len(o.out.SlotNames) >= MaxSlots {
			return fmt.Errorf("usemtl: more than %d materials", MaxSlots)
		}
		o.slotNow = len(o.out.SlotNames)
		o.slotOf[o.material] = uint16(o.slotNow)
		o.out.SlotNames = append(o.out.SlotNames, o.material)
	}
	if n := len(o.runs); n == 0 || o.runs[n-1].slot != uint16(o.slotNow) || o.runs[n-1].group != o.group {
		o.runs = append(o.runs, run{first, uint16(o.slotNow), o.group})
	}
	return nil
}

// corner reads v, v/vt, v//vn or v/vt/vn, with empty parts at the end allowed. Its result is 1 + each index, 0 for none.
func (o *objReader) corner(word []byte) (key [3]uint32, err error) {
	defined := [3]int{len(o.positions), len(o.uvs), len(o.normals)}
	part, i := 0, 0
	for {
		begin := i
		for i < len(word) && word[i] != '/' {
			i++
		}
		if i > begin {
			index, ok := signedIndex(word[begin:i])
			switch {
			case !ok:
				return key, fmt.Errorf("%s is not an index", quote(word[begin:i]))
			case index == 0:
				return key, fmt.Errorf("indices count from 1, or back from -1, got 0")
			case index < 0 && -index > defined[part]:
				return key, fmt.Errorf("index %d: only %d %s stand before it", index, defined[part], partNames[part])
			case index < 0:
				index += defined[part] + 1
			case index > defined[part] && index > o.ahead[part].index:
				o.ahead[part] = reference{index, o.line}
			}
			key[part] = uint32(index)
		} else if part == 0 {
			return key, fmt.Errorf("the index of its position is missing")
		}
		if i == len(word) {
			return key, nil
		}
		i++
		if part++; part > 2 {
			return key, fmt.Errorf("more than 3 indices")
		}
	}
}

// partNames are what the three indices of a corner point at.
var partNames = [3]string{"positions (v)", "texture coordinates (vt)", "normals (vn)"}

// signedIndex reads an integer of at most nine digits, more than any accepted file holds.
func signedIndex(word []byte) (index int, ok bool) {
	i := 0
	if word[0] == '-' || word[0] == '+' {
		i = 1
	}
	if i == len(word) || len(word)-i > 9 {
		return 0, false
	}
	for _, c := range word[i:] {
		if c < '0' || c > '9' {
			return 0, false
		}
		index = 10*index + int(c-'0')
	}
	if word[0] == '-' {
		index = -index
	}
	return index, true
}
