package host

import (
	"fmt"
	"io"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// openBase gives the state the basic functions of Lua 5.1, each our own.
func (s *sandbox) openBase() {
	l := s.main
	pairs := l.NewFunction(s.luaNext)
	ipairs := l.NewFunction(s.ipairsStep)
	for _, f := range []struct {
		name string
		run  lua.LGFunction
	}{
		{"assert", s.luaAssert}, {"error", s.luaError}, {"getmetatable", s.luaGetMetatable}, {"setmetatable", s.luaSetMetatable},
		{"next", s.luaNext}, {"pcall", s.luaPcall}, {"xpcall", s.luaXpcall}, {"print", s.luaPrint}, {"rawequal", s.luaRawEqual},
		{"rawget", s.luaRawGet}, {"rawset", s.luaRawSet}, {"select", s.luaSelect}, {"tonumber", s.luaToNumber}, {"tostring", s.luaToString},
		{"type", s.luaType}, {"unpack", s.luaUnpack}, {"require", s.luaRequire}, {joinName, s.luaJoin},
		{"pairs", func(l *lua.LState) int {
			t := s.table(l, "pairs", 1)
			l.Push(pairs)
			l.Push(t)
			l.Push(lua.LNil)
			return 3
		}},
		{"ipairs", func(l *lua.LState) int {
			t := s.table(l, "ipairs", 1)
			l.Push(ipairs)
			l.Push(t)
			l.Push(lua.LNumber(0))
			return 3
		}},
	} {
		s.api.RawSetString(f.name, l.NewFunction(f.run))
	}
	s.api.RawSetString("_VERSION", lua.LString("Lua 5.1"))
}

func (s *sandbox) luaAssert(l *lua.LState) int {
	if lua.LVAsBool(s.any(l, "assert", 1)) {
		return l.GetTop()
	}
	if l.GetTop() < 2 || l.Get(2) == lua.LNil {
		s.raise(l, "assertion failed")
	}
	l.Error(l.Get(2), 0)
	return 0
}

func (s *sandbox) luaError(l *lua.LState) int {
	level := s.wholeOr(l, "error", 2, 1)
	msg, ok := l.Get(1).(lua.LString)
	if ok && level > 0 {
		if at := s.position(min(level, traceLength) - 1); at.File != "" {
			msg = lua.LString(fmt.Sprintf("%s:%d: %s", at.File, at.Line, string(msg)))
		}
	}
	if ok {
		l.Error(msg, 0)
	}
	l.Error(l.Get(1), 0)
	return 0
}

func (s *sandbox) luaGetMetatable(l *lua.LState) int {
	l.Push(l.GetMetatable(s.any(l, "getmetatable", 1)))
	return 1
}

func (s *sandbox) luaSetMetatable(l *lua.LState) int {
	t := s.table(l, "setmetatable", 1)
	if m, ok := t.Metatable.(*lua.LTable); ok && m.RawGetString("__metatable") != lua.LNil {
		s.raise(l, "setmetatable: the metatable of this table is protected")
	}
	switch m := l.Get(2).(type) {
	case *lua.LTable:
		t.Metatable = m
	case *lua.LNilType:
		if l.GetTop() < 2 {
			s.bad(l, "setmetatable", 2, "a table or nil")
		}
		t.Metatable = m
	default:
		s.bad(l, "setmetatable", 2, "a table or nil")
	}
	l.Push(t)
	return 1
}

// luaNext goes through the list part and then the other keys in the order in which they were first set.
func (s *sandbox) luaNext(l *lua.LState) int {
	key, value := s.table(l, "next", 1).Next(l.Get(2))
	l.Push(key)
	if key == lua.LNil {
		return 1
	}
	l.Push(value)
	return 2
}

func (s *sandbox) ipairsStep(l *lua.LState) int {
	t, i := s.table(l, "ipairs", 1), s.whole(l, "ipairs", 2)+1
	v := t.RawGet(lua.LNumber(i))
	if v == lua.LNil {
		l.Push(lua.LNil)
		return 1
	}
	l.Push(lua.LNumber(i))
	l.Push(v)
	return 2
}

func (s *sandbox) luaRawEqual(l *lua.LState) int {
	l.Push(lua.LBool(l.RawEqual(s.any(l, "rawequal", 1), s.any(l, "rawequal", 2))))
	return 1
}

func (s *sandbox) luaRawGet(l *lua.LState) int {
	l.Push(s.table(l, "rawget", 1).RawGet(s.any(l, "rawget", 2)))
	return 1
}

func (s *sandbox) luaRawSet(l *lua.LState) int {
	t, key, value := s.table(l, "rawset", 1), s.any(l, "rawset", 2), s.any(l, "rawset", 3)
	if m, ok := t.Metatable.(*lua.LTable); ok && m.RawGetString("__metatable") == lua.LFalse {
		if t != s.env || s.api.RawGet(key) != lua.LNil {
			s.raise(l, "rawset: the names of the scene language cannot be changed")
		}
	}
	l.RawSet(t, key, value)
	l.Push(t)
	return 1
}

func (s *sandbox) luaSelect(l *lua.LState) int {
	if v, ok := l.Get(1).(lua.LString); ok && v == "#" {
		l.Push(lua.LNumber(l.GetTop() - 1))
		return 1
	}
	n, count := s.whole(l, "select", 1), l.GetTop()-1
	if n < 0 {
		n = count + n + 1
	}
	if n < 1 {
		s.bad(l, "select", 1, `"#" or a place from 1`)
	}
	s.charge(l, max(count-n, 0)/8)
	return max(count-n+1, 0)
}

func (s *sandbox) luaToNumber(l *lua.LState) int {
	base := s.wholeOr(l, "tonumber", 2, 10)
	if base < 2 || base > 36 {
		s.bad(l, "tonumber", 2, "a base of 2 to 36")
	}
	var out lua.LValue = lua.LNil
	switch v := s.any(l, "tonumber", 1).(type) {
	case lua.LNumber:
		out = v
	case lua.LString:
		s.charge(l, len(v)/16)
		if base == 10 {
			if f, ok := parseNumber(string(v)); ok {
				out = lua.LNumber(f)
			}
		} else if f, ok := parseBase(string(v), base); ok {
			out = lua.LNumber(f)
		}
	}
	l.Push(out)
	return 1
}

// parseBase reads a whole number in a base of 2 to 36.
func parseBase(text string, base int) (float64, bool) {
	text = strings.ToLower(strings.Trim(text, " \t\n\r\v\f"))
	digits := strings.TrimPrefix(text, "-")
	if base == 16 {
		digits = strings.TrimPrefix(digits, "0x")
	}
	v := 0.0
	for _, d := range digits {
		at := strings.IndexRune("0123456789abcdefghijklmnopqrstuvwxyz"[:base], d)
		if at < 0 {
			return 0, false
		}
		v = float64(v*float64(base)) + float64(at)
	}
	if strings.HasPrefix(text, "-") {
		v = -v
	}
	return v, digits != ""
}

func (s *sandbox) luaToString(l *lua.LState) int {
	l.Push(lua.LString(s.written(l, s.any(l, "tostring", 1))))
	return 1
}

// written is tostring: numbers as C's %.14g, no addresses.
func (s *sandbox) written(l *lua.LState, v lua.LValue) string {
	switch v := v.(type) {
	case lua.LString:
		return string(v)
	case lua.LNumber:
		return formatNumber(float64(v))
	case lua.LBool:
		return v.String()
	case *lua.LNilType:
		return "nil"
	}
	m, ok := s.metatable(v).(*lua.LTable)
	if !ok {
		return kind(v)
	}
	f := m.RawGetString("__tostring")
	if f == lua.LNil {
		return kind(v)
	}
	l.Push(f)
	l.Push(v)
	l.Call(1, 1)
	out := l.Get(-1)
	l.Pop(1)
	text, ok := out.(lua.LString)
	if !ok {
		s.raise(l, "tostring: __tostring must return a text, got a %s", kind(out))
	}
	return string(text)
}

// metatable is a value's own metatable, whatever __metatable says.
func (s *sandbox) metatable(v lua.LValue) lua.LValue {
	switch v := v.(type) {
	case *lua.LTable:
		return v.Metatable
	case *lua.LUserData:
		return v.Metatable
	}
	return lua.LNil
}

func (s *sandbox) luaType(l *lua.LState) int {
	l.Push(lua.LString(kind(s.any(l, "type", 1))))
	return 1
}

func (s *sandbox) luaUnpack(l *lua.LState) int {
	t := s.table(l, "unpack", 1)
	from := s.wholeOr(l, "unpack", 2, 1)
	to := s.wholeOr(l, "unpack", 3, t.Len())
	if to-from >= maxSpread {
		s.raise(l, "unpack: %s values are too many, at most %s are accepted", grouped(int64(to-from)+1), grouped(maxSpread))
	}
	s.charge(l, max(to-from, 0))
	for i := from; i <= to; i++ {
		l.Push(t.RawGet(lua.LNumber(i)))
	}
	return max(to-from+1, 0)
}

// printer is where print writes, up to a bound.
type printer struct {
	w       io.Writer
	written int
}

func (s *sandbox) luaPrint(l *lua.LState) int {
	top := l.GetTop()
	parts := make([]string, 0, top)
	for i := 1; i <= top; i++ {
		parts = append(parts, plain(s.written(l, l.Get(i))))
	}
	p := s.printer
	if p.w == nil || p.written > maxPrinted {
		return 0
	}
	line := strings.Join(parts, "\t") + "\n"
	if p.written += len(line); p.written > maxPrinted {
		line = "print: the rest of the output is left out\n"
	}
	// A scene is not to blame for a terminal that is gone, and its plan does not depend on it.
	_, _ = io.WriteString(p.w, line)
	return 0
}
