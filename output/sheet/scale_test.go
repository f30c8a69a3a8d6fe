package sheet

import (
	"image"
	"image/color"
	"math"
	"testing"

	"pgregory.net/rapid"
)

// TestScaleKeepsFlat: a flat picture is the same at every size, to the code.
func TestScaleKeepsFlat(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		side := rapid.IntRange(1, 70)
		c := color.NRGBA{rapid.Uint8().Draw(t, "r"), rapid.Uint8().Draw(t, "g"), rapid.Uint8().Draw(t, "b"), 255}
		l := lightOf(plain(side.Draw(t, "w"), side.Draw(t, "h"), c))
		out, err := l.to(side.Draw(t, "to w"), side.Draw(t, "to h")).over(118)
		if err != nil {
			t.Fatal(err)
		}
		for i := 0; i < len(out.Pix); i += 4 {
			if got := (color.NRGBA{out.Pix[i], out.Pix[i+1], out.Pix[i+2], out.Pix[i+3]}); got != c {
				t.Fatalf("%v became %v", c, got)
			}
		}
	})
}

// TestScaleIsLinear: a fine chequer of black and white averages to half the light, sRGB 187.5, and not to half the code, 127.5.
// Source: IEC 61966-2-1, 1.055·0.5^(1/2.4) - 0.055 = 0.7354.
func TestScaleIsLinear(t *testing.T) {
	m := plain(64, 64, color.NRGBA{0, 0, 0, 255})
	for y := range 64 {
		for x := range 64 {
			if (x+y)%2 == 0 {
				m.SetNRGBA(x, y, color.NRGBA{255, 255, 255, 255})
			}
		}
	}
	out, err := lightOf(m).to(8, 8).over(118)
	if err != nil {
		t.Fatal(err)
	}
	sum := 0.0
	for y := 1; y < 7; y++ {
		for x := 1; x < 7; x++ {
			sum += float64(out.NRGBAAt(x, y).R) / 36
		}
	}
	if math.Abs(sum-187.5) > 0.5 {
		t.Errorf("mean code %.2f, want 187.5", sum)
	}
}

// TestScaleWeights: weights sum to 1, and at the same size they are the identity.
func TestScaleWeights(t *testing.T) {
	for _, c := range [][2]int{{1, 1}, {5, 5}, {480, 240}, {480, 113}, {3, 100}, {100, 1}, {7, 8}} {
		k := weightsFor(c[0], c[1])
		for i := range k.weights {
			sum := 0.0
			for j, w := range k.weights[i] {
				sum += float64(w)
				if at := k.first[i] + j; at < 0 || at >= c[0] {
					t.Fatalf("%v: place %d reads value %d", c, i, at)
				}
				if c[0] == c[1] && k.first[i]+j != i && w != 0 {
					t.Fatalf("%v: place %d takes %v of value %d", c, i, w, k.first[i]+j)
				}
			}
			if math.Abs(sum-1) > 1e-6 {
				t.Fatalf("%v: weights of place %d sum to %v", c, i, sum)
			}
		}
	}
	// Keys 1981: 1 at 0, 0 at 1 and 2, and half way between -1/16 and 9/16.
	for x, want := range map[float64]float64{0: 1, 1: 0, 2: 0, 0.5: 0.5625, 1.5: -0.0625, 3: 0} {
		if got := cubic(x); math.Abs(got-want) > 1e-15 {
			t.Errorf("cubic(%v) = %v, want %v", x, got, want)
		}
	}
}

// TestOverPaper: what is transparent shows the paper, to the code; half covered is half the light of each (the "over" of Porter and
// Duff 1984, in linear light).
func TestOverPaper(t *testing.T) {
	a := 128.0 / 255
	light := a + (1-a)*math.Pow((118.0/255+0.055)/1.055, 2.4) // white over the grey card
	mixed := 255 * (1.055*math.Pow(light, 1/2.4) - 0.055)     // IEC 61966-2-1
	for _, c := range []struct {
		in, alpha uint8
		want      float64
	}{{200, 0, 118}, {200, 255, 200}, {255, 128, mixed}} {
		out, err := lightOf(plain(4, 4, color.NRGBA{c.in, c.in, c.in, c.alpha})).over(118)
		if err != nil {
			t.Fatal(err)
		}
		if got := float64(out.NRGBAAt(1, 2).R); math.Abs(got-c.want) >= 1 {
			t.Errorf("%d at alpha %d: got %v, want %v", c.in, c.alpha, got, c.want)
		}
	}
}

// TestStraight: every kind of picture is read alike, wherever its bounds begin.
func TestStraight(t *testing.T) {
	want := color.NRGBA{10, 200, 118, 255}
	nrgba := plain(6, 6, want)
	rgba := image.NewRGBA(image.Rect(2, 3, 8, 9))
	deep := image.NewNRGBA64(image.Rect(-1, -1, 5, 5))
	for y := range 6 {
		for x := range 6 {
			rgba.Set(x+2, y+3, want)
			deep.Set(x-1, y-1, want)
		}
	}
	for _, img := range []image.Image{nrgba, rgba, deep, nrgba.SubImage(image.Rect(2, 2, 5, 5))} {
		l := lightOf(img)
		for i := 0; i < len(l.pix); i += 4 {
			if got := decoded()[200]; l.pix[i+1] != got || l.pix[i+3] != 1 {
				t.Fatalf("%T: pixel %d is %v", img, i/4, l.pix[i:i+4])
			}
		}
	}
	half := image.NewRGBA(image.Rect(0, 0, 1, 1))
	half.Pix = []uint8{64, 0, 0, 128}
	if got := straight(half).NRGBAAt(0, 0); got.R != 127 || got.A != 128 {
		t.Errorf("premultiplied 64 of 128 became %v", got)
	}
}
