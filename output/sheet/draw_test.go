package sheet

import (
	"bytes"
	"errors"
	"flag"
	"fmt"
	"image"
	"image/color"
	"image/png"
	"io"
	"math"
	"os"
	"path/filepath"
	"strings"
	"testing"

	"lampbook/engine/model"
	"lampbook/output/encode"
)

var update = flag.Bool("update", false, "write the golden pictures anew")

// plain is a picture of one colour.
func plain(w, h int, c color.NRGBA) *image.NRGBA {
	m := image.NewNRGBA(image.Rect(0, 0, w, h))
	for i := 0; i < len(m.Pix); i += 4 {
		m.Pix[i], m.Pix[i+1], m.Pix[i+2], m.Pix[i+3] = c.R, c.G, c.B, c.A
	}
	return m
}

// disc is a made-up picture: a lit disc on a ramp, or on nothing.
func disc(w, h int, c color.NRGBA, bare bool) *image.NRGBA {
	m := image.NewNRGBA(image.Rect(0, 0, w, h))
	for y := range h {
		for x := range w {
			dx, dy := float64(2*x-w)/float64(h), float64(2*y-h)/float64(h)
			px := color.NRGBA{uint8(190 - 60*y/h), uint8(190 - 60*y/h), uint8(190 - 60*y/h), 255}
			if bare {
				px.A = 0
			}
			if r := dx*dx + dy*dy; r < 0.5 {
				lit := 1 - 0.8*math.Min(1, (dx+0.25)*(dx+0.25)+(dy+0.25)*(dy+0.25))
				px = color.NRGBA{uint8(float64(c.R) * lit), uint8(float64(c.G) * lit), uint8(float64(c.B) * lit), 255}
			}
			m.SetNRGBA(x, y, px)
		}
	}
	return m
}

// lay returns a sheet's pages.
func lay(t testing.TB, p *model.Plan, s model.Sheet, src Source, o Options) []Page {
	t.Helper()
	var pages []Page
	if err := Lay(p, s, src, o, func(pg Page) error { pages = append(pages, pg); return nil }); err != nil {
		t.Fatal(err)
	}
	return pages
}

var glazes = map[string]color.NRGBA{"celadon": {159, 195, 164, 255}, "slate": {57, 67, 77, 255}}

func discs(p *model.Plan, bare bool) Source {
	return func(frame int, pass string) (Tile, error) {
		f := &p.Frames[frame]
		v, _ := f.Tag("glaze")
		c, ok := glazes[v.Text]
		if !ok {
			c = color.NRGBA{140, 140, 140, 255}
		}
		return Tile{Image: disc(f.Settings.Width, f.Settings.Height, c, bare)}, nil
	}
}

// goldenSheets are one small sheet for each thing that is drawn.
func goldenSheets() map[string]func(t *testing.T) Page {
	foot := Options{Foot{PlanHash: "3fa0b1c2d9", Stamp: "autumn build"}}
	return map[string]func(t *testing.T) Page{
		// Rows and columns, a blank, a frame that the plan knows to fail, one that failed later, an unfair one, captions.
		"table-grey": func(t *testing.T) Page {
			p := bowls()
			for i := range p.Frames {
				p.Frames[i].Settings.Width, p.Frames[i].Settings.Height = 96, 72
			}
			p.Frames[1].Failure = "bowl.obj: no faces"
			p.Frames[4].Settings.Samples = 16
			src := discs(p, false)
			return lay(t, p, model.Sheet{Name: "table", Title: "Bowl: gloss by glaze", Rows: []string{"glaze"}, Columns: []string{"gloss"}, Caption: "{name}"},
				func(frame int, pass string) (Tile, error) {
					if frame == 2 {
						return Tile{Failure: "not a number at pixel 3, 4"}, nil
					}
					return src(frame, pass)
				}, foot)[0]
		},
		// One axis in lines, numbers with a unit, bare pictures on light paper, tiles scaled.
		"lines-light": func(t *testing.T) Page {
			p := &model.Plan{Scene: "scenes/turntable.lua"}
			for a := -60; a < 60; a += 15 {
				f := frame(fmt.Sprint("view", a), "angle_deg", a)
				f.Settings.Width, f.Settings.Height = 120, 90
				p.Frames = append(p.Frames, f)
			}
			return lay(t, p, model.Sheet{Name: "lines", Title: "Lamp, turned", Columns: []string{"angle_deg"}, Tile: [2]int{60, 60}, Paper: model.PaperLight}, discs(p, true), foot)[0]
		},
		// Two tags on either axis, dark paper, words too long for their columns.
		"nested-dark": func(t *testing.T) Page {
			p := &model.Plan{Scene: "scenes/nested.lua"}
			for _, form := range []string{"cup", "lidded jar of the winter series"} {
				for _, e := range []float64{-1.5, 0.25} {
					for _, g := range []string{"slate", "celadon"} {
						for _, n := range []int{4, 256} {
							f := frame(fmt.Sprintf("f%d", len(p.Frames)), "form", form, "exposure_stops", e, "glaze", g, "gloss", n)
							f.Settings.Width, f.Settings.Height, f.Settings.Exposure = 64, 48, e
							p.Frames = append(p.Frames, f)
						}
					}
				}
			}
			return lay(t, p, model.Sheet{Name: "nested", Title: "Two forms", Rows: []string{"glaze", "exposure_stops"}, Columns: []string{"form", "gloss"}, Paper: model.PaperDark}, discs(p, false), foot)[0]
		},
	}
}

