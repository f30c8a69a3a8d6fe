package host

import (
	"fmt"
	"regexp"
	"slices"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/lua/bind"
)

// The virtual machine's messages, which name no variable.
var (
	indexFault   = regexp.MustCompile(`(?s)^attempt to index a non-table object\((\w+)\) with key '(.*)'$`)
	arithFault   = regexp.MustCompile(`^cannot perform (\w+) operation between (\w+) and (\w+)$`)
	compareFault = regexp.MustCompile(`^attempt to compare (\w+) with (\w+)$`)
	forFault     = regexp.MustCompile(`^for statement (init|limit|step) must be a number$`)
)

// operators are the signs of the virtual machine's words for them.
var operators = map[string]string{"add": "+", "sub": "-", "mul": "*", "div": "/", "mod": "%", "pow": "^"}

// explain puts a message of the virtual machine into plain words and names the variable where the source and the running
// function tell. Other messages come back as they are. It is called while the function that failed is still on the stack.
func (s *sandbox) explain(l *lua.LState, msg string) string {
	at, rest := splitPlace(msg)
	rest = strings.TrimSpace(rest)
	c := s.chunks[at.File]
	if c == nil {
		if rest == "stack overflow" || rest == "registry overflow" {
			return s.placed(overflow(rest))
		}
		return msg
	}
	on := c.notes.lines[at.Line]
	v := viewOf(l, s)
	text := ""
	switch {
	case rest == "stack overflow" || rest == "registry overflow":
		text = overflow(rest)
	case rest == "attempt to call a non-function object":
		text = v.callFault(on)
	case rest == "__unm undefined":
		text = v.unaryFault(on, noteMinus, "no number", "cannot be negated")
	case rest == "__len undefined":
		text = v.unaryFault(on, noteLen, "no table and no text", "has no length")
	case rest == "table index is nil":
		text = "a table key is nil"
	case rest == "table index is NaN":
		text = "a table key is not a number (0/0)"
	case strings.HasPrefix(rest, "too many recursions in"):
		text = "metatables refer to each other in a circle"
	case strings.HasPrefix(rest, joinFault):
		text = joinText(on, rest)
	case indexFault.MatchString(rest):
		m := indexFault.FindStringSubmatch(rest)
		text = v.indexFault(on, m[1], m[2])
	case arithFault.MatchString(rest):
		m := arithFault.FindStringSubmatch(rest)
		text = v.pairFault(on, noteArith, operators[m[1]], m[2], m[3])
	case compareFault.MatchString(rest):
		m := compareFault.FindStringSubmatch(rest)
		text = v.compareFault(on, m[1], m[2])
	case forFault.MatchString(rest):
		text = v.forFault(on, forFault.FindStringSubmatch(rest)[1])
	default:
		return msg
	}
	return s.placed(text)
}

func overflow(rest string) string {
	if rest == "stack overflow" {
		return "functions call each other too deep: does a function call itself without end?"
	}
	return "too many values at once: put them into a table"
}

// view looks up variables in the function that failed.
type view struct {
	s     *sandbox
	l     *lua.LState
	frame *lua.Debug
	fn    *lua.LFunction
}

// viewOf finds the innermost Lua function.
func viewOf(l *lua.LState, s *sandbox) view {
	v := view{s: s, l: l}
	for level := 0; level < 8; level++ {
		dbg, ok := l.GetStack(level)
		if !ok {
			break
		}
		f, err := l.GetInfo("f", dbg, lua.LNil)
		if err != nil {
			break
		}
		if fn, ok := f.(*lua.LFunction); ok && !fn.IsG {
			v.frame, v.fn = dbg, fn
			break
		}
	}
	return v
}

// variable returns the value of a name in the function; ok is false where it cannot be seen. The library shows a local only from the
// second instruction after its declaration on.
func (v view) variable(name string) (found lua.LValue, ok bool) {
	if v.fn == nil {
		return nil, false
	}
	for i := 1; i <= 200; i++ {
		n, value := v.l.GetLocal(v.frame, i)
		if n == "" {
			break
		}
		if n == name {
			found, ok = value, value != nil
		}
	}
	if ok {
		return found, true
	}
	for i := 1; i <= len(v.fn.Upvalues); i++ {
		if v.fn.Upvalues[i-1] == nil {
			continue
		}
		if n, value := v.l.GetUpvalue(v.fn, i); n == name && value != nil {
			return value, true
		}
	}
	if value := v.s.env.RawGetString(name); value != lua.LNil {
		return value, true
	}
	value := v.s.api.RawGetString(name)
	return value, value != lua.LNil
}

