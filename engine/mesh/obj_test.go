package mesh

import (
	"errors"
	"fmt"
	"io/fs"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// files is a reader of what it holds.
type files map[string]string

func (f files) read(path string) ([]byte, error) {
	if text, ok := f[path]; ok {
		return []byte(text), nil
	}
	return nil, fmt.Errorf("%s: %w", path, fs.ErrNotExist)
}

// objText reads OBJ text with the given smoothing angle.
func objText(text string, smooth float64) (*Mesh, error) {
	return Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1, Smooth: smooth}, files{"pot.obj": text}.read)
}

func mustRead(t testing.TB, text string, smooth float64) *Mesh {
	t.Helper()
	m, err := objText(text, smooth)
	if err != nil {
		t.Fatal(err)
	}
	checkShape(t, m)
	return m
}

const square = "v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\nvt 0 0\nvt 1 0\nvt 1 1\nvt 0 1\nvn 0 0 2\n"

// TestOBJForms reads one square in every form that the format has for it.
func TestOBJForms(t *testing.T) {
	for _, c := range []struct {
		name, text   string
		uvs, normals bool
	}{
		{"v", square + "f 1 2 3 4", false, false},
		{"v/vt", square + "f 1/1 2/2 3/3 4/4", true, false},
		{"v//vn", square + "f 1//1 2//1 3//1 4//1", false, true},
		{"v/vt/vn", square + "f 1/1/1 2/2/1 3/3/1 4/4/1", true, true},
		{"empty ends", square + "f 1/1/ 2/2/ 3/3/ 4/4/", true, false},
		{"emptier ends", square + "f 1// 2// 3// 4//", false, false},
		{"from the end", square + "f -4/-4/-1 -3/-3/-1 -2/-2/-1 -1/-1/-1", true, true},
		{"triangles", square + "f 1 2 3\nf 1 3 4", false, false},
		{"old keyword", square + "fo 1 2 3 4", false, false},
		{"faces first", "f 1/1 2/2 3/3 4/4\n" + square, true, false},
		{"CR LF", strings.ReplaceAll(square+"f 1 2 3 4\n", "\n", "\r\n"), false, false},
		{"CR", strings.ReplaceAll(square+"f 1 2 3 4\n", "\n", "\r"), false, false},
		{"byte order mark", "\xef\xbb\xbf" + square + "f 1 2 3 4", false, false},
		{"continued", square + "f 1 2 \\\n3 \\\r\n 4", false, false},
		{"comments", "# C:\\pots\\\n" + square + "f 1 2 3 4 # the whole\n#f 9 9 9", false, false},
		{"tabs", "\n\t \n" + strings.ReplaceAll(square, " ", "\t ") + "\tf 1\t2 3  4 ", false, false},
		{"colours and weights", "v 0 0 0 1\nv 1 0 0 .1 .2 .3\nv 1 1 0 nan nan nan\nv 0 1 0 1 0 0 1\nf 1 2 3 4", false, false},
		{"long numbers", "v 0.00000000000000000000000000000 0e5 -0\nv 1.000000000000000000001 0 0\nv 10e-1 .1E+1 0\nv 0 1. +0\nf 1 2 3 4", false, false},
		{"other statements", square + "o pot\ng a b\ns off\nl 1 2\np 1\nvp 0.1\ncstype bezier\nnonsense 1 2\nf 1 2 3 4", false, false},
		{"zero normals", square + "vn 0 0 0\nf 1//2 2//2 3//2 4//2", false, false},
		{"doubled corners", square + "f 1 1 2\nf 1 2 3 4\nf 3 3 3", false, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			m := mustRead(t, c.text, 0)
			if len(m.Triangles) != 2 || len(m.Positions) != 4 {
				t.Fatalf("%d triangles, %d positions, want 2 and 4", len(m.Triangles), len(m.Positions))
			}
			for _, tri := range m.Triangles {
				a, b, d := corner3(m, tri)
				if n := b.Sub(a).Cross(d.Sub(a)); n != (geom.Vec3d{Z: 1}) {
					t.Errorf("triangle %v has the normal %v, want the unit square's halves facing +z", tri, n)
				}
			}
			if (m.UVs != nil) != c.uvs || (m.Normals != nil) != c.normals {
				t.Errorf("uvs %v, normals %v", m.UVs, m.Normals)
			}
			for i, p := range m.Positions {
				if c.uvs && m.UVs[i] != [2]float32{p.X, p.Y} || c.normals && m.Normals[i] != (geom.Vec3{Z: 1}) {
					t.Errorf("vertex %d: uv %v, normal %v at %v", i, m.UVs, m.Normals, p)
				}
			}
		})
	}
}

