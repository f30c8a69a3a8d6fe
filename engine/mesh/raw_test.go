package mesh

import (
	"math"
	"strings"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// cubeTables is a cube of edge 2 about the origin, eight positions.
func cubeTables() *model.RawMesh {
	r := &model.RawMesh{Triangles: [][3]uint32{
		{0, 2, 3}, {0, 3, 1}, {4, 5, 7}, {4, 7, 6}, {0, 1, 5}, {0, 5, 4}, {2, 6, 7}, {2, 7, 3}, {0, 4, 6}, {0, 6, 2}, {1, 3, 7}, {1, 7, 5},
	}}
	for i := range 8 {
		r.Positions = append(r.Positions, [3]float64{float64(i&1)*2 - 1, float64(i>>1&1)*2 - 1, float64(i>>2)*2 - 1})
	}
	return r
}

func TestRaw(t *testing.T) {
	m := built(t, model.Mesh{Kind: model.MeshRaw, Raw: cubeTables()})
	checkClosed(t, m, 2)
	if v := volumeOf(m); v != 8 || m.Normals != nil || m.UVs != nil {
		t.Errorf("volume %v, normals %v, want 8 and no normals", v, m.Normals)
	}
}

// TestRawOctahedron checks the closed form of SHAPE-octa-a1: volume √2/3, area 2√3 for an edge of 1.
func TestRawOctahedron(t *testing.T) {
	r := &model.RawMesh{Triangles: [][3]uint32{{0, 1, 4}, {1, 2, 4}, {2, 3, 4}, {3, 0, 4}, {1, 0, 5}, {2, 1, 5}, {3, 2, 5}, {0, 3, 5}}}
	h := math.Sqrt2 / 2
	r.Positions = [][3]float64{{h, 0, 0}, {0, 0, -h}, {-h, 0, 0}, {0, 0, h}, {0, h, 0}, {0, -h, 0}}
	m := built(t, model.Mesh{Kind: model.MeshRaw, Raw: r})
	checkClosed(t, m, 2)
	if v, a := volumeOf(m), areaOf(m); !near(v, 0.4714045208, 1e-7) || !near(a, 3.464101615, 1e-7) {
		t.Errorf("volume %v, area %v, want 0.4714045208, 3.464101615 (SHAPE-octa-a1)", v, a)
	}
}

// TestSmooth checks the angle: a cube's faces meet at 90 degrees.
func TestSmooth(t *testing.T) {
	for _, c := range []struct {
		deg      float64
		vertices int
	}{{1, 24}, {89, 24}, {90, 24}, {91, 8}, {180, 8}} {
		m := built(t, model.Mesh{Kind: model.MeshRaw, Raw: cubeTables(), Smooth: c.deg})
		checkClosed(t, m, 2)
		if len(m.Positions) != c.vertices {
			t.Errorf("smoothed under %v degrees: %d vertices, want %d", c.deg, len(m.Positions), c.vertices)
		}
		for i, n := range m.Normals {
			want := geom.Vec3{X: m.Positions[i].X, Y: m.Positions[i].Y, Z: m.Positions[i].Z}.Unit() // by symmetry, weights by angle
			if c.vertices == 24 {
				want = geom.Vec3{}
				for _, tri := range m.Triangles {
					if tri[0] == uint32(i) || tri[1] == uint32(i) || tri[2] == uint32(i) {
						a, b, d := corner3(m, tri)
						want = b.Sub(a).Cross(d.Sub(a)).Unit().Narrow()
					}
				}
			}
			if d := n.Sub(want).Len(); d > 1e-4 {
				t.Errorf("under %v degrees: normal %v at %v, want %v", c.deg, n, m.Positions[i], want)
			}
		}
	}
}

// TestSmoothAcrossSeam checks that vertices in one place are smoothed as one, and texture coordinates kept.
func TestSmoothAcrossSeam(t *testing.T) {
	sphere := built(t, model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 48})
	want := sphere.Normals
	m := *sphere
	m.Triangles = append([][3]uint32(nil), sphere.Triangles...)
	smooth(&m, smoothing{deg: 30})
	checkShape(t, &m)
	if len(m.UVs) != len(m.Positions) || len(m.Positions) != len(sphere.Positions) {
		t.Fatalf("%d positions and %d uvs, want %d", len(m.Positions), len(m.UVs), len(sphere.Positions))
	}
	for i, tri := range m.Triangles {
		for k, v := range tri {
			if d := m.Normals[v].Sub(want[sphere.Triangles[i][k]]).Len(); d > 0.01 {
				t.Fatalf("normal %v, want the sphere's %v", m.Normals[v], want[sphere.Triangles[i][k]])
			}
		}
	}
}

// TestCornerAngle compares with the standard library.
func TestCornerAngle(t *testing.T) {
	for deg := 1.0; deg < 180; deg++ {
		s, c := math.Sincos(deg * math.Pi / 180)
		m := &Mesh{Positions: []geom.Vec3{{}, {X: 2}, {X: float32(c), Y: float32(s)}}, Triangles: [][3]uint32{{0, 1, 2}}}
		if got, want := cornerAngle(m, 0, 0), deg*math.Pi/180; math.Abs(got-want) > 8e-5 {
			t.Errorf("%v degrees: %v, want %v (source: Abramowitz & Stegun 1964, eq. 4.4.45, error below 7e-5)", deg, got, want)
		}
	}
}

