package prelude_test

import (
	"context"
	"fmt"
	"math"
	"os"
	"path/filepath"
	"regexp"
	"strings"
	"testing"

	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/lua/host"
	"lampbook/lua/prelude"
)

// evaluate runs a scene's text with all modules at hand. A scene needs a frame, so it gets one.
func evaluate(t *testing.T, text string) (*model.Plan, *mesh.Library, error) {
	t.Helper()
	path := filepath.Join(t.TempDir(), "scene.lua")
	const head = `local forms, keys, rigs, stands, surfaces = require "forms", require "keys", require "rigs", require "stands", require "surfaces"
local function near(got, want, tolerance, what)
  if not (math.abs(got - want) <= tolerance) then error(what .. ": got " .. got .. ", want " .. want .. " within " .. tolerance) end
end
`
	const foot = "\nframe{ things = { place{ mesh = mesh.sphere{ radius = 0.1 } } } }"
	if err := os.WriteFile(path, []byte(head+text+foot), 0o644); err != nil {
		t.Fatal(err)
	}
	return host.Evaluate(context.Background(), path, host.Options{})
}

// TestModules runs statements about the modules, written in the language itself.
func TestModules(t *testing.T) {
	for _, test := range []struct{ name, source, text string }{
		{"key to fill", "the meter: illuminances are as 2 to the difference in stops", `
			for _, ratio in ipairs{ 1, 2, 4, 8 } do
			  local r = rigs.three_point{ ratio = ratio }
			  local function lux(name, at) return math.pi * 2 ^ -r:only(name):meter{ at = {0, 0.1, 0}, facing = at } end
			  local key, fill = lux("key", {-4.925, 6.428, 5.869}), nil
			  near(key, 1000, 0.2, "key, facing it")
			  fill = lux("fill", {math.sin(math.rad(50)) * math.cos(math.rad(28)), math.sin(math.rad(28)), math.cos(math.rad(50)) * math.cos(math.rad(28))})
			  near(key / fill, ratio, 0.001 * ratio, "key : fill")
			end`},
		{"a rig grows with its subject", "similarity: an emitter of the same luminance under the same solid angle gives the same illuminance", `
			for _, make in ipairs{ rigs.three_point, rigs.tent, rigs.strips } do
			  local small = make{ radius = 0.025 }:meter{ at = {0, 0.025, 0}, facing = {-0.3, 0.5, 1} }
			  local large = make{ radius = 1 }:meter{ at = {0, 1, 0}, facing = {-0.3, 0.5, 1} }
			  near(large, small, 1e-4, "stops for a cup and for a lamp")
			end`},
		{"a subject gives middle and radius", "the box of a sphere, moved and doubled", `
			local ball = place{ mesh = mesh.sphere{ radius = 0.1 }, scale = 2, at = {1, 0.2, -3}, turn = {0, 40, 0} }
			local key = nil
			near(rigs.three_point{ subject = ball, rim = 0 }:meter{ at = {1, 0.2, -3}, facing = {-0.3, 0.5, 1} },
			     rigs.three_point{ centre = {1, 0.2, -3}, radius = 0.2 * math.sqrt(3), rim = 0 }:meter{ at = {1, 0.2, -3}, facing = {-0.3, 0.5, 1} }, 1e-4, "stops")`},
		{"a tent is nearly even", "the meter, turned round: half a stop at most", `
			local tent, least, most = rigs.tent{ lux = 500 }, 1e9, -1e9
			for angle in turntable{ frames = 24 } do
			  local stops = tent:meter{ at = {0, 0.1, 0}, facing = { math.sin(math.rad(angle)), 0.3, math.cos(math.rad(angle)) } }
			  least, most = math.min(least, stops), math.max(most, stops)
			end
			near(most - least, 0, 0.5, "stops between the sides")
			near(math.pi * 2 ^ -tent:without("room"):meter{ at = {0, 0.1, 0}, facing = {0, 1, 0} }, 500, 0.1, "lux facing up")`},
		{"strips balance", "the meter", `
			local pair = rigs.strips{ balance = 0.5, lux = 800 }
			local s, c = math.sin(math.rad(62)) * math.cos(math.rad(22)), math.cos(math.rad(62)) * math.cos(math.rad(22))
			local function lux(name, x) return math.pi * 2 ^ -pair:only(name):meter{ at = {0, 0.1, 0}, facing = {x, math.sin(math.rad(22)), c} } end
			near(lux("left", -s), 800, 0.2, "left")
			near(lux("right", s), 400, 0.2, "right")`},
		{"steps of the ramp", "each patch is one stop, and one of them is the grey card", `
			for i, value in ipairs(stands.ramp_values) do near(value, 0.18 * 2 ^ (i - 4), 1e-12, "patch " .. i) end
			local row = stands.ramp{ width = 0.12, lean = 0 }
			near(#row, 6, 0, "patches")
			near(row[4].material.diffuse.r, 0.18, 1e-6, "fourth patch")
			near(row[2].at[1] - row[1].at[1], 0.02, 1e-9, "pitch")`},
		{"sRGB of the ramp", "IEC 61966-2-1, 8 bits", `
			for value, hex in pairs{ [0.0225] = "29", [0.045] = "3c", [0.09] = "55", [0.18] = "76", [0.36] = "a2", [0.72] = "dd" } do
			  local got = color.grey(value).hex
			  if got ~= "#" .. hex .. hex .. hex then error(value .. " is " .. got .. ", not " .. hex) end
			end`},
		{"curves pass through their points", "definition of interpolation; corners stay", `
			local points = { {0.03, 0}, {0.05, 0.02}, {0.05, 0.02}, {0.06, 0.05}, {0.04, 0.09} }
			local curve = forms.smooth(points, 4)
			near(#curve, 10, 0, "points") -- a straight piece of one, two curved ones of four
			near(curve[2][1], 0.05, 0, "corner") near(curve[6][2], 0.05, 0, "inner point") near(curve[10][1], 0.04, 0, "end")`},
		{"curves are smooth", "a natural spline through points of a line is the line", `
			for _, p in ipairs(forms.smooth({ {0, 0, 0}, {1, 2, 3}, {2, 4, 6}, {5, 10, 15} })) do
			  near(p[2], 2 * p[1], 1e-4, "y") near(p[3], 3 * p[1], 1e-4, "z")
			end`},
		{"surfaces make no light", "energy: diffuse and specular together at most 1", `
			for name, make in pairs(surfaces) do
			  local m = make()
			  for _, c in ipairs{ "r", "g", "b" } do
			    if m.diffuse[c] + m.specular[c] > 1 then error(name .. " reflects more than it gets") end
			  end
			end`},
		{"things stand on the ground", "lowest point 0", `
			near(stands.grey_sphere{ radius = 0.05, at = {1, 0, 2} }.at[2], 0.05, 0, "grey sphere")
			near(stands.table{ top = 0.7, thickness = 0.1 }.at[2], 0.65, 1e-12, "table")
			near(stands.cove().mesh.low[2], 0, 0, "cove")`},
	} {
		t.Run(test.name, func(t *testing.T) {
			if _, _, err := evaluate(t, test.text); err != nil {
				t.Errorf("%v (source: %s)", err, test.source)
			}
		})
	}
}

