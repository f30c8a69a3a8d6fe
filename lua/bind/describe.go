package bind

import (
	"math"
	"strconv"
	"strings"
	"unicode/utf8"

	lua "github.com/yuin/gopher-lua"
)

// describe is a value as a message shows it: short, and as the scene would write it.
func describe(v lua.LValue) string {
	switch v := v.(type) {
	case *lua.LNilType:
		return "nothing"
	case lua.LBool:
		return strconv.FormatBool(bool(v))
	case lua.LNumber:
		return number(float64(v))
	case lua.LString:
		return quote(string(v))
	case *lua.LTable:
		return describeTable(v, 1)
	case *lua.LFunction:
		return "a function"
	case *lua.LUserData:
		switch x := v.Value.(type) {
		case color:
			return x.text()
		case value:
			return "a " + x.kind()
		case *namespace:
			return "the table " + x.name
		}
	}
	return "a " + v.Type().String()
}

// describeTable shows a few elements of a table.
func describeTable(t *lua.LTable, deep int) string {
	const most = 6
	var b strings.Builder
	b.WriteString("{")
	n := 0
	for k, v := t.Next(lua.LNil); k != lua.LNil; k, v = t.Next(k) {
		if n == most {
			b.WriteString(", …")
			break
		}
		if n > 0 {
			b.WriteString(", ")
		}
		n++
		if s, ok := k.(lua.LString); ok {
			b.WriteString(short(string(s)) + " = ")
		}
		if inner, ok := v.(*lua.LTable); ok {
			if deep == 0 {
				b.WriteString("{…}")
			} else {
				b.WriteString(describeTable(inner, deep-1))
			}
			continue
		}
		b.WriteString(describe(v))
	}
	b.WriteString("}")
	return b.String()
}

// number writes a number as a scene would: whole ones without exponent, others by the fewest digits that read back the same.
func number(v float64) string {
	switch {
	case math.IsNaN(v):
		return "not a number (NaN)"
	case math.IsInf(v, 1):
		return "infinity"
	case math.IsInf(v, -1):
		return "-infinity"
	case v == math.Trunc(v) && math.Abs(v) < 1e15:
		return strconv.FormatFloat(v, 'f', -1, 64)
	}
	return strconv.FormatFloat(v, 'g', -1, 64)
}

// quote is a text in quotes, cut where it is long.
func quote(s string) string { return strconv.Quote(short(s)) }

// short cuts a text to sixty letters.
func short(s string) string {
	const most = 60
	if utf8.RuneCountInString(s) <= most {
		return s
	}
	return string([]rune(s)[:most-1]) + "…"
}

// quoted joins words in quotes by commas, the last two by "or".
func quoted(words []string) string {
	var b strings.Builder
	for i, w := range words {
		switch {
		case i == 0:
		case i == len(words)-1:
			b.WriteString(" or ")
		default:
			b.WriteString(", ")
		}
		b.WriteString(strconv.Quote(w))
	}
	return b.String()
}

func joined(words []string) string { return strings.Join(words, ", ") }
