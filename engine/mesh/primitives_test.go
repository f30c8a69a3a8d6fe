package mesh

import (
	"math"
	"strings"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// TestTessellation checks the sphere against the exact figures of inscribed UV spheres.
func TestTessellation(t *testing.T) {
	for _, c := range []struct {
		segments, triangles, vertices int
		volume, area                  float64
		source                        string
	}{
		{32, 960, 482, 4.121941740785847, 12.465694088650581, "TESS-UVSPHERE-32-16: sums of frusta, confirmed by an independent mesh"},
		{64, 3968, 1986, 4.1719957618693275, 12.5411536400341, "TESS-UVSPHERE-64-32: sums of frusta, confirmed by an independent mesh"},
	} {
		m := built(t, model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: c.segments})
		checkClosed(t, m, 2)
		top := topologyOf(m)
		if top.faces != c.triangles || top.vertices != c.vertices {
			t.Errorf("%d triangles on %d vertices, want %d on %d (%s)", top.faces, top.vertices, c.triangles, c.vertices, c.source)
		}
		if v, a := volumeOf(m), areaOf(m); !near(v, c.volume, 1e-6) || !near(a, c.area, 1e-6) {
			t.Errorf("volume %v, area %v, want %v, %v (%s)", v, a, c.volume, c.area, c.source)
		}
	}
}

// TestShapes checks volumes and areas against closed forms. An inscribed form of n segments falls short of the round one by
// a share of about k/n², so the error must be small and fall to a quarter when n doubles.
func TestShapes(t *testing.T) {
	for _, c := range []struct {
		name         string
		mesh         model.Mesh
		volume, area float64
		euler        int
		source       string
	}{
		{"sphere", model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}}, 4 * math.Pi / 3, 4 * math.Pi, 2, "Archimedes"},
		{"torus", model.Mesh{Kind: model.MeshTorus, Size: [3]float64{2, 0.5}}, 9.869604401089358, 39.47841760435743, 0, "SHAPE-torus-2-0.5: Pappus"},
		{"cone", model.Mesh{Kind: model.MeshCone, Size: [3]float64{1, 0, 2}}, 2.0943951023931957, 10.166407384630519, 2, "SHAPE-cone-r1-h2: elementary solid geometry"},
		{"cone upside down", model.Mesh{Kind: model.MeshCone, Size: [3]float64{0, 1, 2}}, 2.0943951023931957, 10.166407384630519, 2, "SHAPE-cone-r1-h2, mirrored"},
		{"frustum", model.Mesh{Kind: model.MeshCone, Size: [3]float64{2, 1, 1}}, math.Pi * 7 / 3, math.Pi * (5 + 3*math.Sqrt2), 2, "closed form πh/3(R²+Rr+r²), π(R²+r²+(R+r)s)"},
		{"cylinder", model.Mesh{Kind: model.MeshCylinder, Size: [3]float64{1, 3}}, 3 * math.Pi, 8 * math.Pi, 2, "closed form πr²h, 2πr(r+h)"},
	} {
		t.Run(c.name, func(t *testing.T) {
			var errorOf [2][2]float64
			for i, n := range [2]int{96, 192} {
				c.mesh.Segments = n
				m := built(t, c.mesh)
				checkClosed(t, m, c.euler)
				errorOf[i] = [2]float64{1 - volumeOf(m)/c.volume, 1 - areaOf(m)/c.area}
			}
			for k, what := range [2]string{"volume", "area"} {
				e96, e192 := errorOf[0][k], errorOf[1][k]
				if ratio := e96 / e192; !(e96 > 0 && e96 < 4e-3 && ratio > 3.9 && ratio < 4.1) {
					t.Errorf("%s falls short by %.3g at 96 segments and %.3g at 192: want a small share and a ratio of 4 (%s)", what, e96, e192, c.source)
				}
			}
		})
	}
}

