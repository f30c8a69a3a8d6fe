package sheet

import (
	"image"
	"math"

	"lampbook/engine/model"
)

// Measures of a page, in pixels where nothing else is said.
const (
	maxSide     = 12_000 // a page's sides
	leastScaled = 240    // a tile's longer side, under which pages are split rather than tiles made smaller
	minModule   = 12
	footRoom    = 8  // modules kept for the foot, enough for ten lines, when a table is cut
	minMeasure  = 20 // modules: the narrowest column of tiles, so that title and foot have room
)

// Sizes of type and distances, in modules.
const (
	titleSize   = 1.4
	headingSize = 0.8
	captionSize = 0.65
	footSize    = 0.55
)

// textItem is a line of text in its place; x and baseline are where it begins.
type textItem struct {
	line        line
	x, baseline float64
}

// tileItem is a cell of the grid.
type tileItem struct {
	cell image.Rectangle
	place
}

// plate is one page, laid out to the pixel.
type plate struct {
	width, height int
	module        float64
	texts         []textItem
	tiles         []tileItem
	subject       [2]int          // of texts: where its lines begin and end
	scale         image.Rectangle // the strip of a sheet of differences; empty on others
}

// composer lays plates of one sheet.
type composer struct {
	plan       *model.Plan
	sheet      *model.Sheet
	pivot      *pivot
	set        *setter
	words      map[string]wording
	failed     map[int]bool // frames that the plan knows to fail
	foot       [][]string   // paragraphs of items
	cell       image.Point
	scale      float64            // of tiles against the sheet's own size for them; 1 or less
	references *references        // nil: nothing is compared
	figures    map[place][]string // what captions say of the difference, in full and shorter; what is not there yet takes the widest
	scaleEnd   float64            // ΔE2000 that shows lightest
	page       int                // which of its table's pages this is, from 0
	pageCount  int
}

// part is what of a table stands on a plate. A sheet with one axis has tiles from first on, perLine in each line.
type part struct {
	table         *table
	row0, row1    int
	col0, col1    int
	perLine       int // one axis; otherwise 0
	columnsInLine int // tiles side by side
}

func (c *composer) wholeTable(t *table) part {
	return c.cut(t, 0, max(1, len(t.rows)), 0, len(t.columns))
}

// cut takes rows row0 to row1 and columns col0 to col1 of a table.
func (c *composer) cut(t *table, row0, row1, col0, col1 int) part {
	p := part{table: t, row0: row0, row1: row1, col0: col0, col1: col1, columnsInLine: col1 - col0}
	if c.pivot.oneAxis() {
		p.perLine = c.perLine(col1 - col0)
		p.columnsInLine = p.perLine
	}
	return p
}

// perLine is how many of n tiles stand in a line. By default it brings the sheet near to √2 : 1, as near as any number can but for a
// fifth; within that, what leaves the fewest places empty in the last line.
func (c *composer) perLine(n int) int {
	if k := c.sheet.PerLine; k > 0 {
		return min(k, n)
	}
	u := c.moduleFor(float64(c.cell.X), float64(c.cell.Y))
	miss := func(k int) float64 {
		lines := (n + k - 1) / k
		w := 5*u + float64(k)*(float64(c.cell.X)+u/2)
		h := 10*u + float64(lines)*(float64(c.cell.Y)+2*u)
		return math.Abs(math.Log(w / h / math.Sqrt2))
	}
	nearest := math.Inf(1)
	for k := 1; k <= n; k++ {
		nearest = min(nearest, miss(k))
	}
	best, empty := 1, n+1
	for k := 1; k <= n; k++ {
		e := (n+k-1)/k*k - n
		if m := miss(k); m <= nearest+math.Log(1.2) && (e < empty || e == empty && m < miss(best)) {
			best, empty = k, e
		}
	}
	return best
}

// moduleFor is a fortieth of the shorter side, at least minModule and at most a tenth of a tile's shorter side, so that on a large
// sheet headings still fit their tiles.
func (c *composer) moduleFor(width, height float64) float64 {
	most := max(minModule, math.Floor(float64(min(c.cell.X, c.cell.Y))/10))
	return min(max(minModule, math.Floor(min(width, height)/40)), most)
}

// compose lays out a part. The module follows from the page's size and the page's size from the module: it grows from the
// least until the two agree.
func (c *composer) compose(p part) *plate {
	u := float64(minModule)
	for {
		pl := c.composeWith(p, u)
		next := c.moduleFor(float64(pl.width), float64(pl.height))
		if next <= u {
			return pl
		}
		u = next
	}
}

func sized(u, modules float64) float64 { return max(minSize, math.Round(4*u*modules)/4) }