func TestRawErrors(t *testing.T) {
	for _, c := range []struct {
		change func(*model.RawMesh)
		want   string
	}{
		{func(r *model.RawMesh) { r.Positions = nil }, "positions is empty"},
		{func(r *model.RawMesh) { r.Triangles = nil }, "triangles is empty"},
		{func(r *model.RawMesh) { r.Triangles[3][1] = 8 }, "triangle 4: index 8 is not among the 8 positions (0 to 7 are accepted)"},
		{func(r *model.RawMesh) { r.Triangles = [][3]uint32{{1, 1, 2}} }, "none is left"},
		{func(r *model.RawMesh) { r.Positions[2][0] = math.NaN() }, "position 3: coordinates must be within ±1e+09 metres, got NaN"},
		{func(r *model.RawMesh) { r.Positions[2][1] = 1e300 }, "got -1, 1e+300, -1"},
		{func(r *model.RawMesh) { r.Normals = make([][3]float64, 7) }, "normals must be one a position (8) or none, got 7"},
		{func(r *model.RawMesh) { r.Normals = make([][3]float64, 8) }, "normal 1: components must be finite and not all 0"},
		{func(r *model.RawMesh) { r.UVs = make([][2]float64, 9) }, "uvs must be one a position (8) or none, got 9"},
		{func(r *model.RawMesh) { r.UVs = make([][2]float64, 8); r.UVs[1][1] = math.Inf(-1) }, "uv 2: both must be finite"},
	} {
		r := cubeTables()
		c.change(r)
		if _, err := Build(model.Mesh{Kind: model.MeshRaw, Raw: r}, nil); err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want an error that says %q", err, c.want)
		}
	}
	if _, err := Build(model.Mesh{Kind: model.MeshRaw, Raw: cubeTables(), Smooth: -1}, nil); err == nil || !strings.Contains(err.Error(), "smooth must be 0 to 180 degrees, got -1") {
		t.Errorf("got %v, want a refusal of the angle", err)
	}
}

// TestRawKeepsTables checks that given normals, made unit, and texture coordinates come through.
func TestRawKeepsTables(t *testing.T) {
	r := cubeTables()
	r.Triangles = append(r.Triangles, [3]uint32{0, 0, 1})
	for _, p := range r.Positions {
		r.Normals = append(r.Normals, [3]float64{p[0] * 1e200, p[1] * 1e200, p[2] * 1e200})
		r.UVs = append(r.UVs, [2]float64{p[0], p[1]})
	}
	m := built(t, model.Mesh{Kind: model.MeshRaw, Raw: r, Smooth: 30})
	if len(m.Triangles) != 12 || len(m.Positions) != 8 {
		t.Errorf("%d triangles, %d positions, want 12 and 8", len(m.Triangles), len(m.Positions))
	}
	for i, n := range m.Normals {
		if d := n.Sub(m.Positions[i].Unit()).Len(); d > 1e-6 || m.UVs[i][0] != m.Positions[i].X {
			t.Errorf("vertex %d: normal %v, uv %v at %v", i, n, m.UVs[i], m.Positions[i])
		}
	}
}

// TestLibrary checks that each distinct mesh is built once, and mistakes are remembered.
func TestLibrary(t *testing.T) {
	reads := 0
	l := NewLibrary(func(string) ([]byte, error) {
		reads++
		return []byte("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 3\n"), nil
	})
	get := func(m model.Mesh) *Mesh {
		out, err := l.Get(m)
		if err != nil {
			t.Fatal(err)
		}
		return out
	}
	sphere := model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 8}
	other := sphere
	other.Size[0] = 2
	if first := get(sphere); get(sphere) != first || get(other) == first {
		t.Error("equal descriptions must give one mesh, different ones two")
	}
	a, b, c := cubeTables(), cubeTables(), cubeTables()
	c.Positions[0][0] = -2
	if get(model.Mesh{Kind: model.MeshRaw, Raw: a}) != get(model.Mesh{Kind: model.MeshRaw, Raw: b}) ||
		get(model.Mesh{Kind: model.MeshRaw, Raw: a}) == get(model.Mesh{Kind: model.MeshRaw, Raw: c}) {
		t.Error("tables count by their content")
	}
	file := model.Mesh{Kind: model.MeshFile, File: "a.obj", Unit: 1}
	get(file)
	get(file)
	if reads != 1 {
		t.Errorf("the file was read %d times", reads)
	}
	file.File = "a.txt"
	_, first := l.Get(file)
	_, second := l.Get(file)
	if first == nil || first != second {
		t.Errorf("got %v, then %v, want the same error", first, second)
	}
	a.Positions[0][0] = math.NaN()
	if _, err := l.Get(model.Mesh{Kind: model.MeshRaw, Raw: &model.RawMesh{Positions: a.Positions, Triangles: a.Triangles}}); err == nil || !strings.Contains(err.Error(), "NaN") {
		t.Errorf("got %v, want the error of Build", err)
	}
}
