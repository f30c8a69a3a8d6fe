package sheet

import (
	"bytes"
	"fmt"
	"image"
	"image/color"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/lucasb-eyer/go-colorful"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// code is the 8-bit sRGB colour next to a Lab colour under D65.
func code(l, a, b float64) color.NRGBA {
	c := tint.FromLab(l, a, b)
	return color.NRGBA{code8(c.R), code8(c.G), code8(c.B), 255}
}

// TestUniformPatches: patches have the published difference, but for 1, as rounding to 8 bits turns the hue of the nearly grey one, and that of an
// outside library for the rounded colours.
func TestUniformPatches(t *testing.T) {
	const source = "Sharma, Wu & Dalal 2005, table 1"
	for _, c := range []struct {
		pair   int
		b      [3]float64 // against 50, 2.5, 0
		want   float64
		source string
	}{
		{17, [3]float64{73, 25, -18}, 27.1492, source},
		{18, [3]float64{61, -5, 29}, 22.8977, source},
		{19, [3]float64{56, -27, -3}, 31.9030, source},
		{20, [3]float64{58, 24, 15}, 19.4535, source},
	} {
		a, b := code(50, 2.5, 0), code(c.b[0], c.b[1], c.b[2])
		m, ok := newYardstick(place{}, plain(5, 4, a), 118).compare(plain(5, 4, b))
		if !ok {
			t.Fatalf("pair %d: not compared", c.pair)
		}
		mean, most95, largest := m.figures()
		if math.Abs(mean-c.want) > 1 || math.Abs(most95-mean) > 1e-5 || most95 != largest {
			t.Errorf("pair %d (%s): %v, %v, %v, want %v", c.pair, c.source, mean, most95, largest, c.want)
		}
		ca, _ := colorful.MakeColor(a)
		cb, _ := colorful.MakeColor(b)
		if library := 100 * ca.DistanceCIEDE2000(cb); math.Abs(mean-library) > 0.03 {
			t.Errorf("pair %d: %v, go-colorful has %v", c.pair, mean, library)
		}
	}
}

// TestEqualTiles: a picture differs from itself by exactly 0, also under another stride and colour model, and one of another size not at all.
func TestEqualTiles(t *testing.T) {
	for _, bare := range []bool{false, true} {
		img := disc(40, 30, color.NRGBA{159, 60, 30, 255}, bare)
		y := newYardstick(place{}, img, 118)
		wide := image.NewNRGBA(image.Rect(-3, -2, 60, 50))
		for i := range wide.Pix {
			wide.Pix[i] = byte(7 * i)
		}
		for y := range 30 {
			for x := range 40 {
				wide.SetNRGBA(x+5, y+6, img.NRGBAAt(x, y))
			}
		}
		for _, same := range []image.Image{img, disc(40, 30, color.NRGBA{159, 60, 30, 255}, bare), wide.SubImage(image.Rect(5, 6, 45, 36))} {
			m, ok := y.compare(same)
			if mean, most95, largest := m.figures(); !ok || mean != 0 || most95 != 0 || largest != 0 {
				t.Errorf("%v, %v, %v", mean, most95, largest)
			}
		}
		if _, ok := y.compare(disc(40, 31, color.NRGBA{}, bare)); ok {
			t.Error("a picture of another size was compared")
		}
	}
}

// TestTransparentPixels are compared as they show on the paper: a clear pixel is the paper's own grey.
func TestTransparentPixels(t *testing.T) {
	clear, under := plain(3, 3, color.NRGBA{200, 10, 10, 0}), plain(3, 3, grey(118))
	m, ok := newYardstick(place{}, clear, 118).compare(under)
	if _, _, largest := m.figures(); !ok || largest != 0 {
		t.Errorf("clear pixels differ by %v from the paper", largest)
	}
	m, _ = newYardstick(place{}, clear, 31).compare(under)
	if _, _, largest := m.figures(); largest < 20 {
		t.Errorf("clear pixels on dark paper differ by %v from a middle grey", largest)
	}
}

// TestPercentile is worked by hand: the nearest rank of 95 % of n values is the ⌈0.95 n⌉-th.
func TestPercentile(t *testing.T) {
	upTo := func(n int) measured {
		m := measured{size: image.Pt(n, 1)}
		for i := range n {
			m.pixels = append(m.pixels, float32(n-i))
		}
		return m
	}
	for _, c := range []struct {
		n                     int
		mean, most95, largest float64
	}{{1, 1, 1, 1}, {10, 5.5, 10, 10}, {20, 10.5, 19, 20}, {21, 11, 20, 21}, {40, 20.5, 38, 40}, {100, 50.5, 95, 100}} {
		if mean, most95, largest := upTo(c.n).figures(); mean != c.mean || most95 != c.most95 || largest != c.largest {
			t.Errorf("1 to %d: %v, %v, %v, want %v", c.n, mean, most95, largest, c)
		}
	}
}

// TestReferenceOf: a tile is compared with its own tags' tile in which the reference's values are put, in its own pass.
func TestReferenceOf(t *testing.T) {
	p := bowls() // celadon has no gloss of 64
	p.Frames[0].Settings.Passes = []model.Pass{model.PassDiffuse}
	p.Frames[2].Settings.Passes = []model.Pass{model.PassDiffuse, model.PassDepth}
	choose := func(pairs ...any) (c []model.TagChoice) {
		for _, t := range tags(pairs...) {
			c = append(c, model.TagChoice{Key: t.Key, Values: []model.Value{t.Value}})
		}
		return c
	}
	table := model.Sheet{Rows: []string{"glaze"}, Columns: []string{"gloss"}}
	for _, c := range []struct {
		sheet     model.Sheet
		reference []model.TagChoice
		of        place
		want      string
	}{
		{table, choose("gloss", 16), place{4, ""}, "slate-16 "},
		{table, choose("gloss", 16), place{3, ""}, "celadon-16 "},
		{table, choose("gloss", 16), place{0, ""}, "slate-16 "},
		{table, choose("gloss", 16), place{2, "diffuse"}, "slate-16 diffuse"},
		{table, choose("gloss", 16), place{2, "depth"}, "none"},
		{table, choose("gloss", 64), place{3, ""}, "none"},
		{table, choose("gloss", 4, "glaze", "celadon"), place{4, ""}, "celadon-4 "},
		{model.Sheet{Columns: []string{"gloss"}, Where: choose("glaze", "slate")}, choose("gloss", 4), place{4, ""}, "slate-4 "},
		{model.Sheet{}, choose("gloss", 4), place{1, ""}, "celadon-4 "},
		{model.Sheet{}, choose("gloss", 4), place{5, ""}, "none"},
	} {
		c.sheet.Reference = c.reference
		pv, err := newPivot(p, &c.sheet)
		if err != nil {
			t.Fatal(err)
		}
		got := "none"
		if ref, ok := newReferences(p, &c.sheet, pv).of(c.of); ok {
			got = p.Frames[ref.frame].Name + " " + ref.pass
		}
		if got != c.want {
			t.Errorf("%s %s by %v: got %q, want %q", p.Frames[c.of.frame].Name, c.of.pass, c.reference, got, c.want)
		}
	}
}

// compared lays bowls with a reference of gloss 16, the picture of celadon 4 of another size and slate 64 failed, and returns the captions.
func compared(t *testing.T, s model.Sheet) (img *image.NRGBA, d drawing, captions []string, asked []string) {
	t.Helper()
	p := bowls()
	for i := range p.Frames {
		p.Frames[i].Settings.Width, p.Frames[i].Settings.Height = 120, 90
	}
	s.Name, s.Rows, s.Columns = "s", []string{"glaze"}, []string{"gloss"}
	s.Reference = []model.TagChoice{{Key: "gloss", Values: []model.Value{num(16)}}}
	fill := map[int]color.NRGBA{0: code(50, 2.5, 0), 1: code(50, 2.5, 0), 2: code(73, 25, -18)}
	src := func(frame int, _ string) (Tile, error) {
		asked = append(asked, p.Frames[frame].Name)
		switch frame {
		case 3:
			return Tile{Image: plain(60, 90, fill[0])}, nil
		case 4:
			return Tile{Failure: "the lamp fell over"}, nil
		}
		return Tile{Image: plain(120, 90, fill[frame])}, nil
	}
	pages, c, err := plates(p, &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	if s.Show == model.ShowDifference {
		if err := surveyAll(pages, c, &s, src); err != nil {
			t.Fatal(err)
		}
		asked = nil
	}
	c.turnTo(pages[0])
	d = drawing{composer: c, part: pages[0].part, plate: c.compose(pages[0].part), ground: grounds[s.Paper]}
	if img, err = d.draw(src); err != nil {
		t.Fatal(err)
	}
	once := len(asked)
	for _, x := range d.plate.texts {
		if strings.HasPrefix(x.line.text, "ΔE"+thinSpace) || x.line.text == isReference || x.line.text == noReference {
			captions = append(captions, x.line.text)
		}
	}
	whole := lay(t, p, s, src, Options{})[0].Image
	asked = asked[:once]
	if !bytes.Equal(whole.Pix, img.Pix) {
		t.Error("Lay draws another page")
	}
	return img, d, captions, asked
}

// TestComparedSheet: captions give the figures, or why there are none; every reference is fetched once more.
func TestComparedSheet(t *testing.T) {
	_, _, captions, asked := compared(t, model.Sheet{})
	// Row by row: slate 16, 4 and 64, which failed; celadon 16 and 4, which has another size.
	if len(captions) != 4 || captions[0] != isReference || captions[2] != isReference || captions[3] != noReference {
		t.Fatalf("got %q", captions)
	}
	var value, same float64
	if _, err := fmt.Sscanf(captions[1], "ΔE"+thinSpace+"%f, 95"+thinSpace+"%%"+thinSpace+"%f", &value, &same); err != nil || math.Abs(value-27.1492) > 0.3 || value != same {
		t.Errorf("caption %q, %v; pair 17 of Sharma, Wu & Dalal 2005 has 27.1492", captions[1], err)
	}
	if got := strings.Join(asked, " "); got != "slate-16 slate-16 slate-4 slate-64 celadon-16 celadon-16 celadon-4" {
		t.Errorf("asked for %s", got)
	}
}

// TestDifferenceSheet: equal tiles are the ramp's dark end, others the colour that the scale has at their number.
func TestDifferenceSheet(t *testing.T) {
	img, d, _, _ := compared(t, model.Sheet{Show: model.ShowDifference})
	if d.scaleEnd != 30 {
		t.Fatalf("scale to %v, want 30: the largest difference is 27.1", d.scaleEnd)
	}
	r := d.plate.scale
	onScale := func(de float64) color.NRGBA {
		return img.NRGBAAt(r.Min.X+int(math.Round(de/30*float64(r.Dx()-1))), r.Min.Y+1)
	}
	for frame, de := range map[int]float64{0: 0, 1: 0, 2: 27.1492} {
		i := slices.IndexFunc(d.plate.tiles, func(t tileItem) bool { return t.frame == frame })
		at := d.plate.tiles[i].cell.Min
		got, want := img.NRGBAAt(at.X+9, at.Y+30), onScale(de)
		if far := max(math.Abs(float64(got.R)-float64(want.R)), math.Abs(float64(got.G)-float64(want.G)), math.Abs(float64(got.B)-float64(want.B))); far > 5 {
			t.Errorf("frame %d: %v, and the scale has %v at %v", frame, got, want, de)
		}
	}
	var numbers []string
	for _, x := range d.plate.texts {
		if x.baseline > float64(r.Max.Y) && x.x < float64(r.Max.X) && len(x.line.text) < 4 {
			numbers = append(numbers, x.line.text)
		}
	}
	if !slices.Equal(numbers, []string{"0", "15", "30"}) {
		t.Errorf("the scale has the numbers %q", numbers)
	}
}

// TestRamp: lighter with every step, of one hue, within what sRGB shows.
func TestRamp(t *testing.T) {
	before := -1.0
	for i, c := range ramp() {
		if min(c.R, c.G, c.B) <= 0 || max(c.R, c.G, c.B) >= 1 {
			t.Fatalf("step %d: %v was clipped", i, c)
		}
		lab := tint.ToLab(c)
		if lab.L <= before || math.Abs(lab.Hue()-250) > 0.1 {
			t.Fatalf("step %d: L* %v after %v, hue %v", i, lab.L, before, lab.Hue())
		}
		before = lab.L
	}
}

func TestScaleEnd(t *testing.T) {
	for largest, want := range map[float64]float64{0: 2, 2: 2, 2.01: 3, 7: 8, 27: 30, 80: 80, 81: 100, 100.5: 120} {
		if got := scaleEnd(largest); got != want {
			t.Errorf("%v: got %v, want %v", largest, got, want)
		}
	}
}

func BenchmarkCompare(b *testing.B) {
	ref := disc(480, 360, color.NRGBA{120, 30, 30, 255}, false)
	y := newYardstick(place{}, ref, 118)
	noisy := image.NewNRGBA(ref.Rect) // every pixel another: the worst
	state := uint32(1)
	for i := range noisy.Pix {
		if state = state*1664525 + 1013904223; i%4 == 3 {
			noisy.Pix[i] = 255
		} else {
			noisy.Pix[i] = byte(state >> 24)
		}
	}
	for name, img := range map[string]image.Image{"alike": disc(480, 360, color.NRGBA{120, 40, 30, 255}, false), "noise": noisy} {
		b.Run("480x360/"+name, func(b *testing.B) {
			for b.Loop() {
				m, _ := y.compare(img)
				m.figures()
			}
		})
	}
}
