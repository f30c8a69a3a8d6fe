package mesh

import (
	"fmt"
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// raw takes the mesh as it is given. Entries are numbered from 1 in messages, as Lua numbers tables; indices are quoted as given to
// the engine, from 0. Triangles that name a position twice are left out.
func raw(m model.Mesh, _ Reader) (*Mesh, error) {
	r := m.Raw
	if r == nil {
		return nil, fmt.Errorf("no tables given")
	}
	if err := angle("smooth", m.Smooth); err != nil {
		return nil, err
	}
	if err := checkRaw(r); err != nil {
		return nil, err
	}
	out := &Mesh{SlotNames: []string{""}}
	for i, p := range r.Positions {
		if !placed(p[:]...) {
			return nil, fmt.Errorf("position %d: coordinates must be within ±%v metres, got %v, %v, %v", i+1, maxCoordinate, p[0], p[1], p[2])
		}
		out.Positions = append(out.Positions, geom.Vec3{X: float32(p[0]), Y: float32(p[1]), Z: float32(p[2])})
	}
	for i, t := range r.Triangles {
		for _, v := range t {
			if int64(v) >= int64(len(r.Positions)) {
				return nil, fmt.Errorf("triangle %d: index %d is not among the %d positions (0 to %d are accepted)", i+1, v, len(r.Positions), len(r.Positions)-1)
			}
		}
		if t[0] != t[1] && t[1] != t[2] && t[2] != t[0] {
			out.Triangles = append(out.Triangles, t)
		}
	}
	if len(out.Triangles) == 0 {
		return nil, fmt.Errorf("every triangle names a position twice: none is left")
	}
	for i, n := range r.Normals {
		unit, ok := unitNormal(n[0], n[1], n[2])
		if !ok {
			return nil, fmt.Errorf("normal %d: components must be finite and not all 0, got %v, %v, %v", i+1, n[0], n[1], n[2])
		}
		out.Normals = append(out.Normals, unit)
	}
	for i, c := range r.UVs {
		u, v := float32(c[0]), float32(c[1])
		if u-u != 0 || v-v != 0 {
			return nil, fmt.Errorf("uv %d: both must be finite, got %v, %v", i+1, c[0], c[1])
		}
		out.UVs = append(out.UVs, [2]float32{u, v})
	}
	if out.Normals == nil && m.Smooth > 0 {
		smooth(out, smoothing{deg: m.Smooth})
	}
	return out, nil
}

// checkRaw checks the lengths of the tables.
func checkRaw(r *model.RawMesh) error {
	switch {
	case len(r.Positions) == 0:
		return fmt.Errorf("positions is empty: at least 3 are needed")
	case len(r.Triangles) == 0:
		return fmt.Errorf("triangles is empty: at least 1 is needed")
	case len(r.Triangles) > MaxTriangles:
		return fmt.Errorf("%d triangles, at most %d are accepted", len(r.Triangles), MaxTriangles)
	case len(r.Positions) > 3*MaxTriangles:
		return fmt.Errorf("%d positions, at most %d are accepted", len(r.Positions), 3*MaxTriangles)
	case len(r.Normals) != 0 && len(r.Normals) != len(r.Positions):
		return fmt.Errorf("normals must be one a position (%d) or none, got %d", len(r.Positions), len(r.Normals))
	case len(r.UVs) != 0 && len(r.UVs) != len(r.Positions):
		return fmt.Errorf("uvs must be one a position (%d) or none, got %d", len(r.Positions), len(r.UVs))
	}
	return nil
}

// unitNormal makes a normal of any length unit. ok is false if it is not finite or has no length.
func unitNormal(x, y, z float64) (n geom.Vec3, ok bool) {
	most := max(math.Abs(x), math.Abs(y), math.Abs(z))
	if !(most > 0 && most <= math.MaxFloat64) {
		return geom.Vec3{}, false
	}
	x, y, z = x/most, y/most, z/most
	l := math.Sqrt(float64(x*x) + float64(y*y) + float64(z*z))
	return geom.Vec3{X: float32(x / l), Y: float32(y / l), Z: float32(z / l)}, true
}