// TestFewSegments checks that the coarsest forms are closed too.
func TestFewSegments(t *testing.T) {
	for _, n := range []int{3, 4, 5, 7} {
		for _, m := range []model.Mesh{
			{Kind: model.MeshSphere, Size: [3]float64{1}}, {Kind: model.MeshCylinder, Size: [3]float64{1, 1}}, {Kind: model.MeshTestForm},
			{Kind: model.MeshCone, Size: [3]float64{1, 0, 1}}, {Kind: model.MeshLathe, Profile: bowl, Crease: 30}, {Kind: model.MeshTorus, Size: [3]float64{2, 1}},
		} {
			m.Segments = n
			euler := 2
			if m.Kind == model.MeshTorus {
				euler = 0
			}
			checkClosed(t, built(t, m), euler)
		}
	}
}

// TestFlatShapes checks the forms that are exact.
func TestFlatShapes(t *testing.T) {
	box := built(t, model.Mesh{Kind: model.MeshBox, Size: [3]float64{1, 2, 3}})
	checkClosed(t, box, 2)
	if v, a := volumeOf(box), areaOf(box); v != 6 || a != 22 {
		t.Errorf("box 1 × 2 × 3: volume %v, area %v, want 6, 22", v, a)
	}
	if got, want := box.Bounds(), (geom.Box{Min: geom.Vec3{X: -0.5, Y: -1, Z: -1.5}, Max: geom.Vec3{X: 0.5, Y: 1, Z: 1.5}}); got != want {
		t.Errorf("box spans %v, want %v", got, want)
	}
	plane := built(t, model.Mesh{Kind: model.MeshPlane, Size: [3]float64{2, 0, 3}})
	disk := built(t, model.Mesh{Kind: model.MeshDisk, Size: [3]float64{1}, Segments: 96})
	// The area of the inscribed regular polygon, n/2·sin(2π/n).
	if a, d, want := areaOf(plane), areaOf(disk), 48*math.Sin(math.Pi/48); a != 6 || !near(d, want, 1e-6) {
		t.Errorf("plane 2 × 3 and unit disk: area %v, %v, want 6, %v", a, d, want)
	}
	for name, m := range map[string]*Mesh{"plane": plane, "disk": disk} {
		for i, tri := range m.Triangles {
			a, b, c := corner3(m, tri)
			if n := b.Sub(a).Cross(c.Sub(a)).Unit(); n != (geom.Vec3d{Y: 1}) {
				t.Errorf("%s: triangle %d faces %v, want straight up", name, i, n)
			}
		}
	}
}

// TestNormals checks that vertex normals are those of the true surface where that is known, and that caps are sharp.
func TestNormals(t *testing.T) {
	const radius, tube = 2, 0.5
	for _, c := range []struct {
		name   string
		mesh   model.Mesh
		normal func(p geom.Vec3d) geom.Vec3d
	}{
		{"sphere", model.Mesh{Kind: model.MeshSphere, Size: [3]float64{radius}}, geom.Vec3d.Unit},
		{"torus", model.Mesh{Kind: model.MeshTorus, Size: [3]float64{radius, tube}}, func(p geom.Vec3d) geom.Vec3d {
			ring := geom.Vec3d{X: p.X, Z: p.Z}.Unit().Scale(radius)
			return p.Sub(ring).Unit()
		}},
	} {
		m := built(t, c.mesh)
		for i, p := range m.Positions {
			if p.X == 0 && p.Z == 0 { // the tips of a fan have the normal of the pole all the same
				continue
			}
			if d := m.Normals[i].Wide().Sub(c.normal(p.Wide())).Len(); d > 1e-6 {
				t.Fatalf("%s: normal %v at %v, want %v", c.name, m.Normals[i], p, c.normal(p.Wide()))
			}
		}
		checkNormalsFaceOut(t, m, 2*360.0/DefaultSegments) // the torus' tube has half as many
	}
	for name, size := range map[string][3]float64{"cylinder": {1, 1, 2}, "cone": {1, 0, 2}, "frustum": {1, 3, 2}} {
		m := built(t, model.Mesh{Kind: model.MeshCone, Size: size})
		t.Run(name, func(t *testing.T) { checkNormalsFaceOut(t, m, 180.0/DefaultSegments+0.01) })
	}
}

