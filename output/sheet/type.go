package sheet

import (
	"image"
	"math"
	"strings"
	"unicode"

	"codeberg.org/go-fonts/dejavu/dejavusans"
	"golang.org/x/image/font"
	"golang.org/x/image/font/gofont/gomedium"
	"golang.org/x/image/font/gofont/goregular"
	"golang.org/x/image/font/opentype"
	"golang.org/x/image/font/sfnt"
	"golang.org/x/text/unicode/norm"
)

// style is a way of setting text.
type style struct {
	size   float64 // pixels to the em
	weight weight
	ink    ink
}

type weight uint8

const (
	regular weight = iota
	medium
	fallback // wider coverage, for what the family lacks
)

// minSize is the smallest type, in pixels to the em.
const minSize = 9

// setter sets type: it measures and cuts text, and finds a face for each character. One goroutine at a time.
type setter struct {
	fonts [3]*sfnt.Font
	faces map[faceKey]font.Face
	fits  map[glyphKey]float64
	buf   sfnt.Buffer
}

type glyphKey struct {
	weight weight
	r      rune
}

type faceKey struct {
	weight weight
	size   float64
}

func newSetter() (*setter, error) {
	s := &setter{faces: map[faceKey]font.Face{}, fits: map[glyphKey]float64{}}
	for w, data := range [...][]byte{regular: goregular.TTF, medium: gomedium.TTF, fallback: dejavusans.TTF} {
		f, err := sfnt.Parse(data)
		if err != nil {
			return nil, err
		}
		s.fonts[w] = f
	}
	return s, nil
}

func (s *setter) face(k faceKey) font.Face {
	f, ok := s.faces[k]
	if !ok {
		var err error
		// At 72 dots an inch a point is a pixel. Unhinted, so that glyphs keep their distances at every size.
		f, err = opentype.NewFace(s.fonts[k.weight], &opentype.FaceOptions{Size: k.size, DPI: 72, Hinting: font.HintingNone})
		if err != nil {
			panic("sheet: embedded font: " + err.Error())
		}
		s.faces[k] = f
	}
	return f
}

// run is a stretch of text in one face, x pixels from the beginning of its line.
type run struct {
	face font.Face
	text string
	x    float64
}

// line is text that has been set: runs from left to right, and the box of its ink, from the baseline's beginning.
type line struct {
	text                   string
	style                  style
	runs                   []run
	width                  float64 // advance
	left, top, right, base float64 // of the ink: base is below the baseline where positive; all 0 without ink
}

// set finds the faces and the measures of a text, in Unicode's composed form. A character that no face has shows as U+FFFD.
func (s *setter) set(text string, st style) line {
	l := line{text: text, style: st}
	var b strings.Builder
	current := faceKey{fallback, st.size}
	flush := func() {
		if b.Len() == 0 {
			return
		}
		f := s.face(current)
		l.runs = append(l.runs, run{f, b.String(), l.width})
		bounds, advance := font.BoundString(f, b.String())
		if !bounds.Empty() {
			left, top := l.width+pixels(bounds.Min.X), pixels(bounds.Min.Y)
			right, base := l.width+pixels(bounds.Max.X), pixels(bounds.Max.Y)
			if l.left == l.right {
				l.left, l.top, l.right, l.base = left, top, right, base
			} else {
				l.left, l.top, l.right, l.base = min(l.left, left), min(l.top, top), max(l.right, right), max(l.base, base)
			}
		}
		l.width += pixels(advance)
		b.Reset()
	}
	for _, r := range clean(text) {
		if string(r) == thinSpace {
			flush()
			l.width += st.size / 5
			continue
		}
		w := st.weight
		if !s.has(w, r) || r == '-' {
			w = fallback // the family's own hyphen is as long as its minus: T-11 would read as a difference
		}
		fit := s.fitOf(w, r)
		if !s.has(w, r) || fit < smallestFit {
			w, r, fit = fallback, unicode.ReplacementChar, 1
		}
		if k := (faceKey{w, st.size * fit}); k != current {
			flush()
			current = k
		}
		b.WriteRune(r)
	}
	flush()
	// A mark without its letter would stand before the line's beginning, over what is there.
	if over := -l.left; over > st.size/8 {
		for i := range l.runs {
			l.runs[i].x += over
		}
		l.left, l.right, l.width = 0, l.right+over, l.width+over
	}
	return l
}

func pixels[T ~int32](v T) float64 { return float64(v) / 64 }

func (s *setter) has(w weight, r rune) bool {
	i, err := s.fonts[w].GlyphIndex(&s.buf, r)
	return err == nil && i != 0
}

// How far ink may reach over and under the baseline, in ems, so that lines leadFor apart never touch. What reaches
// further (capitals with two marks, signs that enclose) is set smaller, and what would have to be smaller than smallestFit is not set.
const (
	mostAscent  = 0.95
	mostDescent = 0.25
	smallestFit = 0.7
)

