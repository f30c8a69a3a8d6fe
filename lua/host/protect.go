package host

import (
	"fmt"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

// The library's pcall has faults that a scene could fall over: it turns Go panics and our limits into values, it builds an account of the
// stack that a long run of tail calls makes gigabytes long, and any error that it catches cuts the closures of the functions around it off
// from their variables. So each pcall runs on a thread of its own (never a coroutine: nothing yields), whose loss concerns nobody else.

// protect calls f with the arguments on a thread of its own. On success the results lie on that thread, which is returned; otherwise the
// error value is. It does not return when the scene has hit a bound.
func (s *sandbox) protect(l *lua.LState, f lua.LValue, arguments []lua.LValue) (th *lua.LState, fault lua.LValue) {
	depth := len(s.running)
	if depth > maxProtected {
		s.raise(l, "pcall is nested more than %d deep", maxProtected)
	}
	th = s.thread(depth)
	at, loading := s.position(0), len(s.loading)
	s.running = append(s.running, th)
	err := s.call(th, s.relay(at), append([]lua.LValue{f}, arguments...))
	s.running, s.loading = s.running[:depth], s.loading[:loading]
	if s.fatal != nil && s.meter.stopped == nil {
		if bug := s.fatal(); bug != nil {
			s.meter.stop(firstLine(bug.Error()), bug)
		}
	}
	if s.meter.stopped != nil {
		s.abandon(l)
	}
	if err != nil {
		return nil, err.Object
	}
	return th, nil
}

// abandon raises the reason for which the meter stopped.
func (s *sandbox) abandon(l *lua.LState) { l.Error(lua.LString(s.meter.stopped.Msg), 0) }

// call runs f on a thread that runs nothing yet, and leaves the results there.
func (s *sandbox) call(th *lua.LState, f lua.LValue, arguments []lua.LValue) *lua.ApiError {
	th.SetTop(0)
	th.Push(th.NewFunction(s.guarded))
	th.Push(f)
	for _, a := range arguments {
		th.Push(a)
	}
	err := th.PCall(len(arguments)+1, lua.MultRet, nil)
	if err == nil {
		return nil
	}
	th.SetTop(0)
	if fault, ok := err.(*lua.ApiError); ok {
		return fault
	}
	return &lua.ApiError{Type: lua.ApiErrorRun, Object: lua.LString(err.Error())}
}

// guarded calls its first argument with the others. Errors come out with the account of the stack that we can afford, and a
// panic that is no error of the script ends the scene for good.
func (s *sandbox) guarded(l *lua.LState) (results int) {
	l.Panic = s.thrown
	defer func() {
		r := recover()
		if r == nil {
			return
		}
		if _, ok := r.(*lua.ApiError); !ok {
			s.bug(l, r)
			r = &lua.ApiError{Type: lua.ApiErrorRun, Object: lua.LString(s.meter.stopped.Msg), StackTrace: kept}
		}
		panic(r)
	}()
	l.Call(l.GetTop()-1, lua.MultRet)
	return l.GetTop()
}

// kept keeps the library from writing its own account of the stack.
const kept = "-"

// thrown is what a thread does with an error: it puts the message into plain words while the variables can still be looked at, and unwinds.
func (s *sandbox) thrown(l *lua.LState) {
	fault := &lua.ApiError{Type: lua.ApiErrorRun, Object: l.Get(-1), StackTrace: kept}
	if text, ok := fault.Object.(lua.LString); ok {
		fault.Object = lua.LString(s.explain(l, string(text)))
	}
	if len(s.running) == 1 {
		fault.Cause = &Error{Trace: s.calls(traceLength)}
	}
	panic(fault)
}

// bug ends the scene because of a panic that is a fault of the program.
func (s *sandbox) bug(l *lua.LState, r any) {
	name := "the script library"
	if dbg, ok := l.GetStack(0); ok {
		if _, err := l.GetInfo("nS", dbg, lua.LNil); err == nil && dbg.What == "G" && dbg.Name != "" {
			name = strings.Trim(dbg.Name, "()")
		}
	}
	s.meter.stop(fmt.Sprintf("internal error in %s (%s), please report it", name, plain(fmt.Sprint(r))), nil)
}

// thread returns the spare thread for a depth of pcall, making it when it is first needed.
func (s *sandbox) thread(depth int) *lua.LState {
	for len(s.spare) < depth {
		old := s.main.Options
		s.main.Options.CallStackSize, s.main.Options.RegistrySize = 400, 1024
		s.main.RemoveContext() // a thread would make a child of it, and a goroutine with that
		th, _ := s.main.NewThread()
		s.main.SetContext(s.meter)
		s.main.Options = old
		th.SetContext(s.meter)
		s.spare = append(s.spare, th)
	}
	return s.spare[depth-1]
}

// relay is a Lua function that calls its first argument with the others, and whose line is that of the pcall: bindings ask
// the stack of their thread for the line of their caller.
func (s *sandbox) relay(at model.Pos) *lua.LFunction {
	if s.caller == nil {
		c, err := load(relayName, []byte("return function(f, ...) return f(...) end"), s.limits)
		if err != nil {
			panic(err)
		}
		s.caller = c.proto.FunctionPrototypes[0]
	}
	proto := *s.caller
	proto.SourceName = at.File
	proto.DbgSourcePositions = make([]int, len(proto.Code))
	for i := range proto.DbgSourcePositions {
		proto.DbgSourcePositions[i] = at.Line
	}
	return s.main.NewFunctionFromProto(&proto)
}

const relayName = "pcall.lua"

// luaPcall is pcall(f, ...).
func (s *sandbox) luaPcall(l *lua.LState) int {
	f := s.any(l, "pcall", 1)
	if !s.callable(f) {
		return s.outcome(l, nil, lua.LString(s.placed(fmt.Sprintf("pcall: argument 1 is %s and cannot be called", article(kind(f))))))
	}
	th, fault := s.protect(l, f, s.rest(l, 2))
	return s.outcome(l, th, fault)
}

// callable reports whether a value can be called.
func (s *sandbox) callable(v lua.LValue) bool {
	if _, ok := v.(*lua.LFunction); ok {
		return true
	}
	m, ok := s.metatable(v).(*lua.LTable)
	return ok && m.RawGetString("__call") != lua.LNil
}

// luaXpcall is xpcall(f, handler). The handler runs after the stack is unwound; there is no debug library that could tell.
func (s *sandbox) luaXpcall(l *lua.LState) int {
	f, handler := s.any(l, "xpcall", 1), s.any(l, "xpcall", 2)
	th, fault := s.protect(l, f, nil)
	if fault == nil {
		return s.outcome(l, th, nil)
	}
	th, second := s.protect(l, handler, []lua.LValue{fault})
	if second != nil {
		return s.outcome(l, nil, second)
	}
	n := s.outcome(l, th, nil)
	l.Replace(l.GetTop()-n+1, lua.LFalse)
	return n
}

// outcome pushes what pcall returns.
func (s *sandbox) outcome(l, th *lua.LState, fault lua.LValue) int {
	if fault != nil {
		l.Push(lua.LFalse)
		l.Push(fault)
		return 2
	}
	n := th.GetTop()
	l.Push(lua.LTrue)
	th.XMoveTo(l, n)
	th.SetTop(0)
	return n + 1
}

// rest copies the arguments from the n-th on.
func (s *sandbox) rest(l *lua.LState, n int) []lua.LValue {
	var out []lua.LValue
	for i := n; i <= l.GetTop(); i++ {
		out = append(out, l.Get(i))
	}
	return out
}

// firstLine is a text up to its first line break.
func firstLine(s string) string {
	s, _, _ = strings.Cut(s, "\n")
	return s
}