// TestTextureCoordinates checks that textures are not mirrored: u × v turns with the triangle.
func TestTextureCoordinates(t *testing.T) {
	outline := [][2]float64{{0, 0}, {2, 0}, {2, 1}, {1, 0.5}, {0, 1}}
	for name, mesh := range map[string]model.Mesh{
		"plane":    {Kind: model.MeshPlane, Size: [3]float64{1, 0, 1}},
		"box":      {Kind: model.MeshBox, Size: [3]float64{1, 1, 1}},
		"sphere":   {Kind: model.MeshSphere, Size: [3]float64{1}},
		"cylinder": {Kind: model.MeshCylinder, Size: [3]float64{1, 1}},
		"torus":    {Kind: model.MeshTorus, Size: [3]float64{2, 1}},
		"lathe":    {Kind: model.MeshLathe, Profile: bowl, Crease: 30},
		"extrude":  {Kind: model.MeshExtrude, Profile: outline, Depth: 1},
		"form":     {Kind: model.MeshTestForm},
	} {
		m := built(t, mesh)
		for i, tri := range m.Triangles {
			a, b, c := m.UVs[tri[0]], m.UVs[tri[1]], m.UVs[tri[2]]
			if turn := (b[0]-a[0])*(c[1]-a[1]) - (b[1]-a[1])*(c[0]-a[0]); !(turn > 0) {
				t.Fatalf("%s: triangle %d has texture coordinates %v, %v, %v, which do not turn counter-clockwise", name, i, a, b, c)
			}
			for _, uv := range [][2]float32{a, b, c} {
				if !(uv[0] >= 0 && uv[0] <= 1 && uv[1] >= 0 && uv[1] <= 1) {
					t.Fatalf("%s: triangle %d: %v is outside [0, 1]", name, i, uv)
				}
			}
		}
	}
}

// TestCircle compares with the standard library and checks the symmetries that are promised.
func TestCircle(t *testing.T) {
	for _, n := range []int{3, 4, 5, 7, 12, 96, 97, 1000, MaxSegments} {
		cos, sin := circle(n)
		for i := range n {
			s, c := math.Sincos(2 * math.Pi * float64(i) / float64(n))
			// The angle that the library is given is itself rounded, to 4e-16 near 2π.
			if math.Abs(cos[i]-c) > 1e-15 || math.Abs(sin[i]-s) > 1e-15 {
				t.Fatalf("%d of %d: %v, %v, want %v, %v (source: package math)", i, n, cos[i], sin[i], c, s)
			}
			if i > 0 && (cos[i] != cos[n-i] || sin[i] != -sin[n-i]) {
				t.Fatalf("%d of %d: %v, %v is not the mirror image of %v, %v", i, n, cos[i], sin[i], cos[n-i], sin[n-i])
			}
		}
		if n%4 == 0 && (cos[n/4] != 0 || sin[n/4] != 1 || cos[n/2] != -1 || sin[n/2] != 0) {
			t.Fatalf("quarter turns of %d are not exact", n)
		}
	}
	for deg := 0.0; deg < 360; deg += 0.37 {
		s, c := math.Sincos(deg * math.Pi / 180)
		if gc, gs := cosSinDeg(deg); math.Abs(gc-c) > 2e-15 || math.Abs(gs-s) > 2e-15 {
			t.Fatalf("%v degrees: %v, %v, want %v, %v (source: package math)", deg, gc, gs, c, s)
		}
	}
}

