package bind

import (
	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
)

// boolean reads true or false.
func (a *args) boolean(name string, dst *bool) bool {
	switch v := a.get(name).(type) {
	case *lua.LNilType:
		return false
	case lua.LBool:
		*dst = bool(v)
	default:
		a.failf("%s must be true or false, got %s", name, describe(v))
	}
	return true
}

// text reads a text of at most 4096 bytes.
func (a *args) text(name string, dst *string) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkText(name, v)
	return true
}

func (a *args) checkText(what string, v lua.LValue) string {
	s, ok := v.(lua.LString)
	if !ok {
		a.failf("%s must be a text in quotes, got %s", what, describe(v))
	}
	if len(s) > 4096 {
		a.failf("%s must be at most 4096 bytes long, got %d", what, len(s))
	}
	return string(s)
}

// oneOf reads one of the words, as its index.
func (a *args) oneOf(name string, words []string, dst *int) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkWord(name, v, words)
	return true
}

func (a *args) checkWord(what string, v lua.LValue, words []string) int {
	s, ok := v.(lua.LString)
	for i, w := range words {
		if ok && string(s) == w {
			return i
		}
	}
	if !ok {
		a.failf("%s must be one of %s, got %s", what, quoted(words), describe(v))
	}
	a.failf("%s must be one of %s, got %s%s", what, quoted(words), describe(v), Guess(string(s), words))
	return 0
}

// point reads {x, y, z}.
func (a *args) point(name string, dst *[3]float64, r limit) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkPoint(name, v, r)
	return true
}

func (a *args) checkPoint(what string, v lua.LValue, r limit) (p [3]float64) {
	a.checkNumbers(what, v, p[:], "{x, y, z}", r)
	return p
}

// pair reads two numbers.
func (a *args) pair(name, shape string, dst *[2]float64, r limit) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	a.checkNumbers(name, v, dst[:], shape, r)
	return true
}

// checkNumbers reads a list of exactly len(dst) numbers, each within the limit; shape shows what is meant.
func (a *args) checkNumbers(what string, v lua.LValue, dst []float64, shape string, r limit) {
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("%s must be %s, got %s", what, shape, describe(v))
	}
	if t.Len() != len(dst) {
		a.failf("%s must be %s, got %s", what, shape, describe(v))
	}
	for k, _ := t.Next(lua.LNil); k != lua.LNil; k, _ = t.Next(k) {
		if k.Type() != lua.LTNumber {
			a.failf("%s must be %s, got the key %s", what, shape, describe(k))
		}
	}
	for i := range dst {
		n, ok := t.RawGetInt(i + 1).(lua.LNumber)
		if !ok {
			a.failf("%s must be %s, got %s", what, shape, describe(v))
		}
		if !r.admits(float64(n)) {
			a.failf("%s must have numbers that are each %s, got %s", what, r.rule(float64(n)), describe(v))
		}
		dst[i] = float64(n)
	}
}

// color reads a colour with no component above most.
func (a *args) color(name string, dst *tint.RGB, most float32) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkColor(name, v, most)
	return true
}

func (a *args) checkColor(what string, v lua.LValue, most float32) tint.RGB {
	c, ok := valueOf[color](v)
	if !ok {
		a.failf("%s must be a colour, got %s%s", what, describe(v), colorAdvice(v))
	}
	if c.R > most || c.G > most || c.B > most {
		a.failf("%s must have components of at most %s, got %s", what, number(float64(most)), c.text())
	}
	return c.RGB
}

// list returns the elements of a list, at most many of them, which must have neither gaps nor names.
func (a *args) list(what string, v lua.LValue, of string, many int) []lua.LValue {
	t, ok := v.(*lua.LTable)
	if !ok {
		a.failf("%s must be a list of %s, got %s", what, of, describe(v))
	}
	n := t.Len()
	if n > many {
		a.failf("%s must have at most %d %s, got %d", what, many, of, n)
	}
	out := make([]lua.LValue, 0, n)
	for k, x := t.Next(lua.LNil); k != lua.LNil; k, x = t.Next(k) {
		if i, ok := k.(lua.LNumber); !ok || i != lua.LNumber(len(out)+1) {
			a.failf("%s must be a list of %s without gaps or names, got the key %s", what, of, describe(k))
		}
		out = append(out, x)
	}
	return out
}

// valueArg reads a value of one kind.
func valueArg[T value](a *args, name, kind string, dst *T) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	x, ok := valueOf[T](v)
	if !ok {
		a.failf("%s must be a %s, got %s", name, kind, describe(v))
	}
	*dst = x
	return true
}
