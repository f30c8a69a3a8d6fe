package bind

import (
	"fmt"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

const sheetKeys = "name title rows columns pages where order caption per_line tile paper"

func sheetCalls() []call {
	return []call{{name: "sheet", keys: sheetKeys, run: func(a *args) lua.LValue {
		a.newSheet()
		return nil
	}}}
}

const maxSheets = 1000

var paperWords = []string{model.PaperGrey: "grey", model.PaperLight: "light", model.PaperDark: "dark"}

// newSheet registers a contact sheet. Whether its tags exist is known when the scene ends: see checkSheets.
func (a *args) newSheet() {
	e := a.env
	if len(e.plan.Sheets) == maxSheets {
		a.failf("the plan has %d sheets already: no more are accepted", maxSheets)
	}
	s := model.Sheet{Pos: e.callSite(a.l)}
	a.text("title", &s.Title)
	if !readable(s.Title) || len(s.Title) > maxTagLength {
		a.failf("title must be a readable text of at most %d bytes, got %s", maxTagLength, quote(s.Title))
	}
	seen := map[string]string{}
	for _, ax := range []struct {
		name string
		dst  *[]string
	}{{"rows", &s.Rows}, {"columns", &s.Columns}, {"pages", &s.Pages}} {
		v := a.get(ax.name)
		if v == lua.LNil {
			continue
		}
		*ax.dst = a.words(ax.name, v, maxTags)
		for _, key := range *ax.dst {
			if other, ok := seen[key]; ok {
				a.failf("%s and %s both name the tag %q", other, ax.name, key)
			}
			seen[key] = ax.name
		}
	}
	for _, c := range a.tagTable("where") {
		s.Where = append(s.Where, model.TagChoice{Key: c.Key, Values: c.Values})
	}
	s.Order = a.tagTable("order")
	if a.text("caption", &s.Caption) && (!readable(s.Caption) || len(s.Caption) > maxTagLength) {
		a.failf("caption must be a readable text of at most %d bytes, got %s", maxTagLength, quote(s.Caption))
	}
	a.integer("per_line", &s.PerLine, 1, 10_000)
	if v := a.get("tile"); v != lua.LNil {
		var tile [2]float64
		a.checkNumbers("tile", v, tile[:], "{width, height} in pixels", between(1, model.MaxSide, ""))
		for i, t := range tile {
			if s.Tile[i] = int(t); float64(s.Tile[i]) != t {
				a.failf("tile must be whole numbers of pixels, got %s", describe(v))
			}
		}
	}
	paper := 0
	a.oneOf("paper", paperWords, &paper)
	s.Paper = model.Paper(paper)
	s.Name = a.sheetName(s.Title)
	e.sheets[strings.ToLower(s.Name)] = true
	e.plan.Sheets = append(e.plan.Sheets, s)
}

// tagTable reads { tag = value } or { tag = {value, …} }.
func (a *args) tagTable(name string) []model.TagOrder {
	v := a.get(name)
	if v == lua.LNil {
		return nil
	}
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("%s must be a table { tag = {value, …} }, got %s", name, describe(v))
	}
	var out []model.TagOrder
	for k, x := t.Next(lua.LNil); k != lua.LNil; k, x = t.Next(k) {
		key, ok := k.(lua.LString)
		if !ok {
			a.failf("%s must be a table { tag = {value, …} }, got the key %s", name, describe(k))
		}
		o := model.TagOrder{Key: string(key)}
		if _, list := x.(*lua.LTable); !list {
			o.Values = []model.Value{a.tagValue(o.Key, x)}
		} else {
			for _, y := range a.list(name+": "+o.Key, x, "values", model.MaxFrames) {
				o.Values = append(o.Values, a.tagValue(o.Key, y))
			}
		}
		out = append(out, o)
	}
	return out
}

// sheetName reads a sheet's name, or makes it of the title.
func (a *args) sheetName(title string) string {
	var name string
	if a.text("name", &name) {
		switch {
		case !model.ValidName(name):
			a.failf("name must be letters, digits, '.', '_' and '-', at most %d of them and not '.' first, got %s", model.MaxNameLength, quote(name))
		case a.env.sheets[strings.ToLower(name)]:
			a.failf("the name %q was given to a sheet before", name)
		}
		return name
	}
	return a.env.freeSheetName(title)
}

// freeSheetName makes a name of a title: "Bowl: gloss by glaze" gives "bowl-gloss-by-glaze".
func (e *Env) freeSheetName(title string) string {
	stem := strings.ToLower(fileLetters(title))
	for strings.Contains(stem, "--") {
		stem = strings.ReplaceAll(stem, "--", "-")
	}
	stem = strings.Trim(stem, "-.")
	if len(stem) > 80 {
		stem = strings.TrimRight(stem[:80], "-.")
	}
	if stem == "" {
		stem = "sheet"
	}
	name := stem
	for n := 2; e.sheets[name]; n++ {
		name = fmt.Sprintf("%s-%d", stem, n)
	}
	return name
}