// TestBadParameters checks that errors say what was given and what is accepted.
func TestBadParameters(t *testing.T) {
	nan, inf := math.NaN(), math.Inf(1)
	square := [][2]float64{{0, 0}, {1, 0}, {1, 1}, {0, 1}}
	for _, c := range []struct {
		mesh model.Mesh
		want []string
	}{
		{model.Mesh{Kind: 99}, []string{"99", "not known"}},
		{model.Mesh{Kind: model.MeshPlane, Size: [3]float64{1, 0, 0}}, []string{"plane: depth must be > 0", "got 0"}},
		{model.Mesh{Kind: model.MeshBox, Size: [3]float64{1, -2, 1}}, []string{"box: height must be > 0", "got -2"}},
		{model.Mesh{Kind: model.MeshSphere, Size: [3]float64{nan}}, []string{"sphere: radius", "got NaN"}},
		{model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 2}, []string{"sphere: segments must be 3 to 4096, got 2"}},
		{model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 4097}, []string{"got 4097"}},
		{model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: -1}, []string{"got -1"}},
		{model.Mesh{Kind: model.MeshCylinder, Size: [3]float64{1, inf}}, []string{"cylinder: height", "got +Inf"}},
		{model.Mesh{Kind: model.MeshCone, Size: [3]float64{0, 0, 1}}, []string{"cone: radius and top are both 0"}},
		{model.Mesh{Kind: model.MeshCone, Size: [3]float64{1, -1, 1}}, []string{"cone: top", "got -1"}},
		{model.Mesh{Kind: model.MeshDisk}, []string{"disk: radius", "got 0"}},
		{model.Mesh{Kind: model.MeshTorus, Size: [3]float64{1, 1}}, []string{"torus: tube must be less than radius 1, got 1"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{1, 0}}}, []string{"lathe: profile must have at least 2 points, got 1"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{1, 0}, {-1, 1}}}, []string{"profile point 2: radius must be at least 0, got -1"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{0, 0}, {0, 1}, {0, 2}}}, []string{"points 1 to 3 are all on the axis"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{1, 0}, {1, 0}}}, []string{"points 1 to 2 are all the same"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{1, 0}, {1, nan}}}, []string{"profile point 2", "NaN"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: square, Crease: 181}, []string{"crease must be 0 to 180 degrees, got 181"}},
		{model.Mesh{Kind: model.MeshLathe, Profile: make([][2]float64, MaxProfile+1)}, []string{"at most 100000 points, got 100001"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: square}, []string{"extrude: depth", "got 0"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: square[:2], Depth: 1}, []string{"at least 3 different points, got 2"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: [][2]float64{{0, 0}, {1, 1}, {1, 0}, {0, 1}}, Depth: 1}, []string{"outline edges 1 and 3 meet"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: [][2]float64{{0, 0}, {2, 0}, {1, 0}}, Depth: 1}, []string{"outline edges 1 and 2 meet"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: [][2]float64{{0, 0}, {1, inf}, {1, 0}}, Depth: 1}, []string{"outline point 2", "+Inf"}},
		{model.Mesh{Kind: model.MeshExtrude, Profile: make([][2]float64, MaxOutline+1), Depth: 1}, []string{"at most 10000 points, got 10001"}},
		{model.Mesh{Kind: model.MeshRaw}, []string{"raw: no tables"}},
		{model.Mesh{Kind: model.MeshFile, File: "a.obj", Unit: 1}, []string{"no reader"}},
	} {
		m, err := Build(c.mesh, nil)
		if err == nil {
			t.Errorf("kind %d of size %v: built %d triangles, want an error", c.mesh.Kind, c.mesh.Size, len(m.Triangles))
			continue
		}
		for _, w := range c.want {
			if !strings.Contains(err.Error(), w) {
				t.Errorf("error %q does not say %q", err, w)
			}
		}
	}
}

// TestManySegments checks that the bound on triangles holds before any is made.
func TestManySegments(t *testing.T) {
	profile := make([][2]float64, 10_000)
	for i := range profile {
		profile[i] = [2]float64{1, float64(i)}
	}
	_, err := Build(model.Mesh{Kind: model.MeshLathe, Profile: profile, Segments: MaxSegments}, nil)
	if err == nil || !strings.Contains(err.Error(), "at most 50000000 are accepted") {
		t.Errorf("got %v, want a refusal that states the limit", err)
	}
}
