package bind

import (
	"math"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
)

// args reads the arguments of one call. Its getters write to dst only where the argument is given, so that a default, or the value
// to be changed, stands in dst beforehand; they report whether it was. What is wrong ends the script.
type args struct {
	env   *Env
	l     *lua.LState
	entry *entry
	self  value       // methods: the value before the colon
	first int         // stack index of the first argument given in order
	table *lua.LTable // the table of keys; nil if none was given
}

// arguments lays out what a call was given and checks its names.
func (e *Env) arguments(l *lua.LState, c *entry) *args {
	a := &args{env: e, l: l, entry: c, first: 1}
	if c.kind != "" {
		ud, _ := l.Get(1).(*lua.LUserData)
		if ud != nil {
			a.self, _ = ud.Value.(value)
		}
		if a.self == nil || a.self.kind() != c.kind {
			_, method, _ := strings.Cut(c.name, ":")
			a.failf("write %s:%s(…), with a colon after a %s, got %s", c.kind, method, c.kind, describe(l.Get(1)))
		}
		a.first = 2
	}
	takesTable := len(c.keys) > 0 || c.list != "" || c.change
	most := a.first - 1 + len(c.params)
	if takesTable {
		most++
	}
	if l.GetTop() > most {
		if _, ok := l.Get(1).(*lua.LUserData); ok && c.kind == "" && l.GetTop() == most+1 && strings.Contains(c.name, ".") {
			a.failf("write %s with a dot, not a colon", c.name)
		}
		a.failf("too many arguments: %s", a.usage())
	}
	for i, p := range c.params {
		if p.Required && l.Get(a.first+i) == lua.LNil {
			a.failf("%s must be given: %s", p.Name, a.usage())
		}
	}
	if !takesTable {
		return a
	}
	given := l.Get(a.first + len(c.params))
	switch t := given.(type) {
	case *lua.LTable:
		a.table = t
	case *lua.LNilType:
	default:
		a.failf("takes a table in braces, got %s: %s", describe(given), a.usage())
	}
	if c.change {
		return a // the value itself checks the keys: see changing
	}
	a.checkKeys(true)
	return a
}

// changing returns the arguments of a "with" as those of the call that made the value, none of them required.
func (a *args) changing(maker string, keys string) *args {
	c := newEntry(call{name: maker + ":with", keys: strings.ReplaceAll(keys, "!", "")})
	b := &args{env: a.env, l: a.l, entry: c, first: a.first, table: a.table}
	b.checkKeys(false)
	return b
}

// checkKeys refuses unknown keys, and missing ones.
func (a *args) checkKeys(needed bool) {
	c := a.entry
	if a.table != nil {
		for k, _ := a.table.Next(lua.LNil); k != lua.LNil; k, _ = a.table.Next(k) {
			a.checkKey(k)
		}
	}
	for _, k := range c.keys {
		if needed && k.Required && a.get(k.Name) == lua.LNil {
			a.failf("%s must be given: %s", k.Name, a.usage())
		}
	}
}

func (a *args) checkKey(k lua.LValue) {
	switch k := k.(type) {
	case lua.LString:
		for _, n := range a.entry.names {
			if n == string(k) {
				return
			}
		}
		if a.entry.list != "" && len(a.entry.names) == 0 {
			a.failf("takes a list of %s, got the key %q", a.entry.list, string(k))
		}
		a.failf("unknown key %q%s", string(k), Hint(string(k), a.entry.names))
	case lua.LNumber:
		if a.entry.list == "" {
			a.failf("takes named values only, got %s without a name%s", describe(a.table.RawGet(k)), Hint("", a.entry.names))
		}
	default:
		a.failf("keys must be names, got %s%s", describe(k), Hint("", a.entry.names))
	}
}

// usage is the shape of a call, for messages.
func (a *args) usage() string {
	c := a.entry
	var parts []string
	for _, p := range c.params {
		parts = append(parts, p.Name)
	}
	var table []string
	for _, k := range c.keys {
		table = append(table, k.Name)
	}
	if c.list != "" {
		table = append(table, c.list+" …")
	}
	braces := "{ " + strings.Join(table, ", ") + " }"
	if c.change {
		braces = "{ key = value, … }"
	}
	switch {
	case len(table) == 0 && !c.change:
		return c.name + "(" + strings.Join(parts, ", ") + ")"
	case len(parts) == 0:
		return c.name + braces
	}
	return c.name + "(" + strings.Join(parts, ", ") + ", " + braces + ")"
}

