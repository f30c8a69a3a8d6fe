package bvh

import (
	"math"
	"math/rand/v2"

	"lampbook/engine/kernel/geom"
)

// bowl is a closed surface: a thick bowl turned on the y axis, of about the given number of triangles, 0.3 wide. Rims, ribs and its outer
// side have both very small and very long triangles.
func bowl(triangles int) *refMesh {
	around := max(3, int(math.Sqrt(float64(triangles)/2)))
	along := max(3, triangles/2/around)
	m := &refMesh{}
	for i := range along {
		s := float64(i) / float64(along) * 2 * math.Pi
		// The profile is a closed curve around a bent middle line.
		radius := 0.09 + 0.05*math.Cos(s) + 0.004*math.Cos(9*s)
		height := 0.06*math.Sin(s) + 0.3*(radius-0.09)*(radius-0.09)*20
		for k := range around {
			a := float64(k) / float64(around) * 2 * math.Pi
			m.positions = append(m.positions, geom.Vec3d{X: radius * math.Cos(a), Y: height, Z: radius * math.Sin(a)}.Narrow())
		}
	}
	at := func(i, k int) uint32 { return uint32(i%along*around + k%around) }
	for i := range along {
		for k := range around {
			a, b, c, d := at(i, k), at(i+1, k), at(i+1, k+1), at(i, k+1)
			m.triangles = append(m.triangles, [3]uint32{a, b, c}, [3]uint32{a, c, d})
		}
	}
	return m
}

// shelves is many bowls of all sizes in a room, in one mesh.
func shelves(triangles int) *refMesh {
	g := rand.New(rand.NewPCG(11, 12))
	m := &refMesh{}
	one := bowl(500)
	for len(m.triangles) < triangles {
		base := uint32(len(m.positions))
		size := float32(0.3 + 3*g.Float64()*g.Float64())
		at := geom.Vec3{X: 4*g.Float32() - 2, Y: float32(g.IntN(5)) * 0.5, Z: 4*g.Float32() - 2}
		for _, p := range one.positions {
			m.positions = append(m.positions, p.Scale(size).Add(at))
		}
		for _, f := range one.triangles {
			m.triangles = append(m.triangles, [3]uint32{f[0] + base, f[1] + base, f[2] + base})
		}
	}
	base := uint32(len(m.positions))
	for i := range 8 {
		m.positions = append(m.positions, geom.Vec3{X: float32(i&1)*8 - 4, Y: float32(i>>1&1)*4 - 1, Z: float32(i>>2)*8 - 4})
	}
	for _, q := range [][4]uint32{{0, 1, 3, 2}, {4, 6, 7, 5}, {0, 4, 5, 1}, {2, 3, 7, 6}, {0, 2, 6, 4}, {1, 5, 7, 3}} {
		m.triangles = append(m.triangles, [3]uint32{base + q[0], base + q[1], base + q[2]}, [3]uint32{base + q[0], base + q[2], base + q[3]})
	}
	return m
}

// pixelRays are n rays of each of size × size pixels of a picture of the box's inside or outside, pixel by pixel.
func pixelRays(box geom.Box, size, n int) []geom.Ray {
	g := rand.New(rand.NewPCG(21, 22))
	c, d := box.Centre(), box.Size()
	eye := c.Add(geom.Vec3{X: 0.9 * d.X, Y: 0.7 * d.Y, Z: 1.3 * d.Z})
	var rays []geom.Ray
	for y := range size {
		for x := range size {
			for range n {
				u, v := (float32(x)+g.Float32())/float32(size)-0.5, (float32(y)+g.Float32())/float32(size)-0.5
				to := c.Add(geom.Vec3{X: u * d.X, Y: v * d.Y, Z: -0.5 * u * d.Z})
				rays = append(rays, geom.Ray{Org: eye, Dir: to.Sub(eye).Unit(), TMax: float32(math.Inf(1))})
			}
		}
	}
	return rays
}

// shadowRays go from hits to random points of a square light above the box; rays that hit nothing are given an empty range.
func shadowRays(box geom.Box, rays []geom.Ray, hits []Hit) []geom.Ray {
	g := rand.New(rand.NewPCG(31, 32))
	c, d := box.Centre(), box.Size()
	out := make([]geom.Ray, len(rays))
	for i := range rays {
		if hits[i].Placement == NoHit {
			continue
		}
		from := rays[i].At(hits[i].T * 0.9999)
		to := c.Add(geom.Vec3{X: (0.2 + 0.4*g.Float32()) * d.X, Y: 1.4 * d.Y, Z: (0.4*g.Float32() - 0.2) * d.Z})
		out[i] = geom.Ray{Org: from, Dir: to.Sub(from), TMin: 1e-4, TMax: 1}
	}
	return out
}

// strayRays go from hits into all directions.
func strayRays(rays []geom.Ray, hits []Hit) []geom.Ray {
	g := rand.New(rand.NewPCG(41, 42))
	out := make([]geom.Ray, len(rays))
	for i := range rays {
		if hits[i].Placement != NoHit {
			d := geom.Vec3{X: float32(g.NormFloat64()), Y: float32(g.NormFloat64()), Z: float32(g.NormFloat64())}
			out[i] = geom.Ray{Org: rays[i].At(hits[i].T * 0.9999), Dir: d.Unit(), TMin: 1e-5, TMax: float32(math.Inf(1))}
		}
	}
	return out
}
