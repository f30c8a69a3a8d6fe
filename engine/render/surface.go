package render

import (
	"math"

	"lampbook/engine/kernel/bvh"
	"lampbook/engine/kernel/geom"
)

// offGround is how far off a surface shadow rays start, as a share of the largest coordinate at hand: four times the rounding of the hit
// point (one interpolated from three vertices is off by at most four units in the last place, 2^-22, of the largest coordinate). Over 400
// random placements at scales of 0.001 to 10000, none of 230,000 pixels had a speck at 2^-22, and 149 had at 2^-23.
const offGround = 1.0 / (1 << 20)

// thin is the ratio of a triangle's longer edge, squared, to twice its area from which on it counts as a sliver. The test of a ray
// against a sliver finds its distance with an error that grows with that ratio: its edge functions are differences of products as large as the
// edge squared, divided by twice the area.
const thin = 16

// offSliver returns how much farther off a sliver shadow rays must start, metres: four units in the last place, 2^-22, of the edge, times
// the ratio, at most a thousandth of the edge. edge2 and n, the cross product of two edges, are in object space.
func (pl *placed) offSliver(edge2 float32, n geom.Vec3) float32 {
	edge := float32(math.Sqrt(float64(edge2)))
	area := float32(math.Sqrt(float64(n.Dot(n))))
	return float32(pl.stretch * min(float32(edge*edge2)/area*(1.0/(1<<22)), edge*(1.0/1024)))
}

// surfaceOf returns the cast's surface that a hit lies on.
func (c *cast) surfaceOf(h *bvh.Hit) int32 {
	pl := &c.placed[h.Placement]
	if pl.mesh.Slots == nil {
		return pl.firstSurface
	}
	return pl.firstSurface + int32(pl.mesh.Slots[h.Triangle])
}

// interact works out the point that a camera ray hit, and returns its surface; local and index are the caller's. Both sides of a surface
// are shaded: normals turn towards the camera.
func (c *cast) interact(h *bvh.Hit, ray *geom.Ray, pt *hit) (surface int32) {
	pl := &c.placed[h.Placement]
	m := pl.mesh
	tri := &m.Triangles[h.Triangle]
	a, b, d := m.Positions[tri[0]], m.Positions[tri[1]], m.Positions[tri[2]]
	wa, wb, wd := 1-h.U-h.V, h.U, h.V
	pObject := a.Scale(wa).AddScaled(wb, b).AddScaled(wd, d)
	ngObject := b.Sub(a).Cross(d.Sub(a))

	pt.wo = ray.Dir.Neg()
	ng := pl.normal(ngObject)
	if ng.Dot(pt.wo) < 0 {
		ng = ng.Neg()
	}
	pt.p = pl.point(pObject)
	pt.n = ng
	start := pt.p
	if m.Normals != nil {
		na, nb, nd := m.Normals[tri[0]], m.Normals[tri[1]], m.Normals[tri[2]]
		ns := pl.normal(na.Scale(wa).AddScaled(wb, nb).AddScaled(wd, nd))
		side := float32(1)
		if ns.Dot(ng) < 0 {
			ns, side = ns.Neg(), -1
		}
		if ns != (geom.Vec3{}) && ns.Finite() {
			pt.n = ns
			// The terminator of a smooth surface must not show its facets: start shadow rays from the curved surface that the
			// vertex normals imply, the mean of the point's projections on the vertices' tangent planes where it
			// lies below them (Hanika 2021, "Hacking the shadow terminator").
			lift := below(pObject, a, na, side).Scale(wa).
				AddScaled(wb, below(pObject, b, nb, side)).
				AddScaled(wd, below(pObject, d, nd, side))
			if lift != (geom.Vec3{}) {
				start = start.Add(pl.direction(lift))
			}
		}
	}
	off := float32(max(pl.reach, abs(pt.p.X), abs(pt.p.Y), abs(pt.p.Z)) * offGround)
	if edge2 := max(b.Sub(a).Dot(b.Sub(a)), d.Sub(a).Dot(d.Sub(a))); float32(edge2*edge2) > thin*thin*ngObject.Dot(ngObject) {
		off += pl.offSliver(edge2, ngObject)
	}
	pt.shadow = start.AddScaled(off, ng)
	return c.surfaceOf(h)
}

// below returns the way from p up to the tangent plane at vertex v with normal side·n, zero where p is not below it.
func below(p, v, n geom.Vec3, side float32) geom.Vec3 {
	d := side * p.Sub(v).Dot(n)
	if d >= 0 {
		return geom.Vec3{}
	}
	return n.Scale(-d * side)
}

// point, direction and normal map from object to world space; normal returns a unit vector, or zero for zero.
func (pl *placed) point(p geom.Vec3) geom.Vec3 {
	if pl.identity {
		return p
	}
	return pl.worldFromObject.Point(p.Wide()).Narrow()
}

func (pl *placed) direction(v geom.Vec3) geom.Vec3 {
	if pl.identity {
		return v
	}
	return pl.worldFromObject.Dir(v.Wide()).Narrow()
}

func (pl *placed) normal(n geom.Vec3) geom.Vec3 {
	if pl.identity {
		// Twice the area of a tiny triangle, squared, falls below what float32 holds.
		if l2 := n.Dot(n); l2 > 1e-30 && l2 < 1e30 {
			return n.Scale(1 / float32(math.Sqrt(float64(l2))))
		}
		return n.Wide().Unit().Narrow()
	}
	return pl.worldFromObject.Normal(n.Wide()).Scale(pl.mirror).Unit().Narrow()
}
