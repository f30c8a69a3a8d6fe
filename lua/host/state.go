package host

import (
	"fmt"
	"slices"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
	"lampbook/lua/bind"
)

func init() {
	// Integer keys at and above this go to a table's hash part. The library's own bound lets t[67108863] = 1 fill a gigabyte.
	lua.MaxArrayIndex = 1 << 20
}

// sandbox is one Lua state with what it may use. It serves one evaluation, on one goroutine.
type sandbox struct {
	meter   *meter
	limits  Limits
	main    *lua.LState
	env     *lua.LTable // the scene's own globals
	api     *lua.LTable // the names that every scene has, behind env
	names   []string    // those names, sorted
	chunks  map[string]*chunk
	loaded  map[string]lua.LValue // modules by name
	loading []string              // modules being loaded, outermost first
	find    func(module string) (name string, text []byte, err error)
	printer *printer
	running []*lua.LState // the threads of the pcalls now open, outermost first; the first is main
	spare   []*lua.LState // a thread for each depth of pcall
	caller  *lua.FunctionProto
	fatal   func() error // a bug in a binding, if there was one
}

// newSandbox makes the state. open adds further globals to it; it may be nil.
func newSandbox(m *meter, limits Limits, open func(l *lua.LState)) *sandbox {
	s := &sandbox{meter: m, limits: limits, chunks: map[string]*chunk{}, loaded: map[string]lua.LValue{}, printer: &printer{}}
	s.main = lua.NewState(lua.Options{
		CallStackSize: 1024, RegistrySize: 4096, RegistryMaxSize: 1 << 18, RegistryGrowStep: 4096, SkipOpenLibs: true,
	})
	s.main.SetContext(m)
	s.running = []*lua.LState{s.main}
	m.trace = s.here
	s.api = s.main.G.Global
	if open != nil {
		open(s.main)
	}
	s.openBase()
	s.openString()
	s.openTable()
	s.openMath()
	for key, _ := s.api.Next(lua.LNil); key != lua.LNil; key, _ = s.api.Next(key) {
		if name := key.String(); identifier(name) {
			s.names = append(s.names, name)
		}
	}
	slices.Sort(s.names)
	s.strict()
	return s
}

// strict gives the scene globals of its own in front of the program's names: reading an unknown one and writing over a known one are errors.
func (s *sandbox) strict() {
	l := s.main
	s.env = l.CreateTable(0, 16)
	guard := l.CreateTable(0, 3)
	guard.RawSetString("__index", s.api)
	guard.RawSetString("__newindex", l.NewFunction(func(l *lua.LState) int {
		key := l.Get(2)
		if s.api.RawGet(key) != lua.LNil {
			s.raise(l, "'%s' belongs to the scene language and cannot be assigned to: choose another name, or write local %s", show(key), show(key))
		}
		l.RawSet(s.env, key, l.Get(3))
		return 0
	}))
	guard.RawSetString("__metatable", lua.LFalse)
	s.env.Metatable = guard
	unknown := l.CreateTable(0, 1)
	unknown.RawSetString("__index", l.NewFunction(func(l *lua.LState) int {
		s.raise(l, "%s", s.undefined(l, show(l.Get(2))))
		return 0
	}))
	s.api.Metatable = unknown
	s.api.RawSetString("_G", s.env)
	l.G.Global = s.env
	l.Env = s.env
}

// undefined says that a global does not exist, and what may have been meant.
func (s *sandbox) undefined(l *lua.LState, name string) string {
	if why, ok := withheld[name]; ok {
		return fmt.Sprintf("'%s' is not available in a scene: %s", name, why)
	}
	known := slices.Clone(s.names)
	for key, _ := s.env.Next(lua.LNil); key != lua.LNil; key, _ = s.env.Next(key) {
		known = append(known, key.String())
		if len(known) > 10_000 {
			break
		}
	}
	at := s.position(0)
	if c := s.chunks[at.File]; c != nil {
		for _, v := range c.notes.locals {
			if v.line <= at.Line {
				known = append(known, v.name)
			}
		}
	}
	slices.Sort(known)
	return fmt.Sprintf("'%s' is not defined%s", name, bind.Guess(short(name), slices.Compact(known)))
}

