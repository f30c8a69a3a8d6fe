package tint

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

// TestNeutral checks the properties and the closed forms that the specification states.
func TestNeutral(t *testing.T) {
	// Source: Khronos PBR Neutral tone mapper, specification 1.0. A grey x below 0.08 becomes 6.25 x²; up to 0.8,
	// x - 0.04; above, 1 - 0.24² / (x - 0.04 + 0.24 - 0.76).
	for _, c := range []struct{ x, want float64 }{
		{0, 0}, {0.04, 0.01}, {0.08, 0.04}, {0.18, 0.14}, {0.5, 0.46}, {0.79, 0.75}, {0.8, 0.76}, {1, 0.76 + 0.24*0.2/0.44},
		{2, 1 - 0.24*0.24/1.44}, {100, 1 - 0.0576/99.44},
	} {
		got := Neutral(Grey(float32(c.x)))
		for _, v := range []float32{got.R, got.G, got.B} {
			if math.Abs(float64(v)-c.want) > 1e-6 {
				t.Errorf("grey %v becomes %v, want %v", c.x, got, c.want)
			}
		}
	}
	// Base colours come back exactly once the 4 % of a dielectric are added: the point of the curve.
	base := RGB{0.7, 0.3, 0.05}
	if got := Neutral(base.Add(Grey(0.04))); !near(got, base, 1e-6) {
		t.Errorf("base colour %v becomes %v", base, got)
	}
	// A colour above the knee, by the steps of the specification in float64.
	if got, want := Neutral(RGB{3, 1, 0.5}), neutral64(3, 1, 0.5); !near(got, want, 1e-6) {
		t.Errorf("got %v, want %v", got, want)
	}
}

// TestShoulder checks that base colours stay, and that the compression is the specification's.
func TestShoulder(t *testing.T) {
	for _, c := range []RGB{{}, Grey(0.18), {0.7, 0.3, 0.05}, Grey(0.79)} {
		if got := Shoulder(c); got != c {
			t.Errorf("%v becomes %v, want itself", c, got)
		}
	}
	// Source: Khronos PBR Neutral tone mapper, specification 1.0, with the knee at 0.8 and no offset: 1 - 0.2² / (x + 0.2 - 0.8).
	for _, c := range []struct{ x, want float64 }{{0.8, 0.8}, {1, 0.9}, {2, 1 - 0.04/1.4}, {100, 1 - 0.04/99.4}} {
		if got := Shoulder(Grey(float32(c.x))); !near(got, Grey(float32(c.want)), 1e-6) {
			t.Errorf("grey %v becomes %v, want %v", c.x, got, c.want)
		}
	}
}

// neutral64 is the specification's reference code, in float64.
func neutral64(r, g, b float64) RGB {
	x := min(r, g, b)
	offset := 0.04
	if x < 0.08 {
		offset = x - 6.25*x*x
	}
	r, g, b = r-offset, g-offset, b-offset
	peak := max(r, g, b)
	if peak >= 0.76 {
		newPeak := 1 - 0.24*0.24/(peak+0.24-0.76)
		k := 1 - 1/(0.15*(peak-newPeak)+1)
		mix := func(v float64) float64 { return v*newPeak/peak*(1-k) + newPeak*k }
		r, g, b = mix(r), mix(g), mix(b)
	}
	return RGB{float32(r), float32(g), float32(b)}
}

func near(a, b RGB, tol float64) bool {
	return max(math.Abs(float64(a.R-b.R)), math.Abs(float64(a.G-b.G)), math.Abs(float64(a.B-b.B))) <= tol
}

func TestReinhard(t *testing.T) {
	// Source: Reinhard et al. 2002, eq. 4: L(1 + L/white²)/(1 + L).
	for _, c := range []struct{ l, white, want float64 }{
		{0, 4, 0}, {0.18, 4, 0.18 * (1 + 0.18/16) / 1.18}, {1, 4, 17.0 / 32}, {4, 4, 1}, {1, 1, 1}, {1, 1e10, 0.5}, {3, 2, 1},
	} {
		if got := Reinhard(Grey(float32(c.l)), float32(c.white)); !near(got, Grey(float32(c.want)), 1e-6) {
			t.Errorf("luminance %v with white %v becomes %v, want %v", c.l, c.white, got, c.want)
		}
	}
	in := RGB{0.2, 0.4, 0.1}
	if got := Reinhard(in, 8); math.Abs(float64(got.R/got.G-0.5)) > 1e-6 || math.Abs(float64(got.B/got.G-0.25)) > 1e-6 {
		t.Errorf("%v becomes %v: the ratios have changed", in, got)
	}
}

func TestACES(t *testing.T) {
	// Source: Narkowicz 2015, (x(2.51x + 0.03))/(x(2.43x + 0.59) + 0.14), evaluated by hand.
	for _, c := range []struct{ x, want float64 }{
		{0, 0}, {0.18, 0.086724 / 0.324932}, {1, 2.54 / 3.16}, {0.5, 0.6425 / 1.0425}, {1000, 1},
	} {
		if got := ACES(Grey(float32(c.x))); !near(got, Grey(float32(c.want)), 1e-6) {
			t.Errorf("%v becomes %v, want %v", c.x, got, c.want)
		}
	}
}

// TestToneConformance is what every curve must do: stay in [0, 1] for whatever float32 holds, keep black black, keep
// greys grey, and never make a brighter grey darker.
func TestToneConformance(t *testing.T) {
	for name, curve := range map[string]func(RGB) RGB{
		"clip": Clip, "shoulder": Shoulder, "neutral": Neutral, "aces": ACES, "reinhard": func(c RGB) RGB { return Reinhard(c, 4) },
	} {
		t.Run(name, func(t *testing.T) {
			if got := curve(RGB{}); !got.Black() {
				t.Errorf("black becomes %v", got)
			}
			odd := rapid.SampledFrom([]float32{0, -1, 1, 1e30, math.MaxFloat32, 1e-40, float32(math.Inf(1)), float32(math.Inf(-1)), float32(math.NaN())})
			rapid.Check(t, func(t *rapid.T) {
				n := rapid.OneOf(rapid.Float32Range(0, 2), rapid.Float32(), odd)
				c := RGB{n.Draw(t, "r"), n.Draw(t, "g"), n.Draw(t, "b")}
				got := curve(c)
				for _, v := range []float32{got.R, got.G, got.B} {
					if !(v >= 0 && v <= 1) {
						t.Fatalf("%v becomes %v", c, got)
					}
				}
			})
			last := RGB{}
			for x := float32(1e-4); x < 1e6; x *= 1.01 {
				got := curve(Grey(x))
				if max(got.R, got.G, got.B)-min(got.R, got.G, got.B) > 1e-6 {
					t.Fatalf("grey %v becomes %v", x, got)
				}
				if got.G < last.G-1e-7 {
					t.Fatalf("grey %v becomes %v after %v", x, got, last)
				}
				last = got
			}
			if last.G < 0.98 {
				t.Errorf("very bright grey becomes %v", last)
			}
		})
	}
}