// TestMistakes holds the modules to the language's rule: the scene's line, what was given, what is accepted, the nearest name.
func TestMistakes(t *testing.T) {
	for text, want := range map[string]string{
		`rigs.three_point{ ration = 4 }`:                    `scene.lua:5: rigs.three_point: unknown key "ration"; did you mean "ratio"? accepted: centre, `,
		`rigs.three_point{ ratio = 0.5 }`:                   `scene.lua:5: rigs.three_point: ratio must be a number 1 to 1000, got 0.5`,
		`rigs.tent{ radius = 0 }`:                           `scene.lua:5: rigs.tent: radius must be a number > 0 metres, got 0`,
		`rigs.strips{ radius = "5 cm" }`:                    `scene.lua:5: rigs.strips: radius must be a number > 0 metres, got "5 cm"`,
		`rigs.strips(5)`:                                    `scene.lua:5: rigs.strips: takes a table in braces, got 5`,
		`rigs.strips{ subject = 4 }`:                        `scene.lua:5: rigs.strips: subject must be a thing or a mesh, got 4`,
		`rigs.tent{ 3 }`:                                    `scene.lua:5: rigs.tent: takes named values only, got one without a name; accepted: `,
		`stands.table{ at = 3 }`:                            `scene.lua:5: stands.table: at must be a point {x, y, z}, got 3`,
		`stands.cove{ distance = 0.2, bend = 0.3 }`:         `scene.lua:5: stands.cove: bend must be at most distance, 0.2 metres, got 0.3`,
		`stands.ramp{ values = {} }`:                        `scene.lua:5: stands.ramp: values must be a list of reflectances`,
		`forms.smooth{ {0, 1}, {0, "x"} }`:                  `scene.lua:5: forms.smooth: point 2 must be {r, y}, or {x, y, z} if all are, in metres`,
		`forms.tube{ path = {{0, 0, 0}, {0, 0, 0}} }`:       `scene.lua:5: forms.tube: the path turns back on itself or stands still at point 1`,
		`forms.thrown{ segments = 9.5, profile = {{0,0}} }`: `scene.lua:5: forms.thrown: segments must be a whole number, got 9.5`,
	} {
		_, _, err := evaluate(t, text)
		if err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s\n\tgave %v\n\twant %s", text, err, want)
		}
	}
}

