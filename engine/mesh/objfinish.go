package mesh

import (
	"fmt"
	"math"

	"lampbook/engine/kernel/geom"
)

// finish makes the mesh of what has been read.
func (o *objReader) finish() error {
	file := o.model.File
	defined := [3]int{len(o.positions), len(o.uvs), len(o.normals)}
	for part, ref := range o.ahead {
		if ref.index > defined[part] {
			return &PosError{file, ref.line, fmt.Errorf("f: index %d: the file holds %d %s", ref.index, defined[part], partNames[part])}
		}
	}
	if len(o.out.Triangles) == 0 {
		return &PosError{file, 0, o.noFaces()}
	}
	given := o.vertices()
	if err := o.cutPolygons(); err != nil {
		return err
	}
	slots, groups := o.spreadRuns()
	slots, groups = o.dropDoubled(slots, groups)
	if len(o.out.Triangles) == 0 {
		return &PosError{file, 0, fmt.Errorf("every face names a position twice: no surface is left")}
	}
	o.out.Slots = slots
	for _, name := range o.libraries.absent {
		o.out.Notes = append(o.out.Notes, fmt.Sprintf("%s: mtllib %s: no such file; surfaces without a material of the scene's are neutral grey", file, quote([]byte(name))))
	}
	o.normalsFor(given, groups)
	if len(o.described) > 0 {
		for _, name := range o.out.SlotNames {
			material, ok := o.described[name]
			if !ok {
				material = neutral()
			}
			o.out.Materials = append(o.out.Materials, material)
		}
	}
	return nil
}

// noFaces says what a file without faces holds instead.
func (o *objReader) noFaces() error {
	switch {
	case o.undrawn > 0:
		return fmt.Errorf("no faces (f): %d positions, and %d points, lines or curves, which have no surface", len(o.positions), o.undrawn)
	case o.unknown != "" && len(o.positions) == 0:
		return fmt.Errorf("no faces (f): is this an OBJ file? %s", o.unknown)
	}
	return fmt.Errorf("no faces (f): %d positions (v) and nothing that joins them", len(o.positions))
}

// vertices makes a vertex of each distinct corner. given says which have normals; nil if none does.
func (o *objReader) vertices() (given []bool) {
	keys := o.corners.keys
	o.out.Positions = make([]geom.Vec3, len(keys))
	for i, k := range keys {
		o.out.Positions[i] = o.positions[k[0]-1]
		if k[1] != 0 {
			if o.out.UVs == nil {
				o.out.UVs = make([][2]float32, len(keys))
			}
			o.out.UVs[i] = o.uvs[k[1]-1]
		}
		if k[2] != 0 && o.normals[k[2]-1] != (geom.Vec3{}) {
			if given == nil {
				given = make([]bool, len(keys))
				o.out.Normals = make([]geom.Vec3, len(keys))
			}
			given[i] = true
			o.out.Normals[i] = o.normals[k[2]-1]
		}
	}
	return given
}

// cutPolygons fills in the triangles of the faces with more than three corners.
func (o *objReader) cutPolygons() error {
	cut := clipper{maxTests: maxClipTests}
	var flat []point2
	for _, p := range o.polygons {
		corners := o.polyCorners[p.corner : p.corner+p.n]
		flat = flatten(o.out.Positions, corners, flat[:0])
		into := o.out.Triangles[p.triangle : p.triangle+p.n-2]
		if p.n == 4 && cutQuad(flat, corners, into) {
			continue
		}
		triangles, _ := cut.clip(flat)
		if cut.tests > cut.maxTests {
			return &PosError{o.model.File, p.line, fmt.Errorf("f: a face of %d corners: the concave faces up to here are too intricate to be cut into triangles", p.n)}
		}
		for i, t := range triangles {
			into[i] = [3]uint32{corners[t[0]], corners[t[1]], corners[t[2]]}
		}
	}
	return nil
}

