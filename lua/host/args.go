package host

import (
	"fmt"
	"math"

	lua "github.com/yuin/gopher-lua"
)

// raise ends the script, or its pcall, with an error at the line that called.
func (s *sandbox) raise(l *lua.LState, format string, args ...any) {
	l.Error(lua.LString(s.placed(fmt.Sprintf(format, args...))), 0)
}

// placed puts the line that an author can change before a message, and the line of the program's own module, if one was at work, behind it.
func (s *sandbox) placed(msg string) string {
	calls := s.calls(traceLength)
	at := blame(calls)
	if at.File == "" {
		return msg
	}
	if calls[0] != at {
		msg += fmt.Sprintf(" (in %s:%d)", calls[0].File, calls[0].Line)
	}
	return fmt.Sprintf("%s:%d: %s", at.File, at.Line, msg)
}

// bad complains about an argument.
func (s *sandbox) bad(l *lua.LState, function string, n int, want string) {
	got := "nothing"
	if n <= l.GetTop() {
		got = kind(l.Get(n))
		switch v := l.Get(n).(type) {
		case lua.LString:
			got = "the text " + fmt.Sprintf("%q", show(v))
		case lua.LNumber:
			got = show(v)
		case *lua.LNilType:
			got = "nil"
		default:
			got = "a " + got
		}
	}
	s.raise(l, "%s: argument %d must be %s, got %s", function, n, want, got)
}

func (s *sandbox) any(l *lua.LState, function string, n int) lua.LValue {
	if l.GetTop() < n {
		s.bad(l, function, n, "given")
	}
	return l.Get(n)
}

func (s *sandbox) table(l *lua.LState, function string, n int) *lua.LTable {
	t, ok := l.Get(n).(*lua.LTable)
	if !ok {
		s.bad(l, function, n, "a table")
	}
	return t
}

// text takes a string, or a number as it would be written.
func (s *sandbox) text(l *lua.LState, function string, n int) string {
	switch v := l.Get(n).(type) {
	case lua.LString:
		return string(v)
	case lua.LNumber:
		return formatNumber(float64(v))
	}
	s.bad(l, function, n, "a text")
	return ""
}

// number takes a number, or a string that reads as one.
func (s *sandbox) number(l *lua.LState, function string, n int) float64 {
	switch v := l.Get(n).(type) {
	case lua.LNumber:
		return float64(v)
	case lua.LString:
		if f, ok := parseNumber(string(v)); ok {
			return f
		}
	}
	s.bad(l, function, n, "a number")
	return 0
}

// whole takes a number and cuts its fraction off, within ± 2^53.
func (s *sandbox) whole(l *lua.LState, function string, n int) int {
	f := s.number(l, function, n)
	if math.IsNaN(f) {
		s.bad(l, function, n, "a number")
	}
	return int(max(-1<<53, min(1<<53, math.Trunc(f))))
}

// wholeOr is whole with a value for an argument that is not given.
func (s *sandbox) wholeOr(l *lua.LState, function string, n, otherwise int) int {
	if l.Get(n) == lua.LNil {
		return otherwise
	}
	return s.whole(l, function, n)
}

// charge counts work and ends the script where it was too much.
func (s *sandbox) charge(l *lua.LState, steps int) {
	if !s.meter.charge(int64(steps)) {
		s.abandon(l)
	}
}

// reserve is asked before a string of n bytes is made.
func (s *sandbox) reserve(l *lua.LState, function string, n int) {
	if n > maxString {
		s.raise(l, "%s: the text would be longer than %d MiB", function, maxString>>20)
	}
	if !s.meter.reserve(int64(n)) {
		s.abandon(l)
	}
}
