package sheet

import (
	"fmt"
	"slices"
	"strings"

	"lampbook/engine/model"
)

// place is what stands in a cell.
type place struct {
	frame int    // index into the plan's frames; -1 where no frame has these tags
	pass  string // "" is the picture
}

// table is one page's share of a pivot, before it is cut to fit a file.
type table struct {
	page    []model.Value   // the values of the sheet's Pages, in their order
	rows    [][]model.Value // one entry a row: the values of the pivot's row keys
	columns [][]model.Value // likewise
	cells   []place         // row by row
}

// pivot is a sheet's frames in order. A pivot with one axis has its keys in columnKeys and one row without values.
type pivot struct {
	pageKeys, rowKeys, columnKeys []string
	byName                        bool // no axis at all: the frames one after another, headed by their names
	tables                        []table
	frames                        []int // every frame that stands on the sheet, in the plan's order
	leftOut                       int   // frames admitted by Where that lack a tag of an axis
}

// oneAxis reports whether the tiles run on from line to line.
func (p *pivot) oneAxis() bool { return len(p.rowKeys) == 0 }

// keys returns the tags of all axes, pages first.
func (p *pivot) keys() []string {
	return slices.Concat(p.pageKeys, p.rowKeys, p.columnKeys)
}

// picturePass is how the picture itself reads on the pass axis.
const picturePass = "picture"

// entry is a frame (or one of its passes) with its values along the three axes.
type entry struct {
	place
	page, row, column []int // ranks
}

// newPivot places the plan's frames. The error says what is wrong with the sheet.
func newPivot(p *model.Plan, s *model.Sheet) (*pivot, error) {
	pv := &pivot{pageKeys: s.Pages, rowKeys: s.Rows, columnKeys: s.Columns}
	if len(s.Columns) == 0 {
		pv.rowKeys, pv.columnKeys = nil, s.Rows
	}
	pv.byName = len(pv.columnKeys) == 0
	var chosen []int
	for i := range p.Frames {
		if s.Shows(&p.Frames[i]) {
			chosen = append(chosen, i)
		}
	}
	order := newRanks(s.Order)
	var entries []entry
	for _, i := range chosen {
		on := false
		for _, pass := range passesOf(&p.Frames[i], pv.keys()) {
			e, ok := pv.entry(p, i, pass, order)
			if ok {
				entries = append(entries, e)
				on = true
			}
		}
		if on {
			pv.frames = append(pv.frames, i)
		} else {
			pv.leftOut++
		}
	}
	if len(entries) == 0 {
		return nil, nothingToShow(p, s, pv, len(chosen))
	}
	slices.SortStableFunc(entries, func(a, b entry) int { return slices.Compare(a.page, b.page) })
	for len(entries) > 0 {
		n := 1
		for n < len(entries) && slices.Equal(entries[n].page, entries[0].page) {
			n++
		}
		t, err := pv.table(p, entries[:n], order)
		if err != nil {
			return nil, err
		}
		pv.tables = append(pv.tables, t)
		entries = entries[n:]
	}
	return pv, nil
}

// passesOf returns what of a frame stands on the sheet: the picture alone, or with an axis of passes all of them.
func passesOf(f *model.Frame, keys []string) []string {
	passes := []string{""}
	if slices.Contains(keys, model.AxisPass) {
		for _, p := range f.Settings.Passes {
			passes = append(passes, p.String())
		}
	}
	return passes
}

// entry ranks a frame along the axes; ok is false where it lacks a tag.
func (pv *pivot) entry(p *model.Plan, frame int, pass string, order *ranks) (e entry, ok bool) {
	e.place = place{frame, pass}
	for _, axis := range [...]struct {
		keys []string
		to   *[]int
	}{{pv.pageKeys, &e.page}, {pv.rowKeys, &e.row}, {pv.columnKeys, &e.column}} {
		for _, k := range axis.keys {
			v, ok := valueOf(&p.Frames[frame], pass, k)
			if !ok {
				return e, false
			}
			*axis.to = append(*axis.to, order.rank(k, v))
		}
	}
	if pv.byName {
		e.column = []int{frame}
	}
	return e, true
}

func valueOf(f *model.Frame, pass, key string) (model.Value, bool) {
	if key != model.AxisPass {
		return f.Tag(key)
	}
	if pass == "" {
		pass = picturePass
	}
	return model.Value{Text: pass}, true
}

