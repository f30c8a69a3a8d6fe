package host

import (
	"errors"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// patternSteps is how many steps one match may take, apart from what the scene has left.
const patternSteps = 20_000_000

// matching makes a matcher that may take what the scene has left.
func (s *sandbox) matching(text, pattern string) *matcher {
	left := s.limits.Steps - s.meter.used
	return &matcher{text: text, pattern: pattern, steps: int(min(left, patternSteps))}
}

// next finds the next match and counts its steps.
func (s *sandbox) next(l *lua.LState, name string, m *matcher, start int) (from, to int) {
	before := m.steps
	from, to, err := m.find(start)
	s.charge(l, before-m.steps)
	switch {
	case errors.Is(err, errSteps):
		s.meter.stop(name+": the pattern "+quote(m.pattern)+" takes too many steps on this text", nil)
		s.abandon(l)
	case err != nil:
		s.raise(l, "%s: %v", name, err)
	}
	return from, to
}

// captures pushes the captures of a match, or the whole match where the pattern has none and whole asks for it.
func (s *sandbox) captures(l *lua.LState, name string, m *matcher, from, to int, whole bool) int {
	if m.level == 0 && whole {
		l.Push(lua.LString(m.text[from:to]))
		return 1
	}
	for i := range m.level {
		l.Push(s.capture(l, name, m, i))
	}
	return m.level
}

func (s *sandbox) capture(l *lua.LState, name string, m *matcher, i int) lua.LValue {
	c := m.capture[i]
	switch c.length {
	case captureOpen:
		s.raise(l, "%s: '(' without ')' in the pattern %s", name, quote(m.pattern))
	case capturePosition:
		return lua.LNumber(c.from + 1)
	}
	return lua.LString(m.text[c.from : c.from+c.length])
}

// startOf is the place at which find and match begin, as a Go index; -1 beyond the text.
func (s *sandbox) startOf(l *lua.LState, name, text string) int {
	i := s.wholeOr(l, name, 3, 1)
	if i < 0 {
		i = max(len(text)+i+1, 1)
	} else if i == 0 {
		i = 1
	}
	return min(i-1, len(text))
}

func (s *sandbox) stringFind(l *lua.LState) int {
	text, pattern := s.text(l, "string.find", 1), s.text(l, "string.find", 2)
	start := s.startOf(l, "string.find", text)
	if lua.LVAsBool(l.Get(4)) || !strings.ContainsAny(pattern, `^$*+?.([%-`) {
		s.charge(l, len(text)/16+len(pattern)/16)
		at := strings.Index(text[start:], pattern)
		if at < 0 {
			l.Push(lua.LNil)
			return 1
		}
		l.Push(lua.LNumber(start + at + 1))
		l.Push(lua.LNumber(start + at + len(pattern)))
		return 2
	}
	m := s.matching(text, pattern)
	from, to := s.next(l, "string.find", m, start)
	if from < 0 {
		l.Push(lua.LNil)
		return 1
	}
	l.Push(lua.LNumber(from + 1))
	l.Push(lua.LNumber(to))
	return 2 + s.captures(l, "string.find", m, from, to, false)
}

func (s *sandbox) stringMatch(l *lua.LState) int {
	text, pattern := s.text(l, "string.match", 1), s.text(l, "string.match", 2)
	m := s.matching(text, pattern)
	from, to := s.next(l, "string.match", m, s.startOf(l, "string.match", text))
	if from < 0 {
		l.Push(lua.LNil)
		return 1
	}
	return s.captures(l, "string.match", m, from, to, true)
}

// stringGmatch returns an iterator. As in Lua 5.1 a '^' matches itself here, since an anchor would make no sense.
func (s *sandbox) stringGmatch(l *lua.LState) int {
	text, pattern := s.text(l, "string.gmatch", 1), s.text(l, "string.gmatch", 2)
	if strings.HasPrefix(pattern, "^") {
		pattern = "%" + pattern
	}
	at := 0
	l.Push(l.NewFunction(func(l *lua.LState) int {
		if at > len(text) {
			l.Push(lua.LNil)
			return 1
		}
		m := s.matching(text, pattern)
		from, to := s.next(l, "string.gmatch", m, at)
		if from < 0 {
			at = len(text) + 1
			l.Push(lua.LNil)
			return 1
		}
		if at = to; from == to {
			at++
		}
		return s.captures(l, "string.gmatch", m, from, to, true)
	}))
	return 1
}

func (s *sandbox) stringGsub(l *lua.LState) int {
	const name = "string.gsub"
	text, pattern := s.text(l, name, 1), s.text(l, name, 2)
	most := s.wholeOr(l, name, 4, len(text)+1)
	by := l.Get(3)
	switch by.(type) {
	case lua.LString, lua.LNumber, *lua.LTable, *lua.LFunction:
	default:
		s.bad(l, name, 3, "a text, a table or a function")
	}
	var out strings.Builder
	at, count := 0, 0
	m := s.matching(text, pattern)
	anchored := strings.HasPrefix(pattern, "^")
	for count < most {
		from, to := s.next(l, name, m, at)
		if from < 0 {
			break
		}
		count++
		out.WriteString(text[at:from])
		out.WriteString(s.replacement(l, m, by, from, to))
		s.reserveGrowth(l, name, out.Len(), to-at)
		if to > from {
			at = to
		} else {
			if from < len(text) {
				out.WriteByte(text[from])
			}
			at = from + 1
		}
		if anchored || at > len(text) {
			break
		}
	}
	if at < len(text) {
		out.WriteString(text[at:])
	}
	s.reserve(l, name, out.Len())
	l.Push(lua.LString(out.String()))
	l.Push(lua.LNumber(count))
	return 2
}

// reserveGrowth checks a text that grows piece by piece without counting what was counted before.
func (s *sandbox) reserveGrowth(l *lua.LState, name string, size, piece int) {
	if size > maxString {
		s.reserve(l, name, size)
	}
	s.charge(l, piece/64+1)
}

// replacement is what gsub puts in the place of a match.
func (s *sandbox) replacement(l *lua.LState, m *matcher, by lua.LValue, from, to int) string {
	const name = "string.gsub"
	whole := m.text[from:to]
	first := func() lua.LValue {
		if m.level == 0 {
			return lua.LString(whole)
		}
		return s.capture(l, name, m, 0)
	}
	var v lua.LValue
	switch by := by.(type) {
	case lua.LNumber:
		return formatNumber(float64(by))
	case lua.LString:
		return s.template(l, m, string(by), whole)
	case *lua.LTable:
		v = l.GetTable(by, first())
	case *lua.LFunction:
		kept := *m // the function may match anew
		l.Push(by)
		n := s.captures(l, name, m, from, to, true)
		l.Call(n, 1)
		v = l.Get(-1)
		l.Pop(1)
		steps := m.steps
		*m = kept
		m.steps = steps
	}
	switch v := v.(type) {
	case lua.LString:
		return string(v)
	case lua.LNumber:
		return formatNumber(float64(v))
	}
	if lua.LVAsBool(v) {
		s.raise(l, "%s: a replacement must be a text or a number, got a %s", name, kind(v))
	}
	return whole
}

// template fills %0 to %9 of a replacement text.
func (s *sandbox) template(l *lua.LState, m *matcher, by, whole string) string {
	if !strings.Contains(by, "%") {
		return by
	}
	var b strings.Builder
	for i := 0; i < len(by); i++ {
		if by[i] != '%' {
			b.WriteByte(by[i])
			continue
		}
		i++
		switch {
		case i >= len(by):
			s.raise(l, "string.gsub: the replacement ends with '%%'; a percent sign is written %%%%")
		case by[i] == '0', by[i] == '1' && m.level == 0:
			b.WriteString(whole)
		case by[i] >= '1' && by[i] <= '9':
			if int(by[i]-'1') >= m.level {
				s.raise(l, "string.gsub: the replacement asks for capture %%%c, the pattern has %d", by[i], m.level)
			}
			b.WriteString(joinedText(s.capture(l, "string.gsub", m, int(by[i]-'1'))))
		default:
			b.WriteByte(by[i])
		}
		if b.Len() > maxString {
			s.reserve(l, "string.gsub", b.Len())
		}
	}
	return b.String()
}
