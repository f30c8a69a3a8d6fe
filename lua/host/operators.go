package host

import (
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// openTexts gives texts their methods, and the arithmetic of those that read as numbers.
func (s *sandbox) openTexts(methods *lua.LTable) {
	l := s.main
	meta := l.CreateTable(0, 8)
	meta.RawSetString("__index", methods)
	meta.RawSetString("__metatable", lua.LFalse)
	for event, operator := range map[string]string{"__add": "+", "__sub": "-", "__mul": "*", "__div": "/", "__mod": "%", "__pow": "^"} {
		meta.RawSetString(event, l.NewFunction(s.arithmetic(event, operator)))
	}
	meta.RawSetString("__unm", l.NewFunction(func(l *lua.LState) int {
		v, ok := parseNumber(l.Get(1).String())
		if !ok {
			s.raise(l, "the text %q is no number and cannot be negated", show(l.Get(1)))
		}
		l.Push(lua.LNumber(-v))
		return 1
	}))
	l.SetMetatable(lua.LString(""), meta)
}

// luaJoin is the operator "..". It goes from right to left, as metamethods may ask.
func (s *sandbox) luaJoin(l *lua.LState) int {
	n := l.GetTop()
	acc := l.Get(n)
	for at := n - 1; at >= 1; {
		if joinable(acc) && joinable(l.Get(at)) {
			first := at
			size := writtenSize(acc)
			for ; first >= 1 && joinable(l.Get(first)); first-- {
				size += writtenSize(l.Get(first))
			}
			s.reserve(l, "'..'", size)
			var b strings.Builder
			b.Grow(size)
			for i := first + 1; i <= at; i++ {
				b.WriteString(joinedText(l.Get(i)))
			}
			b.WriteString(joinedText(acc))
			acc, at = lua.LString(b.String()), first
			continue
		}
		left := l.Get(at)
		f := s.joinEvent(left)
		if f == lua.LNil {
			f = s.joinEvent(acc)
		}
		if f == lua.LNil {
			place, bad := at, left
			if joinable(left) {
				place, bad = at+1, acc
			}
			l.Error(lua.LString(s.atLine(joinFaultOf(place, n, bad))), 0)
		}
		l.Push(f)
		l.Push(left)
		l.Push(acc)
		l.Call(2, 1)
		acc = l.Get(-1)
		l.Pop(1)
		at--
	}
	l.Push(acc)
	return 1
}

func (s *sandbox) joinEvent(v lua.LValue) lua.LValue {
	if m, ok := s.metatable(v).(*lua.LTable); ok {
		return m.RawGetString("__concat")
	}
	return lua.LNil
}

func joinable(v lua.LValue) bool {
	switch v.(type) {
	case lua.LString, lua.LNumber:
		return true
	}
	return false
}

// writtenSize is at least the length of joinedText.
func writtenSize(v lua.LValue) int {
	if t, ok := v.(lua.LString); ok {
		return len(t)
	}
	return 24
}

func joinedText(v lua.LValue) string {
	switch v := v.(type) {
	case lua.LString:
		return string(v)
	case lua.LNumber:
		return formatNumber(float64(v))
	}
	return ""
}

// arithmetic makes the metamethod that lets texts which read as numbers take part in arithmetic.
func (s *sandbox) arithmetic(event, operator string) lua.LGFunction {
	return func(l *lua.LState) int {
		var v [2]float64
		for i := range v {
			switch x := l.Get(i + 1).(type) {
			case lua.LNumber:
				v[i] = float64(x)
				continue
			case lua.LString:
				f, ok := parseNumber(string(x))
				if !ok {
					s.raise(l, "the text %q is no number, and '%s' needs numbers", show(x), operator)
				}
				v[i] = f
				continue
			}
			other := l.Get(2 - i)
			// The right operand's own metamethod was passed over for the text on the left.
			if m, ok := s.metatable(l.Get(i + 1)).(*lua.LTable); ok {
				if f := m.RawGetString(event); f != lua.LNil {
					l.Push(f)
					l.Push(l.Get(1))
					l.Push(l.Get(2))
					l.Call(2, 1)
					return 1
				}
			}
			s.raise(l, "%s and %s cannot take part in '%s': it needs numbers", article(kind(l.Get(i+1))), article(kind(other)), operator)
		}
		l.Push(lua.LNumber(compute(operator, v[0], v[1])))
		return 1
	}
}