// TestOBJWelding counts the vertices of two faces that share corners or not.
func TestOBJWelding(t *testing.T) {
	for _, c := range []struct {
		faces string
		want  int
	}{
		{"f 1 2 3\nf 1 3 4", 4},
		{"f 1/1 2/2 3/3\nf 1/1 3/3 4/4", 4},
		{"f 1/1 2/2 3/3\nf 1/2 3/3 4/4", 5},
		{"f 1//1 2//1 3//1\nf 1//2 3//2 4//2", 6},
	} {
		if m := mustRead(t, square+"vn 0 1 1\n"+c.faces, 0); len(m.Positions) != c.want {
			t.Errorf("%q: %d vertices, want %d", c.faces, len(m.Positions), c.want)
		}
	}
}

// TestOBJPolygons cuts concave faces, in every orientation: the triangles sum to the face's area and do not fold over.
func TestOBJPolygons(t *testing.T) {
	for name, outline := range map[string][][2]float64{
		"arrow": {{0, 0}, {2, 1}, {0, 2}, {0.5, 1}}, "arrow from its tail": {{0.5, 1}, {0, 0}, {2, 1}, {0, 2}},
		"hole by a bridge": {{0, 0}, {4, 0}, {4, 4}, {0, 4}, {0, 0}, {1, 1}, {1, 3}, {3, 3}, {3, 1}, {1, 1}}, "comb": comb(12), "spiral": spiral(100), "with points on edges": {{0, 0}, {1, 0}, {2, 0}, {2, 1}, {1, 1}, {0, 1}},
	} {
		area, _ := shoelace(outline)
		sign := 1.0
		if polygonArea(points2(outline)) < 0 {
			sign = -1
		}
		for axis := range 6 {
			var text strings.Builder
			face := "f"
			for i, p := range outline {
				q := [3]float64{}
				q[(axis+1)%3], q[(axis+2)%3], q[axis%3] = p[0], p[1], 5
				if axis >= 3 {
					q[(axis+1)%3], q[(axis+2)%3] = q[(axis+2)%3], q[(axis+1)%3]
				}
				fmt.Fprintf(&text, "v %v %v %v\n", q[0], q[1], q[2])
				face += fmt.Sprint(" ", i+1)
			}
			m := mustRead(t, text.String()+face, 0)
			if len(m.Triangles) != len(outline)-2 {
				t.Fatalf("%s: %d triangles of %d corners", name, len(m.Triangles), len(outline))
			}
			way := sign
			if axis >= 3 {
				way = -sign
			}
			sum := 0.0
			for _, tri := range m.Triangles {
				a, b, c := corner3(m, tri)
				n := b.Sub(a).Cross(c.Sub(a))
				along := [3]float64{n.X, n.Y, n.Z}[axis%3] * way
				if !(along > 0) {
					t.Fatalf("%s along axis %d: triangle %v faces %v", name, axis, tri, n)
				}
				sum += along / 2
			}
			if !near(sum, area, 1e-5) {
				t.Errorf("%s along axis %d: area %v, want %v (shoelace formula)", name, axis, sum, area)
			}
		}
	}
}

func points2(outline [][2]float64) []point2 {
	var out []point2
	for _, p := range outline {
		out = append(out, point2{p[0], p[1]})
	}
	return out
}

// roof is two squares that meet at 60 degrees between their normals along the edge 2-3.
const roof = "v -1 0 0\nv 0 0 0\nv 0 0 1\nv -1 0 1\nv 0.5 -0.8660254 0\nv 0.5 -0.8660254 1\n"

