package sheet

import (
	"math"
	"slices"

	"lampbook/engine/model"
)

// groupBegins reports whether entry i of an axis has another outer heading than the one before it.
func groupBegins(axis [][]model.Value, i int) bool {
	n := len(axis[i])
	return n > 1 && !slices.Equal(axis[i][:n-1], axis[i-1][:n-1])
}

// columnHeadings lays the headings of a table's columns, an outer tag over an inner, and returns the tiles' top.
func (c *composer) columnHeadings(p part, g *grid, xs []float64, y float64) float64 {
	y += math.Ceil(2.25*g.u) - g.headingLead
	keys := c.pivot.columnKeys
	for k, key := range keys {
		y += g.headingLead
		if k > 0 {
			y += math.Ceil(g.headingLead / 4)
		}
		label, _ := labelOf(key)
		g.put(c.set.fit(label, g.name, g.measure), g.left, y)
		if k == 0 {
			c.rowNames(p, g, y)
		}
		y += g.headingLead
		var headings []heading
		deepest := 1
		for i := 0; i < len(xs); {
			values := p.table.columns[p.col0+i]
			n := 1
			for i+n < len(xs) && k < len(keys)-1 && slices.Equal(values[:k+1], p.table.columns[p.col0+i+n][:k+1]) {
				n++
			}
			room := xs[i+n-1] + float64(c.cell.X) - xs[i]
			h := heading{c.set.wrap(c.words[key].text(values[k]), g.heading, room, 3), g.left + xs[i]}
			headings = append(headings, h)
			deepest = max(deepest, len(h.lines))
			i += n
		}
		y = g.stand(headings, y, deepest)
	}
	return y + math.Ceil(g.u/2)
}

// rowHeading is the column of headings that belongs to one tag of the rows.
type rowHeading struct {
	x, width float64 // from the margin, 2 modules from the sheet's left
	align    bool    // numbers, lined up at their decimal points
	whole    float64 // width of the widest whole part
}

// rowHeadings measures the headings that hang at the left, and how much room they take with the distance to the tiles.
func (c *composer) rowHeadings(p part, g *grid, right float64) (columns []rowHeading, total float64) {
	if len(c.pivot.rowKeys) == 0 {
		return nil, 0
	}
	most := max(8*g.u, right/5)
	x := 0.0
	for k, key := range c.pivot.rowKeys {
		h := rowHeading{x: x, align: true}
		label, _ := labelOf(key)
		widest := c.set.set(shortened(label), g.name).extent()
		seen := map[model.Value]bool{}
		tail := 0.0
		for r := p.row0; r < p.row1; r++ {
			v := p.table.rows[r][k]
			if seen[v] {
				continue
			}
			seen[v] = true
			text := shortened(c.words[key].text(v))
			whole, all := c.set.set(wholePart(text), g.heading).width, c.set.set(text, g.heading).extent()
			widest = max(widest, all)
			h.align = h.align && v.Kind == model.NumberValue
			h.whole = max(h.whole, whole)
			tail = max(tail, all-whole)
		}
		if h.align {
			widest = max(widest, h.whole+tail)
		}
		h.width = math.Ceil(min(widest, most))
		h.align = h.align && h.whole+tail <= h.width
		columns = append(columns, h)
		x += h.width + math.Ceil(0.75*g.u)
	}
	return columns, x
}

// rowNames says the names of the rows' tags on the baseline of the first name of the columns' tags.
func (c *composer) rowNames(p part, g *grid, y float64) {
	columns, _ := c.rowHeadings(p, g, g.measure)
	for k, key := range c.pivot.rowKeys {
		label, _ := labelOf(key)
		g.put(c.set.fit(label, g.name, columns[k].width), 2*g.u+columns[k].x, y)
	}
}

// tableTiles lays the tiles of a table with the headings of its rows, and returns the bottom.
func (c *composer) tableTiles(p part, g *grid, xs []float64, heads []rowHeading, y float64) float64 {
	gutter := math.Ceil(g.u / 2)
	drop := math.Round(c.set.capHeight(g.heading))
	pitch := float64(c.cell.Y) + g.captionLead
	room := max(1, int((pitch-drop)/g.headingLead)+1)
	for r := p.row0; r < p.row1; r++ {
		fresh := r == p.row0
		if r > p.row0 {
			y += gutter
			if groupBegins(p.table.rows, r) {
				y += gutter
			}
		}
		for k, key := range c.pivot.rowKeys {
			if k < len(heads)-1 && !fresh && slices.Equal(p.table.rows[r][:k+1], p.table.rows[r-1][:k+1]) {
				continue
			}
			h := heads[k]
			text := c.words[key].text(p.table.rows[r][k])
			x := 2*g.u + h.x
			if h.align {
				x += h.whole - c.set.set(wholePart(text), g.heading).width
			}
			g.putAll(c.set.wrap(text, g.heading, h.width, min(3, room)), x, y+drop, g.headingLead)
		}
		for k := range p.columnsInLine {
			c.tile(p, g, r*len(p.table.columns)+p.col0+k, xs[k], y)
		}
		y += pitch
	}
	return y
}
