package mesh

import (
	"fmt"
	"math"

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

// circle returns the cosine and sine of 2π·i/n for i in [0, n): exact at quarter turns, mirror-symmetric about both axes
// and both diagonals, and the same bits on every machine.
func circle(n int) (cos, sin []float64) {
	cos, sin = make([]float64, n), make([]float64, n)
	for i := range n {
		k, part := 8*i/n, 8*i%n
		if k&1 != 0 {
			part = n - part
		}
		cos[i], sin[i] = octant(k, float64(part)/float64(n))
	}
	return cos, sin
}

// cosSinDeg returns the cosine and sine of an angle of [0, 360) degrees, exact at quarter turns and the same bits on
// every machine.
func cosSinDeg(deg float64) (cos, sin float64) {
	eighths := deg / 45
	whole := math.Floor(eighths)
	k, f := int(whole)&7, eighths-whole
	if k&1 != 0 {
		f = 1 - f
	}
	return octant(k, f)
}

// octant returns the cosine and sine of an angle in octant k of [0, 8) that is f·45° from the nearest axis, f in [0, 1].
func octant(k int, f float64) (cos, sin float64) {
	c, s := math.Sqrt2/2, math.Sqrt2/2 // on the diagonal, where the two series differ in the last bit
	if f < 1 {
		c, s = cosSinSmall(float64(f * (math.Pi / 4)))
	}
	switch k {
	case 0:
		return c, s
	case 1:
		return s, c
	case 2:
		return -s, c
	case 3:
		return -c, s
	case 4:
		return -c, -s
	case 5:
		return -s, -c
	case 6:
		return s, -c
	}
	return c, -s
}

// cosSinSmall sums the Taylor series for x in [0, π/4]; the first term left out is below 1e-19. Every product is rounded
// before it is summed, so that no compiler may fuse them.
func cosSinSmall(x float64) (cos, sin float64) {
	x2 := float64(x * x)
	cos, sin = 1, 1
	for k := 18; k > 0; k -= 2 {
		cos = 1 - float64(float64(x2*cos)/float64(k*(k-1)))
		sin = 1 - float64(float64(x2*sin)/float64(k*(k+1)))
	}
	return cos, float64(x * sin)
}
