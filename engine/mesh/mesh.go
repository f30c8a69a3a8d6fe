package mesh

import (
	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// Mesh is a set of triangles in object space, counter-clockwise seen from outside.
type Mesh struct {
	Positions []geom.Vec3  // metres
	Normals   []geom.Vec3  // unit, one a position; nil: every triangle is flat
	UVs       [][2]float32 // one a position; nil: none
	Triangles [][3]uint32  // indices into Positions
	Slots     []uint16     // one a triangle: which of SlotNames it belongs to; nil: all to the first
	SlotNames []string     // at least one; material names where a file gives them, else ""
	// Materials holds what a file says of each slot; nil where it says nothing.
	Materials []model.Material
	// Notes are remarks for the scene's author: what the file names and does not have.
	Notes []string
}

// Bytes is the memory that the mesh's tables hold.
func (m *Mesh) Bytes() int64 {
	return int64(12*len(m.Positions) + 12*len(m.Normals) + 8*len(m.UVs) + 12*len(m.Triangles) + 2*len(m.Slots))
}

// Bounds returns the smallest box around the positions that triangles use.
func (m *Mesh) Bounds() geom.Box {
	b := geom.EmptyBox()
	for _, t := range m.Triangles {
		for _, i := range t {
			b = b.Extend(m.Positions[i])
		}
	}
	return b
}