// failf ends the script with an error of this call.
func (a *args) failf(format string, values ...any) {
	a.env.raise(a.l, a.entry.name+": "+format, values...)
}

// get returns an argument by name: one given in order, or a key of the table. Asking for a name that the call does not
// declare is a bug.
func (a *args) get(name string) lua.LValue {
	for i, p := range a.entry.params {
		if p.Name == name {
			return a.l.Get(a.first + i)
		}
	}
	for _, k := range a.entry.names {
		if k == name {
			if a.table == nil {
				return lua.LNil
			}
			return a.table.RawGetString(name)
		}
	}
	panic(a.entry.name + " declares no argument " + name)
}

// given reports whether an argument was given.
func (a *args) given(name string) bool { return a.get(name) != lua.LNil }

// exclude refuses two arguments that say the same thing.
func (a *args) exclude(one, other string) {
	if a.given(one) && a.given(other) {
		a.failf("give %s or %s, not both", one, other)
	}
}

// limit bounds a number. The zero value admits every finite one.
type limit struct {
	low, high   float64 // with set: admitted from low to high
	set         bool
	above       bool // low itself is not admitted
	unit        string
	unboundedUp bool // messages leave out high, which only keeps slips of the finger out
}

// maxLength is the longest length accepted: a million metres is beyond any stage, and float32 still resolves a tenth of a metre there.
const maxLength = 1e6

func lengthAbove0() limit {
	return limit{low: 0, high: maxLength, set: true, above: true, unit: "metres", unboundedUp: true}
}
func between(low, high float64, unit string) limit {
	return limit{low: low, high: high, set: true, unit: unit}
}
func above0(high float64, unit string) limit {
	return limit{low: 0, high: high, set: true, above: true, unit: unit, unboundedUp: true}
}
func atLeast0(high float64, unit string) limit {
	return limit{low: 0, high: high, set: true, unit: unit, unboundedUp: true}
}

// rule is the limit in words, after "must be".
func (r limit) rule(v float64) string {
	unit := r.unit
	if unit != "" {
		unit = " " + unit
	}
	switch {
	case !r.set:
		return "a finite number" + strings.TrimSuffix(" of"+unit, " of")
	case r.unboundedUp && v > r.high:
		return "at most " + number(r.high) + unit
	case r.unboundedUp && r.above:
		return "> " + number(r.low) + unit
	case r.unboundedUp:
		return "at least " + number(r.low) + unit
	case r.above:
		return "> " + number(r.low) + " and at most " + number(r.high) + unit
	}
	return number(r.low) + " to " + number(r.high) + unit
}

func (r limit) admits(v float64) bool {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return false
	}
	return !r.set || (v >= r.low && v <= r.high && !(r.above && v == r.low))
}

// number reads a number within the limit.
func (a *args) number(name string, dst *float64, r limit) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkNumber(name, v, r)
	return true
}

// checkNumber returns v as a number within the limit; what names it in messages.
func (a *args) checkNumber(what string, v lua.LValue, r limit) float64 {
	n, ok := v.(lua.LNumber)
	if !ok {
		rule := r.rule(0)
		if r.set {
			rule = "a number " + rule
		}
		a.failf("%s must be %s, got %s", what, rule, describe(v))
	}
	if !r.admits(float64(n)) {
		a.failf("%s must be %s, got %s", what, r.rule(float64(n)), describe(v))
	}
	return float64(n)
}

// integer reads a whole number from low to high.
func (a *args) integer(name string, dst *int, low, high int) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkInteger(name, v, low, high)
	return true
}

func (a *args) checkInteger(what string, v lua.LValue, low, high int) int {
	n, ok := v.(lua.LNumber)
	if !ok || float64(n) != math.Trunc(float64(n)) || !between(float64(low), float64(high), "").admits(float64(n)) {
		a.failf("%s must be a whole number from %d to %d, got %s", what, low, high, describe(v))
	}
	return int(n)
}

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
	hint := ""
	if n := Nearest(string(s), words); n != "" {
		hint = "; did you mean \"" + n + "\"?"
	}
	a.failf("%s must be one of %s, got %s%s", what, quoted(words), describe(v), hint)
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

// value reads a value of one kind.
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
