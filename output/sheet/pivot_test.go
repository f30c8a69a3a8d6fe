package sheet

import (
	"fmt"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/model"
)

func num(x float64) model.Value { return model.Value{Kind: model.NumberValue, Number: x} }
func txt(s string) model.Value  { return model.Value{Text: s} }

// tags makes tags of key, value pairs.
func tags(pairs ...any) []model.Tag {
	var out []model.Tag
	for i := 0; i < len(pairs); i += 2 {
		t := model.Tag{Key: pairs[i].(string)}
		switch v := pairs[i+1].(type) {
		case int:
			t.Value = num(float64(v))
		case float64:
			t.Value = num(v)
		case string:
			t.Value = txt(v)
		case bool:
			t.Value = model.Value{Kind: model.TruthValue, Truth: v}
		}
		out = append(out, t)
	}
	return out
}

func frame(name string, pairs ...any) model.Frame {
	return model.Frame{Name: name, Tags: tags(pairs...), Settings: model.Settings{
		Width: 48, Height: 36, Samples: 64, LightSamples: 16, Formats: []model.Format{model.FormatPNG},
	}}
}

// bowls is gloss by glaze, with one combination missing and one frame of another kind.
func bowls() *model.Plan {
	p := &model.Plan{Scene: "scenes/bowls.lua"}
	for _, gloss := range []int{16, 4, 64} {
		for _, glaze := range []string{"slate", "celadon"} {
			if gloss != 64 || glaze != "celadon" {
				p.Frames = append(p.Frames, frame(fmt.Sprintf("%s-%d", glaze, gloss), "gloss", gloss, "glaze", glaze))
			}
		}
	}
	p.Frames = append(p.Frames, frame("card", "kind", "grey card"))
	return p
}

// drawn writes a pivot as text: pages, column headings, rows of frame names.
func drawn(p *model.Plan, pv *pivot) string {
	var b strings.Builder
	say := func(values []model.Value) string {
		var all []string
		for _, v := range values {
			all = append(all, v.String())
		}
		return strings.Join(all, "/")
	}
	for _, t := range pv.tables {
		if len(t.page) > 0 {
			fmt.Fprintf(&b, "page %s;", say(t.page))
		}
		for _, c := range t.columns {
			fmt.Fprintf(&b, " %s", say(c))
		}
		for r, row := range t.rows {
			fmt.Fprintf(&b, "; %s:", say(row))
			for c := range t.columns {
				switch pl := t.cells[r*len(t.columns)+c]; {
				case pl.frame < 0:
					b.WriteString(" -")
				case pl.pass != "":
					fmt.Fprintf(&b, " %s(%s)", p.Frames[pl.frame].Name, pl.pass)
				default:
					b.WriteString(" " + p.Frames[pl.frame].Name)
				}
			}
		}
		b.WriteString("\n")
	}
	return strings.TrimSuffix(b.String(), "\n")
}

func TestPivot(t *testing.T) {
	passes := &model.Plan{Frames: []model.Frame{frame("a", "glaze", "slate"), frame("b", "glaze", "celadon")}}
	passes.Frames[0].Settings.Passes = []model.Pass{model.PassDiffuse, model.PassDepth}
	passes.Frames[1].Settings.Passes = []model.Pass{model.PassDiffuse}
	for _, c := range []struct {
		name  string
		plan  *model.Plan
		sheet model.Sheet
		want  string
	}{
		{"first-seen order, a blank", bowls(), model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}},
			" 16 4 64; slate: slate-16 slate-4 slate-64; celadon: celadon-16 celadon-4 -"},
		{"given order first", bowls(), model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"},
			Order: []model.TagOrder{{Key: "gloss", Values: []model.Value{num(4), num(7)}}, {Key: "glaze", Values: []model.Value{txt("celadon")}}}},
			" 4 16 64; celadon: celadon-4 celadon-16 -; slate: slate-4 slate-16 slate-64"},
		{"where", bowls(), model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"},
			Where: []model.TagChoice{{Key: "gloss", Values: []model.Value{num(4), num(16)}}, {Key: "glaze", Values: []model.Value{txt("celadon")}}}},
			" 16 4; celadon: celadon-16 celadon-4"},
		{"one axis of two tags", bowls(), model.Sheet{Columns: []string{"gloss", "glaze"}},
			" 16/slate 16/celadon 4/slate 4/celadon 64/slate; : slate-16 celadon-16 slate-4 celadon-4 slate-64"},
		{"rows alone are one axis", bowls(), model.Sheet{Rows: []string{"glaze", "gloss"}},
			" slate/16 slate/4 slate/64 celadon/16 celadon/4; : slate-16 slate-4 slate-64 celadon-16 celadon-4"},
		{"pages, each with what occurs there", bowls(), model.Sheet{Pages: []string{"glaze"}, Columns: []string{"gloss"}},
			"page slate; 16 4 64; : slate-16 slate-4 slate-64\npage celadon; 16 4; : celadon-16 celadon-4"},
		{"no axis", bowls(), model.Sheet{}, " slate-16 celadon-16 slate-4 celadon-4 slate-64 card; : slate-16 celadon-16 slate-4 celadon-4 slate-64 card"},
		{"passes", passes, model.Sheet{Rows: []string{"glaze"}, Columns: []string{model.AxisPass}},
			" picture diffuse depth; slate: a a(diffuse) a(depth); celadon: b b(diffuse) -"},
		{"passes in a given order", passes, model.Sheet{Rows: []string{"glaze"}, Columns: []string{model.AxisPass},
			Order: []model.TagOrder{{Key: model.AxisPass, Values: []model.Value{txt("depth")}}}},
			" depth picture diffuse; slate: a(depth) a a(diffuse); celadon: - b b(diffuse)"},
	} {
		pv, err := newPivot(c.plan, &c.sheet)
		if err != nil {
			t.Errorf("%s: %v", c.name, err)
			continue
		}
		got := strings.ReplaceAll(drawn(c.plan, pv), ";  :", "; :")
		if got != c.want {
			t.Errorf("%s:\ngot  %q\nwant %q", c.name, got, c.want)
		}
	}
	pv, err := newPivot(bowls(), &model.Sheet{Columns: []string{"gloss", "glaze"}})
	if err != nil || pv.leftOut != 1 {
		t.Errorf("left out %d frames, want 1 (%v)", pv.leftOut, err)
	}
}

