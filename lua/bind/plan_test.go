package bind

import (
	"fmt"
	"math"
	"reflect"
	"slices"
	"strings"
	"testing"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// The example of the design page.
const bowlScene = `
local bowl = mesh.lathe{ profile = {{0, 0}, {0.06, 0}, {0.13, 0.06}, {0.15, 0.11}, {0.145, 0.11}, {0, 0.02}}, segments = 24 }
local glazes = { oxblood = color "#6d1a1a", celadon = color "#9fc3a4", slate = color "#39434d" }
local lights = rig{
  light.area{ name = "key", shape = "rectangle", width = 0.6, height = 0.6,
              position = {0.7, 0.9, 0.6}, target = {0, 0.05, 0}, intensity = 2500 },
  light.ambient{ name = "room", intensity = 40 },
}
settings{ size = {480, 360}, samples = 64, exposure = lights:meter{ at = {0, 0.05, 0}, facing = {0, 0.4, 1} } }
for step in sweep{ {"gloss", geometric(4, 256, 4)}, {"glaze", {"oxblood", "celadon", "slate"}} } do
  local glaze = material.blinn_phong{ diffuse = glazes[step.glaze], specular = color.grey(0.3), shininess = step.gloss }
  local subject = place{ mesh = bowl, material = glaze }
  frame{ tags = step, lights = lights, things = { subject, place{ mesh = mesh.plane{ width = 2 }, backdrop = true } },
         camera = camera.fit{ things = { subject }, direction = {0, 0.45, 1}, margin = 0.15, focal = 70 } }
end
sheet{ title = "Bowl: gloss by glaze", rows = "glaze", columns = "gloss" }
`

func TestDesignExample(t *testing.T) {
	p := mustPlan(t, bowlScene)
	if len(p.Frames) != 12 || len(p.Meshes) != 2 || len(p.Materials) != 13 || len(p.Lights) != 2 {
		t.Fatalf("%d frames, %d meshes, %d materials, %d lights, want 12, 2, 13 (a default one for the table), 2", len(p.Frames), len(p.Meshes), len(p.Materials), len(p.Lights))
	}
	f := p.Frames[1]
	if f.Name != "gloss-4_glaze-celadon" || f.Pos != (model.Pos{File: "scenes/test.lua", Line: 13}) {
		t.Errorf("second frame: %q at %v", f.Name, f.Pos)
	}
	want := []model.Tag{
		{Key: "gloss", Value: model.Value{Kind: model.NumberValue, Number: 4}}, {Key: "glaze", Value: model.Value{Kind: model.TextValue, Text: "celadon"}},
	}
	if !slices.Equal(f.Tags, want) {
		t.Errorf("tags %v, want %v", f.Tags, want)
	}
	for _, g := range p.Frames {
		if g.Camera != f.Camera || g.Settings.Exposure != f.Settings.Exposure || !slices.Equal(g.Lights, f.Lights) {
			t.Errorf("%s: camera, exposure or lights differ from those of %s", g.Name, f.Name)
		}
	}
	wantSheet := model.Sheet{Name: "bowl-gloss-by-glaze", Title: "Bowl: gloss by glaze", Rows: []string{"glaze"}, Columns: []string{"gloss"},
		Pos: model.Pos{File: "scenes/test.lua", Line: 16}}
	if len(p.Sheets) != 1 || !reflect.DeepEqual(p.Sheets[0], wantSheet) {
		t.Errorf("sheets %+v", p.Sheets)
	}
}

// The same scene gives the same plan, to the last field.
func TestSameSceneSamePlan(t *testing.T) {
	first := model.Sum(mustPlan(t, bowlScene))
	for range 5 {
		if again := model.Sum(mustPlan(t, bowlScene)); again != first {
			t.Fatalf("plans differ: %v and %v", first, again)
		}
	}
}

// A file that does not load fails the frames that show it, and no others.
func TestFailedMesh(t *testing.T) {
	p := mustPlan(t, ball+`
		for _, name in ipairs{ "missing", "bad", "jug" } do
			local shown = place{ mesh = mesh.load("shapes/" .. name .. ".obj"), at = {0, 0.1, 0} }
			frame{ tags = { name = name, by = "own" }, things = { ball, shown } }
			frame{ tags = { name = name, by = "camera" }, things = { ball }, camera = camera.fit{ things = { shown } } }
		end`)
	wants := []string{
		`scenes/test.lua:3: mesh.load: shapes/missing.obj: file does not exist`,
		`scenes/test.lua:3: mesh.load: shapes/bad.obj:4: `,
		``,
	}
	for i, f := range p.Frames {
		want := wants[i/2]
		if want == "" && f.Failure != "" || !strings.HasPrefix(f.Failure, want) {
			t.Errorf("%s: failure %q, want %q", f.Name, f.Failure, want)
		}
	}
	if len(p.Warnings) != 2 || p.Warnings[0].Pos.Line != 3 {
		t.Errorf("warnings %v, want one for each file that did not load", p.Warnings)
	}
}

// Materials of a file stand by slot; the scene's own come before them.
func TestSlotMaterials(t *testing.T) {
	p := mustPlan(t, `
		local jug = mesh.load("shapes/jug.obj")
		local red = material.blinn_phong{ diffuse = color.linear(1, 0, 0) }
		frame{ things = { place{ mesh = jug } } }
		frame{ things = { place{ mesh = jug, materials = { foot = red } } } }
		frame{ things = { place{ mesh = jug, material = red } } }
		frame{ things = { place{ mesh = mesh.load("shapes/bare.obj") } } }`)
	diffuse := func(frame int) (out []tint.RGB) {
		for _, id := range p.Frames[frame].Things[0].Materials {
			out = append(out, p.Materials[id].Diffuse)
		}
		return out
	}
	body, foot, red := tint.RGB{R: 0.2, G: 0.3, B: 0.4}, tint.Grey(0.1), tint.RGB{R: 1}
	for i, want := range [][]tint.RGB{{body, foot}, {body, red}, {red}, {tint.Grey(0.5)}} {
		if got := diffuse(i); !slices.Equal(got, want) {
			t.Errorf("frame %d shows %v, want %v", i+1, got, want)
		}
	}
}

// The frame's exposure comes before the camera's, that before the one in settings, and all before the meter.
func TestExposure(t *testing.T) {
	p := mustPlan(t, ball+`
		local sun = light.directional{ direction = {0, 0, -1}, intensity = math.pi }
		local cam = camera{ position = {0, 0, 3} }
		frame{ things = { ball }, lights = { sun }, camera = cam }
		frame{ things = { ball }, lights = { sun:with{ stops = 5 } }, camera = cam }
		frame{ things = { ball }, lights = { sun }, camera = cam:with{ exposure = 2 } }
		frame{ things = { ball }, lights = { sun }, camera = cam:with{ exposure = 2 }, exposure = 3 }
		settings{ exposure = 1 }
		frame{ things = { ball }, lights = { sun }, camera = cam }
		frame{ things = { ball }, lights = { sun }, camera = cam:with{ ev100 = 0 } }`)
	// The meter faces the camera: E = π lux shows the card as it is, 0 stops; it is read once. EV 100 = 0 is 1.2 nit, ISO 12232.
	for i, want := range []float64{0, 0, 2, 3, 1, -math.Log2(1.2)} {
		if got := p.Frames[i].Settings.Exposure; math.Abs(got-want) > 1e-6 {
			t.Errorf("frame %d: exposure %v, want %v", i+1, got, want)
		}
	}
}

// What names no camera and no light is seen whole and lit, and turning it changes neither camera nor lights nor exposure.
func TestDefaults(t *testing.T) {
	p := mustPlan(t, `
		local bar = place{ mesh = mesh.box{ width = 0.3, height = 0.1, depth = 0.05 }, at = {1, 0, 2} }
		local ground = place{ mesh = mesh.plane{ width = 9 }, backdrop = true }
		for angle, number in turntable{ frames = 7 } do
			frame{ tags = { view = number }, things = { bar:with{ turn = {0, angle, 0} }, ground } }
		end`)
	first := p.Frames[0]
	for _, f := range p.Frames {
		if f.Camera != first.Camera || !slices.Equal(f.Lights, first.Lights) || f.Settings.Exposure != first.Settings.Exposure {
			t.Errorf("%s: camera, lights or exposure differ from the first frame's", f.Name)
		}
	}
	if d := math.Hypot(first.Camera.Position[0]-1, first.Camera.Position[2]-2); d > 3 {
		t.Errorf("the camera stands %v metres away: it has framed the ground", d)
	}
	if len(first.Lights) != 2 || first.Settings.Exposure == 0 {
		t.Errorf("lights %v, exposure %v: want the default pair, metered", first.Lights, first.Settings.Exposure)
	}
	if s := p.Sheets; len(s) != 1 || s[0].Title != "Test" || !slices.Equal(s[0].Columns, []string{"view"}) || s[0].Rows != nil {
		t.Errorf("default sheet %+v", s)
	}
}

func TestFieldOfView(t *testing.T) {
	p := mustPlan(t, ball+`
		frame{ things = { ball }, size = {300, 200}, camera = camera{ position = {0, 0, 1}, fov = 2 * math.deg(math.atan(12 / 50)) } }
		frame{ things = { ball }, size = {200, 200}, camera = camera{ position = {0, 0, 1}, fov = 90 } }`)
	for i, want := range []float64{50, 18} {
		if got := p.Frames[i].Camera.FocalMM; math.Abs(got-want) > 1e-9 {
			t.Errorf("frame %d: focal length %v mm, want %v (tan(fov/2) = sensor height / 2 focal)", i+1, got, want)
		}
	}
}

// A fit is worked out for the picture's own shape.
func TestFitFollowsSize(t *testing.T) {
	p := mustPlan(t, `
		local bar = place{ mesh = mesh.box{ width = 0.4, height = 0.1 } }
		local cam = camera.fit{ things = { bar } }
		frame{ things = { bar }, camera = cam }
		frame{ things = { bar }, camera = cam, size = {300, 900} }`)
	if wide, narrow := p.Frames[0].Camera.Position, p.Frames[1].Camera.Position; narrow[2] < wide[2]*1.5 {
		t.Errorf("a narrow picture is taken from %v, a wide one from %v: want farther away", narrow, wide)
	}
}

func TestForced(t *testing.T) {
	exr := []model.Format{model.FormatEXR}
	for _, test := range []struct {
		forced                 Forced
		width, height, samples int
	}{
		{Forced{Formats: exr}, 300, 901, 11},
		{Forced{Formats: exr, Draft: true}, 150, 450, 2},
		{Forced{Formats: exr, Width: 100, Height: 51, Samples: 10}, 100, 51, 10},
		{Forced{Formats: exr, Width: 100, Height: 51, Samples: 10, Draft: true}, 100, 51, 10},
		{Forced{Formats: exr, Width: 100, Height: 51, Draft: true}, 100, 51, 2},
		{Forced{Formats: exr, Samples: 10, Draft: true}, 150, 450, 10},
	} {
		e := newEnv()
		e.Forced = test.forced
		p, err := plan(t, e, ball+`frame{ things = { ball }, size = {300, 901}, samples = 11, formats = {"png", "exr-half"} }`)
		if err != nil {
			t.Fatal(message(err))
		}
		if s := p.Frames[0].Settings; s.Width != test.width || s.Height != test.height || s.Samples != test.samples || !slices.Equal(s.Formats, exr) {
			t.Errorf("%+v: settings %+v", test.forced, s)
		}
	}
}

// TestFormatsTakeAHyphen: the command line and scenes both write exr_half, and both take exr-half.
func TestFormatsTakeAHyphen(t *testing.T) {
	for _, formats := range []string{`"exr-half"`, `"exr_half"`, `{"exr-half"}`} {
		p, err := plan(t, newEnv(), ball+`frame{ things = { ball }, formats = `+formats+` }`)
		if err != nil || !slices.Equal(p.Frames[0].Settings.Formats, []model.Format{model.FormatEXRHalf}) {
			t.Errorf("%s: error %v", formats, err)
		}
	}
}

// TestNoiseAndSeed: a frame's own noise and seed win over those in settings and leave them as they are; 0 takes the target back.
func TestNoiseAndSeed(t *testing.T) {
	p, err := plan(t, newEnv(), ball+`
		settings{ noise = 0.5, samples = 256, seed = 3, passes = { "samples", "noise" } }
		for i = 1, 3 do frame{ things = { ball }, name = "at-" .. i, seed = i * 10 } end
		frame{ things = { ball }, name = "plain", noise = 0 }
		frame{ things = { ball }, name = "fine", noise = 0.1, seed = 4294967295 }`)
	if err != nil {
		t.Fatal(message(err))
	}
	for i, want := range []struct {
		noise float64
		seed  uint32
	}{{0.5, 10}, {0.5, 20}, {0.5, 30}, {0, 3}, {0.1, 4294967295}} {
		s := p.Frames[i].Settings
		if s.Noise != want.noise || s.Seed != want.seed || s.Samples != 256 || !slices.Equal(s.Passes, []model.Pass{model.PassSamples, model.PassNoise}) {
			t.Errorf("frame %s: settings %+v, want noise %v and seed %d", p.Frames[i].Name, s, want.noise, want.seed)
		}
	}
}

// TestDraftNoise: with a quarter of the rays the error doubles, and so does what is asked for.
func TestDraftNoise(t *testing.T) {
	e := newEnv()
	e.Forced.Draft = true
	p, err := plan(t, e, ball+`
		for i, noise in ipairs{ 0, 0.5, 40 } do frame{ things = { ball }, name = "at-" .. i, noise = noise } end`)
	if err != nil {
		t.Fatal(message(err))
	}
	for i, want := range []float64{0, 1, model.MaxNoise} {
		if got := p.Frames[i].Settings.Noise; got != want {
			t.Errorf("noise %v in a draft, want %v", got, want)
		}
	}
}

func TestParams(t *testing.T) {
	e := newEnv()
	e.Overrides = []Override{{"gloss", "1"}, {"gloss", "64"}, {"tint", "#123456"}, {"ground", "false"}}
	p, err := plan(t, e, ball+`
		local gloss = param("gloss", 32, { min = 1, max = 512, help = "exponent" })
		local ground, tint, name = param("ground", true), param("tint", color "#fff"), param("name", "bowl")
		frame{ things = { ball }, tags = { gloss = gloss, ground = ground, tint = tint.hex, name = name } }`)
	if err != nil {
		t.Fatal(message(err))
	}
	want := []model.Param{{Name: "gloss", Value: "64", Set: true, Help: "exponent"}, {Name: "ground", Value: "false", Set: true},
		{Name: "tint", Value: "#123456", Set: true}, {Name: "name", Value: "bowl"}}
	if !slices.Equal(p.Params, want) {
		t.Errorf("params %+v", p.Params)
	}
	if n := p.Frames[0].Name; n != "gloss-64_ground-false_tint--123456_name-bowl" {
		t.Errorf("frame name %q", n)
	}
}

func TestFrameNames(t *testing.T) {
	for _, c := range []struct{ tags, want string }{
		{`{ gloss = 4, glaze = "slate" }`, "gloss-4_glaze-slate"},
		{`{ a = 0.25, b = -3, c = true, d = -0 }`, "a-0.25_b--3_c-true_d-0"},
		{`{ ["Höhe"] = "größer als" }`, "Hohe-grou00dfer-als"},
		{`{ n = 1e20 }`, "n-1e20"},
		{`{ g = "青磁" }`, "g-u9752u78c1"},
		{`{ a = "..", b = "../x" }`, "a-.._b-..-x"},
		{`{ [".a"] = "" }`, "-.a-"},
		{`{ a = "no." }`, "a-no.-"},
		{`{ ["con.a"] = 1 }`, "-con.a-1"},
		{`{ con = 1 }`, "con-1"},
	} {
		p := mustPlan(t, ball+`frame{ things = { ball }, tags = `+c.tags+` }`)
		if got := p.Frames[0].Name; got != c.want || !model.ValidName(got) {
			t.Errorf("%s is named %q, want %q", c.tags, got, c.want)
		}
	}
	p := mustPlan(t, ball+`for i = 1, 2 do frame{ things = { ball }, tags = { a = string.rep("x", 150), b = i } } end frame{ things = { ball } }`)
	if a, b := p.Frames[0].Name, p.Frames[1].Name; a == b || len(a) > model.MaxNameLength || p.Frames[2].Name != "frame-3" {
		t.Errorf("long names %q and %q, then %q", a, b, p.Frames[2].Name)
	}
}

func TestSheets(t *testing.T) {
	p := mustPlan(t, ball+`
		settings{ passes = { "diffuse", "depth" } }
		for step in sweep{ {"a", {1, 2}}, {"b", {"x", "y"}} } do frame{ tags = step, things = { ball } } end
		sheet{ title = "Über: all", columns = {"b", "a"}, pages = "pass", where = { a = 1, b = {"x", "y"} }, order = { b = {"y"} },
			caption = "{a} {name} {pass}", per_line = 3, tile = {120, 90}, paper = "light",
			reference = { a = 1, b = "x" }, show = "difference" }
		sheet{ title = "Über: all" }
		sheet{ where = { a = 2 } }
		sheet{ per_line = 2 }
		sheet{ name = "by-hand" }`)
	text := func(s string) model.Value { return model.Value{Kind: model.TextValue, Text: s} }
	one := model.Value{Kind: model.NumberValue, Number: 1}
	want := model.Sheet{Name: "uber-all", Title: "Über: all", Columns: []string{"b", "a"}, Pages: []string{"pass"},
		Order:   []model.TagOrder{{Key: "b", Values: []model.Value{text("y")}}},
		Where:   []model.TagChoice{{Key: "a", Values: []model.Value{one}}, {Key: "b", Values: []model.Value{text("x"), text("y")}}},
		Caption: "{a} {name} {pass}", PerLine: 3, Tile: [2]int{120, 90}, Paper: model.PaperLight,
		Reference: []model.TagChoice{{Key: "a", Values: []model.Value{one}}, {Key: "b", Values: []model.Value{text("x")}}}, Show: model.ShowDifference, Pos: model.Pos{File: "scenes/test.lua", Line: 4}}
	if !reflect.DeepEqual(p.Sheets[0], want) {
		t.Errorf(" got %+v\nwant %+v", p.Sheets[0], want)
	}
	// What is left out is as on the sheet of a scene that asks for none.
	for i, want := range []struct {
		name, title   string
		columns, rows []string
	}{
		{"uber-all-2", "Über: all", []string{"a"}, []string{"b"}},
		{"test", "Test", []string{"b"}, nil},
		{"test-2", "Test", []string{"a", "b"}, nil},
		{"by-hand", "", []string{"a"}, []string{"b"}},
	} {
		s := p.Sheets[i+1]
		if s.Name != want.name || s.Title != want.title || !slices.Equal(s.Columns, want.columns) || !slices.Equal(s.Rows, want.rows) {
			t.Errorf("got %+v, want %+v", s, want)
		}
	}
}

// One thing, one light and one pass stand for a list of one.
func TestOneForAList(t *testing.T) {
	one := mustPlan(t, ball+`frame{ things = ball, lights = light.ambient{}, passes = "depth" }`)
	list := mustPlan(t, ball+`frame{ things = { ball }, lights = { light.ambient{} }, passes = { "depth" } }`)
	if model.Sum(one) != model.Sum(list) {
		t.Errorf("got %+v, want %+v", one.Frames[0], list.Frames[0])
	}
}

// Without a sheet, the tags that vary make one: the first across, the others down.
func TestDefaultSheet(t *testing.T) {
	for _, c := range []struct {
		loop          string
		columns, rows []string
	}{
		{`frame{ tags = { a = i, b = i % 2, fixed = 1, c = -i }, things = { ball } }`, []string{"a"}, []string{"b", "c"}},
		{`frame{ things = { ball } }`, nil, nil},
		{`frame{ tags = { a = i }, things = { ball } } frame{ tags = { a = i, b = 1 }, things = { ball } }`, nil, nil}, // b would leave half of them out
		{`frame{ name = "f" .. i, tags = { a = i % 2 }, things = { ball } }`, nil, nil},                                // a does not tell them apart
	} {
		p := mustPlan(t, ball+"for i = 1, 4 do "+c.loop+" end")
		s := p.Sheets[0]
		if !slices.Equal(s.Columns, c.columns) || !slices.Equal(s.Rows, c.rows) || s.Caption != "" || s.Name != "test" {
			t.Errorf("%s: %+v", c.loop, s)
		}
	}
}

// Messages from inside the program's own modules point at the user's line.
func TestShippedModules(t *testing.T) {
	e := newEnv()
	e.Shipped = func(chunk string) bool { return chunk == "stands.lua" }
	l := newState(t, e)
	module, err := l.Load(strings.NewReader("\nfunction table_top(width)\n  return place{ mesh = mesh.plane{ width = width } }\nend"), "stands.lua")
	if err != nil {
		t.Fatal(err)
	}
	l.Push(module)
	l.Call(0, 0)
	err = run(t, l, "\n\nlocal t = table_top(-1)")
	if got, want := message(err), "scenes/test.lua:3: mesh.plane: width must be > 0 metres, got -1 (in stands.lua:3)"; got != want {
		t.Errorf("got %s\nwant %s", got, want)
	}
}

// A bug in a binding ends the scene whatever pcall says.
func TestPanicsAreFatal(t *testing.T) {
	e := newEnv()
	l := newState(t, e)
	broken := newEntry(call{name: "broken", keys: "a"})
	broken.run = func(a *args) lua.LValue { return a.get("undeclared") }
	l.SetGlobal("broken", l.NewFunction(e.guard(broken)))
	if err := run(t, l, "pcall(broken, {})"); err != nil {
		t.Fatal(message(err))
	}
	if e.Fatal() == nil || !strings.Contains(e.Fatal().Error(), "broken declares no argument undeclared") {
		t.Errorf("fatal: %v", e.Fatal())
	}
	if _, err := e.Finish(); err == nil {
		t.Error("the plan was given out all the same")
	}
}

func TestTooMany(t *testing.T) {
	e := newEnv()
	l := newState(t, e)
	e.plan.Frames = make([]model.Frame, model.MaxFrames)
	if got := message(run(t, l, ball+"frame{ things = { ball } }")); !strings.Contains(got, "frame: the plan has 200000 frames already") {
		t.Errorf("got %q", got)
	}
	e.plan.Sheets = make([]model.Sheet, maxSheets)
	if got := message(run(t, l, "sheet{}")); !strings.Contains(got, "sheet: the plan has 1000 sheets already") {
		t.Errorf("got %q", got)
	}
}

// BenchmarkPlan evaluates a scene of many frames: a sweep over materials on a fitted form.
func BenchmarkPlan(b *testing.B) {
	for _, frames := range []int{1000, 100_000} {
		b.Run(fmt.Sprintf("frames=%d", frames), func(b *testing.B) {
			scene := strings.Replace(bowlScene, "geometric(4, 256, 4)", fmt.Sprintf("steps(1, 1000, %d)", frames/3+1), 1)
			b.ReportAllocs()
			for b.Loop() {
				p := mustPlan(b, scene)
				b.ReportMetric(float64(len(p.Frames)), "frames")
			}
		})
	}
}

// TestFramingIsTheEngines: what looks at every point of a mesh is handed to the host, which bills it apart from the scene.
func TestFramingIsTheEngines(t *testing.T) {
	for _, c := range []struct {
		scene string
		works int
	}{
		{`frame{ things = { ball } }`, 2}, // the default camera, the default lights
		{`frame{ things = { ball }, name = "a" } frame{ things = { ball }, name = "b" }`, 2},
		{`frame{ things = { ball }, camera = camera.fit{ things = { ball } }, lights = { light.ambient{} }, exposure = 0 }`, 1},
		{`frame{ things = { ball }, camera = camera{ position = {0, 0, 1} }, lights = { light.ambient{} }, exposure = 0 }`, 0},
	} {
		e := newEnv()
		works := 0
		e.Engine = func(work func()) {
			works++
			work()
		}
		got, err := plan(t, e, ball+c.scene)
		if err != nil {
			t.Fatalf("%s: %s", c.scene, message(err))
		}
		want, err := plan(t, newEnv(), ball+c.scene)
		if err != nil || works != c.works || got.Frames[0].Camera != want.Frames[0].Camera {
			t.Errorf("%s: %d works of the engine, want %d; camera %v, without a host %v (%v)", c.scene, works, c.works, got.Frames[0].Camera, want.Frames[0].Camera, err)
		}
	}
}

// TestSheetOfADevice: what Windows keeps for devices is made no sheet's name, neither of a title nor of the scene's own name.
func TestSheetOfADevice(t *testing.T) {
	e := newEnv()
	e.Scene = "aux.lua"
	p, err := plan(t, e, ball+`frame{ things = { ball } } sheet{} sheet{ title = "LPT1.shelf" }`)
	if err != nil {
		t.Fatal(message(err))
	}
	if a, b := p.Sheets[0].Name, p.Sheets[1].Name; a != "sheet-aux" || b != "sheet-lpt1.shelf" {
		t.Errorf("sheets are named %q and %q", a, b)
	}
}
