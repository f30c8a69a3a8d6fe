package sheet

import (
	"fmt"
	"image"
	"math"
	"slices"
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/model"
)

// someText is a tag's value as people and machines make them: short, long, without spaces, in other scripts.
func someText() *rapid.Generator[string] {
	return rapid.OneOf(
		rapid.StringMatching(`[a-z]{1,12}`),
		rapid.StringMatching(`[A-Za-z]{2,9}( [a-z,]{1,9}){0,8}`),
		rapid.StringMatching(`[a-z0-9_-]{30,90}`),
		rapid.SampledFrom([]string{"Ÿ̈gqÅ", "\u9752\u78c1", "ждать", "W", "i", "snow ☃ man", "a\u0323\u0307", "(\u2009)", "~"}),
		rapid.String(),
	)
}

// somePlan is a plan and a sheet of it that can be laid.
func somePlan(t *rapid.T) (*model.Plan, model.Sheet) {
	p := &model.Plan{Scene: someText().Draw(t, "scene")}
	keys := rapid.SliceOfNDistinct(rapid.OneOf(rapid.StringMatching(`[a-z_]{1,20}`), rapid.Just("height_mm")).Filter(func(s string) bool { return s != model.AxisPass }), 1, 3, rapid.ID).Draw(t, "keys")
	values := map[string][]model.Value{}
	for _, k := range keys {
		n := rapid.IntRange(1, 4).Draw(t, "values")
		if rapid.Bool().Draw(t, "numbers") {
			for _, x := range rapid.SliceOfNDistinct(rapid.Float64Range(-1e12, 1e12), n, n, rapid.ID).Draw(t, k) {
				values[k] = append(values[k], num(x))
			}
			continue
		}
		for _, s := range rapid.SliceOfNDistinct(someText(), n, n, rapid.ID).Draw(t, k) {
			values[k] = append(values[k], txt(s))
		}
	}
	size := rapid.SampledFrom([][2]int{{64, 48}, {16, 16}, {480, 360}, {20, 200}, {300, 31}}).Draw(t, "size")
	var add func(tags []model.Tag, rest []string)
	add = func(tags []model.Tag, rest []string) {
		if len(rest) == 0 {
			f := frame(fmt.Sprint("frame-", len(p.Frames), strings.Repeat("-long", rapid.IntRange(0, 9).Draw(t, "name"))))
			f.Tags = slices.Clone(tags)
			f.Settings.Width, f.Settings.Height = size[0], size[1]
			f.Settings.Samples = rapid.SampledFrom([]int{64, 64, 64, 16}).Draw(t, "samples")
			p.Frames = append(p.Frames, f)
			return
		}
		for _, v := range values[rest[0]] {
			add(append(tags, model.Tag{Key: rest[0], Value: v}), rest[1:])
		}
	}
	add(nil, keys)
	i := rapid.IntRange(0, len(keys)).Draw(t, "rows end")
	j := rapid.IntRange(i, len(keys)).Draw(t, "columns end")
	s := model.Sheet{
		Name: "sheet", Title: someText().Draw(t, "title"), Rows: keys[:i], Columns: keys[i:j], Pages: keys[j:],
		Caption: rapid.SampledFrom([]string{"", "{name}", "{" + keys[0] + "} of {name}"}).Draw(t, "caption"),
		Paper:   model.Paper(rapid.IntRange(0, 2).Draw(t, "paper")),
	}
	if rapid.Bool().Draw(t, "reference") {
		s.Reference = []model.TagChoice{{Key: keys[0], Values: values[keys[0]][:1]}}
		s.Show = model.ShowKind(rapid.IntRange(0, 1).Draw(t, "show"))
	}
	if i == 0 || j == i {
		s.PerLine = rapid.IntRange(0, 5).Draw(t, "per line")
	}
	return p, s
}