// TestVolumes measures what the hands have made: a mesh that is closed and faces outward has the volume of its form.
func TestVolumes(t *testing.T) {
	p, library, err := evaluate(t, `
		local path = {}
		for k = 0, 90 do path[k + 1] = { 0.1 * math.cos(math.rad(k)), 0.1 * math.sin(math.rad(k)), 0 } end
		frame{ name = "bend", things = { place{ mesh = forms.tube{ path = path, radius = 0.01, segments = 64 } } } }
		frame{ name = "bar", things = { place{ mesh = forms.tube{ path = { {0, 0, 0}, {0, 0.3, 0} }, radius = 0.02, tip = 0.01, segments = 64 } } } }
		frame{ name = "drum", things = { place{ mesh = forms.thrown{ profile = { {0, 0}, {0.05, 0}, {0.05, 0.1}, {0, 0.1} } } } } }
		frame{ name = "clover", things = { place{ mesh = forms.thrown{ profile = { {0, 0}, {0.05, 0}, {0.05, 0.1}, {0, 0.1} }, segments = 256,
		  shape = function(a, r, y) return r * (1 + 0.2 * math.cos(math.rad(4 * a))), y end } } } }`)
	if err != nil {
		t.Fatal(err)
	}
	want := map[string]struct {
		volume float64
		source string
	}{
		"bend":   {math.Pi * 0.01 * 0.01 * 0.1 * math.Pi / 2, "Pappus: section times the way of its centre"},
		"bar":    {math.Pi * 0.3 / 3 * (0.02*0.02 + 0.02*0.01 + 0.01*0.01), "frustum of a cone"},
		"drum":   {math.Pi * 0.05 * 0.05 * 0.1, "cylinder"},
		"clover": {math.Pi * 0.05 * 0.05 * 0.1 * (1 + 0.2*0.2/2), "area of r = R (1 + e cos 4φ): π R² (1 + e²/2)"},
	}
	for _, f := range p.Frames {
		w, ok := want[f.Name]
		if !ok {
			continue
		}
		delete(want, f.Name)
		m, err := library.Get(p.Meshes[f.Things[0].Mesh])
		if err != nil {
			t.Fatal(err)
		}
		if got := volume(m); math.Abs(got-w.volume) > 0.005*w.volume {
			t.Errorf("%s: volume %.4g m³, want %.4g (source: %s)", f.Name, got, w.volume, w.source)
		}
	}
	if len(want) > 0 {
		t.Errorf("not measured: %v", want)
	}
}

// volume is what a mesh encloses, by the divergence theorem: negative where it is inside out.
func volume(m *mesh.Mesh) float64 {
	sum := 0.0
	for _, t := range m.Triangles {
		a, b, c := m.Positions[t[0]].Wide(), m.Positions[t[1]].Wide(), m.Positions[t[2]].Wide()
		sum += a.Dot(b.Cross(c)) / 6
	}
	return sum
}

