package mesh

import (
	"fmt"
	"math"

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

// sphere is cut into segments around and half as many (rounded up) from pole to pole, inscribed: every vertex lies on it.
func sphere(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("radius", m.Size[0]); err != nil {
		return nil, err
	}
	stacks := (m.Segments + 1) / 2
	cos, sin := circle(2 * stacks)
	var s section
	for j := 0; j <= stacks; j++ {
		nr, ny := sin[j%(2*stacks)], -cos[j%(2*stacks)]
		s = append(s, turnedPoint{r: m.Size[0] * nr, y: m.Size[0] * ny, nr: nr, ny: ny, v: float64(j) / float64(stacks)})
	}
	return revolve([]section{s}, m.Segments)
}

// cylinder is closed by two flat ends.
func cylinder(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("radius", m.Size[0], "height", m.Size[1]); err != nil {
		return nil, err
	}
	return frustum(m.Size[0], m.Size[0], m.Size[1], m.Segments)
}

// cone is closed; either of its radii may be 0.
func cone(m model.Mesh, _ Reader) (*Mesh, error) {
	bottom, top, height := m.Size[0], m.Size[1], m.Size[2]
	for _, s := range [...]struct {
		name  string
		value float64
	}{{"radius", bottom}, {"top", top}} {
		if s.value != 0 {
			if err := sized(s.name, s.value); err != nil {
				return nil, fmt.Errorf("%w; 0 for a point", err)
			}
		}
	}
	if bottom == 0 && top == 0 {
		return nil, fmt.Errorf("radius and top are both 0: one of them must be > 0")
	}
	if err := sized("height", height); err != nil {
		return nil, err
	}
	return frustum(bottom, top, height, m.Segments)
}

// frustum is the closed solid between two circles, centred.
func frustum(bottom, top, height float64, segments int) (*Mesh, error) {
	slant := math.Sqrt(float64(height*height) + float64((bottom-top)*(bottom-top)))
	nr, ny := height/slant, (bottom-top)/slant
	y := height / 2
	var sections []section
	if bottom > 0 {
		sections = append(sections, section{{r: 0, y: -y, ny: -1, v: 0}, {r: bottom, y: -y, ny: -1, v: 1}})
	}
	sections = append(sections, section{{r: bottom, y: -y, nr: nr, ny: ny, v: 0}, {r: top, y: y, nr: nr, ny: ny, v: 1}})
	if top > 0 {
		sections = append(sections, section{{r: top, y: y, ny: 1, v: 0}, {r: 0, y: y, ny: 1, v: 1}})
	}
	return revolve(sections, segments)
}

// disk is flat and faces up (+y).
func disk(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("radius", m.Size[0]); err != nil {
		return nil, err
	}
	return revolve([]section{{{r: m.Size[0], ny: 1, v: 0}, {r: 0, ny: 1, v: 1}}}, m.Segments)
}

// torus lies in the plane of x and z: segments around, half as many (rounded up, at least 3) around the tube.
func torus(m model.Mesh, _ Reader) (*Mesh, error) {
	radius, tube := m.Size[0], m.Size[1]
	if err := sized("radius", radius, "tube", tube); err != nil {
		return nil, err
	}
	if tube >= radius {
		return nil, fmt.Errorf("tube must be less than radius %v, got %v", radius, tube)
	}
	around := max(3, (m.Segments+1)/2)
	cos, sin := circle(around)
	var s section
	for j := 0; j <= around; j++ {
		nr, ny := -cos[j%around], -sin[j%around] // from the inside of the ring under it and outward
		s = append(s, turnedPoint{r: radius + float64(tube*nr), y: tube * ny, nr: nr, ny: ny, v: float64(j) / float64(around)})
	}
	return revolve([]section{s}, m.Segments)
}
