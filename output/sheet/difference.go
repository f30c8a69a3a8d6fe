package sheet

import (
	"image"
	"math"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// references finds, for each place of a sheet, the place that it is compared with.
type references struct {
	keys   []string // tags that tell the sheet's tiles apart, with those of the reference
	frames map[string]int
	plan   *model.Plan
	sheet  *model.Sheet
}

// severalFrames stands for a reference that does not tell its frames apart.
const severalFrames = -1

// newReferences lists the sheet's frames by their tags. A sheet without axes compares by all tags of its frames.
func newReferences(p *model.Plan, s *model.Sheet, pv *pivot) *references {
	if len(s.Reference) == 0 {
		return nil
	}
	r := &references{frames: map[string]int{}, plan: p, sheet: s}
	add := func(key string) {
		if key != model.AxisPass && !slices.Contains(r.keys, key) {
			r.keys = append(r.keys, key)
		}
	}
	for _, c := range s.Reference {
		add(c.Key)
	}
	for _, key := range pv.keys() {
		add(key)
	}
	if pv.byName {
		for _, i := range pv.frames {
			for _, t := range p.Frames[i].Tags {
				add(t.Key)
			}
		}
	}
	for _, i := range pv.frames {
		at := r.address(&p.Frames[i], nil)
		if _, taken := r.frames[at]; taken {
			i = severalFrames
		}
		r.frames[at] = i
	}
	return r
}

// address writes a frame's values of the keys, with those of choices put in place of its own.
func (r *references) address(f *model.Frame, choices []model.TagChoice) string {
	var b strings.Builder
	for _, key := range r.keys {
		v, ok := f.Tag(key)
		for _, c := range choices {
			if c.Key == key {
				v, ok = c.Values[0], true
			}
		}
		if ok {
			b.WriteString(strconv.Itoa(int(v.Kind)) + strconv.Quote(v.String()))
		}
		b.WriteByte(';')
	}
	return b.String()
}

// of returns the place that a place is compared with: the same pass of the reference's frame. ok is false where there is no such frame.
func (r *references) of(at place) (ref place, ok bool) {
	i, ok := r.frames[r.address(&r.plan.Frames[at.frame], r.sheet.Reference)]
	if !ok || i == severalFrames || !slices.Contains(passesOf(&r.plan.Frames[i], []string{model.AxisPass}), at.pass) {
		return ref, false
	}
	return place{i, at.pass}, true
}

// said names the reference for the foot: "gloss 16".
func (r *references) said() string {
	var parts []string
	for _, c := range r.sheet.Reference {
		label, _ := labelOf(c.Key)
		parts = append(parts, label+" "+wordingOf(c.Key, c.Values).text(c.Values[0]))
	}
	return list(parts, "and")
}

// measured is the difference of two pictures: ΔE2000 of each pixel, row by row.
type measured struct {
	size   image.Point
	pixels []float32
}

// yardstick is the picture that others are compared with. It remembers the colours of its pixels, and lately compared pairs.
type yardstick struct {
	place
	picture *image.NRGBA
	labs    []tint.Lab
	paper   uint8
	pairs   []pair
}

// pair is two displayed colours and their difference.
type pair struct {
	a, b [4]byte
	d    float32
}

const pairBits = 14

func newYardstick(at place, img image.Image, paper uint8) *yardstick {
	y := &yardstick{place: at, picture: straight(img), paper: paper, pairs: make([]pair, 1<<pairBits)}
	b := y.picture.Bounds()
	y.labs = make([]tint.Lab, 0, b.Dx()*b.Dy())
	var last [4]byte
	lab := labOf(last, paper)
	for row := b.Min.Y; row < b.Max.Y; row++ {
		pix := y.picture.Pix[y.picture.PixOffset(b.Min.X, row):]
		for x := range b.Dx() {
			if px := [4]byte(pix[4*x:]); px != last {
				last, lab = px, labOf(px, paper)
			}
			y.labs = append(y.labs, lab)
		}
	}
	return y
}

// labOf is the colour of a pixel (sRGB codes, straight alpha) as it shows on a neutral paper.
func labOf(px [4]byte, paper uint8) tint.Lab {
	t := decoded()
	c := tint.RGB{R: t[px[0]], G: t[px[1]], B: t[px[2]]}
	if px[3] < 255 {
		a := float32(px[3]) / 255
		c = c.Scale(a).Add(tint.Grey(t[paper]).Scale(1 - a))
	}
	return tint.ToLab(c)
}

// compare returns the difference of a picture, pixel by pixel; ok is false where its size is another. Equal pixels give exactly 0.
// Source: ISO/CIE 11664-6, as tint.DeltaE2000.
func (y *yardstick) compare(img image.Image) (m measured, ok bool) {
	n := straight(img)
	from, to := y.picture.Bounds(), n.Bounds()
	m.size = to.Size()
	if from.Size() != m.size {
		return m, false
	}
	m.pixels = make([]float32, m.size.X*m.size.Y)
	for row := range m.size.Y {
		a := y.picture.Pix[y.picture.PixOffset(from.Min.X, from.Min.Y+row):]
		b := n.Pix[n.PixOffset(to.Min.X, to.Min.Y+row):]
		for x := range m.size.X {
			pa, pb := [4]byte(a[4*x:]), [4]byte(b[4*x:])
			if pa == pb {
				continue
			}
			i := row*m.size.X + x
			m.pixels[i] = y.difference(pa, pb, y.labs[i])
		}
	}
	return m, true
}

// difference compares two pixels, the first with the given colour. Neighbours are often alike, so pairs are looked up first.
func (y *yardstick) difference(a, b [4]byte, lab tint.Lab) float32 {
	word := func(p [4]byte) uint32 {
		return uint32(p[0]) | uint32(p[1])<<8 | uint32(p[2])<<16 | uint32(p[3])<<24
	}
	slot := &y.pairs[(word(a)*0x9E3779B1^word(b)*0x85EBCA6B)>>(32-pairBits)]
	if slot.a != a || slot.b != b {
		*slot = pair{a, b, float32(tint.DeltaE2000(lab, labOf(b, y.paper)))}
	}
	return slot.d
}

// figures returns the mean and the 95th percentile, the least value that at least 95 % of the pixels do not pass, and the largest.
func (m measured) figures() (mean, most95, largest float64) {
	sum := 0.0
	for _, d := range m.pixels {
		sum += float64(d)
	}
	sorted := slices.Clone(m.pixels)
	slices.Sort(sorted)
	n := len(sorted)
	return sum / float64(n), float64(sorted[(95*n+99)/100-1]), float64(sorted[n-1])
}

// What stands in a caption in place of figures.
const (
	isReference = "reference"
	noReference = "no reference"
)

// figureTexts writes a difference in full and in short, for tiles too narrow. One decimal: the eye sees about 1.
func figureTexts(mean, most95 float64) []string {
	short := "ΔE" + thinSpace + strconv.FormatFloat(mean, 'f', 1, 64)
	return []string{short + ", 95" + thinSpace + "%" + thinSpace + strconv.FormatFloat(most95, 'f', 1, 64), short}
}

// widestFigure keeps the room of a figure until it is known.
var widestFigure = figureTexts(100, 100)

// scaleEnd rounds the largest difference up to an end of scale with easy halves.
func scaleEnd(largest float64) float64 {
	for _, end := range [...]float64{2, 3, 4, 6, 8, 10, 15, 20, 30, 40, 60, 80} {
		if largest <= end {
			return end
		}
	}
	return max(100, math.Ceil(largest/20)*20)
}

// ramp is one hue from dark to light, even in lightness, for differences from 0 to the end of the scale.
// Lightness from 12 to 95, chroma largest halfway, hue 250° (blue) of CIE LCh.
func ramp() *[256]tint.RGB {
	t := new([256]tint.RGB)
	for i := range t {
		x := float64(i) / 255
		lab := tint.FromLCh(12+float64(83*x), 6+float64(float64(80*x)*(1-x)), 250)
		t[i] = tint.Clip(tint.FromLab(lab.L, lab.A, lab.B))
	}
	return t
}

// heat draws a difference as a picture; end is the difference that shows lightest.
func (m measured) heat(end float64) *image.NRGBA {
	colors := ramp()
	var codes [256][4]byte
	for i, c := range colors {
		codes[i] = [4]byte{code8(c.R), code8(c.G), code8(c.B), 255}
	}
	img := image.NewNRGBA(image.Rectangle{Max: m.size})
	for i, d := range m.pixels {
		step := int(min(max(float64(d)/end, 0), 1)*255 + 0.5)
		copy(img.Pix[4*i:], codes[step][:])
	}
	return img
}

func code8(linear float32) uint8 {
	return uint8(float32(tint.EncodeSRGB(min(max(linear, 0), 1))*255) + 0.5)
}
