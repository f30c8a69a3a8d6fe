package sheet

import (
	"fmt"
	"image"
	"math"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

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
	pv, err := newPivot(p, s)
	if err == nil && int(s.Paper) >= len(grounds) {
		err = fmt.Errorf("paper %d is not known", s.Paper)
	}
	if err != nil {
		at := ""
		if s.Pos.File != "" {
			at = fmt.Sprintf("%s:%d: ", s.Pos.File, s.Pos.Line)
		}
		return nil, nil, fmt.Errorf("%ssheet %q: %w", at, s.Name, err)
	}
	set, err := newSetter()
	if err != nil {
		return nil, nil, err
	}
	c := &composer{plan: p, sheet: s, pivot: pv, set: set, words: wordings(p, s, pv), failed: map[int]bool{}, scale: 1,
		references: newReferences(p, s, pv), figures: map[place][]string{}, scaleEnd: 100}
	for _, i := range pv.frames {
		if p.Frames[i].Failure != "" {
			c.failed[i] = true
		}
	}
	c.foot = footOf(p, s, pv, judge(p, pv), c.references, o.Foot)
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

// slug is a table's page values as a part of a file's name: letters, digits, '.', '_' and '-'.
func (c *composer) slug(t *table) string {
	var parts []string
	for i, v := range t.page {
		var b strings.Builder
		for _, r := range strings.ReplaceAll(c.words[c.pivot.pageKeys[i]].text(v), trueMinus, "-") {
			switch {
			case r < 128 && model.ValidName("x"+string(r)+"x"):
				b.WriteRune(r)
			case r == ' ':
				b.WriteByte('-')
			}
		}
		if b.Len() > 0 {
			parts = append(parts, b.String())
		}
	}
	return strings.TrimRight(strings.Join(parts, "-"), ".")
}

// uniqueName is the name of page n of a table: the sheet's name, the slug, and a number where that is not enough or there are several.
func uniqueName(name, slug string, n int, used map[string]bool) string {
	if slug != "" {
		name += "-" + slug
	}
	const room = 8 // for a number
	if len(name) > model.MaxNameLength-room {
		name = strings.TrimRight(name[:model.MaxNameLength-room], ".")
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
