package mesh

import (
	"fmt"

	"lampbook/engine/kernel/geom"
)

// turnedPoint is a point of a profile in the half plane of radius and height.
type turnedPoint struct {
	r, y   float64 // metres; r 0 is on the axis, exactly
	nr, ny float64 // unit normal
	v      float64 // texture coordinate
}

// section is a stretch of profile along which normals are smooth. Outside lies to the right of its direction.
type section []turnedPoint

// revolve turns the sections about y. There are segments + 1 columns of vertices, so that texture coordinates have a
// seam; it lies at the back (-z), and u grows to the right seen from outside. Off the axis each step of a section gives a
// band of quads, cut in two; at the axis it gives a fan whose every triangle has a tip of its own, with the normal of its middle.
func revolve(sections []section, segments int) (*Mesh, error) {
	columns := segments + 1
	triangles := 0
	for _, s := range sections {
		triangles += 2 * segments * (len(s) - 1)
	}
	if triangles > MaxTriangles {
		return nil, fmt.Errorf("%d triangles, at most %d are accepted: give fewer segments or points", triangles, MaxTriangles)
	}
	cos, sin := circle(segments)
	cosMid, sinMid := circle(2 * segments)
	out := &Mesh{SlotNames: []string{""}, Triangles: make([][3]uint32, 0, triangles)}
	put := func(p turnedPoint, c, s, u float64) {
		around := func(r, y float64) geom.Vec3 { return geom.Vec3{X: float32(-r * s), Y: float32(y), Z: float32(-r * c)} }
		out.Positions = append(out.Positions, around(p.r, p.y))
		out.Normals = append(out.Normals, around(p.nr, p.ny))
		out.UVs = append(out.UVs, [2]float32{float32(u), float32(p.v)})
	}
	for _, s := range sections {
		var below uint32 // first vertex of the row before
		for j, p := range s {
			row := uint32(len(out.Positions))
			for i := range columns {
				switch {
				case p.r != 0:
					put(p, cos[i%segments], sin[i%segments], float64(i)/float64(segments))
				case i < segments:
					put(p, cosMid[2*i+1], sinMid[2*i+1], (float64(i)+0.5)/float64(segments))
				}
			}
			for i := uint32(0); j > 0 && i < uint32(segments); i++ {
				switch {
				case s[j-1].r == 0 && p.r == 0:
				case s[j-1].r == 0:
					out.Triangles = append(out.Triangles, [3]uint32{below + i, row + i + 1, row + i})
				case p.r == 0:
					out.Triangles = append(out.Triangles, [3]uint32{below + i, below + i + 1, row + i})
				default:
					out.Triangles = append(out.Triangles,
						[3]uint32{below + i, below + i + 1, row + i + 1}, [3]uint32{below + i, row + i + 1, row + i})
				}
			}
			below = row
		}
	}
	return out, nil
}
