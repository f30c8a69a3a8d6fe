package mesh

import (
	"bytes"
	"fmt"
	"math"
	"path/filepath"
	"strings"
	"testing"

	"lampbook/engine/model"
)

// samples is where the project's own mesh files are.
var samples = filepath.Join("..", "..", "testdata", "meshes")

func TestFacetedVase(t *testing.T) {
	m, err := Build(model.Mesh{Kind: model.MeshFile, File: "faceted_vase.obj", Unit: 1}, osReader(samples))
	if err != nil {
		t.Fatal(err)
	}
	checkShape(t, m)
	checkClosed(t, m, 2)
	if m.Normals != nil {
		t.Error("it has normals, want flat facets")
	}
	if got := fmt.Sprintf("%q", m.SlotNames); got != `["raw clay" "celadon" "white slip"]` || len(m.Materials) != 3 {
		t.Fatalf("slots %s with %d materials", got, len(m.Materials))
	}
	if c := m.Materials[1]; c.Diffuse.G != 0.42 || c.Specular.R != 0.25 || c.Shininess != 90 || c.Opacity != 1 {
		t.Errorf("celadon is %+v", c)
	}
	if b := m.Bounds(); b.Min.Y != 0 || b.Max.Y != 0.21 {
		t.Errorf("it reaches from %v to %v, want 0 to 0.21", b.Min.Y, b.Max.Y)
	}
}

func TestTeaBowl(t *testing.T) {
	m, err := Build(model.Mesh{Kind: model.MeshFile, File: "tea_bowl.obj", Unit: 0.001, ZUp: true}, osReader(samples))
	if err != nil {
		t.Fatal(err)
	}
	checkShape(t, m)
	checkClosed(t, m, 2)
	checkNormalsFaceOut(t, m, 60) // its rim is rounded by three rings only
	if b := m.Bounds(); b.Min.Y != 0 || math.Abs(float64(b.Max.Y)-0.07) > 1e-8 || m.UVs == nil || m.Slots != nil {
		t.Errorf("it spans %v, with slots %v", b, m.Slots)
	}
}

// FuzzOBJ reads anything: no panic, no hang, a mesh of sound tables or an error with the file's name.
func FuzzOBJ(f *testing.F) {
	for _, seed := range []string{
		"", square + "f 1 2 3 4", square + "f 1/1/1 2/2/1 3/3/1\ns 1\nf 1 2 3\ns off\nf -1//-1 -2//-1 -3//-1", roof + "s 2\nf 4 3 2 1\nf 3 6 5 2",
		"mtllib a.mtl\nusemtl x\n" + square + "f 1 2 3 4", "v 0 0 0\\\nv\rf 1 1 1", "f 9 9 9\nv 1e9 -1e-9 .5", "\xef\xbb\xbf# x\n", "f 1 2 3 4 5\n" + square + "v 0.2 0.4 0",
		"mtllib a b.mtl c.mtl", "v 0 0 0\nv 4 0 0\nv 4 4 0\nv 2 1 0\nv 0 4 0\nv 2 1 0\nf 1 2 3 4 5 6 2 1 4",
	} {
		f.Add([]byte(seed), 30.0)
	}
	f.Fuzz(func(t *testing.T, data []byte, deg float64) {
		read := func(path string) ([]byte, error) {
			if path == "a.mtl" {
				return []byte("newmtl x\nKd 1 0 0"), nil
			}
			return data, nil
		}
		m, err := Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1, Smooth: math.Mod(math.Abs(deg), 180)}, read)
		if math.IsNaN(deg) || math.IsInf(deg, 0) {
			if err == nil {
				t.Fatalf("an angle of %v was accepted", deg)
			}
			return
		}
		hash, hashErr := HashFile("pot.obj", read)
		if err != nil {
			if !strings.HasPrefix(err.Error(), "pot.obj:") && !strings.Contains(err.Error(), ".mtl:") && !bytes.Contains(data, []byte("mtllib")) {
				t.Fatalf("the error does not name the file: %v", err)
			}
			return
		}
		if hashErr != nil || hash == "" {
			t.Fatalf("it builds but has no hash: %v", hashErr)
		}
		checkShape(t, m)
		again, err := Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1, Smooth: math.Mod(math.Abs(deg), 180), FileHash: hash}, read)
		if err != nil || fmt.Sprint(again) != fmt.Sprint(m) {
			t.Fatalf("a second reading gives another mesh, or %v", err)
		}
	})
}

