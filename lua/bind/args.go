package bind

import (
	"strings"

	lua "github.com/yuin/gopher-lua"
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
			instead := ""
			if a.entry.keyed != nil {
				instead = a.entry.keyed(string(k), a.table.RawGet(k))
			}
			a.failf("takes a list of %s, got the key %q%s", a.entry.list, string(k), instead)
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
	if c.usage != "" {
		return c.usage
	}
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
