package host

import (
	"math"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/num"
)

// openMath gives the state the mathematical functions of Lua 5.1, with the same bits on every machine: what a scene computes goes into its
// frames' hashes. Chance is not among them: random(name) is the scene's own.
func (s *sandbox) openMath() {
	functions := map[string]lua.LGFunction{}
	for name, f := range map[string]func(float64) float64{
		"abs": math.Abs, "acos": num.AcosWide, "asin": num.AsinWide, "ceil": math.Ceil, "cosh": num.CoshWide, "exp": num.ExpWide,
		"floor": math.Floor, "log": num.LogWide, "log10": num.Log10Wide, "sinh": num.SinhWide, "sqrt": math.Sqrt,
		"tan": num.TanWide, "tanh": num.TanhWide,
		"atan": func(v float64) float64 { return num.Atan2Wide(v, 1) },
		"cos":  func(v float64) float64 { _, c := num.SinCosWide(v); return c },
		"sin":  func(v float64) float64 { s, _ := num.SinCosWide(v); return s },
		"deg":  func(v float64) float64 { return v * (180 / math.Pi) },
		"rad":  func(v float64) float64 { return v * (math.Pi / 180) },
	} {
		functions[name] = func(l *lua.LState) int {
			l.Push(lua.LNumber(f(s.number(l, "math."+name, 1))))
			return 1
		}
	}
	for name, f := range map[string]func(a, b float64) float64{"atan2": num.Atan2Wide, "fmod": math.Mod, "pow": num.PowWide} {
		functions[name] = func(l *lua.LState) int {
			l.Push(lua.LNumber(f(s.number(l, "math."+name, 1), s.number(l, "math."+name, 2))))
			return 1
		}
	}
	for name, better := range map[string]func(a, b float64) bool{
		"max": func(a, b float64) bool { return a > b },
		"min": func(a, b float64) bool { return a < b },
	} {
		functions[name] = func(l *lua.LState) int {
			best := s.number(l, "math."+name, 1)
			for i := 2; i <= l.GetTop(); i++ {
				if v := s.number(l, "math."+name, i); better(v, best) {
					best = v
				}
			}
			l.Push(lua.LNumber(best))
			return 1
		}
	}
	functions["ldexp"] = func(l *lua.LState) int {
		e := max(-4000, min(4000, s.whole(l, "math.ldexp", 2)))
		l.Push(lua.LNumber(math.Ldexp(s.number(l, "math.ldexp", 1), e)))
		return 1
	}
	functions["frexp"] = func(l *lua.LState) int {
		m, e := math.Frexp(s.number(l, "math.frexp", 1))
		l.Push(lua.LNumber(m))
		l.Push(lua.LNumber(e))
		return 2
	}
	functions["modf"] = func(l *lua.LState) int {
		v := s.number(l, "math.modf", 1)
		whole, part := math.Trunc(v), 0.0
		if !math.IsInf(v, 0) {
			part = v - whole
		}
		l.Push(lua.LNumber(whole))
		l.Push(lua.LNumber(part))
		return 2
	}
	const chance = `write local r = random("name"), whose numbers are the same on each run`
	s.seal("math", functions, map[string]lua.LValue{"pi": lua.LNumber(math.Pi), "huge": lua.LNumber(math.Inf(1))}, map[string]string{
		"random": chance, "randomseed": chance, "mod": "write a % b", "round": "write math.floor(x + 0.5)", "clamp": "write math.max(low, math.min(high, x))",
	})
}

// compute is the arithmetic of the virtual machine, for texts that read as numbers.
func compute(operator string, a, b float64) float64 {
	switch operator {
	case "+":
		return a + b
	case "-":
		return a - b
	case "*":
		return a * b
	case "/":
		return a / b
	case "^":
		return num.PowWide(a, b)
	}
	v := math.Mod(a, b)
	if v != 0 && (v < 0) != (b < 0) {
		v += b
	}
	return v
}