// FuzzMTL reads anything: no panic, materials that are valid, or an error with the file's name.
func FuzzMTL(f *testing.F) {
	for _, seed := range []string{
		"", "newmtl a\nKd 0.5 .5 5e-1\nKs 1\nKa 0 0 0\nKe 9 9 9\nNs 10\nd .5\nTr 0.5", "newmtl\n", "Kd 1", "newmtl a\nd -halo 0.5\nTr 0.2\nnewmtl a\nTr .25\\\n",
		"newmtl a # b\nillum 2\nmap_Kd -s 1 1 1 x.png\nNs 1e5",
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, data []byte) {
		into := map[string]model.Material{}
		if err := readMTL("a.mtl", data, into); err != nil {
			if !strings.HasPrefix(err.Error(), "a.mtl:") {
				t.Fatalf("the error does not name the file: %v", err)
			}
			return
		}
		for name, m := range into {
			if err := (&model.Plan{Materials: []model.Material{m}}).Validate(); err != nil {
				t.Fatalf("material %q is accepted, but %v", name, err)
			}
		}
	})
}

// gridOBJ is a sheet of n × n quads, written in one of the usual ways.
func gridOBJ(n int, form string) []byte {
	var b bytes.Buffer
	for y := range n + 1 {
		for x := range n + 1 {
			s, c := math.Sincos(float64(x*7+y*3) / 50)
			fmt.Fprintf(&b, "v %.6f %.6f %.6f\n", float64(x)/float64(n), 0.05*s*c, float64(y)/float64(n))
			if form == "full" {
				fmt.Fprintf(&b, "vt %.6f %.6f\nvn %.4f %.4f %.4f\n", float64(x)/float64(n), float64(y)/float64(n), 0.1*s, 1.0, 0.1*c)
			}
		}
	}
	for y := range n {
		for x := range n {
			i := y*(n+1) + x + 1
			j := i + n + 1
			if form == "full" {
				fmt.Fprintf(&b, "f %d/%d/%d %d/%d/%d %d/%d/%d\nf %d/%d/%d %d/%d/%d %d/%d/%d\n", i, i, i, j, j, j, j+1, j+1, j+1, i, i, i, j+1, j+1, j+1, i+1, i+1, i+1)
			} else {
				fmt.Fprintf(&b, "f %d %d %d %d\n", i, j, j+1, i+1)
			}
		}
	}
	return b.Bytes()
}

// BenchmarkReadOBJ reads sheets: "full" has triangles of positions, texture coordinates and normals, "quads" bare quads, "smoothed" the
// same with normals to be made.
func BenchmarkReadOBJ(b *testing.B) {
	for _, c := range []struct {
		name, form string
		n          int
		smooth     float64
	}{{"full/n=100", "full", 100, 0}, {"full/n=700", "full", 700, 0}, {"quads/n=700", "quads", 700, 0}, {"smoothed/n=700", "quads", 700, 30}} {
		b.Run(c.name, func(b *testing.B) {
			data := gridOBJ(c.n, c.form)
			read := func(string) ([]byte, error) { return data, nil }
			b.SetBytes(int64(len(data)))
			b.ReportAllocs()
			for b.Loop() {
				m, err := Build(model.Mesh{Kind: model.MeshFile, File: "sheet.obj", Unit: 1, Smooth: c.smooth}, read)
				if err != nil || len(m.Triangles) != 2*c.n*c.n {
					b.Fatal(len(m.Triangles), err)
				}
			}
		})
	}
}

// BenchmarkBuild makes forms.
func BenchmarkBuild(b *testing.B) {
	for _, c := range []struct {
		name string
		mesh model.Mesh
	}{
		{"form/segments=96", model.Mesh{Kind: model.MeshTestForm}},
		{"sphere/segments=1024", model.Mesh{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 1024}},
		{"comb/points=2000", model.Mesh{Kind: model.MeshExtrude, Profile: comb(500), Depth: 1}},
		{"spiral/points=10000", model.Mesh{Kind: model.MeshExtrude, Profile: spiral(5000), Depth: 1}},
	} {
		b.Run(c.name, func(b *testing.B) {
			for b.Loop() {
				m, err := Build(c.mesh, nil)
				if err != nil {
					b.Fatal(err)
				}
				b.ReportMetric(float64(len(m.Triangles)), "triangles")
			}
		})
	}
}