// grid is the x and y of tiles while a plate is laid.
type grid struct {
	u            float64
	plate        *plate
	left         float64 // of the first tile
	measure      float64 // width of the tiles' column, at least minMeasure modules
	heading      style
	name         style
	headingLead  float64 // between baselines
	captionStyle style
	captionLead  float64 // 0 without captions
}

func (c *composer) composeWith(p part, u float64) *plate {
	g := &grid{u: u, plate: &plate{module: u}}
	g.heading = style{sized(u, headingSize), medium, firstInk}
	g.name = style{sized(u, headingSize), regular, secondInk}
	g.headingLead = leadFor(u, 1, g.heading.size)
	g.captionStyle = style{sized(u, captionSize), regular, secondInk}
	if c.captioned() {
		g.captionLead = leadFor(u, 1, g.captionStyle.size)
	}
	xs, right := c.columnPlaces(p, u)
	rowHeads, headWidth := c.rowHeadings(p, g, right)
	g.left = max(3*u, math.Ceil(2*u+headWidth))
	g.measure = max(right, minMeasure*u)
	g.plate.width = int(math.Ceil(g.left + g.measure + 2*u))
	y := c.head(p, g)
	if c.pivot.oneAxis() {
		y = c.oneAxisTiles(p, g, xs, y)
	} else {
		y = c.columnHeadings(p, g, xs, y)
		y = c.tableTiles(p, g, xs, rowHeads, y)
	}
	c.footLines(g, y)
	return g.plate
}

// put places a line; without ink it is left out.
func (g *grid) put(l line, x, baseline float64) {
	if l.left != l.right {
		g.plate.texts = append(g.plate.texts, textItem{l, x, baseline})
	}
}

// putAll places lines under one another and returns the last baseline.
func (g *grid) putAll(lines []line, x, baseline, lead float64) float64 {
	for i, l := range lines {
		g.put(l, x, baseline+float64(i)*lead)
	}
	return baseline + float64(max(0, len(lines)-1))*lead
}

// heading is what stands over a column.
type heading struct {
	lines []line
	x     float64
}

// stand places headings side by side so that their last lines share a baseline, which it returns: that of the deepest, begun at y.
func (g *grid) stand(headings []heading, y float64, deepest int) float64 {
	for _, h := range headings {
		g.putAll(h.lines, h.x, y+float64(deepest-len(h.lines))*g.headingLead, g.headingLead)
	}
	return y + float64(deepest-1)*g.headingLead
}

// columnPlaces returns where each column begins, from the first tile's left, and where the last ends. Groups of an outer
// heading stand a gutter further apart.
func (c *composer) columnPlaces(p part, u float64) (xs []float64, right float64) {
	gutter := math.Ceil(u / 2)
	x := 0.0
	for k := range p.columnsInLine {
		if k > 0 {
			x += gutter
			if !c.pivot.oneAxis() && groupBegins(p.table.columns, p.col0+k) {
				x += gutter
			}
		}
		xs = append(xs, x)
		x += float64(c.cell.X)
	}
	return xs, x
}

// head lays title and subject, and returns the baseline of the last.
func (c *composer) head(p part, g *grid) float64 {
	u := g.u
	title := style{sized(u, titleSize), medium, firstInk}
	y := 2*u + math.Round(c.set.capHeight(title))
	y = g.putAll(c.set.wrap(c.title(), title, g.measure, 3), g.left, y, leadFor(u, 1.75, title.size))
	y += math.Ceil(1.5 * u)
	g.plate.subject[0] = len(g.plate.texts)
	y = g.putAll(c.set.wrap(c.subject(p, c.failed), g.name, g.measure, 3), g.left, y, g.headingLead)
	g.plate.subject[1] = len(g.plate.texts)
	return y
}

// restate writes the subject anew on the lines that it has, once it is known which frames failed.
func (c *composer) restate(p part, pl *plate, failed map[int]bool) {
	old := pl.texts[pl.subject[0]:pl.subject[1]]
	if len(old) == 0 {
		return
	}
	room := float64(pl.width) - old[0].x - 2*pl.module
	for i, l := range c.set.wrap(c.subject(p, failed), old[0].line.style, room, len(old)) {
		old[i].line = l
	}
}

// captioned reports whether tiles have captions; where the frame's name is the heading, it is not said twice.
func (c *composer) captioned() bool {
	return c.references != nil || c.ownCaption()
}

func (c *composer) ownCaption() bool {
	return c.sheet.Caption != "" && !(c.pivot.byName && c.sheet.Caption == "{"+model.CaptionName+"}")
}

