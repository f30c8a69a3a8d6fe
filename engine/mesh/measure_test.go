package mesh

import (
	"fmt"
	"math"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// built builds or ends the test.
func built(t testing.TB, m model.Mesh) *Mesh {
	t.Helper()
	out, err := Build(m, nil)
	if err != nil {
		t.Fatal(err)
	}
	checkShape(t, out)
	return out
}

// checkShape checks what must hold of every mesh: tables of one length, indices in range, unit normals, finite numbers.
func checkShape(t testing.TB, m *Mesh) {
	t.Helper()
	if len(m.Triangles) == 0 || len(m.SlotNames) == 0 {
		t.Fatalf("%d triangles, %d slots: both must be at least 1", len(m.Triangles), len(m.SlotNames))
	}
	if m.Normals != nil && len(m.Normals) != len(m.Positions) || m.UVs != nil && len(m.UVs) != len(m.Positions) {
		t.Fatalf("%d positions, %d normals, %d uvs", len(m.Positions), len(m.Normals), len(m.UVs))
	}
	if m.Slots != nil && len(m.Slots) != len(m.Triangles) || m.Materials != nil && len(m.Materials) != len(m.SlotNames) {
		t.Fatalf("%d triangles, %d slot numbers; %d slots, %d materials", len(m.Triangles), len(m.Slots), len(m.SlotNames), len(m.Materials))
	}
	for _, tri := range m.Triangles {
		for _, v := range tri {
			if int(v) >= len(m.Positions) {
				t.Fatalf("index %d of %d positions", v, len(m.Positions))
			}
		}
	}
	for i, s := range m.Slots {
		if int(s) >= len(m.SlotNames) {
			t.Fatalf("triangle %d has slot %d of %d", i, s, len(m.SlotNames))
		}
	}
	for i, p := range m.Positions {
		if !p.Finite() {
			t.Fatalf("position %d is %v", i, p)
		}
	}
	for i, n := range m.Normals {
		if l := n.Len(); !(math.Abs(float64(l)-1) < 1e-6) {
			t.Fatalf("normal %d is %v, of length %v", i, n, l)
		}
	}
}

// corner3 gives the corners of a triangle in float64.
func corner3(m *Mesh, tri [3]uint32) (a, b, c geom.Vec3d) {
	return m.Positions[tri[0]].Wide(), m.Positions[tri[1]].Wide(), m.Positions[tri[2]].Wide()
}

// volumeOf is the volume inside a closed mesh, by the divergence theorem: a sixth of the sum of a·(b×c).
func volumeOf(m *Mesh) float64 {
	sum := 0.0
	for _, tri := range m.Triangles {
		a, b, c := corner3(m, tri)
		sum += a.Dot(b.Cross(c))
	}
	return sum / 6
}

func areaOf(m *Mesh) float64 {
	sum := 0.0
	for _, tri := range m.Triangles {
		a, b, c := corner3(m, tri)
		n := b.Sub(a).Cross(c.Sub(a))
		sum += math.Sqrt(n.Dot(n))
	}
	return sum / 2
}

// topology is what the triangles make when equal positions count as one.
type topology struct {
	vertices, edges, faces int
	fault                  string // what keeps it from being closed, manifold along its edges and turned one way
}

// euler is the Euler characteristic: 2 for a ball, 0 for a ring.
func (t topology) euler() int { return t.vertices - t.edges + t.faces }

func topologyOf(m *Mesh) topology {
	index := map[geom.Vec3]int{}
	at := func(v uint32) int {
		p := m.Positions[v]
		p = geom.Vec3{X: p.X + 0, Y: p.Y + 0, Z: p.Z + 0}
		if _, ok := index[p]; !ok {
			index[p] = len(index)
		}
		return index[p]
	}
	directed := map[[2]int]int{}
	out := topology{faces: len(m.Triangles)}
	for i, tri := range m.Triangles {
		c := [3]int{at(tri[0]), at(tri[1]), at(tri[2])}
		if c[0] == c[1] || c[1] == c[2] || c[2] == c[0] {
			out.fault = fmt.Sprintf("triangle %d has two corners in one place", i)
		}
		for k := range 3 {
			directed[[2]int{c[k], c[(k+1)%3]}]++
		}
	}
	for e, n := range directed {
		back := directed[[2]int{e[1], e[0]}]
		if n != 1 || back != 1 {
			out.fault = fmt.Sprintf("edge %v: %d triangles run along it one way, %d the other", e, n, back)
		}
		if e[0] < e[1] || back == 0 {
			out.edges++
		}
	}
	out.vertices = len(index)
	return out
}

// checkClosed checks that the mesh bounds a solid of the given Euler characteristic, seen from outside.
func checkClosed(t testing.TB, m *Mesh, euler int) {
	t.Helper()
	top := topologyOf(m)
	if top.fault != "" {
		t.Fatal(top.fault)
	}
	if top.euler() != euler {
		t.Fatalf("Euler characteristic %d - %d + %d = %d, want %d", top.vertices, top.edges, top.faces, top.euler(), euler)
	}
	if v := volumeOf(m); !(v > 0) {
		t.Fatalf("volume %v: the triangles face inward", v)
	}
}

// checkNormalsFaceOut checks that every vertex normal is within deg of the normal of each of its triangles.
func checkNormalsFaceOut(t testing.TB, m *Mesh, deg float64) {
	t.Helper()
	limit := math.Cos(deg * math.Pi / 180)
	for i, tri := range m.Triangles {
		a, b, c := corner3(m, tri)
		face := b.Sub(a).Cross(c.Sub(a)).Unit()
		for _, v := range tri {
			if d := face.Dot(m.Normals[v].Wide()); !(d >= limit) {
				t.Fatalf("triangle %d: normal %v of vertex %d is %.2f degrees from its face's %v, at most %v are wanted",
					i, m.Normals[v], v, math.Acos(d)*180/math.Pi, face, deg)
			}
		}
	}
}

// near reports whether got is within rel of want, relatively.
func near(got, want, rel float64) bool { return math.Abs(got-want) <= rel*math.Abs(want) }
