package sheet

import (
	"image"

	"lampbook/engine/model"
)

// Tile is what stands in a place: a picture, or the reason why there is none.
type Tile struct {
	Image   image.Image // sRGB-encoded; nil if failed
	Failure string
}

// Source fetches what stands in a place: the picture of a frame (an index into the plan's frames) where pass is "", otherwise one
// of its passes ("diffuse", "specular", "ambient", "emission", "depth", "normal", "samples", "noise") made visible. It is called once for each place,
// in the order of drawing, so that no more than one picture need be in memory, and not for frames with a Failure in the plan. On a sheet with a
// reference it is called once more for each tile that others are compared with, and those others are drawn together; on a sheet
// of differences, twice as often: the scale is found first.
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
	if s.Show == model.ShowDifference {
		if err := surveyAll(pages, c, &s, src); err != nil {
			return err
		}
	}
	j := judge(p, c.pivot)
	for _, pg := range pages {
		c.turnTo(pg)
		d := drawing{composer: c, part: pg.part, plate: c.compose(pg.part), ground: grounds[s.Paper], fairness: j}
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
