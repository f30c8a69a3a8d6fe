package bind

import (
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// The kinds of value, as type names in messages and annotations say them.
const (
	kindColor     = "color"
	kindMesh      = "mesh"
	kindMaterial  = "material"
	kindLight     = "light"
	kindRig       = "rig"
	kindCamera    = "camera"
	kindThing     = "thing"
	kindTurntable = "turntable"
	kindRandom    = "random"
)

var kinds = []string{kindColor, kindMesh, kindMaterial, kindLight, kindRig, kindCamera, kindThing, kindTurntable, kindRandom}

// value is what a userdata of the scene language holds. Values are immutable.
type value interface {
	kind() string
	// fields lists what a scene may read of the value, in order.
	fields() []string
	// field returns one of them; LNil where it was not stated.
	field(e *Env, l *lua.LState, name string) lua.LValue
	// maker is the call that makes such a value, as shown by tostring.
	maker() string
}

// push wraps a value for Lua.
func (e *Env) push(l *lua.LState, v value) lua.LValue {
	return &lua.LUserData{Value: v, Env: l.Env, Metatable: e.metas[v.kind()]}
}

// valueMeta is the metatable of a kind of value: methods and fields to read, nothing to write.
func (e *Env) valueMeta(l *lua.LState, kind string, methods map[string]lua.LValue) *lua.LTable {
	meta := l.NewTable()
	meta.RawSetString("__metatable", lua.LString(kind))
	meta.RawSetString("__index", l.NewFunction(func(l *lua.LState) int {
		defer e.recovered(l, kind)
		v, _ := l.CheckUserData(1).Value.(value)
		key := l.Get(2)
		if v == nil || key.Type() != lua.LTString {
			e.raise(l, "a %s has no %s", kind, describe(key))
		}
		name := key.String()
		if m, ok := methods[name]; ok {
			l.Push(m)
			return 1
		}
		fields := v.fields()
		for _, f := range fields {
			if f == name {
				l.Push(v.field(e, l, name))
				return 1
			}
		}
		known := append([]string{}, fields...)
		var methodNames []string
		for m := range methods {
			methodNames = append(methodNames, m)
		}
		known = append(known, sorted(methodNames)...)
		e.raise(l, "a %s has no %q%s", kind, name, Hint(name, known))
		return 0
	}))
	meta.RawSetString("__newindex", l.NewFunction(func(l *lua.LState) int {
		if _, ok := methods["with"]; ok {
			e.raise(l, "a %s cannot be changed: %s:with{ %s = … } gives a changed copy", kind, kind, l.Get(2).String())
		}
		e.raise(l, "a %s cannot be changed", kind)
		return 0
	}))
	meta.RawSetString("__tostring", l.NewFunction(func(l *lua.LState) int {
		v, _ := l.CheckUserData(1).Value.(value)
		if v == nil {
			e.raise(l, "tostring: not a %s", kind)
		}
		l.Push(lua.LString(e.show(l, v)))
		return 1
	}))
	if kind == kindTurntable {
		meta.RawSetString("__call", l.NewFunction(e.turntableNext))
	}
	return meta
}

// show writes a value as the call that makes it.
func (e *Env) show(l *lua.LState, v value) string {
	if c, ok := v.(color); ok {
		return c.text()
	}
	var b strings.Builder
	b.WriteString(v.maker() + "{")
	sep := " "
	for _, f := range v.fields() {
		if x := v.field(e, l, f); x != lua.LNil {
			b.WriteString(sep + f + " = " + describe(x))
			sep = ", "
		}
	}
	b.WriteString(" }")
	return b.String()
}

// valueOf returns the value in a userdata, if it holds one of the type.
func valueOf[T value](v lua.LValue) (T, bool) {
	var none T
	ud, ok := v.(*lua.LUserData)
	if !ok {
		return none, false
	}
	x, ok := ud.Value.(T)
	return x, ok
}
