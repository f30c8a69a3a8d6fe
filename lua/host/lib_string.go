package host

import (
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// openString gives the state the string library of Lua 5.1. Case and classes are those of ASCII; lengths count bytes.
func (s *sandbox) openString() {
	functions := map[string]lua.LGFunction{
		"byte": s.stringByte, "char": s.stringChar, "find": s.stringFind, "format": s.luaFormat, "gmatch": s.stringGmatch,
		"gsub": s.stringGsub, "match": s.stringMatch, "rep": s.stringRep, "sub": s.stringSub,
		"len": func(l *lua.LState) int {
			l.Push(lua.LNumber(len(s.text(l, "string.len", 1))))
			return 1
		},
		"lower":   s.mapped("string.lower", 'A', 'Z'),
		"upper":   s.mapped("string.upper", 'a', 'z'),
		"reverse": s.stringReverse,
	}
	inner := s.seal("string", functions, nil, map[string]string{"dump": "a scene is text alone", "gfind": "it is called string.gmatch"})
	s.openTexts(inner)
}

// mapped makes lower or upper: letters from first to last change their case.
func (s *sandbox) mapped(name string, first, last byte) lua.LGFunction {
	return func(l *lua.LState) int {
		text := s.text(l, name, 1)
		s.reserve(l, name, len(text))
		b := []byte(text)
		for i, c := range b {
			if c >= first && c <= last {
				b[i] = c ^ 0x20
			}
		}
		l.Push(lua.LString(b))
		return 1
	}
}

func (s *sandbox) stringReverse(l *lua.LState) int {
	text := s.text(l, "string.reverse", 1)
	s.reserve(l, "string.reverse", len(text))
	b := make([]byte, len(text))
	for i := range b {
		b[len(b)-1-i] = text[i]
	}
	l.Push(lua.LString(b))
	return 1
}

// clip turns the places from and to of a text of n bytes, negative ones counted from its end, into a Go range.
func clip(from, to, n int) (int, int) {
	if from < 0 {
		from = max(n+from+1, 1)
	} else if from == 0 {
		from = 1
	}
	if to < 0 {
		to = n + to + 1
	}
	to = min(to, n)
	if from > to {
		return 0, 0
	}
	return from - 1, to
}

func (s *sandbox) stringSub(l *lua.LState) int {
	text := s.text(l, "string.sub", 1)
	from, to := clip(s.whole(l, "string.sub", 2), s.wholeOr(l, "string.sub", 3, -1), len(text))
	l.Push(lua.LString(text[from:to]))
	return 1
}

func (s *sandbox) stringByte(l *lua.LState) int {
	text := s.text(l, "string.byte", 1)
	first := s.wholeOr(l, "string.byte", 2, 1)
	from, to := clip(first, s.wholeOr(l, "string.byte", 3, first), len(text))
	if to-from > maxSpread {
		s.raise(l, "string.byte: %s values are too many, at most %s are accepted", grouped(int64(to-from)), grouped(maxSpread))
	}
	s.charge(l, to-from)
	for _, c := range []byte(text[from:to]) {
		l.Push(lua.LNumber(c))
	}
	return to - from
}

func (s *sandbox) stringChar(l *lua.LState) int {
	b := make([]byte, l.GetTop())
	for i := range b {
		v := s.whole(l, "string.char", i+1)
		if v < 0 || v > 255 {
			s.bad(l, "string.char", i+1, "0 to 255")
		}
		b[i] = byte(v)
	}
	l.Push(lua.LString(b))
	return 1
}

func (s *sandbox) stringRep(l *lua.LState) int {
	text, n := s.text(l, "string.rep", 1), max(s.whole(l, "string.rep", 2), 0)
	if len(text) > 0 && n > maxString/len(text) {
		n = maxString/len(text) + 1
		s.reserve(l, "string.rep", maxString+1)
	}
	if len(text) == 0 {
		n = 0
	}
	s.reserve(l, "string.rep", n*len(text))
	l.Push(lua.LString(strings.Repeat(text, n)))
	return 1
}
