package mesh

import (
	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// plane is a rectangle in x and z, facing up (+y); u runs along +x, v along -z.
func plane(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("width", m.Size[0], "depth", m.Size[2]); err != nil {
		return nil, err
	}
	x, z := float32(m.Size[0]/2), float32(m.Size[2]/2)
	return &Mesh{
		Positions: []geom.Vec3{{X: -x, Z: z}, {X: x, Z: z}, {X: x, Z: -z}, {X: -x, Z: -z}},
		UVs:       [][2]float32{{0, 0}, {1, 0}, {1, 1}, {0, 1}},
		Triangles: [][3]uint32{{0, 1, 2}, {0, 2, 3}},
		SlotNames: []string{""},
	}, nil
}

// box has sharp edges: four positions a face, each face with the whole square of texture coordinates.
func box(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("width", m.Size[0], "height", m.Size[1], "depth", m.Size[2]); err != nil {
		return nil, err
	}
	half := geom.Vec3{X: float32(m.Size[0] / 2), Y: float32(m.Size[1] / 2), Z: float32(m.Size[2] / 2)}
	// Each face by the directions of its u and v; their cross product points outward.
	faces := [6][2]geom.Vec3{
		{{X: 1}, {Y: 1}},  // +z, the front
		{{X: -1}, {Y: 1}}, // -z
		{{Z: -1}, {Y: 1}}, // +x
		{{Z: 1}, {Y: 1}},  // -x
		{{X: 1}, {Z: -1}}, // +y
		{{X: 1}, {Z: 1}},  // -y
	}
	out := &Mesh{SlotNames: []string{""}}
	for _, f := range faces {
		u, v := f[0], f[1]
		n := u.Cross(v)
		first := uint32(len(out.Positions))
		for _, c := range [4][2]float32{{-1, -1}, {1, -1}, {1, 1}, {-1, 1}} {
			corner := n.Add(u.Scale(c[0])).Add(v.Scale(c[1]))
			out.Positions = append(out.Positions, geom.Vec3{X: corner.X * half.X, Y: corner.Y * half.Y, Z: corner.Z * half.Z})
			out.UVs = append(out.UVs, [2]float32{(c[0] + 1) / 2, (c[1] + 1) / 2})
		}
		out.Triangles = append(out.Triangles, [3]uint32{first, first + 1, first + 2}, [3]uint32{first, first + 2, first + 3})
	}
	return out, nil
}