// path returns the value of a description such as lights.key, and the table that it was last looked up in. Metatables are not asked.
func (v view) path(name string) (value lua.LValue, holder *lua.LTable, last string, ok bool) {
	var parts []string
	if rest, is := strings.CutPrefix(name, requireHead); is {
		module, fields, _ := strings.Cut(rest, requireTail)
		parts = strings.Split(fields, ".") // the first is empty
		value, ok = v.s.loaded[module]
	} else {
		parts = strings.Split(name, ".")
		value, ok = v.variable(parts[0])
	}
	if !ok {
		return nil, nil, "", false
	}
	for _, p := range parts[1:] {
		t, isTable := value.(*lua.LTable)
		if !isTable || !identifier(p) {
			return nil, nil, "", false
		}
		value, holder, last = t.RawGetString(p), t, p
	}
	return value, holder, last, true
}

// likely returns the names among the candidates that can be what failed: all whose value is of the kind, or, where none can be
// seen to be, all whose value cannot be seen.
func (v view) likely(names []string, fits func(lua.LValue) bool) []string {
	var sure, open []string
	for _, n := range names {
		value, _, _, ok := v.path(n)
		switch {
		case n == "" || !ok:
			open = append(open, n)
		case fits(value):
			sure = append(sure, n)
		}
	}
	out := sure
	if len(out) == 0 {
		out = open
	}
	slices.Sort(out)
	out = slices.Compact(out)
	if slices.Contains(out, "") {
		return nil
	}
	return out
}

// either writes one or more names as a subject.
func either(names []string, otherwise string) string {
	switch len(names) {
	case 0:
		return otherwise
	case 1:
		return "'" + names[0] + "'"
	}
	return "one of '" + strings.Join(names, "', '") + "'"
}

// article puts a or an before a kind; nil stands alone.
func article(kind string) string {
	if kind == "nil" {
		return kind
	}
	return "a " + kind
}

// typed makes a test for values of a kind.
func typed(kindName string) func(lua.LValue) bool {
	return func(v lua.LValue) bool { return kind(v) == kindName }
}

// near hints at the key that was meant where the description's last key is missing from its table.
func (v view) near(names []string) string {
	if len(names) != 1 {
		return ""
	}
	_, holder, last, ok := v.path(names[0])
	if !ok || holder == nil || holder.RawGetString(last) != lua.LNil {
		return ""
	}
	var known []string
	for key, _ := holder.Next(lua.LNil); key != lua.LNil && len(known) < 1000; key, _ = holder.Next(key) {
		if k, ok := key.(lua.LString); ok {
			known = append(known, string(k))
		}
	}
	slices.Sort(known)
	return bind.Guess(short(last), known)
}

func (v view) indexFault(on []note, kindName, key string) string {
	var names []string
	for _, n := range on {
		if n.kind == noteIndex && (n.key == key || n.key == "") {
			names = append(names, n.names[0])
		}
	}
	found := v.likely(names, typed(kindName))
	return fmt.Sprintf("%s is %s, so it has no field '%s'%s", either(found, "a value on this line"), article(kindName), short(plain(key)), v.near(found))
}

func (v view) callFault(on []note) string {
	var names []string
	each := ""
	for _, n := range on {
		switch n.kind {
		case noteCall:
			names = append(names, n.names[0])
		case noteEach:
			each = n.names[0]
		}
	}
	if each != "" {
		if value, _, _, ok := v.path(each); ok && !v.s.callable(value) {
			return fmt.Sprintf("'%s' is %s, and 'for … in' needs an iterator: write pairs(%s) or ipairs(%s)", each, article(kind(value)), each, each)
		}
	}
	found := v.likely(names, func(x lua.LValue) bool { return !v.s.callable(x) })
	if len(found) == 1 {
		if value, _, _, ok := v.path(found[0]); ok {
			return fmt.Sprintf("'%s' is %s and cannot be called%s", found[0], article(kind(value)), v.near(found))
		}
	}
	return fmt.Sprintf("%s is no function and cannot be called", either(found, "a value on this line"))
}

