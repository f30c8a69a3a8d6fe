package num

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// ulps returns |got - want| in units of the last place of a float32 at want.
func ulps(got float32, want float64) float64 {
	if math.IsInf(want, 0) || math.Abs(want) >= math.MaxFloat32*(1+0x1p-25) {
		if math.IsInf(float64(got), int(math.Copysign(1, want))) {
			return 0
		}
		return math.Inf(1)
	}
	_, e := math.Frexp(want)
	return math.Abs(float64(got)-want) / math.Ldexp(1, max(e, -125)-24)
}

// TestAccuracy bounds the error of each function against package math in float64, over its range. The bounds are the
// promises of the doc comments; what is measured is logged.
func TestAccuracy(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	spread := func(lo, hi float64) float32 { return float32(math.Exp(lo + (hi-lo)*r.Float64())) }
	signed := func(x float32) float32 {
		if r.IntN(2) == 0 {
			return -x
		}
		return x
	}
	type draw func() (got float32, want float64, at string)
	at := func(v ...float32) string { return fmt.Sprint(v) }
	for _, c := range []struct {
		name  string
		bound float64
		draw  draw
	}{
		{"Pow, x in [0, 1], y to 1e5", 0.51, func() (float32, float64, string) {
			x, y := r.Float32(), spread(-11, 11.5)
			return Pow(x, y), math.Pow(float64(x), float64(y)), at(x, y)
		}},
		{"Pow, x near 1, y to 1e5", 0.51, func() (float32, float64, string) {
			x, y := 1-spread(-16, 0), spread(0, 11.5)
			return Pow(x, y), math.Pow(float64(x), float64(y)), at(x, y)
		}},
		{"Pow, anywhere", 0.51, func() (float32, float64, string) {
			x, y := spread(-103, 88), signed(spread(-5, 5))
			return Pow(x, y), math.Pow(float64(x), float64(y)), at(x, y)
		}},
		{"Exp2", 0.51, func() (float32, float64, string) {
			x := 300*r.Float32() - 150
			return Exp2(x), math.Exp2(float64(x)), at(x)
		}},
		{"Exp", 0.51, func() (float32, float64, string) {
			x := 200*r.Float32() - 104
			return Exp(x), math.Exp(float64(x)), at(x)
		}},
		{"Log2", 0.51, func() (float32, float64, string) {
			x := spread(-103, 88)
			return Log2(x), math.Log2(float64(x)), at(x)
		}},
		{"Log2 near 1", 0.51, func() (float32, float64, string) {
			x := 1 + signed(spread(-16, -3))
			return Log2(x), math.Log1p(float64(x)-1) / math.Ln2, at(x)
		}},
		{"SinCos, sine", 0.51, func() (float32, float64, string) {
			x := signed(spread(-10, math.Log(1.6e6)))
			s, _ := SinCos(x)
			return s, math.Sin(float64(x)), at(x)
		}},
		{"SinCos, cosine", 0.51, func() (float32, float64, string) {
			x := signed(spread(-10, math.Log(1.6e6)))
			_, c := SinCos(x)
			return c, math.Cos(float64(x)), at(x)
		}},
		{"Atan2", 0.501, func() (float32, float64, string) {
			y, x := signed(spread(-10, 10)), signed(spread(-10, 10))
			return Atan2(y, x), math.Atan2(float64(y), float64(x)), at(y, x)
		}},
		{"Acos", 0.501, func() (float32, float64, string) {
			x := 2*r.Float32() - 1
			return Acos(x), 2 * math.Atan(math.Sqrt((1-float64(x))/(1+float64(x)))), at(x)
		}},
		{"Acos near 1", 0.501, func() (float32, float64, string) {
			x := 1 - spread(-16, -3)
			return Acos(x), 2 * math.Asin(math.Sqrt((1-float64(x))/2)), at(x)
		}},
		{"Asin", 0.501, func() (float32, float64, string) {
			x := signed(min(1, spread(-10, 0)))
			return Asin(x), math.Asin(float64(x)), at(x)
		}},
	} {
		worst, where := 0.0, ""
		for range 50000 {
			got, want, x := c.draw()
			if u := ulps(got, want); !(u <= worst) {
				worst, where = u, x
			}
		}
		t.Logf("%-28s %.4f ulp at %s", c.name, worst, where)
		if !(worst <= c.bound) {
			t.Errorf("%s: %.4f ulp at %s, want at most %.3f", c.name, worst, where, c.bound)
		}
	}
}

