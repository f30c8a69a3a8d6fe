package model

import (
	"math"
	"reflect"
	"strings"
	"testing"

	"lampbook/engine/kernel/tint"
)

// small is a valid plan of one frame.
func small() *Plan {
	return &Plan{
		Scene:     "scenes/cup.lua",
		Meshes:    []Mesh{{Kind: MeshSphere, Size: [3]float64{1}}},
		Materials: []Material{{Diffuse: tint.Grey(0.5), Opacity: 1}},
		Lights:    []Light{{Name: "key", Kind: LightPoint, Color: tint.Grey(1), Intensity: 10}},
		Frames: []Frame{{
			Name: "a", Pos: Pos{"scenes/cup.lua", 7},
			Camera:   Camera{Position: [3]float64{0, 0, 5}, Up: [3]float64{0, 1, 0}, FocalMM: 50, SensorMM: 36},
			Lights:   []LightID{0},
			Things:   []Placement{{Materials: []MaterialID{0}, Scale: [3]float64{1, 1, 1}}},
			Settings: Settings{Width: 10, Height: 10, Samples: 1, LightSamples: 1, Formats: []Format{FormatPNG}},
		}},
	}
}

func TestValidate(t *testing.T) {
	if err := small().Validate(); err != nil {
		t.Fatal(err)
	}
	nan := math.NaN()
	tests := []struct {
		name   string
		change func(p *Plan)
		want   string
	}{
		{"name", func(p *Plan) { p.Frames[0].Name = "../x" }, `scenes/cup.lua:7: frame name "../x"`},
		{"dot name", func(p *Plan) { p.Frames[0].Name = ".x" }, "frame name"},
		{"name with a dot at its end", func(p *Plan) { p.Frames[0].Name = "x." }, "not '.' first or last"},
		{"name of a device", func(p *Plan) { p.Frames[0].Name = "Con.2" }, `scenes/cup.lua:7: frame name "Con.2": Windows keeps it for a device, with any ending`},
		{"sheet named as a device", func(p *Plan) { p.Sheets = []Sheet{{Name: "lpt1"}} }, `sheet name "lpt1": Windows keeps it`},
		{"long name", func(p *Plan) { p.Frames[0].Name = strings.Repeat("n", 121) }, "at most 120"},
		{"twice", func(p *Plan) { p.Frames = append(p.Frames, p.Frames[0]) }, "was given before at scenes/cup.lua:7"},
		{"no things", func(p *Plan) { p.Frames[0].Things = nil }, "no things"},
		{"mesh index", func(p *Plan) { p.Frames[0].Things[0].Mesh = 3 }, "mesh 3"},
		{"material index", func(p *Plan) { p.Frames[0].Things[0].Materials[0] = -1 }, "material -1"},
		{"light index", func(p *Plan) { p.Frames[0].Lights[0] = 1 }, "light 1"},
		{"light names", func(p *Plan) { p.Frames[0].Lights = []LightID{0, 0} }, `two lights are named "key"`},
		{"scale", func(p *Plan) { p.Frames[0].Things[0].Scale[1] = 0 }, "scale must not be 0"},
		{"place", func(p *Plan) { p.Frames[0].Things[0].At[1] = nan }, "finite"},
		{"eye", func(p *Plan) { p.Frames[0].Camera.Target = p.Frames[0].Camera.Position }, "same point"},
		{"up", func(p *Plan) { p.Frames[0].Camera.Up = [3]float64{0, 0, 2} }, "up"},
		{"focal", func(p *Plan) { p.Frames[0].Camera.FocalMM = 0 }, "focal must be > 0"},
		{"ortho", func(p *Plan) { p.Frames[0].Camera.Projection = Orthographic }, "height must be > 0"},
		{"size", func(p *Plan) { p.Frames[0].Settings.Width = 20000 }, "16384"},
		{"samples", func(p *Plan) { p.Frames[0].Settings.Samples = 0 }, "samples must be 1"},
		{"exposure", func(p *Plan) { p.Frames[0].Settings.Exposure = nan }, "exposure"},
		{"formats", func(p *Plan) { p.Frames[0].Settings.Formats = nil }, "formats"},
		{"passes", func(p *Plan) { p.Frames[0].Settings.Passes = []Pass{PassDepth, PassDepth} }, "named twice"},
		{"background", func(p *Plan) { p.Frames[0].Settings.Background.Color.R = 2 }, "background"},
		{"reflectance", func(p *Plan) { p.Materials[0].Diffuse.G = 1.5 }, "diffuse must have components of 0 to 1"},
		{"opacity", func(p *Plan) { p.Materials[0].Opacity = 0 }, "opacity"},
		{"intensity", func(p *Plan) { p.Lights[0].Intensity = -1 }, "intensity"},
		{"spot", func(p *Plan) { p.Lights[0].Kind = LightSpot }, "inner and outer"},
		{"rectangle", func(p *Plan) { p.Lights[0].Kind = LightArea }, "width must be > 0"},
		{"profile", func(p *Plan) { p.Meshes[0].Profile = [][2]float64{{nan, 0}} }, "finite"},
		{"table", func(p *Plan) { p.Meshes[0].Raw = &RawMesh{Positions: [][3]float64{{nan}}} }, "finite"},
		{"sheet", func(p *Plan) { p.Sheets = []Sheet{{Name: "a b"}} }, "sheet name"},
		{"per line", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", PerLine: -1}} }, "per_line must be"},
		{"tile", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", Tile: [2]int{8, 100}}} }, "16 to 4096 pixels a side, got 8 and 100"},
		{"paper", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", Paper: 9}} }, "paper 9"},
		{"reference", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", Reference: []TagChoice{{Key: "gloss"}}}} }, `"gloss" one value, got 0`},
		{"show", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", Show: 2}} }, "show 2"},
		{"difference from nothing", func(p *Plan) { p.Sheets = []Sheet{{Name: "a", Show: ShowDifference}} }, "from no reference"},
		{"sheets", func(p *Plan) { p.Sheets = []Sheet{{Name: "a"}, {Name: "a"}} }, "given before"},
	}
	for _, tt := range tests {
		p := small()
		tt.change(p)
		err := p.Validate()
		if err == nil || !strings.Contains(err.Error(), tt.want) {
			t.Errorf("%s: got %v, want an error with %q", tt.name, err, tt.want)
		}
	}
	failed := small()
	failed.Frames[0].Failure, failed.Frames[0].Things = "no such mesh", nil
	if err := failed.Validate(); err != nil {
		t.Errorf("a failed frame spoils the plan: %v", err)
	}
}

// TestHashCoversEveryField changes each field of a frame and of the table entries that it names, one by one: each must change the frame's
// hash, but for those that say in model that they do not.
func TestHashCoversEveryField(t *testing.T) {
	free := map[string]bool{"Frame.Name": true, "Frame.Tags": true, "Frame.Pos": true, "Settings.Formats": true, "Placement.Name": true, "Mesh.File": true}
	filed := func() *Plan {
		p := small()
		p.Meshes[0].Kind = MeshFile
		p.Meshes = append(p.Meshes, Mesh{Kind: MeshTorus}) // so that a thing's mesh can change
		return p
	}
	base := filed()
	before := NewHasher(base).Frame(0)
	roots := []struct {
		name string
		of   func(p *Plan) reflect.Value
	}{
		{"Frame", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Frames[0]).Elem() }},
		{"Camera", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Frames[0].Camera).Elem() }},
		{"Settings", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Frames[0].Settings).Elem() }},
		{"Placement", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Frames[0].Things[0]).Elem() }},
		{"Mesh", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Meshes[0]).Elem() }},
		{"Material", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Materials[0]).Elem() }},
		{"Light", func(p *Plan) reflect.Value { return reflect.ValueOf(&p.Lights[0]).Elem() }},
	}
	changed := 0
	for _, r := range roots {
		typ := r.of(base).Type()
		for i := range typ.NumField() {
			field := r.name + "." + typ.Field(i).Name
			p := filed()
			if !nudge(r.of(p).Field(i)) {
				continue
			}
			changed++
			if same := NewHasher(p).Frame(0) == before; same != free[field] {
				t.Errorf("%s: hash is the same: %v, want %v", field, same, free[field])
			}
		}
	}
	if changed < 60 {
		t.Errorf("only %d fields were changed", changed)
	}
}

