package bind

import (
	"fmt"
	"slices"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

const sheetKeys = "name title rows columns pages where order caption per_line tile paper reference show"

func sheetCalls() []call {
	return []call{{name: "sheet", keys: sheetKeys, run: func(a *args) lua.LValue {
		a.newSheet()
		return nil
	}}}
}

const maxSheets = 1000

var showWords = []string{model.ShowPictures: "pictures", model.ShowDifference: "difference"}

var paperWords = []string{model.PaperGrey: "grey", model.PaperLight: "light", model.PaperDark: "dark"}

// newSheet registers a contact sheet. Whether its tags exist is known when the scene ends: see finishSheets.
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
	for _, c := range a.tagTable("where", manyValues) {
		s.Where = append(s.Where, model.TagChoice(c))
	}
	s.Order = a.tagTable("order", manyValues)
	if a.text("caption", &s.Caption) && (!readable(s.Caption) || len(s.Caption) > maxTagLength) {
		a.failf("caption must be a readable text of at most %d bytes, got %s", maxTagLength, quote(s.Caption))
	}
	if a.integer("per_line", &s.PerLine, 1, 10_000) && len(s.Rows) > 0 && len(s.Columns) > 0 {
		a.failf("per_line is for sheets with one axis: rows and columns make the lines of this one")
	}
	if v := a.get("tile"); v != lua.LNil {
		var tile [2]float64
		a.checkNumbers("tile", v, tile[:], "{width, height} in pixels", between(model.MinTile, model.MaxTile, "pixels"))
		for i, t := range tile {
			if s.Tile[i] = int(t); float64(s.Tile[i]) != t {
				a.failf("tile must be whole numbers of pixels, got %s", describe(v))
			}
		}
	}
	paper := 0
	a.oneOf("paper", paperWords, &paper)
	s.Paper = model.Paper(paper)
	for _, c := range a.tagTable("reference", "{ tag = value }") {
		if len(c.Values) != 1 {
			a.failf("reference must give the tag %s one value, got %d", quote(c.Key), len(c.Values))
		}
		s.Reference = append(s.Reference, model.TagChoice(c))
	}
	show := 0
	a.oneOf("show", showWords, &show)
	s.Show = model.ShowKind(show)
	if s.Show == model.ShowDifference && len(s.Reference) == 0 {
		a.failf("show = \"difference\" needs a reference: give the tag and the value of the tiles to compare with, reference = { tag = value }")
	}
	s.Name = a.sheetName(&s)
	e.sheets[strings.ToLower(s.Name)] = true
	e.plan.Sheets = append(e.plan.Sheets, s)
}

const manyValues = "{ tag = {value, …} }"

