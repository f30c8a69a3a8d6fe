package bvh

import (
	"math"
	"math/rand/v2"

	"lampbook/engine/kernel/geom"
)

// aimAt gives the i-th of a family of rays around a mesh: towards corners, edges and planes of its triangles, along the axes and
// the diagonals, from corners of the mesh, from far away, with narrow and with infinite ranges.
func aimAt(m *refMesh, seed, i uint64) geom.Ray {
	g := rand.New(rand.NewPCG(seed, i))
	f := m.triangles[g.IntN(len(m.triangles))]
	corner := func() geom.Vec3 { return m.positions[f[g.IntN(3)]] }
	size := float32(0)
	for _, p := range m.positions[:min(len(m.positions), 16)] {
		size = max(size, float32(math.Abs(float64(p.X))), float32(math.Abs(float64(p.Y))), float32(math.Abs(float64(p.Z))))
	}
	anywhere := func() geom.Vec3 {
		return geom.Vec3{X: (g.Float32()*2 - 1) * size, Y: (g.Float32()*2 - 1) * size, Z: (g.Float32()*2 - 1) * size}.Scale(2)
	}
	target := corner()
	switch g.IntN(4) {
	case 0: // a point on an edge
		target = target.AddScaled(0.5, corner().Sub(target))
	case 1: // a point inside
		target = target.AddScaled(g.Float32(), corner().Sub(target))
		target = target.AddScaled(g.Float32(), corner().Sub(target))
	}
	r := geom.Ray{TMax: float32(math.Inf(1))}
	switch g.IntN(4) {
	case 0: // along an axis or a diagonal
		r.Dir = geom.Vec3{X: float32(g.IntN(3) - 1), Y: float32(g.IntN(3) - 1), Z: float32(g.IntN(3) - 1)}
		if (r.Dir == geom.Vec3{}) {
			r.Dir.X = math.Float32frombits(1 << 31)
			r.Dir.Z = 1
		}
		r.Org = target.AddScaled(-2*size, r.Dir)
	case 1: // from corner to corner, also along edges
		r.Org = corner()
		r.Dir = target.Sub(r.Org)
	default:
		r.Org = anywhere()
		r.Dir = target.Sub(r.Org)
	}
	switch g.IntN(4) {
	case 0:
		r.TMin, r.TMax = g.Float32(), 1
	case 1:
		r.TMax = 1.5 * g.Float32()
	}
	return r
}
