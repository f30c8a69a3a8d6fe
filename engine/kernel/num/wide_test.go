package num

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"

	"pgregory.net/rapid"
)

// TestElementary bounds the relative error of the float64 functions that scenes compute with against package math, whose own error
// is below 1e-16 but for tan and the hyperbolic functions, where it is below 3e-16.
func TestElementary(t *testing.T) {
	r := rand.New(rand.NewPCG(5, 6))
	worst := map[string]float64{}
	note := func(name string, got, want float64) {
		worst[name] = max(worst[name], math.Abs(got-want)/math.Abs(want))
	}
	for range 50000 {
		x := r.NormFloat64()
		large := 690 * (2*r.Float64() - 1)
		wide := math.Exp(large)
		note("exp", ExpWide(x), math.Exp(x))
		note("exp, anywhere", ExpWide(large), math.Exp(large))
		note("log", LogWide(math.Abs(x)), math.Log(math.Abs(x)))
		note("log, anywhere", LogWide(wide), math.Log(wide))
		note("log10", Log10Wide(wide), math.Log10(wide))
		note("tan", TanWide(x/2), math.Tan(x/2))
		note("sinh", SinhWide(x), math.Sinh(x))
		note("sinh, anywhere", SinhWide(large), math.Sinh(large))
		note("cosh", CoshWide(x), math.Cosh(x))
		note("tanh", TanhWide(x), math.Tanh(x))
		y := 4 * r.NormFloat64()
		base := math.Exp(x)
		want := math.Pow(base, y)
		worst["pow"] = max(worst["pow"], math.Abs(PowWide(base, y)-want)/want/(1+math.Abs(y)))
	}
	for name, bound := range map[string]float64{
		"exp": 3e-16, "exp, anywhere": 3e-16, "log": 4e-16, "log, anywhere": 4e-16, "log10": 6e-16, "tan": 8e-16,
		"sinh": 1e-15, "sinh, anywhere": 1e-15, "cosh": 1e-15, "tanh": 2e-15, "pow": 4e-16,
	} {
		t.Logf("%-16s %.2g", name, worst[name])
		if w, ok := worst[name]; !ok || !(w <= bound) {
			t.Errorf("%s: error %.2g, want at most %.2g", name, w, bound)
		}
	}
}

// TestElementaryEdges has the values that must be exact: IEEE 754-2019, 9.2.1, and what arithmetic says.
func TestElementaryEdges(t *testing.T) {
	inf, negative := math.Inf(1), math.Copysign(0, -1)
	for _, c := range []struct {
		name      string
		got, want float64
	}{
		{"exp 0", ExpWide(0), 1}, {"exp inf", ExpWide(inf), inf}, {"exp -inf", ExpWide(-inf), 0}, {"exp 710", ExpWide(710), inf},
		{"exp -746", ExpWide(-746), 0}, {"exp -745", ExpWide(-745), math.SmallestNonzeroFloat64}, {"exp 1", ExpWide(1), math.E},
		{"log 1", LogWide(1), 0}, {"log 0", LogWide(0), -inf}, {"log inf", LogWide(inf), inf}, {"log e", LogWide(math.E), 1},
		{"log10 1000", Log10Wide(1000), 3}, {"log10 1e22", Log10Wide(1e22), 22}, {"log10 1", Log10Wide(1), 0}, {"log10 0", Log10Wide(0), -inf},
		{"2^10", PowWide(2, 10), 1024}, {"10^-3", PowWide(10, -3), 1e-3}, {"8^(1/3)", PowWide(8, 1.0/3), 2}, {"9^0.5", PowWide(9, 0.5), 3},
		{"4^-0.5", PowWide(4, -0.5), 0.5}, {"(-2)^3", PowWide(-2, 3), -8}, {"(-2)^-1", PowWide(-2, -1), -0.5}, {"0^0", PowWide(0, 0), 1},
		{"0^-1", PowWide(0, -1), inf}, {"0^2", PowWide(0, 2), 0}, {"inf^-2", PowWide(inf, -2), 0}, {"1^inf", PowWide(1, inf), 1},
		{"2^1024", PowWide(2, 1024), inf}, {"2^-1074", PowWide(2, -1074), math.SmallestNonzeroFloat64}, {"2^-1080", PowWide(2, -1080), 0},
		{"(-1)^(2^20+1)", PowWide(-1, 1<<20+1), -1}, {"(-1)^(2^53)", PowWide(-1, 1<<53), 1}, {"(-1)^inf", PowWide(-1, inf), 1},
		{"tan 0", TanWide(0), 0}, {"sinh 0", SinhWide(0), 0}, {"sinh -inf", SinhWide(-inf), -inf},
		{"cosh 0", CoshWide(0), 1}, {"cosh 710", math.Round(CoshWide(710)/1.1169973830808555e308*1e15) / 1e15, 1}, {"cosh 711", CoshWide(711), inf}, {"tanh 100", TanhWide(100), 1}, {"tanh -100", TanhWide(-100), -1},
	} {
		if c.got != c.want {
			t.Errorf("%s: got %v, want %v", c.name, c.got, c.want)
		}
	}
	for name, got := range map[string]float64{
		"exp": ExpWide(math.NaN()), "log": LogWide(math.NaN()), "log -1": LogWide(-1), "log10 -1": Log10Wide(-1), "(-8)^(1/3)": PowWide(-8, 1.0/3),
		"nan^1": PowWide(math.NaN(), 1), "tan inf": TanWide(inf), "sinh": SinhWide(math.NaN()), "tanh": TanhWide(math.NaN()),
	} {
		if got == got {
			t.Errorf("%s: got %v, want NaN", name, got)
		}
	}
	if !math.Signbit(SinhWide(negative)) || !math.Signbit(TanhWide(negative)) {
		t.Error("an odd function has lost the sign of zero")
	}
}

// TestWholePowers: powers of whole numbers are those of exact arithmetic, as long as a float64 holds them.
func TestWholePowers(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x := rapid.Int64Range(-1000, 1000).Draw(t, "x")
		y := rapid.Int64Range(0, 30).Draw(t, "y")
		exact := new(big.Int).Exp(big.NewInt(x), big.NewInt(y), nil)
		if exact.BitLen() > 53 {
			return
		}
		want, _ := new(big.Float).SetInt(exact).Float64()
		if got := PowWide(float64(x), float64(y)); got != want {
			t.Fatalf("%d^%d: got %v, want %v", x, y, got, want)
		}
	})
}