func TestOBJSmoothing(t *testing.T) {
	const given = "vn 0 1 0\n"
	for _, c := range []struct {
		name, faces string
		smooth      float64
		vertices    int // 6 where the edge is smooth, 8 where it is sharp
		normals     bool
		up          [2]float64 // what the normals on the edge may be from straight up, in degrees
	}{
		{"flat", "f 4 3 2 1\nf 3 6 5 2", 0, 6, false, [2]float64{30, 30}},
		{"under the angle", "f 4 3 2 1\nf 3 6 5 2", 61, 6, true, [2]float64{30, 30}},
		{"over the angle", "f 4 3 2 1\nf 3 6 5 2", 59, 8, true, [2]float64{0, 60}},
		{"one group", "s 1\nf 4 3 2 1\nf 3 6 5 2", 0, 6, true, [2]float64{30, 30}},
		{"two groups", "s 1\nf 4 3 2 1\ns 2\nf 3 6 5 2", 180, 8, true, [2]float64{0, 60}},
		{"group and none", "s 1\nf 4 3 2 1\ns off\nf 3 6 5 2", 180, 8, true, [2]float64{0, 60}},
		{"group 0 is none", "s 0\nf 4 3 2 1\nf 3 6 5 2", 61, 6, true, [2]float64{30, 30}},
		{"some given", "s 1\nf 4//1 3//1 2//1 1//1\nf 3 6 5 2", 0, 8, true, [2]float64{0, 30}},
	} {
		m := mustRead(t, roof+given+c.faces, c.smooth)
		if len(m.Positions) != c.vertices || (m.Normals != nil) != c.normals {
			t.Errorf("%s: %d vertices, normals: %v, want %d, %v", c.name, len(m.Positions), m.Normals != nil, c.vertices, c.normals)
		}
		for i, p := range m.Positions {
			if !c.normals || p.X != 0 {
				continue
			}
			angle := math.Acos(float64(m.Normals[i].Y)) * 180 / math.Pi
			if math.Abs(angle-c.up[0]) > 0.1 && math.Abs(angle-c.up[1]) > 0.1 {
				t.Errorf("%s: a normal on the edge is %.1f degrees from up, want %v", c.name, angle, c.up)
			}
		}
	}
}

func TestOBJUnitAndUp(t *testing.T) {
	const text = "v 0 0 0\nv 1000 0 0\nv 0 2000 0\nv 0 0 3000\nvn 0 0 1\nf 1//1 2//1 4//1\nf 1//1 3//1 2//1"
	m, err := Build(model.Mesh{Kind: model.MeshFile, File: "a/POT.OBJ", Unit: 0.001, ZUp: true}, files{"a/POT.OBJ": text}.read)
	if err != nil {
		t.Fatal(err)
	}
	if got, want := m.Bounds(), (geom.Box{Min: geom.Vec3{Z: -2}, Max: geom.Vec3{X: 1, Y: 3}}); got != want {
		t.Errorf("bounds %v, want %v: z points up now, and y away from the eye", got, want)
	}
	if m.Normals[0] != (geom.Vec3{Y: 1}) {
		t.Errorf("normal %v, want up", m.Normals[0])
	}
	// The face in the plane y = 0 of the file looks along -y there, so along +z here.
	a, b, c := corner3(m, m.Triangles[0])
	if n := b.Sub(a).Cross(c.Sub(a)).Unit(); n != (geom.Vec3d{Z: 1}) {
		t.Errorf("the first face looks along %v, want +z", n)
	}
}

func TestOBJMaterials(t *testing.T) {
	f := files{
		"pots/a.obj": "mtllib my glazes.mtl\nmtllib sub\\b.mtl ./c.mtl\n" + square +
			"f 1 2 3\nusemtl deep red \nf 1 2 3\nusemtl unused\nusemtl nowhere\nf 1 2 3\nusemtl deep red\nf 1 2 3 4\n",
		"pots/my glazes.mtl": "\xef\xbb\xbfnewmtl deep red\r\nKd 0.5 0.1 \\\r\n0.1\r\nKs 0.25\nNs 64\nKe 1 2 3\nd 0.5\nTr 0.1\nillum 2\nmap_Kd red.png\nnewmtl\nKa 0 0 1",
		"pots/sub/b.mtl":     "newmtl deep red\nKd 1 1 1\n",
		"pots/c.mtl":         "",
	}
	m, err := Build(model.Mesh{Kind: model.MeshFile, File: "pots/a.obj", Unit: 1}, f.read)
	if err != nil {
		t.Fatal(err)
	}
	checkShape(t, m)
	if got := fmt.Sprintf("%q", m.SlotNames); got != `["" "deep red" "nowhere"]` {
		t.Errorf("slots %s", got)
	}
	if got := fmt.Sprint(m.Slots); got != "[0 1 2 1 1]" {
		t.Errorf("slots of the triangles: %s", got)
	}
	unnamed := neutral()
	unnamed.Ambient = tint.RGB{B: 1}
	red := model.Material{
		Kind: model.BlinnPhong, Diffuse: tint.RGB{R: 0.5, G: 0.1, B: 0.1}, Specular: tint.Grey(0.25), Ambient: tint.RGB{R: 0.5, G: 0.1, B: 0.1},
		Emission: tint.RGB{R: 1, G: 2, B: 3}, Shininess: 64, Opacity: 0.5,
	}
	for i, want := range []model.Material{unnamed, red, neutral()} {
		if m.Materials[i] != want {
			t.Errorf("material %d: %+v, want %+v", i, m.Materials[i], want)
		}
	}
	plain := mustRead(t, square+"usemtl glaze\nf 1 2 3", 0)
	if plain.Materials != nil || plain.SlotNames[0] != "glaze" {
		t.Errorf("without a library: materials %v, slots %q", plain.Materials, plain.SlotNames)
	}
}

