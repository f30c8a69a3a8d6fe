package aim

import (
	"lampbook/engine/kernel/geom"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// WorldFromObject is the map of a placement: scale, then the turns about x, y and z, then the move.
func WorldFromObject(pl model.Placement) geom.Affine {
	return geom.Translate(vec(pl.At)).Mul(geom.Turn(vec(pl.Turn))).Mul(geom.ScaleBy(vec(pl.Scale)))
}

// Thing is a placement with its built mesh.
type Thing struct {
	Mesh      *mesh.Mesh
	Placement model.Placement
}

// Points returns the positions of the thing's triangles in world space, in the mesh's order.
func Points(t Thing) []geom.Vec3d {
	worldFromObject := WorldFromObject(t.Placement)
	used := make([]bool, len(t.Mesh.Positions))
	for _, tri := range t.Mesh.Triangles {
		for _, i := range tri {
			used[i] = true
		}
	}
	pts := make([]geom.Vec3d, 0, len(used))
	for i, p := range t.Mesh.Positions {
		if used[i] {
			pts = append(pts, worldFromObject.Point(p.Wide()))
		}
	}
	return pts
}

// Bounds returns the centre of the things' axis-aligned box and the radius of the sphere around it, in world space, metres.
// Without points both are zero.
func Bounds(things []Thing) (centre [3]float64, radius float64) {
	box := geom.EmptyBox()
	for _, t := range things {
		for _, p := range Points(t) {
			box = box.Extend(p.Narrow())
		}
	}
	if box.Empty() {
		return centre, 0
	}
	return arr(box.Centre().Wide()), box.Size().Wide().Len() / 2
}

func vec(a [3]float64) geom.Vec3d { return geom.Vec3d{X: a[0], Y: a[1], Z: a[2]} }

func arr(v geom.Vec3d) [3]float64 { return [3]float64{v.X, v.Y, v.Z} }