// TestGolden compares sheets with the pictures kept: mean within 0.25 and largest difference within 48 codes, so that a last bit in a glyph's edge
// is no broken test. After a failure the picture and the difference lie in the test's folder. These pins say what was drawn on
// 2026-12-01, looked at and found good; -update writes them anew.
func TestGolden(t *testing.T) {
	for name, draw := range goldenSheets() {
		t.Run(name, func(t *testing.T) {
			got := draw(t).Image
			path := filepath.Join("testdata", "golden", name+".png")
			write := func(path string, img image.Image) {
				if err := encode.WriteFile(path, func(w io.Writer) error { return encode.PNGImage(w, img, encode.Options{}) }); err != nil {
					t.Fatal(err)
				}
			}
			if *update {
				write(path, got)
			}
			data, err := os.ReadFile(path)
			if err != nil {
				t.Fatal(err)
			}
			kept, err := png.Decode(bytes.NewReader(data))
			if err != nil {
				t.Fatal(err)
			}
			want := straight(kept)
			if got.Rect != want.Rect {
				t.Fatalf("got %v, want %v", got.Rect.Size(), want.Rect.Size())
			}
			var sum float64
			worst := 0
			diff := image.NewNRGBA(got.Rect)
			for i := range got.Pix {
				d := max(int(got.Pix[i])-int(want.Pix[i]), int(want.Pix[i])-int(got.Pix[i]))
				sum += float64(d)
				worst = max(worst, d)
				diff.Pix[i] = uint8(min(255, 4*d))
				if i%4 == 3 {
					diff.Pix[i] = 255
				}
			}
			if mean := sum / float64(len(got.Pix)); mean > 0.25 || worst > 48 {
				dir, err := os.MkdirTemp("", "sheet-golden-")
				if err != nil {
					t.Fatal(err)
				}
				write(filepath.Join(dir, name+"-got.png"), got)
				write(filepath.Join(dir, name+"-diff.png"), diff)
				t.Errorf("mean difference %.3f, largest %d codes; see %s", mean, worst, dir)
			}
		})
	}
}

// TestSameBytes: two runs give the same page, whose every pixel is opaque.
func TestSameBytes(t *testing.T) {
	for name, draw := range goldenSheets() {
		a, b := draw(t), draw(t)
		if !bytes.Equal(a.Image.Pix, b.Image.Pix) {
			t.Errorf("%s: two runs gave two pictures", name)
		}
		if !a.Image.Opaque() {
			t.Errorf("%s: the page is not opaque", name)
		}
	}
}