// flatten projects a polygon along the axis that its normal is nearest to, so that it turns counter-clockwise.
// Source of the normal: Newell's sum (Sutherland, Sproull & Schumacker 1974).
func flatten(positions []geom.Vec3, corners []uint32, into []point2) []point2 {
	var n geom.Vec3d
	first := positions[corners[0]].Wide() // near the origin the sum loses less
	a := positions[corners[len(corners)-1]].Wide().Sub(first)
	for _, c := range corners {
		b := positions[c].Wide().Sub(first)
		n = n.Add(a.Cross(b))
		a = b
	}
	x, y, z := math.Abs(n.X), math.Abs(n.Y), math.Abs(n.Z)
	for _, c := range corners {
		p := positions[c].Wide()
		var q point2
		switch {
		case z >= x && z >= y:
			if n.Z < 0 {
				q = point2{p.Y, p.X}
			} else {
				q = point2{p.X, p.Y}
			}
		case y >= x:
			if n.Y < 0 {
				q = point2{p.X, p.Z}
			} else {
				q = point2{p.Z, p.X}
			}
		default:
			if n.X < 0 {
				q = point2{p.Z, p.Y}
			} else {
				q = point2{p.Y, p.Z}
			}
		}
		into = append(into, q)
	}
	return into
}

// cutQuad cuts a quadrilateral along a diagonal that lies inside it, the one from its first corner if both do.
func cutQuad(flat []point2, c []uint32, into [][3]uint32) bool {
	switch {
	case orient(flat[0], flat[1], flat[2]) > 0 && orient(flat[0], flat[2], flat[3]) > 0:
		into[0], into[1] = [3]uint32{c[0], c[1], c[2]}, [3]uint32{c[0], c[2], c[3]}
	case orient(flat[1], flat[2], flat[3]) > 0 && orient(flat[1], flat[3], flat[0]) > 0:
		into[0], into[1] = [3]uint32{c[1], c[2], c[3]}, [3]uint32{c[1], c[3], c[0]}
	default:
		return false
	}
	return true
}

// spreadRuns gives each triangle its slot, or nil if all have the first, and its smoothing group, or nil if none has one.
func (o *objReader) spreadRuns() (slots []uint16, groups []uint32) {
	n := len(o.out.Triangles)
	for i, r := range o.runs {
		end := n
		if i+1 < len(o.runs) {
			end = o.runs[i+1].triangle
		}
		if r.slot != 0 && slots == nil {
			slots = make([]uint16, n)
		}
		if r.group != 0 && groups == nil {
			groups = make([]uint32, n)
		}
		for t := r.triangle; t < end; t++ {
			if slots != nil {
				slots[t] = r.slot
			}
			if groups != nil {
				groups[t] = r.group
			}
		}
	}
	return slots, groups
}

// dropDoubled leaves out the triangles that name a position twice: they have no area, and no edges of their own.
func (o *objReader) dropDoubled(slots []uint16, groups []uint32) ([]uint16, []uint32) {
	keys, kept := o.corners.keys, 0
	for t, tri := range o.out.Triangles {
		a, b, c := keys[tri[0]][0], keys[tri[1]][0], keys[tri[2]][0]
		if a == b || b == c || c == a {
			continue
		}
		o.out.Triangles[kept] = tri
		if slots != nil {
			slots[kept] = slots[t]
		}
		if groups != nil {
			groups[kept] = groups[t]
		}
		kept++
	}
	o.out.Triangles = o.out.Triangles[:kept]
	if slots != nil {
		slots = slots[:kept]
	}
	if groups != nil {
		groups = groups[:kept]
	}
	return slots, groups
}

// normalsFor completes the normals: none at all if every triangle is flat.
func (o *objReader) normalsFor(given []bool, groups []uint32) {
	every := given != nil
	for _, g := range given {
		every = every && g
	}
	if every || given == nil && groups == nil && o.model.Smooth == 0 {
		return
	}
	smooth(o.out, smoothing{deg: o.model.Smooth, groups: groups, given: given})
}
