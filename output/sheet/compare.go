package sheet

import (
	"image"
	"image/color"
	"slices"

	"lampbook/engine/model"
)

// byReference puts the tiles of frames in order of drawing: those with one reference together, as it is fetched anew for each turn.
func (d *drawing) byReference(tiles []tileItem) []tileItem {
	tiles = slices.DeleteFunc(slices.Clone(tiles), func(t tileItem) bool { return t.frame < 0 })
	if d.references == nil {
		return tiles
	}
	turn := map[place]int{}
	turnOf := func(t tileItem) int {
		ref, ok := d.references.of(t.place)
		if !ok {
			ref = place{frame: severalFrames}
		}
		if _, met := turn[ref]; !met {
			turn[ref] = len(turn)
		}
		return turn[ref]
	}
	turns := map[place]int{}
	for _, t := range tiles {
		turns[t.place] = turnOf(t)
	}
	slices.SortStableFunc(tiles, func(a, b tileItem) int { return turns[a.place] - turns[b.place] })
	return tiles
}

// compare measures a picture against its reference, and notes what its caption says. ok is false where there is nothing to compare with.
func (d *drawing) compare(at place, img image.Image, src Source) (m measured, ok bool, err error) {
	d.figures[at] = []string{noReference}
	ref, ok := d.references.of(at)
	if !ok {
		return m, false, nil
	}
	if err := d.fetch(ref, src); err != nil || d.yard.picture == nil {
		return m, false, err
	}
	if m, ok = d.yard.compare(img); !ok {
		return m, false, nil
	}
	mean, most95, largest := m.figures()
	d.figures[at] = figureTexts(mean, most95)
	if ref == at {
		d.figures[at] = []string{isReference}
	}
	d.largest = max(d.largest, largest)
	return m, true, nil
}

// fetch readies the picture of a reference, unless it is the one at hand. One that failed has no picture.
func (d *drawing) fetch(ref place, src Source) error {
	if d.yard != nil && d.yard.place == ref {
		return nil
	}
	d.yard = &yardstick{place: ref}
	if d.plan.Frames[ref.frame].Failure != "" {
		return nil
	}
	tile, err := src(ref.frame, ref.pass)
	if err != nil || tile.Image == nil || tile.Image.Bounds().Empty() {
		return err
	}
	d.yard = newYardstick(ref, tile.Image, d.ground.paper)
	return nil
}

// survey compares the tiles of a page without drawing them, and returns the largest difference.
func (d *drawing) survey(src Source) (float64, error) {
	for _, t := range d.byReference(d.plate.tiles) {
		if d.plan.Frames[t.frame].Failure != "" {
			continue
		}
		tile, err := src(t.frame, t.pass)
		if err != nil {
			return 0, err
		}
		if tile.Image == nil || tile.Image.Bounds().Empty() {
			continue
		}
		if _, _, err := d.compare(t.place, tile.Image, src); err != nil {
			return 0, err
		}
	}
	return d.largest, nil
}

// surveyAll finds the end of the scale that all pages of a sheet of differences share.
func surveyAll(pages []pagePlan, c *composer, s *model.Sheet, src Source) error {
	largest := 0.0
	for _, pg := range pages {
		c.turnTo(pg)
		d := drawing{composer: c, part: pg.part, plate: c.compose(pg.part), ground: grounds[s.Paper]}
		most, err := d.survey(src)
		if err != nil {
			return err
		}
		largest = max(largest, most)
	}
	c.scaleEnd = scaleEnd(largest)
	return nil
}

// strip draws the scale of differences.
func (d *drawing) strip() {
	r := d.plate.scale
	colors := ramp()
	for x := range r.Dx() {
		c := colors[x*255/max(1, r.Dx()-1)]
		px := color.RGBA{code8(c.R), code8(c.G), code8(c.B), 255}
		for y := r.Min.Y; y < r.Max.Y; y++ {
			d.page.SetRGBA(r.Min.X+x, y, px)
		}
	}
}