// TestNothingStrays: outside the boxes of its texts and tiles a page is bare paper, and tiles show their pictures untouched.
func TestNothingStrays(t *testing.T) {
	p := bowls()
	s := model.Sheet{Name: "s", Rows: []string{"glaze"}, Columns: []string{"gloss"}, Caption: "{name} gjÅ"}
	fill := color.NRGBA{201, 33, 90, 255}
	img := lay(t, p, s, func(frame int, _ string) (Tile, error) {
		return Tile{Image: plain(p.Frames[frame].Settings.Width, p.Frames[frame].Settings.Height, fill)}, nil
	}, Options{})[0].Image
	pages, c, err := plates(p, &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	pl := c.compose(pages[0].part)
	kind := make([]byte, pl.width*pl.height)
	mark := func(r image.Rectangle, k byte) {
		for y := r.Min.Y; y < r.Max.Y; y++ {
			for x := r.Min.X; x < r.Max.X; x++ {
				kind[y*pl.width+x] = k
			}
		}
	}
	inked := 0
	for _, x := range pl.texts {
		mark(x.line.box(x.x, x.baseline), 't')
	}
	for _, x := range pl.tiles {
		if x.frame >= 0 {
			mark(x.cell, 'p')
		}
	}
	paper := grey(grounds[model.PaperGrey].paper)
	for i, k := range kind {
		got := img.NRGBAAt(i%pl.width, i/pl.width)
		switch {
		case k == 0 && got != paper:
			t.Fatalf("%v at %d, %d, where there should be paper", got, i%pl.width, i/pl.width)
		case k == 'p' && got != fill:
			t.Fatalf("%v at %d, %d, where there should be a picture", got, i%pl.width, i/pl.width)
		case k == 't' && got != paper:
			inked++
		}
	}
	if inked < 500 {
		t.Errorf("%d pixels of text", inked)
	}
}

// TestFailuresAreDrawn: a failed place has ink, in the plan's case without asking for the picture; a blank has none.
func TestFailuresAreDrawn(t *testing.T) {
	p := bowls()
	p.Frames[0].Failure = "the mesh has no faces"
	s := model.Sheet{Name: "s", Rows: []string{"glaze"}, Columns: []string{"gloss"}}
	pages, c, err := plates(p, &s, Options{})
	if err != nil {
		t.Fatal(err)
	}
	img := lay(t, p, s, func(frame int, _ string) (Tile, error) {
		if frame == 0 {
			t.Error("asked for the picture of a frame that fails in the plan")
		}
		return Tile{Failure: "the lamp fell over"}, nil
	}, Options{})[0].Image
	for _, tile := range c.compose(pages[0].part).tiles {
		ink := 0
		for y := tile.cell.Min.Y; y < tile.cell.Max.Y; y++ {
			for x := tile.cell.Min.X; x < tile.cell.Max.X; x++ {
				if img.NRGBAAt(x, y) != grey(118) {
					ink++
				}
			}
		}
		if tile.frame < 0 && ink > 0 || tile.frame >= 0 && ink < 50 {
			t.Errorf("frame %d: %d pixels of ink", tile.frame, ink)
		}
	}
}

func TestLayHandsErrorsOn(t *testing.T) {
	p := bowls()
	s := model.Sheet{Name: "s", Pages: []string{"glaze"}, Columns: []string{"gloss"}}
	broken := errors.New("no such picture")
	src := func(int, string) (Tile, error) { return Tile{}, broken }
	if err := Lay(p, s, src, Options{}, func(Page) error { return nil }); err != broken {
		t.Errorf("got %v", err)
	}
	calls := 0
	if err := Lay(p, s, discs(p, false), Options{}, func(Page) error { calls++; return broken }); err != broken || calls != 1 {
		t.Errorf("got %v after %d pages", err, calls)
	}
	s.Columns = []string{"glos"}
	s.Pos = model.Pos{File: "bowls.lua", Line: 3}
	if err := Lay(p, s, src, Options{}, nil); err == nil || !strings.HasPrefix(err.Error(), `bowls.lua:3: sheet "s": no frame has all the tags glaze and glos`) {
		t.Errorf("got %v", err)
	}
	s.Columns, s.Paper = []string{"gloss"}, 9
	if err := Lay(p, s, src, Options{}, nil); err == nil || !strings.Contains(err.Error(), "paper 9") {
		t.Errorf("got %v", err)
	}
}

// TestOnePictureAtATime: a source is asked once for each place, in order of drawing.
func TestOnePictureAtATime(t *testing.T) {
	p := bowls()
	p.Frames[0].Settings.Passes = []model.Pass{model.PassDiffuse}
	var asked []string
	src := discs(p, false)
	lay(t, p, model.Sheet{Name: "s", Rows: []string{"glaze", "gloss"}, Columns: []string{model.AxisPass}}, func(f int, pass string) (Tile, error) {
		asked = append(asked, p.Frames[f].Name+" "+pass)
		return src(f, pass)
	}, Options{})
	if got := strings.Join(asked, ","); got != "slate-16 ,slate-16 diffuse,slate-4 ,slate-64 ,celadon-16 ,celadon-4 " {
		t.Errorf("asked for %s", got)
	}
}

func BenchmarkLay(b *testing.B) {
	p := many(3, 4, 480, 360)
	tile := disc(480, 360, color.NRGBA{120, 30, 30, 255}, false)
	for _, c := range []struct {
		name string
		tile [2]int
	}{{"tiles=12/480x360", [2]int{}}, {"tiles=12/480x360/scaled=240x180", [2]int{240, 180}}} {
		b.Run(c.name, func(b *testing.B) {
			s := model.Sheet{Name: "s", Rows: []string{"row"}, Columns: []string{"column"}, Tile: c.tile}
			for b.Loop() {
				lay(b, p, s, func(int, string) (Tile, error) { return Tile{Image: tile}, nil }, Options{})
			}
		})
	}
}
