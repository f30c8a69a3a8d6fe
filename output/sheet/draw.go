package sheet

import (
	"image"
	"image/color"
	"image/draw"
	"maps"
	"math"
	"regexp"

	"github.com/fogleman/gg"

	"lampbook/engine/model"
)

// drawing is a plate being drawn.
type drawing struct {
	*composer
	part     part
	plate    *plate
	missing  map[int]bool // frames without a picture, as met
	ground   ground
	fairness fairness
	yard     *yardstick  // what was compared with last
	largest  float64     // difference met
	page     *image.RGBA // opaque, so that its bytes are an NRGBA's too
}

// draw fetches and places the tiles, then the labels.
func (d *drawing) draw(src Source) (*image.NRGBA, error) {
	d.missing = maps.Clone(d.failed)
	d.page = image.NewRGBA(image.Rect(0, 0, d.plate.width, d.plate.height))
	draw.Draw(d.page, d.page.Rect, image.NewUniform(grey(d.ground.paper)), image.Point{}, draw.Src)
	for _, t := range d.byReference(d.plate.tiles) {
		if err := d.tile(t, src); err != nil {
			return nil, err
		}
	}
	if d.references != nil {
		d.plate = d.composeWith(d.part, d.plate.module) // the figures, now known, move nothing
	}
	if !d.plate.scale.Empty() {
		d.strip()
	}
	d.restate(d.part, d.plate, d.missing)
	for _, t := range d.plate.texts {
		d.text(t)
	}
	return &image.NRGBA{Pix: d.page.Pix, Stride: d.page.Stride, Rect: d.page.Rect}, nil
}

// tile draws what stands in one place.
func (d *drawing) tile(t tileItem, src Source) error {
	d.figures[t.place] = nil // what fails has no figure
	if reason := d.plan.Frames[t.frame].Failure; reason != "" {
		d.fail(t.cell, reason)
		return nil
	}
	tile, err := src(t.frame, t.pass)
	if err != nil {
		return err
	}
	if tile.Image == nil || tile.Image.Bounds().Empty() {
		reason := tile.Failure
		if reason == "" {
			reason = "no picture"
		}
		d.missing[t.frame] = true
		d.fail(t.cell, reason)
		return nil
	}
	img := tile.Image
	if d.references != nil {
		m, ok, err := d.compare(t.place, img, src)
		if err != nil {
			return err
		}
		if d.sheet.Show == model.ShowDifference {
			if !ok {
				d.fail(t.cell, noReference)
				return nil
			}
			img = m.heat(d.scaleEnd)
		}
	}
	size := img.Bounds().Size()
	want := d.sizeIn(size, t.cell.Size())
	at := image.Rectangle{t.cell.Min, t.cell.Min.Add(want)}
	if want != size || !opaque(img) {
		l := lightOf(img)
		if want != size {
			l = l.to(want.X, want.Y)
		}
		if img, err = l.over(d.ground.paper); err != nil {
			return err
		}
	}
	draw.Draw(d.page, at, img, img.Bounds().Min, draw.Src)
	if d.fairness.unfair[t.frame] {
		d.unfair(at)
	}
	return nil
}

// sizeIn is the size in which a picture stands in a cell: its own, scaled as the sheet is, or what fills the sheet's own Tile; never
// larger than the cell.
func (d *drawing) sizeIn(size, cell image.Point) image.Point {
	by := d.scale
	fill := filling(size, cell)
	if d.sheet.Tile != [2]int{} || by > fill {
		by = fill
	}
	s := scaled(size, by)
	return image.Pt(min(s.X, cell.X), min(s.Y, cell.Y))
}

// text draws a line on a layer of its own, no larger than its ink.
func (d *drawing) text(t textItem) {
	box := t.line.box(t.x, t.baseline).Inset(-1)
	dc := gg.NewContext(box.Dx(), box.Dy())
	dc.SetColor(d.ground.color(t.line.style.ink))
	for _, r := range t.line.runs {
		dc.SetFontFace(r.face)
		dc.DrawString(r.text, t.x+r.x-float64(box.Min.X), t.baseline-float64(box.Min.Y))
	}
	draw.Draw(d.page, box, dc.Image(), image.Point{}, draw.Over)
}

// sceneLine is how a reason begins that a line of a scene or module is to blame for.
var sceneLine = regexp.MustCompile(`^[^\n:]+\.lua:[0-9]+: (mesh\.load: )?`)

// tileReason is a reason as tiles give it: the file and what is wrong with it. The line of the scene and its call are left out: they
// are the same in every tile of a row, and the record of the run has them.
func tileReason(reason string) string { return reason[len(sceneLine.FindString(reason)):] }

// fail draws a thin diagonal from corner to corner and the reason in the middle, where the diagonal makes room for it.
func (d *drawing) fail(cell image.Rectangle, reason string) {
	u := d.plate.module
	w, h := float64(cell.Dx()), float64(cell.Dy())
	d.stroke(cell, 0, h, w, 0, max(1, u/16), d.ground.color(thirdInk))
	st := style{sized(u, captionSize), regular, firstInk}
	lead := leadFor(u, 0.85, st.size)
	pad := math.Ceil(u / 2)
	lines := d.set.wrap(tileReason(reason), st, w-2*pad, max(1, min(6, int((h-2*pad)/lead))))
	var box image.Rectangle
	var items []textItem
	cap := d.set.capHeight(st)
	top := float64(cell.Min.Y) + math.Round((h-float64(len(lines)-1)*lead-cap)/2)
	for i, l := range lines {
		it := textItem{l, float64(cell.Min.X) + math.Round((w-l.extent())/2), top + math.Round(cap) + float64(i)*lead}
		items = append(items, it)
		box = box.Union(l.box(it.x, it.baseline))
	}
	if box.Empty() || !box.In(cell) {
		return // a tile too small for a word: the diagonal alone
	}
	clear := box.Inset(-int(pad / 2)).Intersect(cell)
	draw.Draw(d.page, clear, image.NewUniform(grey(d.ground.paper)), image.Point{}, draw.Src)
	for _, it := range items {
		d.text(it)
	}
}

// unfair draws a short stroke across the upper right corner of a picture, on a bed of ground so that it shows on any picture.
func (d *drawing) unfair(tile image.Rectangle) {
	side := math.Ceil(min(1.2*d.plate.module, float64(min(tile.Dx(), tile.Dy()))/2))
	corner := image.Rect(tile.Max.X-int(side), tile.Min.Y, tile.Max.X, tile.Min.Y+int(side))
	thin := max(1.5, d.plate.module/8)
	d.stroke(corner, 0, 0, side, side, 3*thin, grey(d.ground.paper))
	d.stroke(corner, 0, 0, side, side, thin, d.ground.color(firstInk))
}

// stroke draws a straight line inside a box, between points given from its corner.
func (d *drawing) stroke(box image.Rectangle, x0, y0, x1, y1, width float64, c color.Color) {
	dc := gg.NewContext(box.Dx(), box.Dy())
	dc.SetColor(c)
	dc.SetLineWidth(width)
	dc.DrawLine(x0, y0, x1, y1)
	dc.Stroke()
	draw.Draw(d.page, box, dc.Image(), image.Point{}, draw.Over)
}
