package bind

import (
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/google/go-cmp/cmp"
	lua "github.com/yuin/gopher-lua"
	"pgregory.net/rapid"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// Expressions and what Lua makes of them, as text.
var expressionTests = []struct{ expression, want, source string }{
	{`mm(85)`, "0.085", "definition"},
	{`cm(12)`, "0.12", "definition"},
	{`inch(3)`, "0.0762", "25.4 mm exactly, International Yard and Pound Agreement 1959"},
	{`table.concat(steps(0, 0.3, 4), " ")`, "0 0.1 0.2 0.3", "closed form"},
	{`table.concat(steps(5, 9, 1), " ")`, "5", "one number is the first"},
	{`table.concat(geometric(4, 256, 4), " ")`, "4 16 64 256", "closed form: ratio 4"},
	{`table.concat(geometric(-1, -8, 4), " ")`, "-1 -2 -4 -8", "closed form: ratio 2"},
	{`color "#b5651d".hex`, "#b5651d", "a hex colour reads back"},
	{`color.grey(0.18).r`, "0.18000000715255737", "float32 nearest to 0.18"},
	{`color.srgb(1, 1, 1) .g`, "1", "IEC 61966-2-1: white is 1"},
	{`color.lab(100, 0, 0).hex`, "#ffffff", "CIE 15: L* = 100 is the white"},
	{`color.grey(0.5):mixed(color.grey(1), 0.5).b`, "0.75", "closed form"},
	{`color.grey(0.5):scaled(0.5).b`, "0.25", "closed form"},
	{`color.grey(0.5):with{ b = 1 }.b`, "1", "definition"},
	{`tostring(color.linear(0.5, 0.25, 0))`, "color.linear(0.5, 0.25, 0)", "reads as it is written"},
	{`tostring(material.blinn_phong{}.ambient)`, "color.linear(0.5, 0.5, 0.5)", "ambient follows diffuse"},
	{`tostring(material.blinn_phong{ diffuse = color.grey(1) }:with{ diffuse = color.grey(0) }.ambient)`, "color.linear(0, 0, 0)", "and goes on following"},
	{`tostring(material.blinn_phong{ ambient = color.grey(1) }:with{ diffuse = color.grey(0) }.ambient)`, "color.linear(1, 1, 1)", "unless it was given"},
	{`mesh.box{ width = 2 }.height`, "2", "as high as wide"},
	{`mesh.box{ width = 2, depth = 3 }.depth`, "3", "definition"},
	{`mesh.cone{ radius = 1, height = 3 }.height`, "3", "definition"},
	{`mesh.sphere{ radius = 2 }.low[2]`, "-2", "closed form: the pole is on the axis"},
	{`table.concat(mesh.load("shapes/jug.obj").slots, " ")`, "body foot", "the file"},
	{`table.concat(mesh.load("shapes/jug.obj", { unit = "cm" }).high, " ")`, "0.009999999776482582 0.009999999776482582 0.009999999776482582", "float32 nearest to 1 cm"},
	{`light.spot{ position = {0, 1, 0} }.inner`, "20", "two thirds of 30"},
	{`light.spot{ position = {0, 1, 0}, outer = 45 }:with{ outer = 60 }.inner`, "40", "two thirds of 60"},
	{`light.area{ position = {0, 1, 0.2}, width = 2 }:with{ width = 3 }.height`, "3", "as high as wide"},
	{`table.concat(light.area{ position = {0, 1, 0} }.up, " ")`, "0 0 -1", "an overhead light has another up"},
	{`table.concat(rig{ light.ambient{}, light.point{ position = {0, 1, 0} }, light.ambient{} }:names(), ", ")`, "ambient 1, point 1, ambient 2", "named by kind and number"},
	{`table.concat(rig{ light.ambient{}, light.ambient{ name = "ambient 1" } }:names(), ", ")`, "ambient 2, ambient 1", "a given name is not taken"},
	{`table.concat(rig{ light.ambient{}, light.ambient{} }:only("ambient 2"):names(), ", ")`, "ambient 2", "a light alone keeps its name"},
	{`table.concat(rig{ rig{ light.ambient{} }, rig{ light.ambient{} } }:names(), ", ")`, "ambient 1, ambient 2", "numbers of two rigs make way"},
	{`rig{ light.ambient{ name = "a" }, light.ambient{ name = "b" } }:without("a").count`, "1", "definition"},
	{`camera{ position = {0, 0, 1}, fov = 30 }.focal`, "nil", "the field of view counts"},
	{`turntable{}.frames`, "36", "default"},
	{`data.csv("products.csv", { decimal = ",", numbers = "height", text = "article" })[1].height`, "11.5", "the file"},
	{`data.csv("products.csv")[1].article`, "0012", "cells are texts: codes keep their zeros"},
	{`data.csv("products.csv")[1].name`, "bowl; wide", "RFC 4180: a quoted separator"},
	{`data.csv("products.csv", { decimal = ",", numbers = "height" })[2].height`, "nil", "an empty number"},
	{`data.csv("products.csv")[2]._line`, "4", "the file"},
	{`data.json("products.json")[2]._line`, "3", "the file"},
	{`data.json("products.json")[1].glaze`, "nil", "null"},
	{`data.json("products.json")[2].tags[2]`, "2", "the file"},
}

func TestExpressions(t *testing.T) {
	for _, c := range expressionTests {
		e := newEnv()
		l := newState(t, e)
		if err := run(t, l, "return "+c.expression); err != nil {
			t.Errorf("%s: %s", c.expression, message(err))
			continue
		}
		got := l.Get(-1).String()
		if n, ok := l.Get(-1).(lua.LNumber); ok {
			got = number(float64(n))
		}
		if got != c.want {
			t.Errorf("%s = %s, want %s (%s)", c.expression, got, c.want, c.source)
		}
	}
}

func TestLightValues(t *testing.T) {
	one := tint.Grey(1)
	for _, c := range []struct {
		scene  string
		want   func(l *model.Light)
		source string
	}{
		{`light.point{ position = {1, 2, 3} }`, func(l *model.Light) {
			l.Kind, l.Position, l.Intensity = model.LightPoint, [3]float64{1, 2, 3}, 1000
		}, "defaults"},
		{`light.point{ position = {1, 2, 3}, intensity = 50, stops = 2, falloff = "none", range = 4, shadows = false }`, func(l *model.Light) {
			l.Kind, l.Position, l.Intensity, l.NoFalloff, l.Range, l.NoShadow = model.LightPoint, [3]float64{1, 2, 3}, 200, true, 4, true
		}, "a stop doubles"},
		{`light.directional{ direction = {0, -1, 0}, color = color.linear(1, 0.5, 0) }`, func(l *model.Light) {
			l.Kind, l.Direction, l.Intensity, l.Color = model.LightDirectional, [3]float64{0, -1, 0}, 1000, tint.RGB{R: 1, G: 0.5}
		}, "defaults"},
		{`light.ambient{ temperature = 3200 }`, func(l *model.Light) {
			l.Kind, l.Intensity, l.Color, l.Components.Ambient = model.LightAmbient, 40, tint.Kelvin(3200), one
		}, "defaults"},
		{`light.area{ position = {0, 0, 2}, shape = "disk", radius = 0.5, two_sided = true, visible = true }`, func(l *model.Light) {
			l.Kind, l.Position, l.Intensity, l.Shape, l.Radius, l.Width, l.Height = model.LightArea, [3]float64{0, 0, 2}, 1000, model.AreaDisk, 0.5, 0.6, 0.6
			l.TwoSided, l.Visible, l.Up = true, true, [3]float64{0, 1, 0}
		}, "defaults"},
		{`light.ambient{ components = { diffuse = 0.5, emission = color.linear(1, 0, 0) } }`, func(l *model.Light) {
			l.Kind, l.Intensity = model.LightAmbient, 40
			l.Components = model.Components{Diffuse: tint.Grey(0.5), Specular: one, Ambient: one, Emission: tint.RGB{R: 1}}
		}, "components"},
	} {
		want := model.Light{Color: one, Components: model.Components{Diffuse: one, Specular: one}}
		c.want(&want)
		if got := valueIn[*light](t, c.scene).Light; got != want {
			t.Errorf("%s (%s)\n got %+v\nwant %+v", c.scene, c.source, got, want)
		}
	}
}

// A lamp's power spreads over its solid angle, or over its face by Lambert's law.
func TestPower(t *testing.T) {
	for _, c := range []struct {
		scene  string
		want   float64
		source string
	}{
		{`light.point{ position = {0, 1, 0}, power = 800 }`, 800 / (4 * math.Pi), "I = Φ / 4π"},
		{`light.area{ position = {0, 1, 0}, width = 2, height = 0.5, power = 800 }`, 800 / math.Pi, "L = Φ / (π A), A = 1 m²"},
		{`light.area{ position = {0, 1, 0}, width = 2, height = 0.5, power = 800 }:with{ width = 4 }`, 400 / math.Pi, "power stays when the face grows"},
		{`light.area{ position = {0, 1, 0}, width = 2, height = 0.5, power = 800 }:with{ intensity = 3, stops = -1 }`, 1.5, "intensity replaces power"},
	} {
		got := valueIn[*light](t, c.scene).Intensity
		if math.Abs(got-c.want) > 1e-9*c.want {
			t.Errorf("%s emits %v, want %v (%s)", c.scene, got, c.want, c.source)
		}
	}
}

func TestRigs(t *testing.T) {
	r := valueIn[*rig](t, `rig{ light.point{ position = {1, 2, 0}, name = "p" }, light.directional{ direction = {0, -1, -1} } }:turned(90):brighter(1)`)
	p, d := r.lights[0].Light, r.lights[1].Light
	if p.Position != [3]float64{0, 2, -1} || d.Direction != [3]float64{-1, -1, 0} {
		t.Errorf("turned by 90 degrees: position %v, direction %v; counter-clockwise seen from above takes x to -z and -z to -x", p.Position, d.Direction)
	}
	if p.Intensity != 2000 || d.Intensity != 2000 {
		t.Errorf("brighter by a stop: %v and %v, want 2000", p.Intensity, d.Intensity)
	}
	r = valueIn[*rig](t, `rig{ light.point{ position = {1, 2, 0}, name = "p" }, light.ambient{} }:with{ p = { intensity = 5 }, ["ambient 1"] = light.point{ position = {0, 1, 0} } }`)
	if r.lights[0].Intensity != 5 || r.lights[1].Name != "ambient 1" || r.lights[1].Kind != model.LightPoint {
		t.Errorf("with: %+v", r.models())
	}
}

// The incident meter's reading is a closed form.
func TestMeter(t *testing.T) {
	for _, c := range []struct {
		scene  string
		want   float64
		source string
	}{
		{`rig{ light.directional{ direction = {0, -1, 0}, intensity = math.pi } }:meter{ facing = {0, 1, 0} }`, 0, "E = π gives a card of 0.18 the radiance 0.18"},
		{`rig{ light.point{ position = {0, 0, 2}, intensity = 4 * math.pi } }:meter{}`, 0, "E = I / d²"},
		{`rig{ light.directional{ direction = {0, 0, -1}, intensity = 4 * math.pi } }:meter{}`, -2, "four times the light, two stops less"},
		{`rig{ light.ambient{ intensity = 0.5 } }:meter{}`, 1, "an ambient 0.5 nit shows 0.09"},
	} {
		e := newEnv()
		l := newState(t, e)
		if err := run(t, l, "return "+c.scene); err != nil {
			t.Fatal(message(err))
		}
		if got := float64(l.Get(-1).(lua.LNumber)); math.Abs(got-c.want) > 1e-6 {
			t.Errorf("%s = %v, want %v (%s)", c.scene, got, c.want, c.source)
		}
	}
}

func TestMeshValues(t *testing.T) {
	for _, c := range []struct {
		scene string
		want  model.Mesh
	}{
		{`mesh.plane{ width = 2 }`, model.Mesh{Kind: model.MeshPlane, Size: [3]float64{2, 0, 2}}},
		{`mesh.box{ width = 1, height = 2, depth = 3 }`, model.Mesh{Kind: model.MeshBox, Size: [3]float64{1, 2, 3}}},
		{`mesh.sphere{ radius = 2, segments = 7 }`, model.Mesh{Kind: model.MeshSphere, Size: [3]float64{2}, Segments: 7}},
		{`mesh.cylinder{ radius = 2, height = 3 }`, model.Mesh{Kind: model.MeshCylinder, Size: [3]float64{2, 3}}},
		{`mesh.cone{ radius = 2, top = 1, height = 3 }`, model.Mesh{Kind: model.MeshCone, Size: [3]float64{2, 1, 3}}},
		{`mesh.disk{ radius = 2 }`, model.Mesh{Kind: model.MeshDisk, Size: [3]float64{2}}},
		{`mesh.torus{ radius = 2, tube = 1 }`, model.Mesh{Kind: model.MeshTorus, Size: [3]float64{2, 1}}},
		{`mesh.lathe{ profile = {{0, 0}, {1, 0}, {1, 1}}, segments = 8 }`, model.Mesh{Kind: model.MeshLathe, Profile: [][2]float64{{0, 0}, {1, 0}, {1, 1}}, Segments: 8, Crease: 30}},
		{`mesh.extrude{ outline = {{0, 0}, {1, 0}, {1, 1}}, depth = 2 }`, model.Mesh{Kind: model.MeshExtrude, Profile: [][2]float64{{0, 0}, {1, 0}, {1, 1}}, Depth: 2}},
		{`mesh.test_form()`, model.Mesh{Kind: model.MeshTestForm}},
		{`mesh.raw{ positions = {{0, 0, 0}, {1, 0, 0}, {0, 1, 0}}, triangles = {{1, 2, 3}}, smooth = 0 }`, model.Mesh{Kind: model.MeshRaw,
			Raw: &model.RawMesh{Positions: [][3]float64{{0, 0, 0}, {1, 0, 0}, {0, 1, 0}}, Triangles: [][3]uint32{{0, 1, 2}}}}},
	} {
		if diff := cmp.Diff(c.want, valueIn[*form](t, c.scene).Mesh); diff != "" {
			t.Errorf("%s (-want +got)\n%s", c.scene, diff)
		}
	}
	f := valueIn[*form](t, `mesh.load("shapes/jug.obj", { unit = "mm", up = "z", smooth = 10 })`)
	if f.File != "shapes/jug.obj" || len(f.FileHash) != 64 || f.Unit != 0.001 || !f.ZUp || f.Smooth != 10 || f.failure != "" {
		t.Errorf("mesh.load: %+v", f)
	}
}

// makers are expressions for one value of each kind and form.
var makers = []string{
	`color "#b5651d"`, `mesh.plane{ width = 2 }`, `mesh.box{ width = 1, depth = 3 }`, `mesh.sphere{ radius = 2, segments = 7 }`,
	`mesh.cylinder{ radius = 2, height = 3 }`, `mesh.cone{ radius = 2, height = 3 }`, `mesh.disk{ radius = 2 }`, `mesh.torus{ radius = 2, tube = 1 }`,
	`mesh.lathe{ profile = {{0, 0}, {1, 0}, {1, 1}}, segments = 8 }`, `mesh.extrude{ outline = {{0, 0}, {1, 0}, {1, 1}}, depth = 2 }`,
	`mesh.test_form{ segments = 12 }`, `mesh.load("shapes/bare.obj", { up = "z" })`, `mesh.load("missing.obj")`,
	`mesh.raw{ positions = {{0, 0, 0}, {1, 0, 0}, {0, 1, 0}}, triangles = {{1, 2, 3}} }`,
	`material.blinn_phong{ diffuse = color "#fff", shininess = 3 }`,
	`light.directional{ stops = 1 }`, `light.point{ position = {0, 1, 0}, power = 3 }`, `light.spot{ position = {0, 1, 0}, range = 3 }`,
	`light.area{ position = {0, 1, 0}, temperature = 3000 }`, `light.area{ position = {0, 1, 0}, shape = "sphere" }`, `light.ambient{}`,
	`rig{ light.ambient{}, light.point{ position = {0, 1, 0} } }`,
	`camera{ position = {0, 0, 1}, fov = 30, shift = {0.1, 0} }`, `camera{ position = {0, 0, 1}, projection = "orthographic", height = 2 }`,
	`camera.fit{ things = { place{ mesh = mesh.sphere{ radius = 1, segments = 8 } } }, ev100 = 3 }`,
	`place{ mesh = mesh.sphere{ radius = 1, segments = 8 }, turn = {0, 30, 0}, name = "a", seen = false }`,
}

// A value changed in nothing is the same value; a value read field by field, and made again of these, too.
func TestWithNothing(t *testing.T) {
	for _, m := range makers {
		e := newEnv()
		l := newState(t, e)
		if err := run(t, l, "local v = "+m+" return tostring(v), tostring(v:with{}), v == v:with{}"); err != nil {
			t.Fatalf("%s: %s", m, message(err))
		}
		if before, after := l.Get(-3).String(), l.Get(-2).String(); before != after {
			t.Errorf("%s\n  is  %s\n  and with{} gives %s", m, before, after)
		}
	}
}

// TestImmutable applies methods at random to a pool of values: what was in the pool reads the same afterwards.
func TestImmutable(t *testing.T) {
	changes := []string{
		`v:with{}`, `v:with{ stops = 2 }`, `v:with{ name = "b" }`, `v:with{ r = 0.5 }`, `v:with{ segments = 5 }`, `v:with{ shininess = 9 }`,
		`v:with{ color = color.grey(0.1) }`, `v:with{ target = {0, 0.5, 0.5} }`, `v:with{ at = {1, 1, 1} }`, `v:with{ margin = 0.2 }`, `v:with{ width = 9 }`,
		`v:with{ material = material.blinn_phong{} }`, `v:with{ ["ambient 1"] = { stops = 3 } }`, `v:turned(30)`, `v:brighter(1)`, `v:only("ambient 1")`,
		`v:without("ambient 1")`, `v:scaled(0.5)`, `v:mixed(color.grey(0), 0.5)`, `rig{ v }`, `place{ mesh = v }`, `camera.fit{ things = { v } }`,
		`frame{ things = { v } }`, `frame{ things = { place{ mesh = mesh.sphere{ radius = 1, segments = 3 } } }, lights = v }`,
		`frame{ things = { place{ mesh = mesh.sphere{ radius = 1, segments = 3 } } }, lights = { v } }`,
	}
	rapid.Check(t, func(t *rapid.T) {
		var scene strings.Builder
		scene.WriteString("local pool, shown = {}, {}\nlocal function add(v) if v ~= nil then pool[#pool + 1] = v shown[#shown + 1] = tostring(v) end end\n")
		for _, m := range rapid.SliceOfN(rapid.SampledFrom(makers), 1, 6).Draw(t, "makers") {
			scene.WriteString("add(" + m + ")\n")
		}
		for _, c := range rapid.SliceOfN(rapid.SampledFrom(changes), 1, 12).Draw(t, "changes") {
			i := rapid.IntRange(1, 6).Draw(t, "place")
			scene.WriteString("pcall(function() local v = pool[(" + number(float64(i)) + " - 1) % #pool + 1] add((" + c + ")) end)\n")
		}
		scene.WriteString("for i, v in ipairs(pool) do if tostring(v) ~= shown[i] then error(shown[i] .. ' became ' .. tostring(v)) end end\n")
		e := newEnv()
		l := lua.NewState()
		defer l.Close()
		Open(l, e)
		if err := l.DoString(scene.String()); err != nil {
			t.Fatalf("%s\n%s", scene.String(), message(err))
		}
		if e.Fatal() != nil {
			t.Fatal(e.Fatal())
		}
	})
}

// Reading what a value is not, or writing to it, is an error for every kind.
func TestStrict(t *testing.T) {
	for _, m := range makers {
		for _, use := range []string{"v.nonesuch", "v.nonesuch()", "v[1]", "v:nonesuch()"} {
			e := newEnv()
			if err := run(t, newState(t, e), "local v = "+m+" return "+use); err == nil {
				t.Errorf("%s: %s is no error", m, use)
			}
		}
		if err := run(t, newState(t, newEnv()), "assert(type(getmetatable("+m+")) == 'string')"); err != nil {
			t.Errorf("%s: its metatable can be had: %s", m, message(err))
		}
		e := newEnv()
		if err := run(t, newState(t, e), "local v = "+m+" v.name = 'x'"); err == nil || !strings.Contains(message(err), "cannot be changed") {
			t.Errorf("%s: writing gives %q", m, message(err))
		}
	}
}

// Iterators that stand in a variable are written with ", nil, nil": the script library leaves the loop's control as it was where
// one expression that is no call is given. The host mends that in every scene.
func TestLoops(t *testing.T) {
	for _, c := range []struct{ scene, want, source string }{
		{`for s in sweep{ {"a", {1, 2}}, {"b", {"x", "y"}} } do add(s.a, s.b) end`, "1 x 1 y 2 x 2 y", "the last axis fastest"},
		{`local s = sweep{ {"a", {1, 2}} } for p in s, nil, nil do for q in s, nil, nil do add(p.a, q.a) end end for p in s, nil, nil do add(p.a) end`, "1 1 1 2 2 1 2 2 1 2", "a sweep within itself, and again"},
		{`local s = sweep{ {"a", {1, 2}} } for p in s, nil, nil do add(p.a) break end for p in s, nil, nil do add(p.a) end`, "1 1 2", "a loop left early"},
		{`for s in sweep{ {"z", {1}}, {"a", {2}}, {"m", {3}} } do s.extra = 4 for k, v in pairs(s) do add(k) end end`, "z a m extra", "keys in the order of the axes"},
		{`for angle, n in turntable{ frames = 4 } do add(angle, n) end`, "0 1 90 2 180 3 270 4", "the last does not repeat the first"},
		{`local t = turntable{ frames = 3, start = -90 } for a in t, nil, nil do for b in t, nil, nil do add(a + b) end end`, "-180 -60 60 -60 60 180 60 180 300", "closed form: sums of -90, 30, 150"},
		{`for _, r in ipairs(data.csv("products.csv")) do for k, v in pairs(r) do add(k) end end`, "article name height article name height", "columns in order, the line not among them"},
	} {
		e := newEnv()
		l := newState(t, e)
		err := run(t, l, "local out = {} local function add(...) for i = 1, select('#', ...) do out[#out + 1] = tostring((select(i, ...))) end end "+c.scene+" return table.concat(out, ' ')")
		if err != nil {
			t.Errorf("%s: %s", c.scene, message(err))
		} else if got := l.Get(-1).String(); got != c.want {
			t.Errorf("%s\n got %s\nwant %s (%s)", c.scene, got, c.want, c.source)
		}
	}
}

func TestRandom(t *testing.T) {
	draw := func(scene, source string) []string {
		e := newEnv()
		e.Scene = scene
		l := newState(t, e)
		if err := run(t, l, source+" local r = random('a') local out = {} for i = 1, 8 do out[i] = r:integer(1, 1000000) end return table.concat(out, ' ')"); err != nil {
			t.Fatal(message(err))
		}
		return strings.Fields(l.Get(-1).String())
	}
	first := draw("scenes/bowl.lua", "")
	if again := draw("elsewhere/bowl.lua", "random('b'):number() random('a'):number()"); !slices.Equal(first, again) {
		t.Errorf("another generator, or another folder, changed the numbers: %v, %v", first, again)
	}
	if other := draw("scenes/jug.lua", ""); slices.Equal(first, other) {
		t.Errorf("two scenes draw the same numbers: %v", first)
	}
	e := newEnv()
	l := newState(t, e)
	if err := run(t, l, `local r = random("x") local seen = {}
		for i = 1, 200 do local n = r:integer(1, 3) seen[n] = true assert(n >= 1 and n <= 3) local x = r:number(-1, 1) assert(x >= -1 and x < 1) end
		assert(seen[1] and seen[2] and seen[3])
		local s = r:shuffle{1, 2, 3, 4, 5} table.sort(s) assert(table.concat(s) == "12345")`); err != nil {
		t.Error(message(err))
	}
}

// TestLeast: what is above 0 and less than a billionth is refused by the name of its key; a billionth itself makes a sound plan.
func TestLeast(t *testing.T) {
	for _, c := range []struct{ scene, call, key, rule string }{
		{`mesh.sphere{ radius = V }`, "mesh.sphere", "radius", "at least 1e-09 metres"},
		{`mesh.plane{ width = V, depth = 1 }`, "mesh.plane", "width", "at least 1e-09 metres"},
		{`mesh.box{ width = 1, height = V }`, "mesh.box", "height", "at least 1e-09 metres"},
		{`mesh.cylinder{ radius = 1, height = V }`, "mesh.cylinder", "height", "at least 1e-09 metres"},
		{`mesh.torus{ radius = 1, tube = V }`, "mesh.torus", "tube", "at least 1e-09 metres"},
		{`mesh.cone{ radius = V, top = 1, height = 1 }`, "mesh.cone", "radius", "0 or at least 1e-09 metres"},
		{`mesh.cone{ radius = 1, top = V, height = 1 }`, "mesh.cone", "top", "0 or at least 1e-09 metres"},
		{`mesh.extrude{ outline = {{0, 0}, {1, 0}, {0, 1}}, depth = V }`, "mesh.extrude", "depth", "at least 1e-09 metres"},
		{`mesh.load("shapes/bare.obj", { unit = V })`, "mesh.load", "unit", "at least 1e-09 metres to one unit of the file"},
		{`place{ mesh = mesh.sphere{ radius = 1 }, scale = V }`, "place", "scale", "at least 1e-09"},
		{`place{ mesh = mesh.sphere{ radius = 1 }, scale = {1, V, 1} }`, "place", "scale", "at least 1e-09 along every axis, or at most -1e-09 to mirror"},
		{`place{ mesh = mesh.sphere{ radius = 1 }, scale = {1, 1, -V} }`, "place", "scale", "at least 1e-09 along every axis, or at most -1e-09 to mirror"},
		{`light.area{ position = {0, 1, 0}, up = {0, 0, 1}, width = V }`, "light.area", "width", "at least 1e-09 metres"},
		{`light.area{ position = {0, 1, 0}, shape = "sphere", radius = V }`, "light.area", "radius", "at least 1e-09 metres"},
		{`light.point{ position = {0, 1, 0}, range = V }`, "light.point", "range", "at least 1e-09 metres"},
		{`light.spot{ position = {0, 1, 0}, outer = V }`, "light.spot", "outer", "at least 1e-09 degrees from the axis"},
		{`camera{ position = {0, 0, 1}, focal = V }`, "camera", "focal", "at least 1e-09 millimetres"},
		{`camera{ position = {0, 0, 1}, sensor = V }`, "camera", "sensor", "at least 1e-09 millimetres"},
		{`camera{ position = {0, 0, 1}, fov = V }`, "camera", "fov", "at least 1e-09 degrees"},
		{`camera{ position = {0, 0, 1}, focus = V }`, "camera", "focus", "at least 1e-09 metres"},
		{`camera{ position = {0, 0, 1}, projection = "orthographic", height = V }`, "camera", "height", "at least 1e-09 metres"},
		{`material.blinn_phong{ opacity = V }`, "material.blinn_phong", "opacity", "at least 1e-09"},
	} {
		for _, v := range []string{"5e-324", "1e-300", "9.99e-10"} {
			err := run(t, newState(t, newEnv()), "return "+strings.ReplaceAll(c.scene, "V", v))
			if got, want := message(err), "scenes/test.lua:1: "+c.call+": "+c.key+" must be "+c.rule+", got "; !strings.HasPrefix(got, want) {
				t.Errorf("%s at %s\n got %s\nwant %s…", c.scene, v, got, want)
			}
		}
		use := map[string]string{
			"mesh": "things = { place{ mesh = x } }", "place": "things = { x }", "light": "things = { ball }, lights = { x }",
			"camera": "things = { ball }, camera = x", "material": "things = { ball:with{ material = x } }",
		}
		maker, _, _ := strings.Cut(c.call, ".")
		scene := ball + "local x = " + strings.ReplaceAll(c.scene, "V", "1e-9") + " frame{ " + use[maker] + " }"
		if p, err := plan(t, newEnv(), scene); err != nil {
			t.Errorf("%s: %s", scene, message(err))
		} else if err := p.Validate(); err != nil {
			t.Errorf("%s: %v", scene, err)
		}
	}
}