// TestLayout: whatever the tags, every text stands whole inside its page, at 9 pixels or more, and touches no other text and no tile; tiles
// touch nothing.
func TestLayout(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p, s := somePlan(t)
		foot := Foot{PlanHash: "3fa0b1c2d9", Stamp: someText().Draw(t, "stamp"), Lines: []string{someText().Draw(t, "line")}}
		pages, c, err := plates(p, &s, Options{foot})
		if err != nil {
			t.Fatal(err)
		}
		tiles := 0
		for _, pg := range pages {
			c.turnTo(pg)
			pl := c.compose(pg.part)
			page := image.Rect(0, 0, pl.width, pl.height)
			if max(pl.width, pl.height) > maxSide {
				t.Fatalf("page of %d × %d", pl.width, pl.height)
			}
			var boxes []image.Rectangle
			var what []string
			for _, x := range pl.texts {
				if x.line.style.size < minSize {
					t.Fatalf("%q is set in %v pixels", x.line.text, x.line.style.size)
				}
				boxes = append(boxes, x.line.box(x.x, x.baseline))
				what = append(what, fmt.Sprintf("%q", x.line.text))
			}
			for _, tile := range pl.tiles {
				boxes = append(boxes, tile.cell)
				what = append(what, "tile")
				if tile.frame >= 0 {
					tiles++
				}
			}
			if s.Show == model.ShowDifference {
				if pl.scale.Empty() {
					t.Fatal("no scale")
				}
				boxes = append(boxes, pl.scale)
				what = append(what, "scale")
			}
			for i, a := range boxes {
				if !a.In(page) {
					t.Fatalf("%s at %v stands out of the page %v", what[i], a, page)
				}
				for j, b := range boxes[:i] {
					if a.Overlaps(b) {
						t.Fatalf("%s at %v and %s at %v overlap", what[i], a, what[j], b)
					}
				}
			}
		}
		if tiles != len(p.Frames) {
			t.Fatalf("%d tiles for %d frames", tiles, len(p.Frames))
		}
	})
}

// many is n frames of one numeric tag, or rows by columns of two.
func many(rows, columns, width, height int) *model.Plan {
	p := &model.Plan{}
	for r := range rows {
		for c := range columns {
			f := frame(fmt.Sprintf("f-%d-%d", r, c), "row", r, "column", c)
			f.Settings.Width, f.Settings.Height = width, height
			p.Frames = append(p.Frames, f)
		}
	}
	return p
}