// TestOBJErrors checks that a broken file is refused with its name, the line and the fault.
func TestOBJErrors(t *testing.T) {
	for _, c := range []struct {
		text string
		line int
		want string
	}{
		{"", 0, "no faces"},
		{"v 0 0 0\n", 0, "no faces (f): 1 positions"},
		{"v 0 0 0\nv 1 0 0\nl 1 2\n", 0, "1 points, lines or curves"},
		{"PK\x03\x04 stuff", 0, `is this an OBJ file? line 1 begins with "PK\x03\x04"`},
		{"\xff\xfev\x00 \x00", 1, "UTF-16"},
		{"v 1 2 3\n\x00v", 2, "zero byte"},
		{"v 1 2\n", 1, "v: 3 coordinates are needed, got 2"},
		{"\n\nv 1 2 x\n", 3, `v: "x" is not a finite decimal number`},
		{"v 1 2 nan\n", 1, `"nan"`},
		{"v 1 -inf 0\n", 1, `"-inf"`},
		{"v 1 1e999 0\n", 1, `"1e999"`},
		{"v 1 0x10 0\n", 1, `"0x10"`},
		{"v 1,5 0 0\n", 1, `"1,5"`},
		{"v 1 1e30 0\n", 1, "within ±1e+09 metres"},
		{"vt\n", 1, "vt: 1 to 3 coordinates"},
		{"vt 1e300\n", 1, "vt: coordinates must be within"},
		{"vn 1 2\n", 1, "vn: 3 components are needed, got 2"},
		{square + "f 1 2\n", 10, "f: at least 3 corners are needed, got 2"},
		{square + "f\n", 10, "got 0"},
		{square + "f 1 2 5\n", 10, "index 5: the file holds 4 positions (v)"},
		{square + "f 1/9 2/1 3/1\n", 10, "index 9: the file holds 4 texture coordinates (vt)"},
		{square + "f 1//2 2//1 3//1\n", 10, "index 2: the file holds 1 normals (vn)"},
		{square + "f 1 2 -5\n", 10, "index -5: only 4 positions (v) stand before it"},
		{square + "f 1 2 0\n", 10, "indices count from 1"},
		{square + "f 1 2 3.5\n", 10, `"3.5" is not an index`},
		{square + "f 1 2 99999999999999999999\n", 10, "is not an index"},
		{square + "f 1 2 /3\n", 10, "index of its position is missing"},
		{square + "f 1 2 3/1/1/1\n", 10, "more than 3 indices"},
		{square + "f 1/1 2/2 3\n", 10, "the same form"},
		{square + "f 1 1 2\n", 0, "no surface is left"},
		{"s one\n", 1, `got "one"`},
		{"surf 0 1 0 1 1 2 3 4\n", 1, "free-form surfaces are not read"},
		{"csh rm things\n", 1, "may not call"},
		{"mtllib\n", 1, "a file name is missing"},
		{"mtllib " + strings.Repeat("a ", 3000) + "\n", 1, "at most 4096"},
	} {
		_, err := Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1}, files{"pot.obj": c.text, "a.mtl": ""}.read)
		var at *PosError
		if !errors.As(err, &at) {
			t.Errorf("%q: got %v, want an error with a place", c.text, err)
			continue
		}
		if at.File != "pot.obj" || at.Line != c.line || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: got %q, want line %d and %q", c.text, err, c.line, c.want)
		}
	}
}