// checkSheets refuses tags that no frame has.
func (e *Env) checkSheets() error {
	var known []string
	has := map[string]bool{}
	for _, f := range e.plan.Frames {
		for _, t := range f.Tags {
			if !has[t.Key] {
				has[t.Key] = true
				known = append(known, t.Key)
			}
		}
	}
	for _, s := range e.plan.Sheets {
		for _, ax := range []struct {
			name string
			keys []string
		}{{"rows", s.Rows}, {"columns", s.Columns}, {"pages", s.Pages}} {
			for _, key := range ax.keys {
				if key == model.AxisPass {
					if !e.passes {
						return fmt.Errorf("%ssheet: %s names the passes, and no frame has any: ask for them in settings{ passes = … }", prefix(s.Pos), ax.name)
					}
					continue
				}
				if !has[key] {
					return unknownTag(s, ax.name, key, known)
				}
			}
		}
		for _, w := range s.Where {
			if !has[w.Key] {
				return unknownTag(s, "where", w.Key, known)
			}
		}
		for _, o := range s.Order {
			if !has[o.Key] && o.Key != model.AxisPass {
				return unknownTag(s, "order", o.Key, known)
			}
		}
		if err := checkCaption(s, has, known); err != nil {
			return err
		}
		if !e.anyFrame(s.Where) {
			e.warn(s.Pos, "sheet: where admits no frame, so the sheet will be empty")
		}
	}
	return nil
}

func unknownTag(s model.Sheet, what, key string, known []string) error {
	if len(known) == 0 {
		return fmt.Errorf("%ssheet: %s names the tag %s, and no frame has tags", prefix(s.Pos), what, quote(key))
	}
	return fmt.Errorf("%ssheet: %s names a tag that no frame has, %s%s", prefix(s.Pos), what, quote(key), Hint(key, known))
}

// checkCaption checks the names in braces.
func checkCaption(s model.Sheet, has map[string]bool, known []string) error {
	rest := s.Caption
	for {
		_, after, ok := strings.Cut(rest, "{")
		if !ok {
			return nil
		}
		key, tail, closed := strings.Cut(after, "}")
		if !closed {
			return fmt.Errorf("%ssheet: caption has a { without its }: %s", prefix(s.Pos), quote(s.Caption))
		}
		if key != "name" && !has[key] {
			return unknownTag(s, "caption", key, append([]string{"name"}, known...))
		}
		rest = tail
	}
}

// anyFrame reports whether a frame answers every choice.
func (e *Env) anyFrame(where []model.TagChoice) bool {
	for _, f := range e.plan.Frames {
		all := true
		for _, w := range where {
			all = all && answers(f, w)
		}
		if all {
			return true
		}
	}
	return false
}

func answers(f model.Frame, w model.TagChoice) bool {
	for _, t := range f.Tags {
		if t.Key != w.Key {
			continue
		}
		for _, v := range w.Values {
			if v == t.Value {
				return true
			}
		}
	}
	return false
}

// defaultSheet is the sheet of a scene that asks for none: all frames, by the tags in which they differ, the first across, the
// others down.
func (e *Env) defaultSheet() {
	var keys []string
	first := map[string]model.Value{}
	count := map[string]int{}
	varies := map[string]bool{}
	for _, f := range e.plan.Frames {
		for _, t := range f.Tags {
			v, seen := first[t.Key]
			if !seen {
				keys = append(keys, t.Key)
				first[t.Key] = t.Value
			} else if v != t.Value {
				varies[t.Key] = true
			}
			count[t.Key]++
		}
	}
	s := model.Sheet{Title: titleOf(e.stem())}
	for _, k := range keys {
		switch {
		case !varies[k] && count[k] == len(e.plan.Frames):
		case len(s.Columns) == 0:
			s.Columns = []string{k}
		default:
			s.Rows = append(s.Rows, k)
		}
	}
	if len(s.Columns) == 0 && len(e.plan.Frames) > 1 {
		s.Caption = "{name}"
	}
	s.Name = e.freeSheetName(e.stem())
	e.plan.Sheets = []model.Sheet{s}
}

// titleOf makes a title of a file's name: "first_sheet" gives "First sheet".
func titleOf(stem string) string {
	t := strings.TrimSpace(strings.NewReplacer("_", " ", "-", " ").Replace(stem))
	if !readable(t) || t == "" {
		return ""
	}
	r := []rune(t)
	return strings.ToUpper(string(r[:1])) + string(r[1:])
}