// TestCove holds coves to their form (source: floor, quarter of a cylinder, wall, in closed form): each point lies on it with its true
// normal, each face looks into the cove, and no triangle is a sliver.
func TestCove(t *testing.T) {
	for _, test := range []struct {
		call           string
		distance, bend float64 // metres
	}{
		{"stands.cove()", 0.9, 0.6},
		{"stands.cove{ radius = 2, distance = 12 }", 12, 12},
		{"stands.cove{ width = 1.3, front = 0.2, bend = 0.45, height = 1 }", 0.9, 0.45},
	} {
		p, library, err := evaluate(t, `frame{ name = "cove", things = { `+test.call+` } }`)
		if err != nil {
			t.Fatal(err)
		}
		m, err := library.Get(p.Meshes[p.Frames[0].Things[0].Mesh])
		if err != nil {
			t.Fatal(err)
		}
		close := func(a, b float64) bool { return math.Abs(a-b) <= 2e-5*test.distance }
		for i, position := range m.Positions {
			q, n := position.Wide(), m.Normals[i].Wide()
			y, z := q.Y-test.bend, q.Z+test.distance-test.bend // from the axis of the bend
			on := close(q.Y, 0) && close(n.Y, 1) && z >= -2e-5*test.distance
			on = on || close(q.Z, -test.distance) && close(n.Z, 1) && y >= -2e-5*test.distance
			on = on || close(math.Hypot(y, z), test.bend) && close(n.Y*test.bend, -y) && close(n.Z*test.bend, -z)
			if !on {
				t.Errorf("%s: the normal at %v is %v", test.call, q, n)
			}
		}
		if count := len(m.Triangles); count > 10000 {
			t.Errorf("%s has %d triangles", test.call, count)
		}
		for _, tri := range m.Triangles {
			a, b, c := m.Positions[tri[0]].Wide(), m.Positions[tri[1]].Wide(), m.Positions[tri[2]].Wide()
			ab, bc, ca := b.Sub(a), c.Sub(b), a.Sub(c)
			normal := ab.Cross(bc)
			if normal.Unit().Dot(m.Normals[tri[0]].Wide()) < 0.99 {
				t.Errorf("%s: triangle %v faces %v, its normal is %v", test.call, tri, normal.Unit(), m.Normals[tri[0]])
			}
			longest := max(ab.Dot(ab), bc.Dot(bc), ca.Dot(ca))
			if height := math.Sqrt(normal.Dot(normal)) / longest; height < 0.2 {
				t.Errorf("%s: triangle %v is %.3f of its longest edge wide", test.call, tri, height)
			}
		}
	}
}

// TestSurfaceTable holds the table at the head of surfaces.lua to what its functions give.
func TestSurfaceTable(t *testing.T) {
	text, _ := prelude.Source("surfaces")
	row := regexp.MustCompile(`(?m)^---   ([a-z_]+) +([0-9.]+) +([0-9]+) +(#[0-9a-f]{6}) `)
	found := row.FindAllStringSubmatch(text, -1)
	var scene strings.Builder
	scene.WriteString("local listed = 0\n")
	for _, r := range found {
		fmt.Fprintf(&scene, "listed = listed + 1\ndo\n local m = surfaces.%s()\n near(m.shininess, %s, 0, %q)\n", r[1], r[3], r[1])
		if r[1] == "brass" {
			fmt.Fprintf(&scene, " near(m.specular.r, %s * color(%q).r, 1e-6, %q)\nend\n", r[2], r[4], r[1])
			continue
		}
		fmt.Fprintf(&scene, " near(m.specular.r, %s, 1e-6, %q)\n if m.diffuse.hex ~= %q then error(m.diffuse.hex) end\nend\n", r[2], r[1], r[4])
	}
	scene.WriteString("for name in pairs(surfaces) do listed = listed - 1 end\nnear(listed, 0, 0, \"surfaces that the table leaves out\")")
	if _, _, err := evaluate(t, scene.String()); err != nil {
		t.Error(err)
	}
}
