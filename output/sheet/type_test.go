package sheet

import (
	"strings"
	"testing"
	"unicode/utf8"

	"pgregory.net/rapid"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

func setterFor(t testing.TB) *setter {
	t.Helper()
	s, err := newSetter()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestContrast checks every ink on every paper: 4.5 : 1 for text, 3 : 1 for lines. WCAG-THRESH of the reference table (WCAG 2.2, 1.4.3
// and 1.4.11); the measure itself is checked on WCAG-CR rows: #767676 on white 4.5422, black on white 21 (WCAG 2.2).
func TestContrast(t *testing.T) {
	ratio := func(a, b uint8) float64 {
		light := func(c uint8) tint.RGB { return tint.Grey(tint.DecodeSRGB(float32(c) / 255)) }
		return tint.ContrastRatio(light(a), light(b))
	}
	for _, c := range []struct {
		a, b uint8
		want float64
	}{{0, 255, 21}, {118, 255, 4.542224959605253}, {119, 255, 4.478089453577214}, {148, 255, 3.0334698257384747}, {128, 0, 5.317210002277984}} {
		if got := ratio(c.a, c.b); got < c.want-0.005 || got > c.want+0.005 {
			t.Errorf("%d on %d: contrast %.4f, want %.4f", c.a, c.b, got, c.want)
		}
	}
	for paper, g := range grounds {
		for i, least := range [...]float64{firstInk: 4.5, secondInk: 4.5, thirdInk: 3} {
			if got := ratio(g.paper, g.inks[i]); got < least {
				t.Errorf("paper %d, ink %d: contrast %.2f, want at least %v", paper, i, got, least)
			}
		}
	}
	for paper, want := range map[model.Paper]float64{model.PaperGrey: 49.6, model.PaperLight: 95, model.PaperDark: 12} {
		l := tint.ToLab(tint.Grey(tint.DecodeSRGB(float32(grounds[paper].paper) / 255))).L
		if l < want-0.3 || l > want+0.3 {
			t.Errorf("paper %d: L* %.2f, want %v", paper, l, want)
		}
	}
}

func TestSetFallsBack(t *testing.T) {
	s := setterFor(t)
	st := style{20, regular, firstInk}
	for _, c := range []struct {
		text  string
		runs  string // what was set, a bar between faces
		count int
	}{
		{"celadon", "celadon", 1},
		{"ce\u0301ladon", "céladon", 1},             // composed: NFC
		{"\u9752\u78c1", "\ufffd\ufffd", 1},         // no face has these
		{"snow \u2603 man", "snow |\u2603| man", 3}, // the fallback has this
		{"a\u2009b", "a|b", 2},                      // a thin space is a distance
		{"a\tb\nc", "a b c", 1},
		{"a\u200bb\u202ec", "abc", 1},
		{"bad \xff byte", "bad \ufffd byte", 1},
		{"", "", 0},
	} {
		l := s.set(c.text, st)
		var all []string
		for _, r := range l.runs {
			all = append(all, r.text)
		}
		got := strings.Join(all, "|")
		if strings.ContainsRune(c.runs, '\ufffd') {
			got = strings.ReplaceAll(got, "|", "") // whichever face has it
		} else if len(l.runs) != c.count {
			t.Errorf("%q: %d runs, want %d", c.text, len(l.runs), c.count)
		}
		if got != c.runs {
			t.Errorf("%q: set %q, want %q", c.text, got, c.runs)
		}
		if c.text != "" && (l.width <= 0 || l.left >= l.right) {
			t.Errorf("%q: width %v, ink %v to %v", c.text, l.width, l.left, l.right)
		}
	}
	if a, b := s.set("a\u2009b", st).width, s.set("ab", st).width; a < b+3.9 || a > b+4.1 {
		t.Errorf("a thin space is %v wide, want a fifth of 20", a-b)
	}
}

// TestSetKeepsMarksIn: a mark without a letter begins where the line begins.
func TestSetKeepsMarksIn(t *testing.T) {
	for _, text := range []string{"\u0488", "\u0301", "\u0489a"} {
		if l := setterFor(t).set(text, style{20, regular, firstInk}); l.left < -20.0/8 || l.extent() < l.right {
			t.Errorf("%q: ink from %v to %v", text, l.left, l.right)
		}
	}
}

// TestSetBoundsHeight: no ink passes what leadFor allows for, and ordinary letters keep their size.
func TestSetBoundsHeight(t *testing.T) {
	s := setterFor(t)
	st := style{100, medium, firstInk}
	for r := rune(' '); r < 0x3000; r++ {
		if l := s.set(string(r), st); -l.top > 100*mostAscent+1 || l.base > 100*mostDescent+1 {
			t.Fatalf("%q reaches %v over and %v under the baseline", r, -l.top, l.base)
		}
	}
	for _, r := range "AÅÇgjqyÿ{|(µЩЏ" {
		if fit := s.fitOf(medium, r); fit != 1 {
			t.Errorf("%q is set at %v of its size", r, fit)
		}
	}
	if fit := s.fitOf(fallback, 'Ấ'); fit < smallestFit || fit == 1 {
		t.Errorf("a capital with two marks is set at %v of its size", fit)
	}
}

// TestFit: what is cut keeps both its ends and never passes the width.
func TestFit(t *testing.T) {
	s := setterFor(t)
	rapid.Check(t, func(t *rapid.T) {
		text := rapid.String().Draw(t, "text")
		st := style{rapid.Float64Range(9, 40).Draw(t, "size"), medium, firstInk}
		width := rapid.Float64Range(0, 400).Draw(t, "width")
		l := s.fit(text, st, width)
		if l.extent() > width {
			t.Fatalf("%v wide, room %v", l.extent(), width)
		}
		for _, l := range s.wrap(text, st, width, 3) {
			if l.extent() > width {
				t.Fatalf("wrapped: %v wide, room %v", l.extent(), width)
			}
		}
		if n := len(s.wrap(text, st, width, 3)); n > 3 {
			t.Fatalf("%d lines", n)
		}
	})
	st := style{10, regular, firstInk}
	l := s.fit("the-first-bowl-of-the-winter-series-second-edition", st, 120)
	head, tail, found := strings.Cut(l.text, ellipsis)
	if !found || !strings.HasPrefix("the-first-bowl-of-the-winter-series-second-edition", head) ||
		!strings.HasSuffix("the-first-bowl-of-the-winter-series-second-edition", tail) || utf8.RuneCountInString(head)-utf8.RuneCountInString(tail) > 1 {
		t.Errorf("got %q", l.text)
	}
	if l.extent() < 110 {
		t.Errorf("%q is %v wide: more would fit in 120", l.text, l.extent())
	}
}

// TestWrapLosesNothing: with room enough, the lines together are the text.
func TestWrapLosesNothing(t *testing.T) {
	s := setterFor(t)
	st := style{10, regular, firstInk}
	text := "products.csv:8: height: a number is accepted, got \"tall\""
	var parts []string
	for _, l := range s.wrap(text, st, 100, 9) {
		parts = append(parts, l.text)
	}
	if got := strings.Join(parts, " "); got != text || len(parts) < 3 {
		t.Errorf("got %q", parts)
	}
}