// TestWide bounds the relative error of the float64 forms against package math, whose own error is below 1e-16.
func TestWide(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	worst := map[string]float64{}
	note := func(name string, got, want float64) {
		scale := math.Abs(want)
		if want == 0 {
			scale = 1
		}
		worst[name] = max(worst[name], math.Abs(got-want)/scale)
	}
	for range 50000 {
		x, y := r.NormFloat64(), math.Exp(20*r.Float64()-10)
		s, c := SinCosWide(2 * x)
		// Absolute: both lose relative precision near their zeros, where the angle itself is rounded.
		worst["sin"] = max(worst["sin"], math.Abs(s-math.Sin(2*x)))
		worst["cos"] = max(worst["cos"], math.Abs(c-math.Cos(2*x)))
		note("atan2", Atan2Wide(x, y), math.Atan2(x, y))
		note("atan2, x negative", Atan2Wide(x, -y), math.Atan2(x, -y))
		u := 2*r.Float64() - 1
		// Half-angle forms: package math's own Acos loses half its digits near 1.
		note("acos", AcosWide(u), 2*math.Atan(math.Sqrt((1-u)/(1+u))))
		note("asin", AsinWide(u), 2*math.Atan(u/(1+math.Sqrt((1-u)*(1+u)))))
		note("atanh", AtanhWide(u), math.Atanh(u))
		f := float32(y)
		note("log2", Log2Wide(f), math.Log2(float64(f)))
		so, co := SinCosOctant(u * math.Pi / 4)
		note("octant sine", so, math.Sin(u*math.Pi/4))
		note("octant cosine", co, math.Cos(u*math.Pi/4))
	}
	bounds := map[string]float64{
		"sin": 3e-16, "cos": 3e-16, "atan2": 7e-16, "atan2, x negative": 5e-16, "acos": 1e-15, "asin": 1e-15,
		"atanh": 1e-15, "log2": 1e-11, "octant sine": 3e-10, "octant cosine": 3e-10,
	}
	for name, bound := range bounds {
		t.Logf("%-18s %.2g", name, worst[name])
		if w, ok := worst[name]; !ok || !(w <= bound) {
			t.Errorf("%s: error %.2g, want at most %.2g", name, w, bound)
		}
	}
}

