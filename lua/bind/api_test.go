package bind

import (
	"io/fs"
	"regexp"
	"slices"
	"strings"
	"testing"

	"lampbook/engine/model"
	"lampbook/lua/api"
)

// apiEntry is one documented call.
type apiEntry struct {
	name     string // "light.area", "rig:turned"
	file     string
	sentence string
	example  string
	params   []Key  // the last is the table of keys, where the call takes one
	class    string // of the table of keys, "light.area.keys"
	list     bool   // the table is a list
}

// apiClass is the fields of a documented table.
type apiClass struct {
	fields []Key
	notes  map[string]string
}

var (
	apiField    = regexp.MustCompile(`^---@field (\w+)(\??) (.+)$`)
	apiParam    = regexp.MustCompile(`^---@param (\w+)(\??) (\S+)(.*)$`)
	apiFunction = regexp.MustCompile(`^function ([\w.:]+)\(([\w, ]*)\) end$`)
	apiOverload = regexp.MustCompile(`^---@overload fun\((\w+): ([\w.]+)\)`)
	apiTable    = regexp.MustCompile(`^(\w+) = \{\}$`)
)

// readAPI reads the annotation files.
func readAPI(t *testing.T) (entries map[string]apiEntry, classes map[string]apiClass) {
	t.Helper()
	entries, classes = map[string]apiEntry{}, map[string]apiClass{}
	names, err := fs.Glob(api.Files(), "*.lua")
	if err != nil || len(names) == 0 {
		t.Fatalf("no annotation files: %v", err)
	}
	for _, file := range names {
		content, err := fs.ReadFile(api.Files(), file)
		if err != nil {
			t.Fatal(err)
		}
		lines := strings.Split(string(content), "\n")
		if lines[0] != "---@meta" {
			t.Errorf("%s must begin with ---@meta", file)
		}
		var e apiEntry
		class := ""
		for _, line := range lines {
			add := func(name string) {
				e.name, e.file = name, file
				if _, ok := entries[name]; ok {
					t.Errorf("%s: %s has two entries", file, name)
				}
				entries[name] = e
			}
			if m := apiField.FindStringSubmatch(line); m != nil {
				c := classes[class]
				c.fields = append(c.fields, Key{m[1], m[2] == ""})
				if c.notes == nil {
					c.notes = map[string]string{}
				}
				c.notes[m[1]] = m[3]
				classes[class] = c
			} else if c, ok := strings.CutPrefix(line, "---@class "); ok {
				class = c
				if _, ok := classes[class]; !ok {
					classes[class] = apiClass{}
				}
			} else if m := apiParam.FindStringSubmatch(line); m != nil {
				e.params = append(e.params, Key{m[1], m[2] == ""})
				if strings.HasSuffix(m[3], ".keys") {
					e.class = m[3]
				}
				e.list = e.list || strings.HasSuffix(m[3], "[]")
				if m[2] == "?" && !strings.Contains(m[4], "default") {
					t.Errorf("%s: %s may be left out, and no default is stated", file, line)
				}
			} else if m := apiOverload.FindStringSubmatch(line); m != nil {
				e.params = []Key{{m[1], true}}
				if strings.HasSuffix(m[2], ".keys") {
					e.class = m[2]
				}
			} else if x, ok := strings.CutPrefix(line, "--- Example: "); ok {
				e.example = x
			} else if x, ok := strings.CutPrefix(line, "--- "); ok {
				e.sentence = x
			} else if m := apiFunction.FindStringSubmatch(line); m != nil {
				add(m[1])
				var written []string
				for _, p := range e.params {
					written = append(written, p.Name)
				}
				if m[2] != strings.Join(written, ", ") {
					t.Errorf("%s: %s: its @param lines name %v", file, line, written)
				}
				e = apiEntry{}
			} else if m := apiTable.FindStringSubmatch(line); m != nil && len(e.params) > 0 {
				add(m[1])
				e = apiEntry{}
			} else if line == "" {
				e = apiEntry{}
			}
		}
	}
	return entries, classes
}

// TestAPI holds the annotation files against the bindings, both ways.
func TestAPI(t *testing.T) {
	entries, classes := readAPI(t)
	for _, b := range Bindings() {
		e, ok := entries[b.Name]
		if !ok {
			t.Errorf("%s has no entry in lua/api", b.Name)
			continue
		}
		delete(entries, b.Name)
		if e.sentence == "" || !strings.HasSuffix(e.sentence, ".") {
			t.Errorf("%s: %s: its sentence must end in a full stop, got %q", e.file, b.Name, e.sentence)
		}
		if e.example == "" {
			t.Errorf("%s: %s has no example", e.file, b.Name)
		}
		params := e.params
		if len(b.Keys) > 0 || b.Change || b.List != "" {
			if len(params) == 0 {
				t.Errorf("%s: %s takes a table, and its entry has none", e.file, b.Name)
				continue
			}
			params = params[:len(params)-1]
		}
		if !slices.Equal(params, b.Params) {
			t.Errorf("%s: %s takes %v in order, its entry says %v", e.file, b.Name, b.Params, params)
		}
		if b.Change || b.List != "" {
			if e.class != "" || (b.List != "" && !e.list) {
				t.Errorf("%s: the table of %s is a list or a table of changes", e.file, b.Name)
			}
			continue
		}
		if len(b.Keys) == 0 {
			if e.class != "" {
				t.Errorf("%s: %s takes no table, its entry says %s", e.file, b.Name, e.class)
			}
			continue
		}
		if e.class != b.Name+".keys" && e.class != strings.ReplaceAll(b.Name, ":", ".")+".keys" {
			t.Errorf("%s: the keys of %s must be class %s.keys, got %q", e.file, b.Name, b.Name, e.class)
		}
		checkAPIClass(t, e, b, classes[e.class])
	}
	for name, e := range entries {
		t.Errorf("%s: %s is documented, and there is no such binding", e.file, name)
	}
}

