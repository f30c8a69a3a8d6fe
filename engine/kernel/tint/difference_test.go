package tint

import (
	"math"
	"testing"

	"github.com/lucasb-eyer/go-colorful"
	"pgregory.net/rapid"
)

// TestDeltaE2000 checks the pairs of Sharma, Wu & Dalal 2005, table 1 (rows DE00, printed there to four decimals).
func TestDeltaE2000(t *testing.T) {
	for _, c := range []struct {
		id   string
		x, y Lab
		want float64
	}{
		{"DE00-03", Lab{50.0, 2.8361, -74.02}, Lab{50.0, 0.0, -82.7485}, 3.4412},
		{"DE00-06", Lab{50.0, -0.9009, -85.5211}, Lab{50.0, 0.0, -82.7485}, 1.0},
		{"DE00-07", Lab{50.0, 0.0, 0.0}, Lab{50.0, -1.0, 2.0}, 2.3669},
		{"DE00-08", Lab{50.0, -1.0, 2.0}, Lab{50.0, 0.0, 0.0}, 2.3669},
		{"DE00-10", Lab{50.0, 2.49, -0.001}, Lab{50.0, -2.49, 0.001}, 7.1792},
		{"DE00-11", Lab{50.0, 2.49, -0.001}, Lab{50.0, -2.49, 0.0011}, 7.2195},
		{"DE00-13", Lab{50.0, -0.001, 2.49}, Lab{50.0, 0.0009, -2.49}, 4.8045},
		{"DE00-15", Lab{50.0, -0.001, 2.49}, Lab{50.0, 0.0011, -2.49}, 4.7461},
		{"DE00-16", Lab{50.0, 2.5, 0.0}, Lab{50.0, 0.0, -2.5}, 4.3065},
		{"DE00-17", Lab{50.0, 2.5, 0.0}, Lab{73.0, 25.0, -18.0}, 27.1492},
		{"DE00-18", Lab{50.0, 2.5, 0.0}, Lab{61.0, -5.0, 29.0}, 22.8977},
		{"DE00-19", Lab{50.0, 2.5, 0.0}, Lab{56.0, -27.0, -3.0}, 31.903},
		{"DE00-22", Lab{50.0, 2.5, 0.0}, Lab{50.0, 3.2972, 0.0}, 1.0},
		{"DE00-24", Lab{50.0, 2.5, 0.0}, Lab{50.0, 3.2592, 0.335}, 1.0},
		{"DE00-25", Lab{60.2574, -34.0099, 36.2677}, Lab{60.4626, -34.1751, 39.4387}, 1.2644},
		{"DE00-26", Lab{63.0109, -31.0961, -5.8663}, Lab{62.8187, -29.7946, -4.0864}, 1.263},
		{"DE00-27", Lab{61.2901, 3.7196, -5.3901}, Lab{61.4292, 2.248, -4.962}, 1.8731},
		{"DE00-28", Lab{35.0831, -44.1164, 3.7933}, Lab{35.0232, -40.0716, 1.5901}, 1.8645},
		{"DE00-29", Lab{22.7233, 20.0904, -46.694}, Lab{23.0331, 14.973, -42.5619}, 2.0373},
		{"DE00-30", Lab{36.4612, 47.858, 18.3852}, Lab{36.2715, 50.5065, 21.2231}, 1.4146},
		{"DE00-31", Lab{90.8027, -2.0831, 1.441}, Lab{91.1528, -1.6435, 0.0447}, 1.4441},
		{"DE00-32", Lab{90.9257, -0.5406, -0.9208}, Lab{88.6381, -0.8985, -0.7239}, 1.5381},
	} {
		for _, got := range []float64{DeltaE2000(c.x, c.y), DeltaE2000(c.y, c.x)} {
			if math.Abs(got-c.want) > 1e-4 {
				t.Errorf("%s: got %.5f, want %.4f", c.id, got, c.want)
			}
		}
	}
	// DE00-14: the hues are opposite, and either mean hue is right.
	got := DeltaE2000(Lab{50, -0.001, 2.49}, Lab{50, 0.001, -2.49})
	if math.Abs(got-4.8045) > 1e-4 && math.Abs(got-4.7461) > 1e-4 {
		t.Errorf("DE00-14: got %.5f, want 4.8045 or 4.7461", got)
	}
}