// withheld are the names of Lua that a scene has not, and what to do instead.
var withheld = map[string]string{
	"io": "files are read by mesh.load, data.csv and data.json", "os": "a scene gives the same plan at any time on any machine",
	"debug": "nothing of the state can be changed from within", "coroutine": "write a loop or a function that returns a table",
	"package": "require \"name\" loads a module", "module": "a module returns a table", "load": "code is loaded by require alone",
	"loadstring": "code is loaded by require alone", "loadfile": "code is loaded by require alone", "dofile": "write require \"name\"",
	"getfenv": "pass values as arguments", "setfenv": "pass values as arguments", "newproxy": "write setmetatable({}, …)",
	"collectgarbage": "memory is looked after", "arg": "parameters are declared by param and given by --set",
}

// seal makes a library's functions into a table that cannot be changed and answers unknown names with the nearest known one.
func (s *sandbox) seal(name string, functions map[string]lua.LGFunction, values map[string]lua.LValue, removed map[string]string) *lua.LTable {
	l := s.main
	inner := l.CreateTable(0, len(functions)+len(values))
	var known []string
	for n := range functions {
		known = append(known, n)
	}
	for n := range values {
		known = append(known, n)
	}
	slices.Sort(known)
	for _, n := range known {
		if f, ok := functions[n]; ok {
			inner.RawSetString(n, l.NewFunction(f))
		} else {
			inner.RawSetString(n, values[n])
		}
	}
	strange := l.CreateTable(0, 2)
	strange.RawSetString("__index", l.NewFunction(func(l *lua.LState) int {
		key := show(l.Get(2))
		if why, ok := removed[key]; ok {
			s.raise(l, "%s.%s is not available in a scene: %s", name, key, why)
		}
		s.raise(l, "%s has no %q%s", name, key, bind.Hint(short(key), known))
		return 0
	}))
	inner.Metatable = strange
	outer := l.CreateTable(0, 0)
	meta := l.CreateTable(0, 3)
	meta.RawSetString("__index", inner)
	meta.RawSetString("__newindex", l.NewFunction(func(l *lua.LState) int {
		s.raise(l, "%s cannot be changed: keep your own functions in a table of your own", name)
		return 0
	}))
	meta.RawSetString("__metatable", lua.LFalse)
	outer.Metatable = meta
	s.api.RawSetString(name, outer)
	return inner
}

// position returns the line of the n-th Lua function from the innermost, over all open pcalls; the zero Pos where there is none.
func (s *sandbox) position(n int) model.Pos {
	if calls := s.calls(n + 1); n < len(calls) {
		return calls[n]
	}
	return model.Pos{}
}

// calls returns the lines of the running Lua functions, innermost first, at most so many. Tail calls leave no line.
func (s *sandbox) calls(most int) []model.Pos {
	var out []model.Pos
	for i := len(s.running) - 1; i >= 0 && len(out) < most; i-- {
		l := s.running[i]
		for level := 0; level < 4*most+8 && len(out) < most; level++ {
			dbg, ok := l.GetStack(level)
			if !ok {
				break
			}
			if _, err := l.GetInfo("Sl", dbg, lua.LNil); err != nil || dbg.Source == "" || dbg.CurrentLine < 1 {
				continue
			}
			at := model.Pos{File: dbg.Source, Line: dbg.CurrentLine}
			if n := len(out); n > 0 && out[n-1] == at {
				continue
			}
			out = append(out, at)
		}
	}
	return out
}

// here is the place that the script has reached, as an Error without a message.
func (s *sandbox) here() *Error {
	trace := s.calls(traceLength)
	return &Error{Pos: blame(trace), Trace: trace}
}

// traceLength is how many calls an error remembers.
const traceLength = 30

// blame is the line that an author can change: the innermost one outside the program's own modules.
func blame(trace []model.Pos) model.Pos {
	for _, p := range trace {
		if !shipped(p.File) {
			return p
		}
	}
	if len(trace) > 0 {
		return trace[0]
	}
	return model.Pos{}
}

// shippedFolder is how errors show where the program's own modules lie.
const shippedFolder = "prelude/"

// shipped reports whether a chunk is one of the program's own modules. Scene paths that look alike are told apart in Evaluate.
func shipped(file string) bool { return strings.HasPrefix(file, shippedFolder) }

// show writes a value into a message, short.
func show(v lua.LValue) string {
	switch v := v.(type) {
	case lua.LString:
		return short(plain(string(v[:min(len(v), 200)])))
	case lua.LNumber:
		return formatNumber(float64(v))
	}
	return kind(v)
}

// kind is the type of a value in a message.
func kind(v lua.LValue) string { return v.Type().String() }