func checkAPIClass(t *testing.T, e apiEntry, b Binding, c apiClass) {
	t.Helper()
	byName := func(a, b Key) int { return strings.Compare(a.Name, b.Name) }
	got, want := slices.Clone(c.fields), slices.Clone(b.Keys)
	slices.SortFunc(got, byName)
	slices.SortFunc(want, byName)
	if !slices.Equal(got, want) {
		t.Errorf("%s: %s takes %v, its entry says %v", e.file, b.Name, want, got)
	}
	for _, f := range c.fields {
		if !f.Required && !strings.Contains(c.notes[f.Name], "default") {
			t.Errorf("%s: %s: %s may be left out, and no default is stated", e.file, b.Name, f.Name)
		}
	}
}

// TestAPIFields holds what may be read of a value against its documented class.
func TestAPIFields(t *testing.T) {
	_, classes := readAPI(t)
	constructorKeys := map[string][]string{}
	for _, m := range formMakers {
		constructorKeys[kindMesh] = append(constructorKeys[kindMesh], namesOf(m.keys)...)
	}
	for _, m := range lightMakers {
		constructorKeys[kindLight] = append(constructorKeys[kindLight], namesOf(m.keys)...)
	}
	constructorKeys[kindMaterial] = namesOf(blinnPhongKeys)
	constructorKeys[kindThing] = namesOf(placeKeys)
	var values []value
	for kind := range formMakers {
		values = append(values, defaultForm(model.MeshKind(kind)))
	}
	for kind := range lightMakers {
		values = append(values, valueIn[*light](t, lightMakers[kind].name+"{ "+map[bool]string{true: "position = {1, 1, 1}"}[strings.Contains(lightMakers[kind].keys, "position")]+" }"))
	}
	values = append(values, color{}, &material{}, &rig{}, defaultView(), &thing{}, &turntable{}, &random{})
	seen := map[string]bool{}
	for _, v := range values {
		seen[v.kind()] = true
		class, ok := classes[v.kind()]
		if !ok {
			t.Errorf("the class %s is not documented", v.kind())
			continue
		}
		fields := v.fields()
		for _, f := range class.fields {
			if !slices.Contains(fields, f.Name) {
				t.Errorf("class %s: %s is documented, and cannot be read", v.kind(), f.Name)
			}
		}
		for _, f := range fields {
			documented := slices.ContainsFunc(class.fields, func(k Key) bool { return k.Name == f })
			if !documented && !slices.Contains(constructorKeys[v.kind()], f) {
				t.Errorf("class %s: %s can be read, and is not documented", v.kind(), f)
			}
		}
	}
	for _, kind := range kinds {
		if !seen[kind] {
			t.Errorf("no %s was looked at", kind)
		}
	}
}

// TestAPIExamples runs every example.
func TestAPIExamples(t *testing.T) {
	const stage = `
		studio = rig{ light.area{ name = "key", position = {0.7, 0.9, 0.6} }, light.ambient{ name = "room" } }
		subject = place{ mesh = mesh.sphere{ radius = 0.05, segments = 12 } }
		function print() end
	`
	entries, _ := readAPI(t)
	for name, e := range entries {
		env := newEnv()
		env.Files = workshop.with("products.csv", "article,height\n12,0.5\n")
		l := newState(t, env)
		if err := run(t, l, stage); err != nil {
			t.Fatal(message(err))
		}
		source := e.example
		if _, err := l.LoadString(source); err != nil {
			source = "local _ = " + source
		}
		if !strings.Contains(source, e.name[strings.LastIndexAny(e.name, ".:")+1:]) {
			t.Errorf("%s: the example of %s does not call it: %s", e.file, name, e.example)
		}
		if err := run(t, l, source); err != nil {
			t.Errorf("%s: the example of %s: %s", e.file, name, message(err))
		}
	}
}

// with is the folder with one file changed.
func (m memFiles) with(name, content string) memFiles {
	changed := memFiles{name: content}
	for n, c := range m {
		if n != name {
			changed[n] = c
		}
	}
	return changed
}
