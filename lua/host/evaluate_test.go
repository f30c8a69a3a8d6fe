package host

import (
	"context"
	"encoding/json"
	"errors"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"testing"

	lua "github.com/yuin/gopher-lua"

	"lampbook/lua/bind"
)

const bowl = `
local gloss = param("gloss", 32, { min = 1, max = 512, help = "exponent" })
local form = mesh.lathe{ profile = {{0, 0}, {0.06, 0}, {0.13, 0.06}, {0.15, 0.11}, {0.145, 0.11}, {0, 0.02}} }
local lights = rig{
  light.point{ name = "key", position = {0.7, 0.9, 0.6}, intensity = 40 },
  light.ambient{ name = "room", intensity = 40 },
}
settings{ size = {48, 36}, samples = 4 }
local glazes = { oxblood = color "#6d1a1a", celadon = color "#9fc3a4" }
local names = {}
for name in pairs(glazes) do names[#names + 1] = name end
for step in sweep{ {"gloss", {gloss, 64}}, {"glaze", names} } do
  local thing = place{ mesh = form, material = material.blinn_phong{ diffuse = glazes[step.glaze], shininess = step.gloss } }
  local ok, why = pcall(frame, { tags = step, lights = lights, things = { thing },
    camera = camera{ position = {0, 0.4, 1}, target = {0, 0.05, 0} } })
  if not ok then error(why, 0) end
end
sheet{ title = "Bowl", rows = "glaze", columns = "gloss" }
`

