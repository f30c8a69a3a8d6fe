package sheet

import (
	"strings"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/model"
)

var numberTests = []struct {
	x      float64
	digits int
	want   string
	source string
}{
	{256, 4, "256", "whole"},
	{-1.5, 4, "\u22121.5", "true minus, U+2212"},
	{0, 4, "0", "whole"},
	{1200, 4, "1200", "ISO 80000-1: four digits may stay together"},
	{12800, 4, "12\u2009800", "ISO 80000-1, 7.3.1: groups of three, small space"},
	{1234567, 4, "1\u2009234\u2009567", "ISO 80000-1, 7.3.1"},
	{0.1 + 0.2, 4, "0.3", "rounding of binary fractions is not shown"},
	{1.0 / 3, 4, "0.3333", "four digits"},
	{40.317473596635935, 4, "40.32", "four digits"},
	{12345.678, 7, "12\u2009345.68", "seven digits"},
	{1234.5, 4, "1234.5", "the whole part in full, and two decimals"},
	{12345.678, 4, "12\u2009345.68", "likewise"},
	{0.00025, 4, "0.00025", "plain down to 10^-4"},
	{0.0000025, 4, "2.5\u2009×\u200910⁻⁶", "power of ten"},
	{-2e15 / 3, 4, "\u22126.667\u2009×\u200910¹⁴", "power of ten"},
	{1e10, 4, "1\u2009×\u200910¹⁰", "power of ten"},
}

func TestNumber(t *testing.T) {
	for _, c := range numberTests {
		if got := number(c.x, c.digits); got != c.want {
			t.Errorf("number(%v, %d) = %q, want %q (%s)", c.x, c.digits, got, c.want, c.source)
		}
	}
}

// TestWordingTellsApart: different numbers of one tag never read alike.
func TestWordingTellsApart(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		base := rapid.Float64Range(-1e6, 1e6).Draw(t, "base")
		var values []model.Value
		for _, step := range rapid.SliceOfDistinct(rapid.IntRange(0, 1000), rapid.ID).Draw(t, "steps") {
			values = append(values, num(base+float64(step)*1e-3))
		}
		w := wordingOf("gloss", values)
		seen := map[string]bool{}
		for _, v := range values {
			text := w.text(v)
			if seen[text] {
				t.Fatalf("%q stands for two values", text)
			}
			seen[text] = true
		}
	})
}

func TestWords(t *testing.T) {
	for _, c := range []struct{ key, label, unit string }{
		{"gloss", "gloss", ""}, {"angle_deg", "angle", "°"}, {"light_samples", "light samples", ""}, {"height_mm", "height", "\u2009mm"},
		{"_deg", " deg", ""}, {"exposure_stops", "exposure", "\u2009stops"}, {"form", "form", ""},
	} {
		if label, unit := labelOf(c.key); label != c.label || unit != c.unit {
			t.Errorf("%s: got %q and %q", c.key, label, unit)
		}
	}
	for text, want := range map[string]string{
		"12.5°": "12", "\u22123\u2009mm": "\u22123", "12\u2009800.5": "12\u2009800", "7": "7", "celadon": "", "1\u2009×": "1",
	} {
		if got := wholePart(text); got != want {
			t.Errorf("whole part of %q: got %q, want %q", text, got, want)
		}
	}
	w := wordingOf("angle_deg", nil)
	if got := w.text(model.Value{Kind: model.TruthValue, Truth: true}); got != "yes" {
		t.Errorf("got %q", got)
	}
}

func TestCaption(t *testing.T) {
	f := frame("bowl-1", "gloss", 16, "glaze", "slate", "angle_deg", -30)
	words := map[string]wording{}
	for _, k := range []string{"gloss", "glaze", "angle_deg"} {
		v, _ := f.Tag(k)
		words[k] = wordingOf(k, []model.Value{v})
	}
	for template, want := range map[string]string{
		"{name}":                     "bowl-1",
		"gloss {gloss}, {angle_deg}": "gloss 16, \u221230°",
		"{missing}{glaze}!":          "slate!",
		"{} {glaze":                  "{} {glaze",
		"{pass}":                     "depth",
	} {
		if got := captionOf((&model.Sheet{Caption: template}).CaptionParts(), &f, "depth", words); got != want {
			t.Errorf("%q gave %q, want %q", template, got, want)
		}
	}
}

func FuzzCaption(f *testing.F) {
	f.Add("{name} {gloss}")
	f.Add("}{{}{gloss")
	fr := frame("bowl", "gloss", 16)
	f.Fuzz(func(t *testing.T, template string) {
		got := captionOf((&model.Sheet{Caption: template}).CaptionParts(), &fr, "", map[string]wording{"gloss": {digits: 4}})
		if !strings.Contains(template, "{") && got != template {
			t.Errorf("%q became %q", template, got)
		}
	})
}