// table sets entries of one page out in rows and columns: of each axis, what occurs on this page.
func (pv *pivot) table(p *model.Plan, entries []entry, order *ranks) (table, error) {
	distinct := func(of func(entry) []int) [][]int {
		all := make([][]int, len(entries))
		for i, e := range entries {
			all[i] = of(e)
		}
		slices.SortFunc(all, slices.Compare[[]int])
		return slices.CompactFunc(all, slices.Equal[[]int])
	}
	rows := distinct(func(e entry) []int { return e.row })
	columns := distinct(func(e entry) []int { return e.column })
	t := table{page: order.values(pv.pageKeys, entries[0].page)}
	for _, r := range rows {
		t.rows = append(t.rows, order.values(pv.rowKeys, r))
	}
	for _, c := range columns {
		if pv.byName {
			t.columns = append(t.columns, []model.Value{{Text: p.Frames[c[0]].Name}})
			continue
		}
		t.columns = append(t.columns, order.values(pv.columnKeys, c))
	}
	// A page may hold a large and sparse table; what a plan can ask for at most is bounded here, not in a machine's memory.
	if len(rows) > maxCells/len(columns) {
		return t, fmt.Errorf("%d rows by %d columns are more than %d places for %d pictures: choose other tags for rows and columns",
			len(rows), len(columns), maxCells, len(entries))
	}
	t.cells = slices.Repeat([]place{{frame: -1}}, len(rows)*len(columns))
	for _, e := range entries {
		r, _ := slices.BinarySearchFunc(rows, e.row, slices.Compare[[]int])
		c, _ := slices.BinarySearchFunc(columns, e.column, slices.Compare[[]int])
		at := &t.cells[r*len(columns)+c]
		if at.frame >= 0 {
			return t, sameCell(&p.Frames[at.frame], &p.Frames[e.frame], pv.keys())
		}
		*at = e.place
	}
	return t, nil
}

// maxCells is the largest table: twenty places for each frame of the largest plan.
const maxCells = 20 * model.MaxFrames

// ranks numbers the values of each tag: those of the given order first, the rest as they are met.
type ranks struct {
	of     map[tagValue]int
	listed map[string][]model.Value // by key, in order of rank
}

type tagValue struct {
	key   string
	value model.Value
}

func newRanks(order []model.TagOrder) *ranks {
	r := &ranks{map[tagValue]int{}, map[string][]model.Value{}}
	for _, o := range order {
		for _, v := range o.Values {
			r.rank(o.Key, v)
		}
	}
	return r
}

func (r *ranks) rank(key string, v model.Value) int {
	kv := tagValue{key, v}
	n, ok := r.of[kv]
	if !ok {
		n = len(r.listed[key])
		r.of[kv] = n
		r.listed[key] = append(r.listed[key], v)
	}
	return n
}

func (r *ranks) values(keys []string, ranks []int) []model.Value {
	var out []model.Value
	for i, k := range keys {
		out = append(out, r.listed[k][ranks[i]])
	}
	return out
}

// sameCell says that two frames want one place, and which tags would part them.
func sameCell(a, b *model.Frame, axes []string) error {
	var parting []string
	for _, t := range slices.Concat(a.Tags, b.Tags) {
		va, oka := a.Tag(t.Key)
		vb, okb := b.Tag(t.Key)
		if (va != vb || oka != okb) && !slices.Contains(parting, t.Key) {
			parting = append(parting, t.Key)
		}
	}
	head := fmt.Sprintf("frames %q and %q stand in one place", a.Name, b.Name)
	if len(axes) > 0 {
		head += " (same " + list(axes, "and") + ")"
	}
	switch len(parting) {
	case 0:
		return fmt.Errorf("%s and have the same tags: give them a tag that tells them apart", head)
	case 1:
		return fmt.Errorf("%s: tag %s tells them apart; add it to rows, columns or pages, or choose one of its values with where", head, parting[0])
	}
	return fmt.Errorf("%s: tags %s tell them apart; add one to rows, columns or pages, or choose one of its values with where", head, list(parting, "and"))
}

// nothingToShow says why no frame stands on the sheet.
func nothingToShow(p *model.Plan, s *model.Sheet, pv *pivot, chosen int) error {
	switch {
	case len(p.Frames) == 0:
		return fmt.Errorf("the scene has no frames")
	case chosen == 0:
		var keys []string
		for _, c := range s.Where {
			keys = append(keys, c.Key)
		}
		return fmt.Errorf("where admits none of the %d frames: no frame has the chosen %s", len(p.Frames), list(keys, "and"))
	}
	if keys := pv.keys(); len(keys) > 1 {
		return fmt.Errorf("no frame has all the tags %s", list(keys, "and"))
	}
	return fmt.Errorf("no frame has the tag %s", list(pv.keys(), "and"))
}

// list joins words as a sentence does: "a, b and c".
func list(words []string, last string) string {
	if len(words) < 2 {
		return strings.Join(words, "")
	}
	n := len(words) - 1
	return strings.Join(words[:n], ", ") + " " + last + " " + words[n]
}
