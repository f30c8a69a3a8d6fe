package mesh

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// comb is an outline with many teeth, of more reflex corners than convex ones.
func comb(teeth int) [][2]float64 {
	outline := [][2]float64{{float64(teeth), -1}}
	for i := teeth; i > 0; i-- {
		x := float64(i)
		outline = append(outline, [2]float64{x, 1}, [2]float64{x - 0.5, 0.1}, [2]float64{x - 0.6, 0.05}, [2]float64{x - 0.7, 0.1})
	}
	return append(outline, [2]float64{0, 1}, [2]float64{0, -1})
}

// spiral is the outline of a band rolled up, turning by 3 rounds.
func spiral(points int) [][2]float64 {
	var outer, inner [][2]float64
	for i := range points {
		turn := 3 * float64(i) / float64(points-1)
		s, c := math.Sincos(2 * math.Pi * turn)
		outer = append(outer, [2]float64{(1 + turn) * c, (1 + turn) * s})
		inner = append(inner, [2]float64{(0.6 + turn) * c, (0.6 + turn) * s})
	}
	slices.Reverse(inner)
	return append(outer, inner...)
}

// shoelace gives the area and the length of an outline.
func shoelace(outline [][2]float64) (area, length float64) {
	for i, p := range outline {
		q := outline[(i+1)%len(outline)]
		area += (p[0]*q[1] - p[1]*q[0]) / 2
		length += math.Hypot(q[0]-p[0], q[1]-p[1])
	}
	return math.Abs(area), length
}

// checkExtrusion checks volume and area against the shoelace formula.
func checkExtrusion(t testing.TB, outline [][2]float64, depth float64) *Mesh {
	t.Helper()
	m := built(t, model.Mesh{Kind: model.MeshExtrude, Profile: outline, Depth: depth})
	checkClosed(t, m, 2)
	area, length := shoelace(outline)
	if v := volumeOf(m); !near(v, area*depth, 1e-5) {
		t.Fatalf("volume %v, want %v × %v (shoelace formula)", v, area, depth)
	}
	if a, want := areaOf(m), 2*area+length*depth; !near(a, want, 1e-5) {
		t.Fatalf("area %v, want %v (shoelace formula)", a, want)
	}
	return m
}

func TestExtrude(t *testing.T) {
	for name, outline := range map[string][][2]float64{
		"triangle":         {{0, 0}, {1, 0}, {0, 1}},
		"clockwise":        {{0, 0}, {0, 1}, {1, 0}},
		"closed by itself": {{0, 0}, {1, 0}, {1, 1}, {0, 1}, {0, 0}},
		"repeated points":  {{0, 0}, {1, 0}, {1, 0}, {1, 1}, {0, 1}},
		"points on edges":  {{0, 0}, {0.5, 0}, {1, 0}, {1, 0.3}, {1, 1}, {0, 1}, {0, 0.2}},
		"arrow":            {{0, 0}, {2, 1}, {0, 2}, {0.5, 1}},
		"comb":             comb(40),
		"spiral":           spiral(300),
	} {
		t.Run(name, func(t *testing.T) { checkExtrusion(t, outline, 0.25) })
	}
}

// TestExtrudeCrease checks that sides are smooth under 30 degrees and sharp from there on, and the rims sharp.
func TestExtrudeCrease(t *testing.T) {
	for _, c := range []struct {
		corners, normals int // of the outline; at the corner (1, 0, z) besides the cap's
	}{{11, 2}, {12, 2}, {13, 1}, {100, 1}} {
		var outline [][2]float64
		for i := range c.corners {
			s, cos := math.Sincos(2 * math.Pi * float64(i) / float64(c.corners))
			outline = append(outline, [2]float64{cos, s})
		}
		m := checkExtrusion(t, outline, 1)
		seen := map[geom.Vec3]bool{}
		for i, p := range m.Positions {
			if p == (geom.Vec3{X: 1, Z: 0.5}) && m.Normals[i].Z == 0 {
				seen[m.Normals[i]] = true
			}
		}
		if len(seen) != c.normals {
			t.Errorf("%d-gon, which turns by %.1f degrees: %d side normals at a corner, want %d", c.corners, 360/float64(c.corners), len(seen), c.normals)
		}
		checkNormalsFaceOut(t, m, 16)
	}
}