// TestMTLErrors checks that a mistake in a library names the library.
func TestMTLErrors(t *testing.T) {
	for _, c := range []struct {
		text string
		line int
		want string
	}{
		{"Kd 1 1 1\n", 1, "Kd: it stands before the first newmtl"},
		{"newmtl a\nKd 1 1\n", 2, "Kd: one or three values are needed, got 2"},
		{"newmtl a\nKd\n", 2, "got 0"},
		{"newmtl a\nKd 1 1 1.5\n", 2, "Kd: values must be 0 to 1, got 1.5"},
		{"newmtl a\nKs -0.1\n", 2, "Ks: values must be 0 to 1, got -0.1"},
		{"newmtl a\nKa 0 0 red\n", 2, `"red" is not a finite decimal number`},
		{"newmtl a\nKe 1e39 0 0\n", 2, "Ke: values must be 0 to"},
		{"newmtl a\nKd spectral oak.rfl\n", 2, `given as "spectral" are not read`},
		{"newmtl a\nKd xyz 1 1 1\n", 2, `"xyz"`},
		{"newmtl a\n\nNs -1\n", 3, "exponent must be 0 to 100000, got -1"},
		{"newmtl a\nNs 100001\n", 2, "got 100001"},
		{"newmtl a\nNs\n", 2, "a number is missing"},
		{"newmtl a\nd 0\n", 2, "opacity must be > 0 and at most 1, got 0"},
		{"newmtl a\nd -halo 2\n", 2, "got 2"},
		{"newmtl a\nTr 1\n", 2, "transparency (1 - d) must be at least 0 and < 1, got 1"},
		{"\xfe\xff\x00n", 1, "UTF-16"},
	} {
		_, err := Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1}, files{"pot.obj": "mtllib pot.mtl", "pot.mtl": c.text}.read)
		var at *PosError
		if !errors.As(err, &at) || at.File != "pot.mtl" || at.Line != c.line || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: got %v, want pot.mtl:%d and %q", c.text, err, c.line, c.want)
		}
	}
}

// TestFiles checks extensions, the parameters of files, and hashes.
func TestFiles(t *testing.T) {
	f := files{"pot.obj": "mtllib a.mtl\nmtllib a.mtl\n" + square + "f 1 2 3", "a.mtl": "newmtl a", "pot.ply": "ply"}
	m := model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1}
	for _, c := range []struct {
		change func(*model.Mesh)
		want   string
	}{
		{func(m *model.Mesh) { m.File = "pot.ply" }, `pot.ply: mesh files of type ".ply" are not read: .obj is accepted`},
		{func(m *model.Mesh) { m.File = "none.obj" }, "none.obj: "},
		{func(m *model.Mesh) { m.Unit = 0 }, "file: unit must be > 0"},
		{func(m *model.Mesh) { m.Smooth = 200 }, "smooth must be 0 to 180 degrees, got 200"},
		{func(m *model.Mesh) { m.FileHash = "00" }, "pot.obj: the file, or one that it names, has changed"},
	} {
		bad := m
		c.change(&bad)
		if _, err := Build(bad, f.read); err == nil || !strings.HasPrefix(err.Error(), strings.Split(c.want, "smooth")[0]) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v, want %q", err, c.want)
		}
	}
	first, err := HashFile("pot.obj", f.read)
	if err != nil || len(first) != 64 {
		t.Fatalf("hash %q, %v", first, err)
	}
	m.FileHash = first
	if _, err := Build(m, f.read); err != nil {
		t.Errorf("unchanged file: %v", err)
	}
	f["a.mtl"] = "newmtl b"
	second, _ := HashFile("pot.obj", f.read)
	f["pot.obj"] += "\n"
	third, _ := HashFile("pot.obj", f.read)
	if first == second || second == third {
		t.Errorf("hashes %s, %s, %s must differ: the library changed, then the mesh", first, second, third)
	}
	if _, err := Build(m, f.read); err == nil || !strings.Contains(err.Error(), "has changed") {
		t.Errorf("changed file: got %v", err)
	}
	delete(f, "a.mtl")
	if without, err := HashFile("pot.obj", f.read); err != nil || without == third {
		t.Errorf("missing library: got %v, %v", without, err)
	}
}