// tagTable reads { tag = value } or { tag = {value, …} }; form is which of the two a message recommends.
func (a *args) tagTable(name, form string) []model.TagOrder {
	v := a.get(name)
	if v == lua.LNil {
		return nil
	}
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("%s must be a table %s, got %s", name, form, describe(v))
	}
	var out []model.TagOrder
	for k, x := t.Next(lua.LNil); k != lua.LNil; k, x = t.Next(k) {
		key, ok := k.(lua.LString)
		if !ok {
			a.failf("%s must be a table %s, got the key %s", name, form, describe(k))
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

// sheetName reads a sheet's name, or makes it of the title. A sheet with neither is called as the scene is.
func (a *args) sheetName(s *model.Sheet) string {
	var name string
	if a.text("name", &name) {
		a.checkName(name)
		if a.env.sheets[strings.ToLower(name)] {
			a.failf("the name %q was given to a sheet before", name)
		}
		return name
	}
	if s.Title == "" {
		s.Title = titleOf(a.env.stem())
		return a.env.freeSheetName(a.env.stem())
	}
	return a.env.freeSheetName(s.Title)
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
	switch {
	case stem == "":
		stem = "sheet"
	case model.ReservedName(stem):
		stem = "sheet-" + stem
	}
	name := stem
	for n := 2; e.sheets[name]; n++ {
		name = fmt.Sprintf("%s-%d", stem, n)
	}
	return name
}

// finishSheets refuses tags that no frame has and sheets without frames, and gives axes to the sheets that name none. A scene
// without a sheet gets one of all its frames.
func (e *Env) finishSheets() error {
	if len(e.plan.Sheets) == 0 {
		e.plan.Sheets = []model.Sheet{{Title: titleOf(e.stem()), Name: e.freeSheetName(e.stem())}}
	}
	known := e.tagKeys()
	for i := range e.plan.Sheets {
		s := &e.plan.Sheets[i]
		if err := e.checkSheet(s, known); err != nil {
			return fmt.Errorf("%ssheet: %w", prefix(s.Pos), err)
		}
		var frames []*model.Frame
		for i := range e.plan.Frames {
			if f := &e.plan.Frames[i]; s.Shows(f) {
				frames = append(frames, f)
			}
		}
		if len(frames) == 0 {
			return fmt.Errorf("%ssheet: where admits none of the scene's frames", prefix(s.Pos))
		}
		if !slices.ContainsFunc(frames, (&model.Sheet{Where: s.Reference}).Shows) {
			return fmt.Errorf("%ssheet: none of the sheet's frames has the values that reference names", prefix(s.Pos))
		}
		if len(s.Rows) == 0 && len(s.Columns) == 0 && len(s.Pages) == 0 {
			giveAxes(s, frames)
		}
	}
	return nil
}

// tagKeys lists the tags of all frames, as first seen.
func (e *Env) tagKeys() []string {
	var known []string
	seen := map[string]bool{}
	for _, f := range e.plan.Frames {
		for _, t := range f.Tags {
			if !seen[t.Key] {
				seen[t.Key] = true
				known = append(known, t.Key)
			}
		}
	}
	return known
}

// checkSheet checks the tags that a sheet names; known are those of the frames.
func (e *Env) checkSheet(s *model.Sheet, known []string) error {
	check := func(what string, passes bool, key string, more ...string) error {
		switch {
		case slices.Contains(known, key) || slices.Contains(more, key):
			return nil
		case passes && key == model.AxisPass && e.passes:
			return nil
		case passes && key == model.AxisPass:
			return fmt.Errorf("%s names the passes, and no frame has any: ask for them in settings{ passes = … }", what)
		case len(known) == 0:
			return fmt.Errorf("%s names the tag %s, and no frame has tags", what, quote(key))
		}
		return fmt.Errorf("%s names a tag that no frame has, %s%s", what, quote(key), Hint(key, append(more, known...)))
	}
	for _, ax := range []struct {
		name string
		keys []string
	}{{"rows", s.Rows}, {"columns", s.Columns}, {"pages", s.Pages}} {
		for _, key := range ax.keys {
			if err := check(ax.name, true, key); err != nil {
				return err
			}
		}
	}
	for _, w := range s.Where {
		if err := check("where", false, w.Key); err != nil {
			return err
		}
	}
	for _, r := range s.Reference {
		if err := check("reference", false, r.Key); err != nil {
			return err
		}
	}
	for _, o := range s.Order {
		if err := check("order", true, o.Key); err != nil {
			return err
		}
	}
	for _, part := range s.CaptionParts() {
		if strings.Contains(part.Text, "{") {
			return fmt.Errorf("caption has a { without a name and its }: %s", quote(s.Caption))
		}
		if part.Key != "" {
			if err := check("caption", true, part.Key, model.CaptionName); err != nil {
				return err
			}
		}
	}
	return nil
}

// giveAxes lays a sheet by the tags in which its frames differ, the first across, the others down; in lines of per_line, all across.
// Frames that these do not tell apart, or of which some lack one, stand under their names.
func giveAxes(s *model.Sheet, frames []*model.Frame) {
	var axes []string
	for _, t := range frames[0].Tags {
		varies := false
		all := true
		for _, f := range frames[1:] {
			v, ok := f.Tag(t.Key)
			varies = varies || v != t.Value
			all = all && ok
		}
		if varies && all {
			axes = append(axes, t.Key)
		}
	}
	if !tellApart(axes, frames) {
		return
	}
	if len(axes) < 2 || s.PerLine > 0 {
		s.Columns = axes
		return
	}
	s.Columns, s.Rows = axes[:1:1], axes[1:]
}

// tellApart reports whether no two frames have the same values of the tags.
func tellApart(keys []string, frames []*model.Frame) bool {
	met := map[string]bool{}
	for _, f := range frames {
		var place strings.Builder
		for _, k := range keys {
			v, _ := f.Tag(k)
			fmt.Fprintf(&place, "%d %q ", v.Kind, v.String())
		}
		if met[place.String()] {
			return false
		}
		met[place.String()] = true
	}
	return true
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