// TestEdges has the values that must be exact. Source: IEEE 754-2019, 9.2.1, unless it says otherwise.
func TestEdges(t *testing.T) {
	inf, nan := float32(math.Inf(1)), float32(math.NaN())
	tiny := float32(math.SmallestNonzeroFloat32)
	for _, c := range []struct {
		name      string
		got, want float32
	}{
		{"0^5", Pow(0, 5), 0}, {"0^0", Pow(0, 0), 1}, {"0^-1", Pow(0, -1), inf}, {"0^1e5", Pow(0, 1e5), 0},
		{"1^1e5", Pow(1, 1e5), 1}, {"1^0", Pow(1, 0), 1}, {"1^-3", Pow(1, -3), 1}, {"0.3^0", Pow(0.3, 0), 1},
		{"nan^0", Pow(nan, 0), 1}, {"inf^2", Pow(inf, 2), inf}, {"inf^-2", Pow(inf, -2), 0}, {"inf^0", Pow(inf, 0), 1},
		{"0.5^inf", Pow(0.5, inf), 0}, {"2^inf", Pow(2, inf), inf}, {"2^-inf", Pow(2, -inf), 0},
		{"2^10", Pow(2, 10), 1024}, {"2^0.5", Pow(2, 0.5), math.Sqrt2}, {"4^0.5", Pow(4, 0.5), 2}, {"9^2", Pow(9, 2), 81},
		{"0.5^149", Pow(0.5, 149), tiny}, {"0.5^151", Pow(0.5, 151), 0}, {"2^128", Pow(2, 128), inf},
		{"tiny^1", Pow(tiny, 1), tiny}, {"max^1", Pow(math.MaxFloat32, 1), math.MaxFloat32},
		{"exp2 -149", Exp2(-149), tiny}, {"exp2 127", Exp2(127), 0x1p127}, {"exp2 inf", Exp2(inf), inf},
		{"exp2 -inf", Exp2(-inf), 0}, {"exp2 0", Exp2(0), 1}, {"exp 0", Exp(0), 1},
		{"log2 1", Log2(1), 0}, {"log2 8", Log2(8), 3}, {"log2 tiny", Log2(tiny), -149}, {"log2 0", Log2(0), -inf},
		{"log2 inf", Log2(inf), inf},
		{"acos 1", Acos(1), 0}, {"acos -1", Acos(-1), math.Pi}, {"acos 0", Acos(0), math.Pi / 2},
		{"asin 1", Asin(1), math.Pi / 2}, {"asin -1", Asin(-1), -math.Pi / 2}, {"asin 0", Asin(0), 0},
		{"atan2 0 1", Atan2(0, 1), 0}, {"atan2 0 -1", Atan2(0, -1), math.Pi}, {"atan2 1 0", Atan2(1, 0), math.Pi / 2},
		{"atan2 -1 0", Atan2(-1, 0), -math.Pi / 2}, {"atan2 0 0", Atan2(0, 0), 0}, {"atan2 1 1", Atan2(1, 1), math.Pi / 4},
		{"atan2 inf inf", Atan2(inf, inf), math.Pi / 4}, {"atan2 1 inf", Atan2(1, inf), 0},
		{"atan2 1 -inf", Atan2(1, -inf), math.Pi}, {"atan2 -inf 1", Atan2(-inf, 1), -math.Pi / 2},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %v, want %v", c.name, c.got, c.want)
		}
	}
	sinInf, cosInf := SinCos(inf)
	for name, got := range map[string]float32{
		"(-2)^2": Pow(-2, 2), "nan^1": Pow(nan, 1), "2^nan": Pow(2, nan), "exp2 nan": Exp2(nan), "log2 -1": Log2(-1),
		"log2 nan": Log2(nan), "acos 2": Acos(2), "asin -2": Asin(-2), "atan2 nan": Atan2(nan, 1), "sin inf": sinInf,
		"cos inf": cosInf, "atanh 2": float32(AtanhWide(2)),
	} {
		if got == got {
			t.Errorf("%s: got %v, want NaN", name, got)
		}
	}
	if s, c := SinCos(0); s != 0 || c != 1 {
		t.Errorf("SinCos(0) = %v, %v", s, c)
	}
	if math.Signbit(float64(Atan2(float32(math.Copysign(0, -1)), 1))) != true {
		t.Error("Atan2(-0, 1) has lost its sign")
	}
}

// TestPowParts checks that the split forms have the bits of Pow, and that Pow rises with x.
func TestPowParts(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float32Range(0, 2).Draw(t, "x")
		y := rapid.Float32Range(0, 1e5).Draw(t, "y")
		p := Pow(x, y)
		if y > 0 {
			if q := Exp2Wide(float64(y) * Log2Wide(x)); p != q {
				t.Fatalf("Pow(%v, %v) = %v, in two parts %v", x, y, p, q)
			}
		}
		if next := Pow(math.Nextafter32(x, 3), y); next < p {
			t.Fatalf("Pow(%v, %v) = %v, but %v for the next x", x, y, p, next)
		}
	})
}

// TestAngleCircle holds for all finite angles, however large: sine and cosine stay on the circle.
func TestAngleCircle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Float32().Draw(t, "x")
		s, c := SinCos(x)
		if l := math.Hypot(float64(s), float64(c)); !(math.Abs(l-1) < 1e-7) {
			t.Fatalf("SinCos(%v) = %v, %v, of length %v", x, s, c, l)
		}
	})
}

var sink float32

func BenchmarkPow(b *testing.B) {
	r := rand.New(rand.NewPCG(1, 2))
	var xs [1024]float32
	for i := range xs {
		xs[i] = r.Float32()
	}
	for _, y := range []float32{16, 1000} {
		b.Run(fmt.Sprintf("y=%v", y), func(b *testing.B) {
			for i := 0; b.Loop(); i++ {
				sink += Pow(xs[i&1023], y)
			}
		})
	}
	b.Run("log-kept", func(b *testing.B) {
		l := Log2Wide(0.99)
		for i := 0; b.Loop(); i++ {
			sink += Exp2Wide(l * float64(xs[i&1023]))
		}
	})
}

func BenchmarkSinCos(b *testing.B) {
	for i := 0; b.Loop(); i++ {
		s, c := SinCos(float32(i&1023) * 0.01)
		sink += s + c
	}
}

func BenchmarkAtan2(b *testing.B) {
	for i := 0; b.Loop(); i++ {
		sink += Atan2(float32(i&1023)-500, 300)
	}
}