// TestPages: pages stay within 12,000 pixels a side; tiles keep their pixels as long as they can, then shrink, down to 240 pixels, and
// then the table is cut; nothing is lost.
func TestPages(t *testing.T) {
	for _, c := range []struct {
		name           string
		rows, columns  int
		width, height  int
		sheet          model.Sheet
		pages          int
		scale          [2]float64 // least and most
		oneAxisPerLine int
	}{
		{"keeps its pixels", 20, 20, 480, 360, model.Sheet{Rows: []string{"row"}, Columns: []string{"column"}}, 1, [2]float64{1, 1}, 0},
		{"shrinks", 8, 40, 480, 360, model.Sheet{Rows: []string{"row"}, Columns: []string{"column"}}, 1, [2]float64{0.5, 0.65}, 0},
		{"is cut", 100, 100, 480, 360, model.Sheet{Rows: []string{"row"}, Columns: []string{"column"}}, 6, [2]float64{0.5, 0.5}, 0},
		{"small tiles do not shrink", 1, 300, 64, 48, model.Sheet{Rows: []string{"row"}, Columns: []string{"column"}}, 2, [2]float64{1, 1}, 0},
		{"its own tile does not shrink", 2, 40, 480, 360, model.Sheet{Rows: []string{"row"}, Columns: []string{"column"}, Tile: [2]int{480, 360}}, 2, [2]float64{1, 1}, 0},
		{"one axis shrinks", 100, 10, 480, 360, model.Sheet{Columns: []string{"row", "column"}}, 1, [2]float64{0.5, 0.8}, 0},
		{"one axis is cut", 100, 100, 480, 360, model.Sheet{Columns: []string{"row", "column"}}, 6, [2]float64{0.5, 0.5}, 0},
		{"one column of its own", 100, 10, 480, 360, model.Sheet{Columns: []string{"row", "column"}, PerLine: 1}, 18, [2]float64{0.5, 0.5}, 1},
	} {
		t.Run(c.name, func(t *testing.T) {
			p := many(c.rows, c.columns, c.width, c.height)
			c.sheet.Name = "big"
			pages, cp, err := plates(p, &c.sheet, Options{})
			if err != nil {
				t.Fatal(err)
			}
			seen := map[int]bool{}
			names := map[string]bool{}
			for n, pg := range pages {
				cp.turnTo(pg)
				if pg.scale < c.scale[0] || pg.scale > c.scale[1] {
					t.Fatalf("page %s: scale %v, want %v", pg.name, pg.scale, c.scale)
				}
				pt := pg.part
				for r := pt.row0; r < pt.row1; r++ {
					for k := pt.col0; k < pt.col1; k++ {
						seen[pt.table.cells[r*len(pt.table.columns)+k].frame] = true
					}
				}
				names[pg.name] = true
				if n%10 == 0 {
					if pl := cp.compose(pt); max(pl.width, pl.height) > maxSide {
						t.Fatalf("page %s has %d × %d pixels", pg.name, pl.width, pl.height)
					}
				}
				if c.oneAxisPerLine > 0 && pt.perLine != c.oneAxisPerLine {
					t.Fatalf("%d in a line", pt.perLine)
				}
			}
			if len(pages) != c.pages || len(names) != len(pages) {
				t.Errorf("%d pages with %d names, want %d", len(pages), len(names), c.pages)
			}
			if len(seen) != len(p.Frames) || pages[0].name != "big" || len(pages) > 1 && pages[1].name != "big-2" {
				t.Errorf("%d of %d frames, first page %q", len(seen), len(p.Frames), pages[0].name)
			}
		})
	}
}

// TestPerLine: by default a sheet with one axis is about √2 : 1, and its last line is full where that costs little.
func TestPerLine(t *testing.T) {
	for _, c := range []struct{ n, width, height, want int }{
		{36, 480, 360, 6}, {12, 480, 360, 4}, {1, 480, 360, 1}, {2, 480, 360, 2}, {7, 480, 360, 3}, {36, 200, 600, 12},
	} {
		p := many(1, c.n, c.width, c.height)
		s := model.Sheet{Name: "s", Columns: []string{"column"}}
		pages, cp, err := plates(p, &s, Options{})
		if err != nil {
			t.Fatal(err)
		}
		if got := pages[0].part.perLine; got != c.want {
			t.Errorf("%d tiles of %d × %d: %d in a line, want %d", c.n, c.width, c.height, got, c.want)
		}
		cp.turnTo(pages[0])
		pl := cp.compose(pages[0].part)
		if off := math.Abs(math.Log(float64(pl.width) / float64(pl.height) / math.Sqrt2)); c.n >= 12 && off > math.Log(1.35) {
			t.Errorf("%d tiles of %d × %d: sheet of %d × %d", c.n, c.width, c.height, pl.width, pl.height)
		}
	}
}