// TestDeltaE2000Library compares random pairs with an outside library, and looks at symmetry and identity.
func TestDeltaE2000Library(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		lab := rapid.Custom(func(t *rapid.T) Lab {
			return Lab{rapid.Float64Range(0, 100).Draw(t, "L"), rapid.Float64Range(-128, 128).Draw(t, "a"), rapid.Float64Range(-128, 128).Draw(t, "b")}
		})
		x, y := lab.Draw(t, "x"), lab.Draw(t, "y")
		if math.Abs(math.Abs(x.Hue()-y.Hue())-180) < 0.1 {
			t.Skip("opposite hues: two answers are right")
		}
		d := DeltaE2000(x, y)
		if !(d >= 0) || math.Abs(d-DeltaE2000(y, x)) > 1e-9 {
			t.Fatalf("difference %v one way, %v the other", d, DeltaE2000(y, x))
		}
		if s := DeltaE2000(x, x); s != 0 {
			t.Fatalf("difference from itself %v", s)
		}
	})
	// Colours that both can hold: 8-bit sRGB. The library rounds its white and its
	// matrices, which turns the hues of near greys.
	rapid.Check(t, func(t *rapid.T) {
		channel := rapid.IntRange(0, 255)
		draw := func(label string) (RGB, colorful.Color) {
			r, g, b := channel.Draw(t, label+".r"), channel.Draw(t, label+".g"), channel.Draw(t, label+".b")
			v := [3]float64{float64(r) / 255, float64(g) / 255, float64(b) / 255}
			return FromSRGB(float32(v[0]), float32(v[1]), float32(v[2])), colorful.Color{R: v[0], G: v[1], B: v[2]}
		}
		x, lx := draw("x")
		y, ly := draw("y")
		l, a, b := lx.Lab()
		mine := ToLab(x)
		if math.Abs(mine.L-100*l) > 0.01 || math.Abs(mine.A-100*a) > 0.05 || math.Abs(mine.B-100*b) > 0.05 {
			t.Fatalf("Lab %v, go-colorful has %v, %v, %v", mine, 100*l, 100*a, 100*b)
		}
		if math.Abs(math.Abs(ToLab(x).Hue()-ToLab(y).Hue())-180) < 1 || min(ToLab(x).Chroma(), ToLab(y).Chroma()) < 1 {
			t.Skip("nearly opposite hues, or a grey, whose hue is chance: the mean hue differs")
		}
		if d, lib := DeltaE2000(ToLab(x), ToLab(y)), 100*lx.DistanceCIEDE2000(ly); math.Abs(d-lib) > 0.03+0.003*d {
			t.Fatalf("difference %v, go-colorful has %v", d, lib)
		}
	})
}

func TestContrastRatio(t *testing.T) {
	for _, c := range []struct {
		id, a, b string
		want     float64
	}{ // Source: WCAG 2.2, relative luminance and contrast ratio.
		{"WCAG-CR-black-white", "#000000", "#ffffff", 21.0},
		{"WCAG-CR-767676", "#767676", "#ffffff", 4.542224959605253},
		{"WCAG-CR-777777", "#777777", "#ffffff", 4.478089453577214},
		{"WCAG-CR-949494", "#949494", "#ffffff", 3.0334698257384747},
		{"WCAG-CR-red-white", "#ff0000", "#ffffff", 3.9984767707539985},
		{"WCAG-CR-blue-white", "#0000ff", "#ffffff", 8.592471358428805},
		{"WCAG-CR-midgrey128-black", "#808080", "#000000", 5.317210002277984},
		{"WCAG-CR-grey118-white", "#767676", "#ffffff", 4.542224959605253},
	} {
		if got := ContrastRatio(hex(t, c.a), hex(t, c.b)); math.Abs(got-c.want) > 0.001 {
			t.Errorf("%s: got %.5f, want %.5f", c.id, got, c.want)
		}
		if got := ContrastRatio(hex(t, c.b), hex(t, c.a)); math.Abs(got-c.want) > 0.001 {
			t.Errorf("%s, swapped: got %.5f, want %.5f", c.id, got, c.want)
		}
	}
}

func hex(t *testing.T, s string) RGB {
	t.Helper()
	c, err := ParseHex(s)
	if err != nil {
		t.Fatal(err)
	}
	return c
}
