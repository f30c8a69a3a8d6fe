package mesh

import (
	"fmt"
	"math"
	"slices"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// outlineCrease is the turn of an extruded outline, in degrees, from which on its edge is sharp.
const outlineCrease = 30

// extrude makes a closed solid of m.Profile, an outline in x and y of either direction, m.Depth deep along z and centred in it.
// Its sides are smooth where the outline turns by less than outlineCrease; the rims are sharp. Equal neighbours count once, and so
// does a last point that repeats the first. u runs once around the outline, v from back to front; the ends take theirs from x and y.
func extrude(m model.Mesh, _ Reader) (*Mesh, error) {
	if err := sized("depth", m.Depth); err != nil {
		return nil, err
	}
	outline, err := cleanOutline(m.Profile)
	if err != nil {
		return nil, err
	}
	out := &Mesh{SlotNames: []string{""}}
	z := float32(m.Depth / 2)
	addSides(out, outline, z)
	if !addEnds(out, outline, z) {
		return nil, fmt.Errorf("outline of %d points is too intricate to be cut into triangles: give fewer points", len(outline))
	}
	return out, nil
}

// cleanOutline returns the outline counter-clockwise, in float32 coordinates, without repetitions; it touches itself nowhere.
func cleanOutline(profile [][2]float64) ([]point2, error) {
	if len(profile) > MaxOutline {
		return nil, fmt.Errorf("outline must have at most %d points, got %d", MaxOutline, len(profile))
	}
	var outline []point2
	for i, p := range profile {
		if !placed(p[0], p[1]) {
			return nil, fmt.Errorf("outline point %d: x and y must be within ±%v metres, got %v, %v", i+1, maxCoordinate, p[0], p[1])
		}
		q := point2{float64(float32(p[0])), float64(float32(p[1]))}
		if len(outline) == 0 || outline[len(outline)-1] != q {
			outline = append(outline, q)
		}
	}
	if n := len(outline); n > 1 && outline[0] == outline[n-1] {
		outline = outline[:n-1]
	}
	if len(outline) < 3 {
		return nil, fmt.Errorf("outline must have at least 3 different points, got %d", len(outline))
	}
	if err := checkSimple(outline); err != nil {
		return nil, err
	}
	switch area := polygonArea(outline); {
	case area == 0:
		return nil, fmt.Errorf("outline encloses no area: its %d points lie on a line", len(outline))
	case area < 0:
		slices.Reverse(outline)
	}
	return outline, nil
}

// addSides adds a quad for each edge of the outline, between -z and z.
func addSides(out *Mesh, outline []point2, z float32) {
	n := len(outline)
	cosCrease, _ := cosSinDeg(outlineCrease)
	normals := make([]point2, n) // of each edge, outward
	lengths := make([]float64, n)
	total := 0.0
	for i, a := range outline {
		b := outline[(i+1)%n]
		dx, dy := b.x-a.x, b.y-a.y
		lengths[i] = math.Sqrt(float64(dx*dx) + float64(dy*dy))
		normals[i] = point2{dy / lengths[i], -dx / lengths[i]}
		total += lengths[i]
	}
	// at returns the normal of edge i at its corner with edge j.
	at := func(i, j int) geom.Vec3 {
		p, q := normals[i], normals[j]
		if float64(p.x*q.x)+float64(p.y*q.y) > cosCrease+1e-9 {
			wp, wq := lengths[i], lengths[j]
			p = point2{float64(p.x*wp) + float64(q.x*wq), float64(p.y*wp) + float64(q.y*wq)}
			l := math.Sqrt(float64(p.x*p.x) + float64(p.y*p.y))
			p = point2{p.x / l, p.y / l}
		}
		return geom.Vec3{X: float32(p.x), Y: float32(p.y)}
	}
	along := 0.0
	for i, a := range outline {
		b := outline[(i+1)%n]
		first := uint32(len(out.Positions))
		u0 := float32(along / total)
		along += lengths[i]
		u1 := float32(along / total)
		na, nb := at(i, (i+n-1)%n), at(i, (i+1)%n)
		ax, ay, bx, by := float32(a.x), float32(a.y), float32(b.x), float32(b.y)
		out.Positions = append(out.Positions, geom.Vec3{X: ax, Y: ay, Z: z}, geom.Vec3{X: ax, Y: ay, Z: -z}, geom.Vec3{X: bx, Y: by, Z: -z}, geom.Vec3{X: bx, Y: by, Z: z})
		out.Normals = append(out.Normals, na, na, nb, nb)
		out.UVs = append(out.UVs, [2]float32{u0, 1}, [2]float32{u0, 0}, [2]float32{u1, 0}, [2]float32{u1, 1})
		out.Triangles = append(out.Triangles, [3]uint32{first, first + 1, first + 2}, [3]uint32{first, first + 2, first + 3})
	}
}

// addEnds adds the two flat ends, at z and -z. It reports whether they could be cut into triangles.
func addEnds(out *Mesh, outline []point2, z float32) bool {
	lo, hi := bounds2(outline)
	c := clipper{maxTests: maxClipTests}
	triangles, ok := c.clip(outline)
	for _, side := range [2]float32{1, -1} {
		first := uint32(len(out.Positions))
		for _, p := range outline {
			u, v := float32((p.x-lo.x)/(hi.x-lo.x)), float32((p.y-lo.y)/(hi.y-lo.y))
			if side < 0 {
				u = 1 - u // so that the back end is not mirrored either
			}
			out.Positions = append(out.Positions, geom.Vec3{X: float32(p.x), Y: float32(p.y), Z: side * z})
			out.Normals = append(out.Normals, geom.Vec3{Z: side})
			out.UVs = append(out.UVs, [2]float32{u, v})
		}
		for _, t := range triangles {
			a, b, d := first+uint32(t[0]), first+uint32(t[1]), first+uint32(t[2])
			if side < 0 {
				b, d = d, b
			}
			out.Triangles = append(out.Triangles, [3]uint32{a, b, d})
		}
	}
	return ok
}