func TestPageNames(t *testing.T) {
	p := &model.Plan{}
	for i, v := range []string{"celadon", "ox blood", "\u9752", "\u78c1", "..", "celadon!", strings.Repeat("x", 200), strings.Repeat(".", 200) + "x"} {
		p.Frames = append(p.Frames, frame(fmt.Sprint("f", i), "glaze", v, "gloss", 4))
	}
	names, err := Names(p, model.Sheet{Name: "by-glaze", Pages: []string{"glaze"}, Columns: []string{"gloss"}}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	want := []string{"by-glaze-celadon", "by-glaze-ox-blood", "by-glaze", "by-glaze-2", "by-glaze-3", "by-glaze-celadon-2"}
	if !slices.Equal(names[:6], want) {
		t.Errorf("got %q, want %q", names[:6], want)
	}
	for _, n := range names {
		if !model.ValidName(n) {
			t.Errorf("%q is no file's name", n)
		}
	}
	long := Options{Foot{PlanHash: "3fa0b1c2d9", Stamp: strings.Repeat("a build ", 60), Lines: []string{"one", "two", "three"}}}
	for rows := 54; rows < 64; rows++ {
		p, s := many(rows, 1, 480, 240), model.Sheet{Name: "s", Rows: []string{"row"}, Columns: []string{"column"}, Tile: [2]int{400, 200}}
		with, err := Names(p, s, long)
		without, err2 := Names(p, s, Options{})
		if err != nil || err2 != nil || !slices.Equal(with, without) {
			t.Errorf("%d rows: pages %q with a long foot, %q without (%v, %v)", rows, with, without, err, err2)
		}
	}
	minus, err := Names(many(1, 1, 8, 8), model.Sheet{Name: "s", Pages: []string{"row", "column"}}, Options{})
	if err != nil || !slices.Equal(minus, []string{"s-0-0"}) {
		t.Errorf("got %q, %v", minus, err)
	}
}

// TestDecimalAlignment: numbers of a row axis have their decimal points under one another.
func TestDecimalAlignment(t *testing.T) {
	p := &model.Plan{}
	for i, x := range []float64{-1.5, 0, 12.25, 100} {
		p.Frames = append(p.Frames, frame(fmt.Sprint("f", i), "exposure_stops", x, "form", "cup"))
	}
	s := model.Sheet{Name: "s", Rows: []string{"exposure_stops"}, Columns: []string{"form"}}
	pages, c, err := plates(p, &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	pl := c.compose(pages[0].part)
	var points []float64
	for _, x := range pl.texts {
		if strings.HasSuffix(x.line.text, "stops") && x.line.style.weight == medium {
			points = append(points, x.x+c.set.set(wholePart(x.line.text), x.line.style).width)
		}
	}
	if len(points) != 4 {
		t.Fatalf("%d row headings, want 4", len(points))
	}
	for _, q := range points {
		if math.Abs(q-points[0]) > 1e-6 {
			t.Errorf("decimal points at %v", points)
			break
		}
	}
}

func TestSubject(t *testing.T) {
	for _, c := range []struct {
		sheet model.Sheet
		want  string
	}{
		{model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}}, "5 frames, 1 failed"},
		{model.Sheet{Pages: []string{"glaze"}, Columns: []string{"gloss"}}, "glaze slate: 3 frames"},
		{model.Sheet{}, "6 frames, 1 failed"},
		{model.Sheet{Columns: []string{"kind"}}, "1 frame"},
		{model.Sheet{Columns: []string{"glaze", "gloss"}}, "5 frames, 1 failed"},
	} {
		p := bowls()
		p.Frames[1].Failure = "no mesh" // celadon, gloss 16
		pages, cp, err := plates(p, &c.sheet, Options{})
		if err != nil {
			t.Fatal(err)
		}
		cp.turnTo(pages[0])
		if got := cp.subject(pages[0].part, cp.failed); got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

// TestFailuresCounted: the line under the title counts the frames that the plan knows to fail and those that have no picture when it is drawn.
func TestFailuresCounted(t *testing.T) {
	p := bowls()
	p.Frames[1].Failure = "no mesh"
	s := model.Sheet{Name: "s", Rows: []string{"glaze"}, Columns: []string{"gloss"}}
	pages, c, err := plates(p, &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	c.turnTo(pages[0])
	d := drawing{composer: c, part: pages[0].part, plate: c.compose(pages[0].part), ground: grounds[s.Paper]}
	said := func() string { return d.plate.texts[d.plate.subject[0]].line.text }
	if got := said(); got != "5 frames, 1 failed" {
		t.Errorf("before: %q", got)
	}
	src := discs(p, false)
	if _, err := d.draw(func(frame int, pass string) (Tile, error) {
		if frame == 2 {
			return Tile{Failure: "not a number at pixel 3, 4"}, nil
		}
		return src(frame, pass)
	}); err != nil {
		t.Fatal(err)
	}
	if got := said(); got != "5 frames, 2 failed" {
		t.Errorf("after: %q", got)
	}
}

func TestTileReason(t *testing.T) {
	for reason, want := range map[string]string{
		"scenes/shelf.lua:12: mesh.load: jug.obj:4: no faces": "jug.obj:4: no faces",
		"my scenes/shelf.lua:12: camera: nothing to frame":    "camera: nothing to frame",
		"not a number at pixel 3, 4":                          "not a number at pixel 3, 4",
		"":                                                    "",
	} {
		if got := tileReason(reason); got != want {
			t.Errorf("%q: got %q, want %q", reason, got, want)
		}
	}
}

// TestNamesSaidOnce: where a frame's name is its heading, a caption of the name alone is left out; other captions stay.
func TestNamesSaidOnce(t *testing.T) {
	for _, c := range []struct {
		sheet model.Sheet
		want  int
	}{
		{model.Sheet{Caption: "{name}"}, 1}, {model.Sheet{Caption: "{name}: {kind}"}, 1}, {model.Sheet{Columns: []string{"kind"}, Caption: "{name}"}, 1},
		{model.Sheet{}, 1}, {model.Sheet{Columns: []string{"kind"}}, 0},
	} {
		pages, cp, err := plates(bowls(), &c.sheet, Options{})
		if err != nil {
			t.Fatal(err)
		}
		cp.turnTo(pages[0])
		n := 0
		for _, x := range cp.compose(pages[0].part).texts {
			if x.line.text == "card" {
				n++
			}
		}
		if n != c.want {
			t.Errorf("%+v: the name stands there %d times, want %d", c.sheet, n, c.want)
		}
	}
}

// TestAxisNamesLevel: the names of the rows' tags stand on the line of the columns' first, clear of the rows' own headings.
func TestAxisNamesLevel(t *testing.T) {
	s := model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}}
	pages, c, err := plates(bowls(), &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	c.turnTo(pages[0])
	at := map[string]float64{}
	for _, x := range c.compose(pages[0].part).texts {
		at[x.line.text] = x.baseline
	}
	if at["glaze"] == 0 || at["glaze"] != at["gloss"] {
		t.Errorf("glaze on %v, gloss on %v", at["glaze"], at["gloss"])
	}
	if lead := leadFor(minModule, 1, sized(minModule, headingSize)); at["slate"]-at["glaze"] < 1.5*lead {
		t.Errorf("glaze on %v, its first value on %v: nearer than lines of one text, %v apart", at["glaze"], at["slate"], lead)
	}
}

func TestFoot(t *testing.T) {
	p := bowls()
	p.Frames[0].Settings.Samples = 16
	for i := range p.Frames {
		p.Frames[i].Settings.Width += i
	}
	_, c, err := plates(p, &model.Sheet{Name: "s", Rows: []string{"glaze"}, Columns: []string{"gloss"}}, Options{Foot{PlanHash: "3fa0", Stamp: "build 7", Lines: []string{"a remark"}}})
	if err != nil {
		t.Fatal(err)
	}
	if got, want := strings.Join(c.foot[0], "|"), "scenes/bowls.lua|various sizes|16 and 64 samples|plan 3fa0|build 7"; got != want {
		t.Errorf("got %q, want %q", got, want)
	}
	noisy := bowls()
	for i := range noisy.Frames {
		noisy.Frames[i].Settings.Noise = 0.25
	}
	_, quiet, err := plates(noisy, &model.Sheet{Name: "s", Rows: []string{"glaze"}, Columns: []string{"gloss"}}, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if got := strings.Join(quiet.foot[0], "|"); !strings.HasSuffix(got, " samples at most|noise 0.25\u2009L*") {
		t.Errorf("got %q, want the samples as a bound, and the noise", got)
	}
	if got := c.foot[1]; got[len(got)-1] != "Simulation, not a colour proof" || got[len(got)-2] != "Left out for want of a tag: 1" {
		t.Errorf("got %q", got)
	}
	if got := strings.Join(c.foot[2], "|"); got != "a remark" {
		t.Errorf("got %q", got)
	}
}