// oneAxisTiles lays lines of tiles, each under its own heading, and returns the bottom.
func (c *composer) oneAxisTiles(p part, g *grid, xs []float64, y float64) float64 {
	y += math.Ceil(2.25*g.u) - g.headingLead
	if !c.pivot.byName {
		y += g.headingLead
		g.put(c.set.fit(labels(c.pivot.columnKeys, "and"), g.name, g.measure), g.left, y)
	}
	for n := p.col0; n < p.col1; n += p.perLine {
		if n > p.col0 {
			y += math.Ceil(g.u / 2)
		}
		y += g.headingLead
		var headings []heading
		deepest := 1
		for k := 0; k < p.perLine && n+k < p.col1; k++ {
			h := heading{c.set.wrap(c.headingOf(p.table.columns[n+k]), g.heading, float64(c.cell.X), 3), g.left + xs[k]}
			headings = append(headings, h)
			deepest = max(deepest, len(h.lines))
		}
		y = g.stand(headings, y, deepest) + math.Ceil(g.u/2)
		for k := 0; k < p.perLine && n+k < p.col1; k++ {
			c.tile(p, g, n+k, xs[k], y)
		}
		y += float64(c.cell.Y) + g.captionLead
	}
	return y
}

// tile lays one cell and its caption.
func (c *composer) tile(p part, g *grid, cell int, x, y float64) {
	at := image.Pt(int(g.left+x), int(y))
	pl := p.table.cells[cell]
	g.plate.tiles = append(g.plate.tiles, tileItem{image.Rectangle{at, at.Add(c.cell)}, pl})
	if g.captionLead > 0 && pl.frame >= 0 {
		left, room := g.left+x, float64(c.cell.X)
		baseline := y + float64(c.cell.Y) + math.Ceil(max(0.72*g.captionLead, mostAscent*g.captionStyle.size))
		if figure, ok := c.figure(pl, g.captionStyle, room); ok {
			if !c.ownCaption() {
				g.put(figure, left, baseline)
				return
			}
			// The figures stand at the right, under one another down a column; the caption takes the rest.
			at := left + room - math.Ceil(figure.extent())
			g.put(figure, at, baseline)
			room = at - left - math.Ceil(g.captionStyle.size)
		}
		if c.ownCaption() {
			text := captionOf(c.sheet.CaptionParts(), &c.plan.Frames[pl.frame], pl.pass, c.words)
			g.put(c.set.fit(text, g.captionStyle, room), left, baseline)
		}
	}
}

// figure sets what a caption says of the difference. A figure is never cut: one that has no room is left out.
func (c *composer) figure(at place, st style, room float64) (l line, ok bool) {
	if c.references == nil {
		return line{}, false
	}
	texts, known := c.figures[at]
	if !known {
		texts = widestFigure
	}
	for _, t := range texts {
		if l = c.set.set(t, st); l.extent() <= room {
			return l, l.left != l.right
		}
	}
	return line{}, false
}

// footLines lays the foot, a paragraph after another, and closes the page.
func (c *composer) footLines(g *grid, y float64) {
	st := style{sized(g.u, footSize), regular, secondInk}
	lead := leadFor(g.u, 0.8, st.size)
	gap := math.Ceil(2 * st.size)
	y += math.Ceil(1.5 * g.u)
	if c.sheet.Show == model.ShowDifference {
		y = c.scaleStrip(g, st, lead, y)
	}
	for n, items := range c.foot {
		if n > 0 {
			y += lead
		}
		x := 0.0
		for _, item := range items {
			lines := c.set.wrap(item, st, g.measure, 4)
			if x > 0 && (len(lines) > 1 || x+gap+lines[0].extent() > g.measure) {
				y += lead
				x = 0
			} else if x > 0 {
				x += gap
			}
			y = g.putAll(lines, g.left+x, y, lead)
			x += lines[len(lines)-1].extent()
			if len(lines) > 1 {
				x = g.measure // what follows begins a line of its own
			}
		}
	}
	g.plate.height = int(math.Ceil(y + 2*g.u))
}

// scaleStrip lays the scale of differences, its unit above and numbers below, and returns the next baseline.
func (c *composer) scaleStrip(g *grid, st style, lead, y float64) float64 {
	const width = 16 // modules, within minMeasure
	g.put(c.set.fit("ΔE2000 to the reference tile, each pixel", st, g.measure), g.left, y)
	y += math.Ceil(mostDescent*st.size + g.u/4)
	at := image.Pt(int(g.left), int(y))
	g.plate.scale = image.Rectangle{at, at.Add(image.Pt(int(math.Ceil(width*g.u)), int(math.Ceil(0.75*g.u))))}
	y = float64(g.plate.scale.Max.Y) + math.Ceil(mostAscent*st.size+g.u/4)
	for i := range 3 {
		part := float64(i) / 2
		l := c.set.set(number(c.scaleEnd*part, 4), st)
		g.put(l, g.left+math.Round((width*g.u-l.extent())*part), y)
	}
	return y + 2*lead
}
