package aim

import (
	"math"
	"strconv"

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

// eachPoint calls take for the positions of the thing's triangles in world space, in the mesh's order.
func eachPoint(t Thing, take func(geom.Vec3d)) {
	worldFromObject := WorldFromObject(t.Placement)
	used := make([]bool, len(t.Mesh.Positions))
	for _, tri := range t.Mesh.Triangles {
		for _, i := range tri {
			used[i] = true
		}
	}
	for i, p := range t.Mesh.Positions {
		if used[i] {
			take(worldFromObject.Point(p.Wide()))
		}
	}
}

// Bounds returns the centre of the things' axis-aligned box and the radius of the sphere around it, in world space, metres.
// Without points both are zero.
func Bounds(things []Thing) (centre [3]float64, radius float64) {
	box := geom.EmptyBox()
	for _, t := range things {
		eachPoint(t, func(p geom.Vec3d) { box = box.Extend(p.Narrow()) })
	}
	if box.Empty() {
		return centre, 0
	}
	return arr(box.Centre().Wide()), box.Size().Wide().Len() / 2
}

// settled rounds x to 12 significant digits. Logarithms and sines may differ in their last bit from one machine to another; what aim
// works out becomes part of the plan, and the plan must not.
func settled(x float64) float64 {
	if y, err := strconv.ParseFloat(strconv.FormatFloat(x, 'g', 12, 64), 64); err == nil {
		return y
	}
	return x // not finite
}

// settledPoint is settled, for each coordinate; what is nothing beside size becomes 0.
func settledPoint(v geom.Vec3d, size float64) [3]float64 {
	p := arr(v)
	for i := range p {
		p[i] = settled(p[i])
		if math.Abs(p[i]) < 1e-12*size {
			p[i] = 0
		}
	}
	return p
}

func vec(a [3]float64) geom.Vec3d { return geom.Vec3d{X: a[0], Y: a[1], Z: a[2]} }

func arr(v geom.Vec3d) [3]float64 { return [3]float64{v.X, v.Y, v.Z} }