// TestRefused: a sheet that shows nothing, or two frames in one place.
func TestRefused(t *testing.T) {
	twins := bowls()
	twins.Frames = append(twins.Frames, frame("again", "gloss", 4, "glaze", "slate"))
	for _, c := range []struct {
		plan  *model.Plan
		sheet model.Sheet
		want  string
	}{
		{bowls(), model.Sheet{Columns: []string{"gloss"}}, `frames "slate-16" and "celadon-16" stand in one place (same gloss): tag glaze tells them apart`},
		{twins, model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}}, `frames "slate-4" and "again" stand in one place (same glaze and gloss) and have the same tags`},
		{bowls(), model.Sheet{Where: []model.TagChoice{{Key: "gloss", Values: []model.Value{txt("4")}}}}, "where admits none of the 6 frames: no frame has the chosen gloss"},
		{bowls(), model.Sheet{Columns: []string{"gloss"}, Rows: []string{"kind"}}, "no frame has all the tags kind and gloss"},
		{&model.Plan{}, model.Sheet{}, "the scene has no frames"},
		{&model.Plan{Frames: []model.Frame{frame("a")}}, model.Sheet{Rows: []string{"gloss"}}, "no frame has the tag gloss"},
	} {
		c.sheet.Name, c.sheet.Pos = "sheet-1", model.Pos{File: "bowls.lua", Line: 9}
		_, err := Names(c.plan, c.sheet, Options{})
		if err == nil || !strings.HasPrefix(err.Error(), `bowls.lua:9: sheet "sheet-1": `) || !strings.Contains(err.Error(), c.want) {
			t.Errorf("got %v\nwant an error with %q", err, c.want)
		}
	}
	if _, err := Names(bowls(), model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}, Caption: "{name}, {gloss} {pass}"}, Options{}); err != nil {
		t.Error(err)
	}
}

// TestPivotPlacesEachFrameOnce: whatever the tags and axes, each frame stands on the sheet once, under its own values, or is counted as left out.
func TestPivotPlacesEachFrameOnce(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := &model.Plan{}
		keys := []string{"a", "b", "c"}
		used := map[string]bool{}
		for i := range rapid.IntRange(1, 30).Draw(t, "frames") {
			f := frame(fmt.Sprint("f", i))
			id := ""
			for _, k := range keys {
				n := rapid.IntRange(0, 4).Draw(t, k)
				id += fmt.Sprint(n, ",")
				if n > 0 || i == 0 {
					f.Tags = append(f.Tags, model.Tag{Key: k, Value: num(float64(n))})
				}
			}
			if i == 0 || !used[id] {
				used[id] = true
				p.Frames = append(p.Frames, f)
			}
		}
		order := rapid.Permutation(keys).Draw(t, "axes")
		i := rapid.IntRange(0, 3).Draw(t, "rows end")
		j := rapid.IntRange(i, 3).Draw(t, "columns end")
		s := model.Sheet{Rows: order[:i], Columns: order[i:j], Pages: order[j:]}
		pv, err := newPivot(p, &s)
		if err != nil {
			t.Fatal(err) // frames differ in the three tags, and all three are axes
		}
		count := map[int]int{}
		for _, tb := range pv.tables {
			for r := range tb.rows {
				for c := range tb.columns {
					pl := tb.cells[r*len(tb.columns)+c]
					if pl.frame < 0 {
						continue
					}
					count[pl.frame]++
					want := slices.Concat(tb.page, tb.rows[r], tb.columns[c])
					for n, k := range slices.Concat(pv.pageKeys, pv.rowKeys, pv.columnKeys) {
						if v, ok := p.Frames[pl.frame].Tag(k); !ok || v != want[n] {
							t.Fatalf("frame %d stands under %s %v", pl.frame, k, want[n])
						}
					}
				}
			}
		}
		for i, n := range count {
			if n != 1 {
				t.Fatalf("frame %d stands %d times", i, n)
			}
		}
		if len(count)+pv.leftOut != len(p.Frames) {
			t.Fatalf("%d placed and %d left out of %d", len(count), pv.leftOut, len(p.Frames))
		}
	})
}