func (v view) unaryFault(on []note, what noteKind, is, cannot string) string {
	var names []string
	for _, n := range on {
		if n.kind == what {
			names = append(names, n.names[0])
		}
	}
	numeric := func(x lua.LValue) bool { return kind(x) != "table" && (what != noteMinus || kind(x) != "number") }
	found := v.likely(names, numeric)
	if len(found) == 1 {
		if value, _, _, ok := v.path(found[0]); ok {
			return fmt.Sprintf("'%s' is %s and %s%s", found[0], article(kind(value)), cannot, v.near(found))
		}
	}
	return fmt.Sprintf("%s is %s and %s", either(found, "a value on this line"), is, cannot)
}

// pairFault is a binary operation on values of the two kinds.
func (v view) pairFault(on []note, what noteKind, operator, left, right string) string {
	bad := left
	side := 0
	if left == "number" || left == "string" && right != "number" && right != "string" {
		bad, side = right, 1
	}
	var names []string
	for _, n := range on {
		if n.kind == what && n.key == operator {
			names = append(names, n.names[side])
		}
	}
	found := v.likely(names, typed(bad))
	return fmt.Sprintf("%s is %s, and '%s' needs numbers%s", either(found, "a value on this line"), article(bad), operator, v.near(found))
}

func (v view) compareFault(on []note, left, right string) string {
	var pairs []string
	for _, n := range on {
		if n.kind != noteCompare || n.key == "==" || n.key == "~=" || n.names[0] == "" && n.names[1] == "" {
			continue
		}
		one, two := n.names[0], n.names[1]
		if n.key == ">" || n.key == ">=" { // the compiler turns these round
			one, two = two, one
		}
		if fitsOr(v, one, left) && fitsOr(v, two, right) {
			pairs = append(pairs, fmt.Sprintf("%s %s %s", orDots(n.names[0]), n.key, orDots(n.names[1])))
		}
	}
	slices.Sort(pairs)
	pairs = slices.Compact(pairs)
	text := fmt.Sprintf("%s cannot be compared with %s", article(left), article(right))
	if len(pairs) == 1 {
		text += " (" + pairs[0] + ")"
	}
	return text
}

// fitsOr reports whether a name's value is of the kind, or cannot be seen.
func fitsOr(v view, name, kindName string) bool {
	value, _, _, ok := v.path(name)
	return !ok || kind(value) == kindName
}

func orDots(name string) string {
	if name == "" {
		return "…"
	}
	return name
}

func (v view) forFault(on []note, which string) string {
	place := map[string]int{"init": 0, "limit": 1, "step": 2}[which]
	word := map[string]string{"init": "first value", "limit": "last value", "step": "step"}[which]
	for _, n := range on {
		if n.kind != noteFor {
			continue
		}
		if name := n.names[place]; name != "" {
			if value, _, _, ok := v.path(name); ok {
				return fmt.Sprintf("the %s of 'for %s' must be a number, '%s' is %s", word, n.key, name, article(kind(value)))
			}
			return fmt.Sprintf("the %s of 'for %s' must be a number, '%s' is none", word, n.key, name)
		}
		return fmt.Sprintf("the %s of 'for %s' must be a number", word, n.key)
	}
	return fmt.Sprintf("the %s of a 'for' must be a number", word)
}

// joinFault begins the message of our own "..".
const joinFault = "operand "

// joinFaultOf is that message: which operand of how many is of the wrong kind.
func joinFaultOf(place, count int, v lua.LValue) string {
	return fmt.Sprintf(joinFault+"%d of %d is %s", place, count, kind(v))
}

// atLine puts the line of the innermost Lua function before a message, as the virtual machine does.
func (s *sandbox) atLine(msg string) string {
	at := s.position(0)
	return fmt.Sprintf("%s:%d: %s", at.File, at.Line, msg)
}

// joinText names the operand that could not be joined.
func joinText(on []note, rest string) string {
	var place, count int
	var kindName string
	if n, err := fmt.Sscanf(rest, joinFault+"%d of %d is %s", &place, &count, &kindName); err != nil || n != 3 {
		return rest
	}
	var names []string
	for _, n := range on {
		if n.kind == noteJoin && len(n.names) == count {
			names = append(names, n.names[place-1])
		}
	}
	if len(names) == 1 && names[0] != "" {
		return fmt.Sprintf("'%s' is %s, and '..' joins texts and numbers", names[0], article(kindName))
	}
	return fmt.Sprintf("operand %d of '..' is %s, and '..' joins texts and numbers", place, article(kindName))
}
