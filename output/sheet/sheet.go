package sheet

import (
	"fmt"
	"image"
	"math"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

// Tile is what stands in a place: a picture, or the reason why there is none.
type Tile struct {
	Image   image.Image // sRGB-encoded; nil if failed
	Failure string
}

// Source fetches what stands in a place: the picture of a frame (an index into the plan's frames) where pass is "", otherwise one
// of its passes ("diffuse", "specular", "ambient", "emission", "depth", "normal") made visible. It is called once for each place,
// in the order of drawing, so that no more than one picture need be in memory, and not for frames with a Failure in the plan.
// An error ends the sheet.
type Source func(frame int, pass string) (Tile, error)

// Foot is what the foot of a sheet says beside what the plan says itself (scene, size, samples). Empty entries are left out.
type Foot struct {
	PlanHash string
	Stamp    string   // a date or a build, as the user gave it
	Lines    []string // further remarks, each a line of its own
}

// Options tunes Lay. The zero value works.
type Options struct {
	Foot Foot
}

// Page is a finished page.
type Page struct {
	Name  string       // the file's name without its ending: the sheet's, with the page's value or number where there are several
	Image *image.NRGBA // opaque
}

// Lay draws a sheet and hands its pages to emit, one after another; each page is drawn once the one before has been taken. A page is at most
// 12,000 pixels a side: then tiles are made smaller, down to 240 pixels, and then the table is cut into several pages. An
// error of src or emit ends it and is returned as it is; other errors begin with the sheet's place in the scene.
func Lay(p *model.Plan, s model.Sheet, src Source, o Options, emit func(Page) error) error {
	pages, c, err := plates(p, &s, o)
	if err != nil {
		return err
	}
	j := judge(p, c.pivot)
	for _, pg := range pages {
		c.turnTo(pg)
		d := drawing{composer: c, plate: c.compose(pg.part), ground: grounds[s.Paper], fairness: j}
		img, err := d.draw(src)
		if err != nil {
			return err
		}
		if err := emit(Page{pg.name, img}); err != nil {
			return err
		}
	}
	return nil
}

// Names returns the names of a sheet's pages without drawing them. They do not depend on the foot.
func Names(p *model.Plan, s model.Sheet, o Options) ([]string, error) {
	pages, _, err := plates(p, &s, o)
	if err != nil {
		return nil, err
	}
	var names []string
	for _, pg := range pages {
		names = append(names, pg.name)
	}
	return names, nil
}

// pagePlan is a page to be laid.
type pagePlan struct {
	name     string
	part     part
	cell     image.Point
	scale    float64
	page, of int // among the pages of one table
}

// turnTo readies the composer for a page.
func (c *composer) turnTo(pg pagePlan) {
	c.cell, c.scale, c.page, c.pageCount = pg.cell, pg.scale, pg.page, pg.of
}

// plates decides what stands on which page.
func plates(p *model.Plan, s *model.Sheet, o Options) ([]pagePlan, *composer, error) {
	pv, err := checked(p, s)
	if err != nil {
		return nil, nil, err
	}
	if int(s.Paper) >= len(grounds) {
		return nil, nil, fmt.Errorf("sheet %q: paper %d is not known", s.Name, s.Paper)
	}
	set, err := newSetter()
	if err != nil {
		return nil, nil, err
	}
	c := &composer{plan: p, sheet: s, pivot: pv, set: set, words: wordings(p, s, pv), scale: 1}
	c.foot = footOf(p, s, pv, judge(p, pv), o.Foot)
	natural := naturalCell(p, s, pv)
	used := map[string]bool{}
	var pages []pagePlan
	for i := range pv.tables {
		t := &pv.tables[i]
		c.cell, c.scale = natural, 1
		parts := c.cutToFit(t)
		for n, part := range parts {
			name := uniqueName(s.Name, c.slug(t), n, used)
			pages = append(pages, pagePlan{name: name, part: part, cell: c.cell, scale: c.scale, page: n, of: len(parts)})
		}
	}
	return pages, c, nil
}

// naturalCell is the place that every tile of a sheet has: as large as the largest picture, scaled to the sheet's own Tile where it has one.
func naturalCell(p *model.Plan, s *model.Sheet, pv *pivot) image.Point {
	var cell image.Point
	for _, i := range pv.frames {
		if f := &p.Frames[i]; f.Failure == "" {
			size := image.Pt(f.Settings.Width, f.Settings.Height)
			if s.Tile != [2]int{} {
				size = scaled(size, filling(size, image.Pt(s.Tile[0], s.Tile[1])))
			}
			cell.X, cell.Y = max(cell.X, size.X), max(cell.Y, size.Y)
		}
	}
	switch {
	case cell.X > 0 && cell.Y > 0:
		return cell
	case s.Tile != [2]int{}:
		return image.Pt(s.Tile[0], s.Tile[1])
	}
	return image.Pt(320, 240) // nothing on the sheet could be rendered: room for the reasons
}

// filling is the scale at which a picture just fits a box.
func filling(size, box image.Point) float64 {
	return min(float64(box.X)/float64(size.X), float64(box.Y)/float64(size.Y))
}

// cutToFit returns the parts of a table that fit a page each. It makes the composer's cell smaller first, unless the sheet has
// its own Tile or tiles would become too small to judge.
func (c *composer) cutToFit(t *table) []part {
	// The foot counts as footRoom, not as what it says: the cut, and so the pages' names, must not hang on a stamp.
	foot := c.foot
	c.foot = nil
	defer func() { c.foot = foot }()
	fits := func(p part) bool {
		pl := c.compose(p)
		return pl.width <= maxSide && float64(pl.height)+footRoom*pl.module <= maxSide
	}
	if c.mayFit(t, c.cell) {
		if whole := c.wholeTable(t); fits(whole) {
			return []part{whole}
		}
	}
	if c.sheet.Tile == [2]int{} {
		natural := c.cell
		least := min(1, float64(leastScaled)/float64(max(natural.X, natural.Y)))
		for c.scale > least {
			c.scale = max(least, c.scale*0.95)
			c.cell = scaled(natural, c.scale)
			if !c.mayFit(t, c.cell) {
				continue
			}
			if whole := c.wholeTable(t); fits(whole) {
				return []part{whole}
			}
		}
	}
	// Cut columns until a page is narrow enough, then rows until it is low enough.
	rows, columns := max(1, len(t.rows)), len(t.columns)
	if c.pivot.oneAxis() {
		inLine := maxSide/c.cell.X + 1
		if c.sheet.PerLine > 0 {
			inLine = c.sheet.PerLine
		}
		n := max(1, columns/(inLine*(maxSide/c.cell.Y+1)))
		for n < columns && !fits(c.cut(t, 0, 1, 0, share(columns, n))) {
			n = min(columns, n+max(1, n/8))
		}
		return c.cuts(t, 1, n)
	}
	nc, nr := max(1, columns*c.cell.X/maxSide), max(1, rows*c.cell.Y/maxSide)
	for nc < columns && c.compose(c.cut(t, 0, 1, 0, share(columns, nc))).width > maxSide {
		nc++
	}
	for nr < rows && !fits(c.cut(t, 0, share(rows, nr), 0, share(columns, nc))) {
		nr++
	}
	return c.cuts(t, nr, nc)
}

// mayFit is a quick no for tables whose tiles alone pass a page.
func (c *composer) mayFit(t *table, cell image.Point) bool {
	if c.pivot.oneAxis() {
		return len(t.columns)*cell.X/maxSide <= maxSide/cell.Y
	}
	return len(t.columns)*cell.X <= maxSide && len(t.rows)*cell.Y <= maxSide
}

// share is the size of the largest of n nearly equal shares of a total.
func share(total, n int) int { return (total + n - 1) / n }

// cuts divides a table into nr by nc parts, as equal as can be.
func (c *composer) cuts(t *table, nr, nc int) []part {
	rows, columns := max(1, len(t.rows)), len(t.columns)
	rs, cs := share(rows, nr), share(columns, nc)
	var parts []part
	for r := 0; r < rows; r += rs {
		for k := 0; k < columns; k += cs {
			parts = append(parts, c.cut(t, r, min(rows, r+rs), k, min(columns, k+cs)))
		}
	}
	return parts
}

func scaled(p image.Point, by float64) image.Point {
	return image.Pt(max(1, int(math.Round(float64(p.X)*by))), max(1, int(math.Round(float64(p.Y)*by))))
}

// wordings finds how the values of each tag that the sheet writes are written.
func wordings(p *model.Plan, s *model.Sheet, pv *pivot) map[string]wording {
	words := map[string]wording{}
	for _, key := range append(pv.keys(), captionKeys(s.Caption)...) {
		if _, ok := words[key]; !ok {
			words[key] = wordingOf(key, valuesOf(p, pv.frames, key))
		}
	}
	return words
}

// valuesOf lists the values of a tag among frames, each once, in first-seen order.
func valuesOf(p *model.Plan, frames []int, key string) []model.Value {
	var values []model.Value
	seen := map[model.Value]bool{}
	for _, i := range frames {
		if v, ok := p.Frames[i].Tag(key); ok && !seen[v] {
			seen[v] = true
			values = append(values, v)
		}
	}
	return values
}

// slug is a table's page values as a part of a file's name: letters, digits, '.', '_' and '-'.
func (c *composer) slug(t *table) string {
	var parts []string
	for i, v := range t.page {
		var b strings.Builder
		for _, r := range strings.ReplaceAll(c.words[c.pivot.pageKeys[i]].text(v), trueMinus, "-") {
			switch {
			case r < 128 && model.ValidName("x"+string(r)):
				b.WriteRune(r)
			case r == ' ':
				b.WriteByte('-')
			}
		}
		if b.Len() > 0 {
			parts = append(parts, b.String())
		}
	}
	return strings.Join(parts, "-")
}

// uniqueName is the name of page n of a table: the sheet's name, the slug, and a number where that is not enough or there are several.
func uniqueName(name, slug string, n int, used map[string]bool) string {
	if slug != "" {
		name += "-" + slug
	}
	const room = 8 // for a number
	if len(name) > model.MaxNameLength-room {
		name = name[:model.MaxNameLength-room]
	}
	full := name
	if n > 0 {
		full = name + "-" + strconv.Itoa(n+1)
	}
	for k := n + 2; used[full]; k++ {
		full = name + "-" + strconv.Itoa(k)
	}
	used[full] = true
	return full
}

// title is the sheet's title, or its name made readable.
func (c *composer) title() string {
	if c.sheet.Title != "" {
		return c.sheet.Title
	}
	words := strings.Map(func(r rune) rune {
		if r == '_' || r == '-' {
			return ' '
		}
		return r
	}, c.sheet.Name)
	return strings.ToUpper(words[:min(1, len(words))]) + words[min(1, len(words)):]
}

// subject says in one line what a page shows: "gloss 4 to 256 by glaze, 12 frames".
func (c *composer) subject(p part) string {
	var frames []int
	seen := map[int]bool{}
	for r := p.row0; r < p.row1; r++ {
		for k := p.col0; k < p.col1; k++ {
			if pl := p.table.cells[r*len(p.table.columns)+k]; pl.frame >= 0 && !seen[pl.frame] {
				seen[pl.frame] = true
				frames = append(frames, pl.frame)
			}
		}
	}
	spans := func(keys []string) string {
		var all []string
		for _, key := range keys {
			if key == model.AxisPass {
				all = append(all, "passes")
				continue
			}
			all = append(all, span(key, valuesOf(c.plan, frames, key), c.words[key]))
		}
		return list(all, "and")
	}
	var parts []string
	if s := spans(c.pivot.columnKeys); s != "" {
		parts = append(parts, s)
	}
	if s := spans(c.pivot.rowKeys); s != "" {
		parts[0] += " by " + s
	}
	count := strconv.Itoa(len(frames)) + " frames"
	if len(frames) == 1 {
		count = "1 frame"
	}
	parts = append(parts, count)
	if c.pageCount > 1 {
		parts = append(parts, fmt.Sprintf("page %d of %d", c.page+1, c.pageCount))
	}
	text := strings.Join(parts, ", ")
	var page []string
	for i, key := range c.pivot.pageKeys {
		label, _ := labelOf(key)
		page = append(page, label+" "+c.words[key].text(p.table.page[i]))
	}
	if len(page) > 0 {
		text = list(page, "and") + ": " + text
	}
	return text
}

// headingOf is the heading of a tile on a sheet with one axis.
func (c *composer) headingOf(values []model.Value) string {
	if c.pivot.byName {
		return values[0].Text
	}
	var all []string
	for i, v := range values {
		all = append(all, c.words[c.pivot.columnKeys[i]].text(v))
	}
	return strings.Join(all, ", ")
}

// footOf writes the foot: what was rendered and how, then whether the tiles may be compared.
func footOf(p *model.Plan, s *model.Sheet, pv *pivot, j fairness, f Foot) [][]string {
	var first []string
	add := func(text string) {
		if text != "" {
			first = append(first, text)
		}
	}
	add(p.Scene)
	var sizes, samples []string
	for _, i := range pv.frames {
		if fr := &p.Frames[i]; fr.Failure == "" {
			if t := sizeText(fr.Settings.Width, fr.Settings.Height); !slices.Contains(sizes, t) {
				sizes = append(sizes, t)
			}
			if t := number(float64(fr.Settings.Samples), 17); !slices.Contains(samples, t) {
				samples = append(samples, t)
			}
		}
	}
	one := func(values []string, unit string) string {
		switch {
		case len(values) == 0:
			return ""
		case len(values) > 3:
			return fmt.Sprintf("%s to %s%s", values[0], values[len(values)-1], unit)
		}
		return list(values, "and") + unit
	}
	add(one(sizes, " pixels"))
	add(one(samples, " samples"))
	if f.PlanHash != "" {
		add("plan " + f.PlanHash)
	}
	add(f.Stamp)
	second := []string{}
	if text := j.line(); text != "" {
		second = append(second, text)
	}
	if pv.leftOut > 0 {
		second = append(second, fmt.Sprintf("Left out for want of a tag: %d", pv.leftOut))
	}
	second = append(second, "Simulation, not a colour proof")
	foot := [][]string{first, second}
	for _, l := range f.Lines {
		foot = append(foot, []string{l})
	}
	return foot
}
