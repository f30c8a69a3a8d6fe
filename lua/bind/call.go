package bind

import (
	"fmt"
	"runtime/debug"
	"slices"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

// call is one entry of the scene language: a function, or a method of a kind of value.
type call struct {
	name   string                                // "steps", "light.area", "rig:turned"
	params string                                // values given in order, "from! to! count!"; "!" marks what must be given
	keys   string                                // keys of the table that follows them, likewise; "" if there is none
	list   string                                // what the table's list holds, where it may hold one: "lights"
	change bool                                  // a method "with": takes any key that made the value, all of them optional
	usage  string                                // how it is called, for messages, where its names do not say it
	keyed  func(key string, v lua.LValue) string // what to write instead, where a key stands in a table that takes a list alone
	run    func(a *args) lua.LValue
}

// calls is the whole language.
func calls() []call {
	return slices.Concat(numberCalls(), colorCalls(), meshCalls(), materialCalls(), lightCalls(), rigCalls(), cameraCalls(),
		placeCalls(), paramCalls(), sweepCalls(), randomCalls(), csvCalls(), jsonCalls(), settingsCalls(), frameCalls(), sheetCalls())
}

// Key is one name that a binding takes.
type Key struct {
	Name     string
	Required bool
}

func keysOf(words string) []Key {
	var keys []Key
	for _, w := range strings.Fields(words) {
		name, required := strings.CutSuffix(w, "!")
		keys = append(keys, Key{name, required})
	}
	return keys
}

// Open installs the scene language into the state's globals and begins a new plan.
func Open(l *lua.LState, e *Env) {
	e.start()
	spaces := map[string]*namespace{}
	methods := map[string]map[string]lua.LValue{}
	var order []string
	for _, c := range calls() {
		c := newEntry(c)
		fn := l.NewFunction(e.guard(c))
		if kind, method, ok := strings.Cut(c.name, ":"); ok {
			if methods[kind] == nil {
				methods[kind] = map[string]lua.LValue{}
			}
			methods[kind][method] = fn
			continue
		}
		head, member, dotted := strings.Cut(c.name, ".")
		space := spaces[head]
		if space == nil {
			space = &namespace{name: head, members: map[string]lua.LValue{}}
			spaces[head] = space
			order = append(order, head)
		}
		if dotted {
			space.members[member] = fn
			space.names = append(space.names, member)
		} else {
			space.self = fn
		}
	}
	for _, kind := range kinds {
		e.metas[kind] = e.valueMeta(l, kind, methods[kind])
	}
	for _, head := range order {
		space := spaces[head]
		if len(space.names) == 0 {
			l.SetGlobal(head, space.self)
			continue
		}
		ud := l.NewUserData()
		ud.Value = space
		ud.Metatable = e.spaceMeta(l, space)
		l.SetGlobal(head, ud)
	}
}

// namespace is a strict, read-only table of functions, such as light; it may be a function itself, as color is.
type namespace struct {
	name    string
	self    lua.LValue // nil: it cannot be called
	members map[string]lua.LValue
	names   []string
}

// spaceMeta is the metatable of a namespace.
func (e *Env) spaceMeta(l *lua.LState, space *namespace) *lua.LTable {
	meta := l.NewTable()
	meta.RawSetString("__metatable", lua.LString(space.name))
	meta.RawSetString("__index", l.NewFunction(func(l *lua.LState) int {
		key := l.Get(2)
		v, ok := space.members[key.String()]
		if !ok || key.Type() != lua.LTString {
			e.raise(l, "%s has no %s%s", space.name, describe(key), Hint(key.String(), space.names))
		}
		l.Push(v)
		return 1
	}))
	meta.RawSetString("__newindex", l.NewFunction(func(l *lua.LState) int {
		e.raise(l, "%s cannot be changed", space.name)
		return 0
	}))
	meta.RawSetString("__tostring", l.NewFunction(func(l *lua.LState) int {
		l.Push(lua.LString(space.name))
		return 1
	}))
	if space.self != nil {
		self := space.self.(*lua.LFunction).GFunction
		meta.RawSetString("__call", l.NewFunction(func(l *lua.LState) int {
			l.Remove(1) // the namespace itself
			return self(l)
		}))
	}
	return meta
}

// entry is a call with its keys looked up once.
type entry struct {
	call
	params, keys []Key
	names        []string // of keys
	kind         string   // methods: the kind of value before the colon
}

func newEntry(c call) *entry {
	n := &entry{call: c, params: keysOf(c.params), keys: keysOf(c.keys)}
	for _, k := range n.keys {
		n.names = append(n.names, k.Name)
	}
	n.kind, _, _ = strings.Cut(c.name, ":")
	if n.kind == c.name {
		n.kind = ""
	}
	return n
}

// guard makes a Lua function of an entry: arguments are laid out and their names checked, and a panic, which is a bug here, ends the
// scene whatever pcall says.
func (e *Env) guard(c *entry) lua.LGFunction {
	return func(l *lua.LState) int {
		defer e.recovered(l, c.name)
		a := e.arguments(l, c)
		v := c.run(a)
		if v == nil {
			return 0
		}
		l.Push(v)
		return 1
	}
}

// recovered lets errors of the script pass and turns any other panic into a fatal error of the Env.
func (e *Env) recovered(l *lua.LState, name string) {
	r := recover()
	if r == nil {
		return
	}
	if _, ok := r.(*lua.ApiError); ok {
		panic(r)
	}
	if e.fatal == nil {
		e.fatal = fmt.Errorf("%s%s: this is a bug in lampbook, not in the scene: %v\n%s", prefix(e.callSite(l)), name, r, debug.Stack())
	}
	e.raise(l, "%s: this is a bug in lampbook, not in the scene: %v", name, r)
}

// callSite is the innermost line of the running script that is not in one of the program's own modules.
func (e *Env) callSite(l *lua.LState) model.Pos {
	pos, _ := e.site(l)
	return pos
}

// site is callSite, with the line inside a module of the program's own from which the call came, if it came from one.
func (e *Env) site(l *lua.LState) (pos, inside model.Pos) {
	for level := 0; ; level++ {
		dbg, ok := l.GetStack(level)
		if !ok {
			return inside, model.Pos{} // only the program's own code is running
		}
		if _, err := l.GetInfo("Sl", dbg, lua.LNil); err != nil || dbg.Source == "" || dbg.CurrentLine < 1 {
			continue
		}
		here := model.Pos{File: dbg.Source, Line: dbg.CurrentLine}
		if e.Shipped == nil || !e.Shipped(dbg.Source) {
			return here, inside
		}
		if inside == (model.Pos{}) {
			inside = here
		}
	}
}

// raise ends the script with an error at the call site.
func (e *Env) raise(l *lua.LState, format string, values ...any) {
	pos, inside := e.site(l)
	text := prefix(pos) + fmt.Sprintf(format, values...)
	if inside != (model.Pos{}) {
		text += fmt.Sprintf(" (in %s:%d)", inside.File, inside.Line)
	}
	l.Error(lua.LString(text), 0)
}

// prefix is how a place reads at the head of a message.
func prefix(p model.Pos) string {
	if p.File == "" {
		return ""
	}
	return fmt.Sprintf("%s:%d: ", p.File, p.Line)
}

// namesOf lists the names among the words of a call.
func namesOf(words string) []string {
	var names []string
	for _, k := range keysOf(words) {
		names = append(names, k.Name)
	}
	return names
}