// TestExtrudeProperties extrudes random stars: closed solids of the outline's area, whichever way round.
func TestExtrudeProperties(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		n := rapid.IntRange(3, 60).Draw(rt, "points")
		phase := rapid.Float64Range(0, 1).Draw(rt, "phase")
		var outline [][2]float64
		for i := range n {
			r := rapid.Float64Range(0.05, 3).Draw(rt, "radius")
			s, c := math.Sincos(2 * math.Pi * (float64(i) + phase) / float64(n))
			outline = append(outline, [2]float64{r * c, r * s})
		}
		if rapid.Bool().Draw(rt, "reversed") {
			slices.Reverse(outline)
		}
		depth := rapid.Float64Range(0.01, 5).Draw(rt, "depth")
		m, err := Build(model.Mesh{Kind: model.MeshExtrude, Profile: outline, Depth: depth}, nil)
		if err != nil {
			rt.Fatal(err)
		}
		if top := topologyOf(m); top.fault != "" || top.euler() != 2 {
			rt.Fatalf("Euler characteristic %d, %s", top.euler(), top.fault)
		}
		area, length := shoelace(outline)
		if v, a := volumeOf(m), areaOf(m); !near(v, area*depth, 1e-4) || !near(a, 2*area+length*depth, 1e-4) {
			rt.Fatalf("volume %v, area %v, want %v, %v (shoelace formula)", v, a, area*depth, 2*area+length*depth)
		}
	})
}

// TestClipEars checks on grid polygons, full of collinear points, that the triangles cover the polygon without overlap:
// n - 2 of them, each with an area, summing to the polygon's.
func TestClipEars(t *testing.T) {
	rapid.Check(t, func(rt *rapid.T) {
		// A skyline: columns of whole heights over a common ground, with every corner of the grid on the way.
		var p []point2
		columns := rapid.IntRange(1, 20).Draw(rt, "columns")
		for x := range columns + 1 {
			p = append(p, point2{float64(x), 0})
		}
		before := 0
		for x := columns; x > 0; x-- {
			h := rapid.IntRange(1, 6).Draw(rt, "height")
			step := 1
			if h < before {
				step = -1
			}
			for y := before + step; before != 0 && y != h+step && h != before; y += step {
				p = append(p, point2{float64(x), float64(y)})
			}
			if before == 0 {
				p = append(p, point2{float64(x), float64(h)})
			}
			p = append(p, point2{float64(x - 1), float64(h)})
			before = h
		}
		c := clipper{maxTests: maxClipTests}
		triangles, ok := c.clip(p)
		if !ok || len(triangles) != len(p)-2 {
			rt.Fatalf("%d triangles of a polygon of %d corners, simple: %v", len(triangles), len(p), ok)
		}
		sum := 0.0
		for _, tri := range triangles {
			a := orient(p[tri[0]], p[tri[1]], p[tri[2]])
			if !(a > 0) {
				rt.Fatalf("triangle %v has twice the area %v", tri, a)
			}
			sum += a / 2
		}
		if want := polygonArea(p); math.Abs(sum-want) > 1e-9 {
			rt.Fatalf("the triangles cover %v, the polygon %v", sum, want)
		}
	})
}

// TestClipBadPolygon checks that polygons that cross themselves end too, within the bound on the work, with as many triangles.
func TestClipBadPolygon(t *testing.T) {
	var star, zigzag []point2
	for i := range 501 { // edges that all cross
		s, c := math.Sincos(2 * math.Pi * float64(i*250) / 501)
		star = append(star, point2{c, s})
	}
	star[7], star[300] = star[300], star[7]
	for i := range 20_000 { // every corner reflex or in the way of another
		zigzag = append(zigzag, point2{float64(i * 7919 % 20_000), float64(i * 104729 % 20_011)})
	}
	for _, p := range [][]point2{star, zigzag} {
		for _, most := range []int{1, 10_000, 1_000_000} {
			c := clipper{maxTests: most}
			triangles, _ := c.clip(p)
			if len(triangles) != len(p)-2 {
				t.Errorf("%d triangles of %d corners", len(triangles), len(p))
			}
			if c.tests > most+5*len(p) {
				t.Errorf("%d corners looked at, with a bound of %d", c.tests, most)
			}
		}
	}
}