// scene writes files into a new folder and returns the path of the first.
func scene(t *testing.T, files ...string) string {
	t.Helper()
	dir := t.TempDir()
	for i := 0; i < len(files); i += 2 {
		p := filepath.Join(dir, files[i])
		if err := os.MkdirAll(filepath.Dir(p), 0o755); err != nil {
			t.Fatal(err)
		}
		if err := os.WriteFile(p, []byte(files[i+1]), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	return filepath.Join(dir, files[0])
}

func TestEvaluate(t *testing.T) {
	path := scene(t, "bowl.lua", bowl)
	plan, library, err := Evaluate(context.Background(), path, Options{Set: []Override{{Name: "gloss", Text: "16"}}})
	if err != nil {
		t.Fatal(err)
	}
	if len(plan.Frames) != 4 || len(plan.Sheets) != 1 || library == nil {
		t.Fatalf("%d frames, %d sheets", len(plan.Frames), len(plan.Sheets))
	}
	if pos := plan.Frames[0].Pos; pos.File != filepath.ToSlash(path) || pos.Line != 14 {
		t.Errorf("a frame registered through pcall stands at %v, want line 14", pos)
	}
	if p := plan.Params[0]; p.Value != "16" || !p.Set {
		t.Errorf("parameter %+v", p)
	}
	if _, err := library.Get(plan.Meshes[0]); err != nil {
		t.Error(err)
	}
}

func TestSamePlanEachTime(t *testing.T) {
	path := scene(t, "bowl.lua", bowl)
	first := ""
	for range 50 {
		plan, _, err := Evaluate(context.Background(), path, Options{})
		if err != nil {
			t.Fatal(err)
		}
		text, err := json.Marshal(plan)
		if err != nil {
			t.Fatal(err)
		}
		if first == "" {
			first = string(text)
		}
		if string(text) != first {
			t.Fatalf("one evaluation gave\n%s\nanother\n%s", first, text)
		}
	}
}

func TestEvaluateErrors(t *testing.T) {
	for _, c := range []struct {
		name, script, want string
		set                []Override
	}{
		{"misspelt table", "ligth.point{}", "scene.lua:1: 'ligth' is not defined; did you mean \"light\"?", nil},
		{"misspelt function", "light.piont{}", "scene.lua:1: light has no", nil},
		{"misspelt key", "\nmesh.sphere{ radus = 1 }", "scene.lua:2:", nil},
		{"caught and thrown on", "local ok, e = pcall(mesh.sphere, { radius = -1 })\nerror(e, 0)", "scene.lua:1: mesh.sphere", nil},
		{"over a table", "light = {}", "scene.lua:1: 'light' belongs to the scene language", nil},
		{"into a table", "light.mine = 1", "scene.lua:1: light cannot be changed", nil},
		{"no frame", "local x = 1", "scene.lua: the scene registers no frame", nil},
		{"unknown parameter", bowl, `"glos"`, []Override{{Name: "glos", Text: "1"}}},
		{"wrong parameter", bowl, "gloss", []Override{{Name: "gloss", Text: "shiny"}}},
		{"missing module", `require "riggs"`, "scene.lua:1: require: no module is called 'riggs'; did you mean \"rigs\"? accepted: ", nil},
		{"missing module, near to the scene's own name", `require "scen"`, "scene.lua:1: require: no module is called 'scen'; accepted: ", nil},
		{"module of Lua", `require "os"`, "surfaces, or a .lua file beside the scene", nil},
		{"missing table", `data.csv("none.csv")`, "none.csv: no such file beside the scene, in ", nil},
		{"csv outside", `data.csv("/etc/passwd")`, "--assets DIR", nil},
	} {
		t.Run(c.name, func(t *testing.T) {
			path := scene(t, "scene.lua", c.script, "lamp.obj", "v 0 0 0\n", "rigs2.lua", "return {}")
			_, _, err := Evaluate(context.Background(), path, Options{Set: c.set})
			var e *Error
			if !errors.As(err, &e) {
				t.Fatalf("got %v", err)
			}
			if !strings.Contains(e.Error(), c.want) {
				t.Errorf("\n got %s\nwant %s", e, c.want)
			}
			if strings.Contains(c.want, "scene.lua:") && !strings.HasPrefix(e.Error(), filepath.ToSlash(path)) {
				t.Errorf("%s does not begin with the scene's path", e)
			}
		})
	}
}

func TestSceneFiles(t *testing.T) {
	dir := t.TempDir()
	write := func(name, text string) string {
		p := filepath.Join(dir, name)
		if err := os.WriteFile(p, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
		return p
	}
	fifo := filepath.Join(dir, "pipe.lua")
	if err := makePipe(fifo); err != nil {
		t.Skipf("no pipes here: %v", err)
	}
	for path, want := range map[string]string{
		filepath.Join(dir, "none.lua"): "no such file", dir: "a folder, not a scene", fifo: "not a regular file",
		write("scene.txt", ""):                                "ends in .lua",
		write("big.lua", strings.Repeat("-", 2<<20)):          "data.csv",
		write("bom.lua", "\xef\xbb\xbflocal x = y"):           "bom.lua:1: 'y' is not defined",
		write("shebang.lua", "#!/usr/bin/lampbook\nprint(y)"): "shebang.lua:2: 'y' is not defined",
		write("both.lua", "\xef\xbb\xbf#!/bin/x\r\nprint(y)"): "both.lua:2: 'y' is not defined",
	} {
		_, _, err := Evaluate(context.Background(), path, Options{})
		if e := new(Error); !errors.As(err, &e) || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %q", path, err, want)
		}
	}
	if _, _, err := Evaluate(context.Background(), filepath.Join(dir, "none.lua"), Options{}); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("got %v", err)
	}
	if _, _, err := Evaluate(context.Background(), filepath.Join(dir, "bom.lua"), Options{Assets: []string{filepath.Join(dir, "nowhere")}}); err == nil || !strings.Contains(err.Error(), "--assets") {
		t.Errorf("got %v", err)
	}
}

func TestModules(t *testing.T) {
	path := scene(t, "scene.lua", `
local one, two = require "tools.form", require "tools.form"
print(one == two, one.name, require "plain")
print(pcall(require, "tools.bad"))
print(pcall(require, "tools.bad"))
`, "tools/form.lua", `print "loaded" return { name = ... }`, "plain.lua", "local x = 1", "tools/bad.lua", "\nerror 'not today'")
	var out strings.Builder
	_, _, err := Evaluate(context.Background(), path, Options{Print: &out})
	if err == nil || !strings.Contains(err.Error(), "no frame") {
		t.Fatal(err)
	}
	bad := filepath.ToSlash(filepath.Join(filepath.Dir(path), "tools/bad.lua"))
	want := "loaded\ntrue\ttools.form\ttrue\n" + strings.Repeat("false\t"+bad+":2: not today\n", 2)
	if out.String() != want {
		t.Errorf("printed\n%s\nwant\n%s", out.String(), want)
	}
}

func TestPrint(t *testing.T) {
	path := scene(t, "scene.lua", `print("a", 1, nil, {}, 0.1, "\27[31mred\r\0") for i = 1, 1e5 do print(("x"):rep(100)) end`)
	var out strings.Builder
	_, _, err := Evaluate(context.Background(), path, Options{Print: &out})
	if err == nil || !strings.Contains(err.Error(), "no frame") {
		t.Fatal(err)
	}
	first, _, _ := strings.Cut(out.String(), "\n")
	if first != "a\t1\tnil\ttable\t0.1\t\\x1b[31mred\\x0d\\x00" {
		t.Errorf("printed %q", first)
	}
	if n := out.Len(); n > maxPrinted+200 || !strings.HasSuffix(out.String(), "left out\n") {
		t.Errorf("%d bytes printed, ending %q", n, out.String()[n-40:])
	}
}

func TestFilesJail(t *testing.T) {
	dir := t.TempDir()
	for _, d := range []string{"scene/sub", "assets", "secret"} {
		if err := os.MkdirAll(filepath.Join(dir, d), 0o755); err != nil {
			t.Fatal(err)
		}
	}
	for _, f := range []string{"scene/in.obj", "scene/sub/deep.obj", "assets/shared.obj", "secret/key", "scene-b.obj"} {
		if err := os.WriteFile(filepath.Join(dir, f), []byte(f), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	links := map[string]string{
		"scene/out.obj": "../secret/key", "scene/abs.obj": filepath.Join(dir, "secret/key"), "scene/outdir": "../secret", "scene/inside.obj": "sub/deep.obj",
		"scene/loop.obj": "loop.obj", "scene/null.obj": "/dev/null",
	}
	for name, to := range links {
		if err := os.Symlink(to, filepath.Join(dir, name)); err != nil {
			t.Skipf("no links here: %v", err)
		}
	}
	if err := makePipe(filepath.Join(dir, "scene/pipe.obj")); err != nil {
		t.Skipf("no pipes here: %v", err)
	}
	f, err := OpenFiles(filepath.Join(dir, "scene"), []string{filepath.Join(dir, "assets")}, 17)
	if err != nil {
		t.Fatal(err)
	}
	for name, want := range map[string]string{
		"in.obj": "scene/in.obj", "./sub/../in.obj": "scene/in.obj", "sub/deep.obj": "scene/sub/deep.obj", "shared.obj": "assets/shared.obj",
		"inside.obj": "scene/sub/deep.obj", "../assets/shared.obj": "assets/shared.obj", filepath.Join(dir, "assets/shared.obj"): "assets/shared.obj",
		filepath.Join(dir, "scene/in.obj"): "scene/in.obj",
	} {
		at, err := f.Find(name)
		if err != nil {
			t.Errorf("%s: %v", name, err)
			continue
		}
		text, err := f.Read(at)
		if want != "scene/sub/deep.obj" && (err != nil || string(text) != want) {
			t.Errorf("%s: read %q from %s (%v), want %q", name, text, at, err, want)
		}
		if want == "scene/sub/deep.obj" && (err == nil || !strings.Contains(err.Error(), "larger than")) {
			t.Errorf("%s: a file of 18 bytes passes a bound of 17: %q, %v", name, text, err)
		}
	}
	for name, want := range map[string]string{
		"../secret/key": "--assets DIR", filepath.Join(dir, "secret/key"): "--assets DIR", "/etc/passwd": "--assets DIR", "out.obj": "--assets DIR",
		"abs.obj": "--assets DIR", "outdir/key": "--assets DIR", "sub/../../secret/key": "--assets DIR", "../scene-b.obj": "--assets DIR", "null.obj": "--assets DIR",
		"": "empty", "sub": "a folder", "pipe.obj": "not a regular file", "loop.obj": "", "in.ojb": `did you mean "in.obj"?`, "sub/dep.obj": `did you mean "sub/deep.obj"?`,
		"a\x00b": "zero byte", strings.Repeat("a/", 4000): "longer than", "none/none.obj": "none/none.obj: no such file beside the scene, in " + filepath.ToSlash(filepath.Join(dir, "scene")) + ", nor in --assets", "..": "", ".": "a folder",
	} {
		if at, err := f.Find(name); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("Find(%q) = %q, %v; want %q", name, at, err, want)
		}
		if name == "../assets/shared.obj" {
			continue
		}
		if text, err := f.Read(filepath.ToSlash(filepath.Join(dir, "scene", name))); err == nil {
			t.Errorf("Read of %q gave %q", name, text)
		}
	}
	if _, err := f.Find("none.obj"); !errors.Is(err, fs.ErrNotExist) {
		t.Errorf("a missing file gives %v, which is no fs.ErrNotExist", err)
	}
}

// TestEveryGlobalIsProtected assigns over each name of the scene language.
func TestEveryGlobalIsProtected(t *testing.T) {
	limits := Limits{}.withDefaults()
	names := newSandbox(newMeter(t.Context(), limits), limits, func(l *lua.LState) { bind.Open(l, &bind.Env{}) }).names
	for _, name := range []string{"frame", "mesh", "print", "pcall", "math", "string", "table", "require"} {
		if !slices.Contains(names, name) {
			t.Errorf("%s is not among the names %v", name, names)
		}
	}
	for _, name := range append(names, "_G") {
		path := scene(t, "scene.lua", name+" = 1")
		if _, _, err := Evaluate(context.Background(), path, Options{}); err == nil || !strings.Contains(err.Error(), "belongs to the scene language") {
			t.Errorf("%s = 1: %v", name, err)
		}
	}
}

func FuzzScene(f *testing.F) {
	for _, h := range hostile {
		if h.bound == "time" || h.bound == "stack" || h.bound == "output" { // these are costly, and the sandbox tests run them
			f.Add(h.script)
		}
	}
	for _, c := range faults {
		f.Add(c.script)
	}
	f.Add(bowl)
	dir := f.TempDir()
	path := filepath.Join(dir, "scene.lua")
	limits := Limits{Steps: 20_000, Memory: 8 << 20, Source: 64 << 10}
	f.Fuzz(func(t *testing.T, script string) {
		if err := os.WriteFile(path, []byte(script), 0o644); err != nil {
			t.Fatal(err)
		}
		plan, _, err := Evaluate(context.Background(), path, Options{Limits: limits})
		var e *Error
		switch {
		case err == nil && plan == nil:
			t.Fatal("no plan and no error")
		case err == nil:
			if err := plan.Validate(); err != nil {
				t.Fatal(err)
			}
		case !errors.As(err, &e):
			t.Fatalf("an error of type %T: %v", err, err)
		case strings.Contains(e.Msg, "internal error"):
			t.Fatal(e)
		case e.Pos.File == "" || strings.ContainsAny(e.Msg, "\x00\x1b"):
			t.Fatalf("message without a place, or unfit for a terminal: %q", e.Error())
		}
	})
}
