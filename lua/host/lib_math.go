package host

import (
	"math"

	lua "github.com/yuin/gopher-lua"
)

// openMath gives the state the mathematical functions of Lua 5.1. Chance is not among them: random(name) is the scene's own.
func (s *sandbox) openMath() {
	functions := map[string]lua.LGFunction{}
	for name, f := range map[string]func(float64) float64{
		"abs": math.Abs, "acos": math.Acos, "asin": math.Asin, "atan": math.Atan, "ceil": math.Ceil, "cos": math.Cos, "cosh": math.Cosh,
		"exp": math.Exp, "floor": math.Floor, "log": math.Log, "log10": math.Log10, "sin": math.Sin, "sinh": math.Sinh,
		"sqrt": math.Sqrt, "tan": math.Tan, "tanh": math.Tanh,
		"deg": func(v float64) float64 { return v * (180 / math.Pi) },
		"rad": func(v float64) float64 { return v * (math.Pi / 180) },
	} {
		functions[name] = func(l *lua.LState) int {
			l.Push(lua.LNumber(f(s.number(l, "math."+name, 1))))
			return 1
		}
	}
	for name, f := range map[string]func(a, b float64) float64{"atan2": math.Atan2, "fmod": math.Mod, "pow": math.Pow} {
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
		return math.Pow(a, b)
	}
	v := math.Mod(a, b)
	if v != 0 && (v < 0) != (b < 0) {
		v += b
	}
	return v
}