// fitOf is the factor at which a glyph keeps to mostAscent and mostDescent: 1 for nearly all.
func (s *setter) fitOf(w weight, r rune) float64 {
	k := glyphKey{w, r}
	fit, ok := s.fits[k]
	if !ok {
		fit = 1
		const em = 100
		if b, _, ok := s.face(faceKey{w, em}).GlyphBounds(r); ok {
			if up := -pixels(b.Min.Y) / em; up > mostAscent {
				fit = mostAscent / up
			}
			if down := pixels(b.Max.Y) / em; down > mostDescent {
				fit = min(fit, mostDescent/down)
			}
		}
		s.fits[k] = fit
	}
	return fit
}

// leadFor is the distance of baselines for a size of type: the given modules, but never so little that lines could touch,
// with a pixel for the rounding of either line.
func leadFor(u, modules, size float64) float64 {
	return math.Ceil(max(u*modules, (mostAscent+mostDescent)*size+2))
}

// clean composes a text and takes out what has no place on one line: controls become spaces, marks of direction and width go.
func clean(text string) string {
	return strings.Map(func(r rune) rune {
		switch {
		case r == '\u202f': // narrow no-break space
			return '\u2009'
		case unicode.IsControl(r), r == '\u2028', r == '\u2029':
			return ' '
		case unicode.Is(unicode.Cf, r), unicode.Is(unicode.Variation_Selector, r):
			return -1
		}
		return r
	}, norm.NFC.String(strings.ToValidUTF8(text, "\ufffd")))
}

// extent is how far a line reaches to the right of its beginning.
func (l line) extent() float64 { return max(l.width, l.right) }

// box is the ink's box with the line begun at x on a baseline, in whole pixels outwards.
func (l line) box(x, baseline float64) image.Rectangle {
	return image.Rect(int(math.Floor(x+l.left)), int(math.Floor(baseline+l.top)), int(math.Ceil(x+l.right)), int(math.Ceil(baseline+l.base)))
}

// longest is the number of characters of a text that is looked at: more would not fit any sheet.
const longest = 600

// shortened cuts what is absurdly long in its middle, so that setting stays quick.
func shortened(text string) string {
	if len(text) <= longest {
		return text
	}
	r := []rune(text)
	if len(r) <= longest {
		return text
	}
	return string(r[:longest/2]) + ellipsis + string(r[len(r)-longest/2:])
}

// fit sets a text on one line of at most the given width, with an ellipsis in its middle where it is longer. Where not even
// the ellipsis fits, the line is empty.
func (s *setter) fit(text string, st style, width float64) line {
	text = shortened(text)
	l := s.set(text, st)
	if l.extent() <= width {
		return l
	}
	r := []rune(clean(text))
	cut := func(keep int) line {
		head, tail := (keep+1)/2, len(r)-keep/2
		for head > 0 && head < len(r) && unicode.Is(unicode.Mn, r[head]) {
			head-- // a mark goes with its letter
		}
		for tail < len(r) && unicode.Is(unicode.Mn, r[tail]) {
			tail++
		}
		return s.set(strings.TrimRight(string(r[:head]), " ")+ellipsis+strings.TrimLeft(string(r[tail:]), " "), st)
	}
	low, high := 0, len(r) // keeping low fits or is the least; keeping high does not
	for high-low > 1 {
		if mid := (low + high) / 2; cut(mid).extent() <= width {
			low = mid
		} else {
			high = mid
		}
	}
	if l = cut(low); l.extent() > width {
		return s.set("", st)
	}
	return l
}

// wrap sets a text on at most the given number of lines, broken after spaces, hyphens, underscores, slashes and commas; what is
// left over is cut by fit.
func (s *setter) wrap(text string, st style, width float64, lines int) []line {
	text = shortened(text)
	if l := s.set(text, st); l.extent() <= width || lines <= 1 {
		return []line{s.fit(text, st, width)}
	}
	var out []line
	rest := text
	for len(out) < lines-1 && rest != "" {
		end := 0
		for _, e := range breaks(rest) {
			if s.set(strings.TrimRight(rest[:e], " "), st).extent() > width {
				break
			}
			end = e
		}
		if end == 0 {
			break // not even one word fits
		}
		out = append(out, s.set(strings.TrimRight(rest[:end], " "), st))
		rest = rest[end:]
	}
	if rest != "" {
		out = append(out, s.fit(rest, st, width))
	}
	return out
}

// breaks lists where a text may end a line, in bytes, its end last.
func breaks(text string) []int {
	var at []int
	for i, r := range text {
		if strings.ContainsRune(" -_/,", r) && i+1 < len(text) {
			at = append(at, i+1)
		}
	}
	return append(at, len(text))
}

// capHeight is how high capitals stand over the baseline.
func (s *setter) capHeight(st style) float64 {
	return pixels(s.face(faceKey{st.weight, st.size}).Metrics().CapHeight)
}
