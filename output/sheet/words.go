package sheet

import (
	"math"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

// Characters of a compositor's case.
const (
	trueMinus = "\u2212"
	thinSpace = "\u2009"
	times     = "\u00d7"
	degree    = "\u00b0"
	ellipsis  = "\u2026"
)

// units are the endings of a tag's name that say in what its numbers are, and how the unit is written after them.
var units = [...]struct{ ending, unit string }{
	{"_deg", degree}, {"_mm", thinSpace + "mm"}, {"_cm", thinSpace + "cm"}, {"_m", thinSpace + "m"}, {"_cd", thinSpace + "cd"},
	{"_lm", thinSpace + "lm"}, {"_lx", thinSpace + "lx"}, {"_nit", thinSpace + "nit"}, {"_percent", thinSpace + "%"},
	{"_stops", thinSpace + "stops"}, {"_kelvin", thinSpace + "K"},
}

// labelOf is how a tag's name reads, and the unit that its ending states.
func labelOf(key string) (label, unit string) {
	for _, u := range units {
		if rest, ok := strings.CutSuffix(key, u.ending); ok && rest != "" {
			return strings.ReplaceAll(rest, "_", " "), u.unit
		}
	}
	return strings.ReplaceAll(key, "_", " "), ""
}

// labels is list for tag names.
func labels(keys []string, last string) string {
	var all []string
	for _, k := range keys {
		label, _ := labelOf(k)
		all = append(all, label)
	}
	return list(all, last)
}

// wording writes the values of one tag alike: numbers to as many digits as tell all of them apart.
type wording struct {
	unit   string
	digits int // significant
}

// wordingOf finds the wording for all values of a tag that a sheet shows.
func wordingOf(key string, values []model.Value) wording {
	_, unit := labelOf(key)
	w := wording{unit: unit, digits: 4}
	for ; w.digits < 17; w.digits++ {
		byText := map[string]float64{}
		clash := false
		for _, v := range values {
			if v.Kind != model.NumberValue {
				continue
			}
			text := number(v.Number, w.digits)
			other, ok := byText[text]
			clash = clash || ok && other != v.Number
			byText[text] = v.Number
		}
		if !clash {
			break
		}
	}
	return w
}

// text writes a value.
func (w wording) text(v model.Value) string {
	switch v.Kind {
	case model.NumberValue:
		return number(v.Number, w.digits) + w.unit
	case model.TruthValue:
		if v.Truth {
			return "yes"
		}
		return "no"
	}
	return v.Text
}

// number writes x with at most the given significant digits, but always with its whole part in full and two decimals up to ten thousand
// million; a true minus, thin spaces between thousands from five digits on, and a power of ten where it would run long.
func number(x float64, digits int) string {
	size := math.Abs(x)
	sign := ""
	if x < 0 {
		sign = trueMinus
	}
	if size == math.Trunc(size) && size < 1e10 {
		return sign + grouped(strconv.FormatFloat(size, 'f', 0, 64))
	}
	if size >= 1 && size < 1e10 {
		digits = max(digits, 2+len(strconv.FormatFloat(math.Trunc(size), 'f', 0, 64)))
	}
	rounded, err := strconv.ParseFloat(strconv.FormatFloat(size, 'g', digits, 64), 64)
	if err != nil || math.IsInf(rounded, 0) || rounded != rounded {
		return sign + strconv.FormatFloat(size, 'g', -1, 64)
	}
	if rounded >= 1e-4 && rounded < 1e10 {
		whole, fraction, found := strings.Cut(strconv.FormatFloat(rounded, 'f', -1, 64), ".")
		if !found {
			return sign + grouped(whole)
		}
		return sign + grouped(whole) + "." + fraction
	}
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(rounded, 'e', -1, 64), "e")
	n, _ := strconv.Atoi(exponent) // strconv wrote it
	return sign + mantissa + thinSpace + times + thinSpace + "10" + superscript.Replace(strconv.Itoa(n))
}

var superscript = strings.NewReplacer("-", "⁻", "0", "⁰", "1", "¹", "2", "²", "3", "³", "4", "⁴", "5", "⁵", "6", "⁶", "7", "⁷", "8", "⁸", "9", "⁹")

// grouped sets thin spaces between thousands, from five digits on (ISO 80000-1:2022, 7.3.1).
func grouped(digits string) string {
	if len(digits) < 5 {
		return digits
	}
	var b strings.Builder
	for i, d := range digits {
		if i > 0 && (len(digits)-i)%3 == 0 {
			b.WriteString(thinSpace)
		}
		b.WriteRune(d)
	}
	return b.String()
}

// wholePart is the part of a written number left of its decimal point, or of its unit: what decimal alignment lines up.
func wholePart(text string) string {
	for i, r := range text {
		if (r < '0' || r > '9') && string(r) != trueMinus && string(r) != thinSpace {
			return text[:i]
		}
		if string(r) == thinSpace {
			// A thin space parts thousands only where a digit follows.
			rest := text[i+len(thinSpace):]
			if rest == "" || rest[0] < '0' || rest[0] > '9' {
				return text[:i]
			}
		}
	}
	return text
}

// captionKeys lists what a caption's braces name.
func captionKeys(s *model.Sheet) []string {
	var keys []string
	for _, p := range s.CaptionParts() {
		if p.Key != "" {
			keys = append(keys, p.Key)
		}
	}
	return keys
}

// captionOf fills a caption for a frame. A tag that the frame lacks leaves nothing.
func captionOf(parts []model.CaptionPart, f *model.Frame, pass string, words map[string]wording) string {
	var b strings.Builder
	for _, p := range parts {
		b.WriteString(p.Text)
		switch v, ok := valueOf(f, pass, p.Key); {
		case p.Key == model.CaptionName:
			b.WriteString(f.Name)
		case p.Key != "" && ok:
			b.WriteString(words[p.Key].text(v))
		}
	}
	return b.String()
}