// nudge changes a value; it returns false for those that the roots cover or that have nothing to change.
func nudge(v reflect.Value) bool {
	switch v.Kind() {
	case reflect.Float64, reflect.Float32:
		v.SetFloat(v.Float() + 0.25)
	case reflect.Int:
		v.SetInt(v.Int() + 1)
	case reflect.Uint8, reflect.Uint32:
		v.SetUint(v.Uint() + 1)
	case reflect.String:
		v.SetString(v.String() + "x")
	case reflect.Bool:
		v.SetBool(!v.Bool())
	case reflect.Array:
		return nudge(v.Index(v.Len() - 1))
	case reflect.Struct:
		switch v.Type().Name() {
		case "Camera", "Settings":
			return false
		}
		return nudge(v.Field(v.NumField() - 1))
	case reflect.Slice:
		if v.Type().Elem().Kind() == reflect.Struct && v.Len() > 0 {
			return false
		}
		if v.Type() == reflect.TypeFor[[]LightID]() || v.Type() == reflect.TypeFor[[]MaterialID]() {
			v.Set(reflect.Append(v, v.Index(0)))
			return true
		}
		v.Set(reflect.Append(v, reflect.Zero(v.Type().Elem())))
	case reflect.Pointer:
		v.Set(reflect.New(v.Type().Elem()))
	default:
		return false
	}
	return true
}

func TestPlanHash(t *testing.T) {
	before := NewHasher(small()).Plan()
	moved := small()
	moved.Scene, moved.Frames[0].Pos.Line = "elsewhere.lua", 99
	if NewHasher(moved).Plan() != before {
		t.Error("the plan's hash depends on where the scene lies")
	}
	renamed := small()
	renamed.Frames[0].Name = "b"
	if NewHasher(renamed).Plan() == before {
		t.Error("a renamed frame leaves the plan's hash as it was")
	}
	if s := before.Short(); len(s) != 10 || !strings.HasPrefix(before.String(), s) {
		t.Errorf("short hash is %q", s)
	}
}

func TestValidName(t *testing.T) {
	const source = "Microsoft, Naming Files, Paths, and Namespaces; from memory"
	for _, c := range []struct {
		names  string
		valid  bool
		source string
	}{
		{"a 7 _ - a.b a-b_c.d -a __ a..b", true, "file systems, web addresses and shells"},
		{". .a a. a.b. .. a/b ü a:b", false, "file systems, web addresses and shells"},
		{"con PRN Aux nul com1 COM9 lpt1 Lpt9 con.x nul.tar.gz com1.a-b", false, source},
		{"cone com com0 com10 lpt lpt0 con-1 x.con auxiliary _nul nul_", true, source},
	} {
		for _, n := range strings.Fields(c.names) {
			if ValidName(n) != c.valid {
				t.Errorf("ValidName(%q) = %t (%s)", n, !c.valid, c.source)
			}
		}
	}
}