// osReader reads below a folder, as a caller would.
func osReader(root string) Reader {
	return func(path string) ([]byte, error) { return os.ReadFile(filepath.Join(root, filepath.FromSlash(path))) }
}

// TestForeignFiles reads the awkward and the broken OBJ files of the reference collection.
func TestForeignFiles(t *testing.T) {
	root := filepath.Join("..", "..", "..", "shared", "reference", "open", "bad-meshes")
	if _, err := os.Stat(root); err != nil {
		t.Skip("the collection of awkward mesh files is not beside the checkout: ", err)
	}
	// What each must give: the sum of corners less two over its faces, or words of the error.
	want := map[string]any{
		"box_UTF16BE.obj": "box_UTF16BE.obj:1: the text is UTF-16", "box_mat_with_spaces.obj": 12, "box_without_lineending.obj": 12,
		"concave_polygon.obj": 64, "cube_usemtl.obj": 12, "cube_with_vertexcolors.obj": 12, "cube_with_vertexcolors_uni.obj": 12,
		"empty_mat.obj": 256, "mtl_different_folder.obj": 12, "multiple_spaces.obj": 1, "only_a_part_of_vertexcolors.obj": 3,
		"regr_3429812.obj": 4, "space_in_material_name.obj": 64, "testmixed.obj": 12,
		"malformed.obj": "malformed.obj:28: f: corner \"0\": indices count from 1", "malformed2.obj": "malformed2.obj:23: f: at least 3 corners are needed, got 0",
		"cube_compressed.obj": 12, "obj_empty.obj": "obj_empty.obj: no faces", "obj_points.obj": "obj_points.obj: no faces (f): 8 positions",
		"obj_wireframe.obj": "obj_wireframe.obj: no faces (f): 8 positions, and 12 points, lines or curves", "face_in_group_name.obj": "no faces",
		"face_in_group_name_mid_file.obj": "face_in_group_name_mid_file.obj:5: f: index 4: the file holds 0 normals",
		"jacked.obj":                      12, "joined_tetrahedra.obj": 8, "obj_with_no_face_in_chunk.obj": 1,
		"polygonfaces.obj": 3, "singlevn.obj": 2,
	}
	seen := 0
	err := filepath.WalkDir(root, func(path string, d fs.DirEntry, err error) error {
		if err != nil || !strings.HasSuffix(path, ".obj") {
			return err
		}
		seen++
		name, _ := filepath.Rel(root, path)
		name = filepath.ToSlash(name)
		m, err := Build(model.Mesh{Kind: model.MeshFile, File: name, Unit: 1, Smooth: 30}, osReader(root))
		switch w := want[filepath.Base(name)].(type) {
		case nil:
			t.Errorf("%s: nothing is said of it; it gives %v, %v", name, m, err)
		case string:
			if err == nil || !strings.Contains(err.Error(), w) {
				t.Errorf("%s: got %v, want an error that says %q", name, err, w)
			}
		case int:
			if err != nil || len(m.Triangles) != w {
				t.Errorf("%s: got %v, want %d triangles", name, err, w)
				return nil
			}
			checkShape(t, m)
		}
		return nil
	})
	if err != nil || seen < len(want) {
		t.Errorf("%d files seen of %d, %v", seen, len(want), err)
	}
}

// TestMissingLibrary reads files whose material library is not there: the form is whole, and a note says what was missed.
func TestMissingLibrary(t *testing.T) {
	for text, note := range map[string]string{
		"mtllib gone.mtl\n":               `pot.obj: mtllib "gone.mtl": no such file`,
		"mtllib a.mtl my gone.mtl\n":      `pot.obj: mtllib "my gone.mtl": no such file`,
		"mtllib a b c\nmtllib a b c\n#\n": `pot.obj: mtllib "a b c": no such file`,
	} {
		f := files{"pot.obj": text + square + "usemtl x\nf 1 2 3", "a.mtl": "newmtl y"}
		m, err := Build(model.Mesh{Kind: model.MeshFile, File: "pot.obj", Unit: 1}, f.read)
		if err != nil || len(m.Triangles) != 1 || len(m.Notes) != 1 || !strings.HasPrefix(m.Notes[0], note) {
			t.Errorf("%q: got %v, %v, want a triangle and the note %q", text, m, err, note)
		}
	}
}
