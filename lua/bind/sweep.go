package bind

import (
	"fmt"
	"math"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

func sweepCalls() []call {
	return []call{
		{name: "sweep", list: "axes", keyed: asAxis, run: newSweep},
		{name: "turntable", keys: "frames start", run: newTurntable},
	}
}

// axis is one thing that a sweep varies.
type axis struct {
	key    string
	values []lua.LValue
}

// sweep walks every combination of its axes, the last one fastest.
type sweep struct {
	env   *Env
	axes  []axis
	count int
	meta  *lua.LTable         // of the steps: reading an unknown key is an error
	live  map[*lua.LTable]int // steps handed out last, one for each loop that runs, with the number of the next
}

// asAxis is how what was written as a key is written as an axis.
func asAxis(key string, v lua.LValue) string {
	values := "{value, …}"
	if t, ok := v.(*lua.LTable); ok {
		values = describeTable(t, 0)
	}
	return fmt.Sprintf(": write { {%s, %s} }", quote(key), values)
}

// newSweep reads { {"gloss", {4, 16}}, {"glaze", names} } and gives the iterator.
func newSweep(a *args) lua.LValue {
	if a.table == nil {
		a.failf("takes a list of axes { {\"name\", {value, …}}, … }, got nothing")
	}
	s := &sweep{env: a.env, count: 1, live: map[*lua.LTable]int{}}
	var keys []string
	for i, v := range a.list("sweep", a.table, "axes", 16) {
		ax := a.axis(i+1, v)
		for _, k := range keys {
			if k == ax.key {
				a.failf("two axes are named %q", k)
			}
		}
		keys = append(keys, ax.key)
		s.axes = append(s.axes, ax)
		s.count *= len(ax.values)
		if s.count > model.MaxFrames {
			a.failf("more than %d combinations: no plan holds as many frames", model.MaxFrames)
		}
	}
	if len(s.axes) == 0 {
		a.failf("takes at least one axis {\"name\", {value, …}}")
	}
	s.meta = a.env.strictMeta(a.l, "sweep step", "this sweep", keys)
	return a.l.NewFunction(func(l *lua.LState) int {
		defer s.env.recovered(l, "sweep")
		l.Push(s.next(l, l.Get(2)))
		return 1
	})
}

func (a *args) axis(n int, v lua.LValue) axis {
	t, ok := v.(*lua.LTable)
	if !ok || t.Len() != 2 {
		a.failf("axis %d must be {\"name\", {value, …}}, got %s", n, describe(v))
	}
	key, ok := t.RawGetInt(1).(lua.LString)
	if !ok {
		a.failf("axis %d must begin with its name in quotes, got %s", n, describe(t.RawGetInt(1)))
	}
	a.checkTagKey(string(key))
	ax := axis{key: string(key), values: a.list("axis \""+string(key)+"\"", t.RawGetInt(2), "values", model.MaxFrames)}
	if len(ax.values) == 0 {
		a.failf("axis %q has no values", ax.key)
	}
	for _, x := range ax.values {
		a.tagValue(ax.key, x)
	}
	return ax
}

// next gives the step after the one that a loop holds, or nil after the last; a loop begins with nil. So a sweep may be
// walked again, and within itself.
func (s *sweep) next(l *lua.LState, control lua.LValue) lua.LValue {
	i := 0
	if t, ok := control.(*lua.LTable); ok {
		at, known := s.live[t]
		if !known {
			s.env.raise(l, "sweep: write for step in sweep{ … } do")
		}
		delete(s.live, t)
		i = at
	}
	if i >= s.count {
		return lua.LNil
	}
	step := l.CreateTable(0, len(s.axes))
	rest, stride := i, s.count
	for _, ax := range s.axes {
		stride /= len(ax.values)
		step.RawSetString(ax.key, ax.values[rest/stride])
		rest %= stride
	}
	step.Metatable = s.meta
	s.live[step] = i + 1
	return step
}

// strictMeta is a metatable under which reading an unknown key is an error; owner says whose keys they are.
func (e *Env) strictMeta(l *lua.LState, kind, owner string, keys []string) *lua.LTable {
	meta := l.NewTable()
	meta.RawSetString("__metatable", lua.LString(kind))
	meta.RawSetString("__index", l.NewFunction(func(l *lua.LState) int {
		key := l.Get(2)
		e.raise(l, "%s has no %s%s", owner, describe(key), Hint(key.String(), keys))
		return 0
	}))
	return meta
}

// turntable is a whole turn in equal steps. Called as an iterator it gives angle and number; it keeps no state, so it may be
// walked again.
type turntable struct {
	frames int
	start  float64 // degrees
}

const turntableKeys = "frames start"

func newTurntable(a *args) lua.LValue {
	t := &turntable{frames: 36}
	a.integer("frames", &t.frames, 1, 36_000)
	a.number("start", &t.start, between(-360, 360, "degrees"))
	return a.env.push(a.l, t)
}

// angle is the i-th angle in degrees, i from 0.
func (t *turntable) angle(i int) float64 {
	return rounded(t.start + 360*float64(i)/float64(t.frames))
}

// turntableNext is the iterator: it is called with the turntable, nothing, and the last angle.
func (e *Env) turntableNext(l *lua.LState) int {
	t, ok := valueOf[*turntable](l.Get(1))
	if !ok {
		e.raise(l, "turntable: write for angle, number in turntable{ … } do")
	}
	i := 0
	if last, ok := l.Get(3).(lua.LNumber); ok {
		i = int(math.Round((float64(last)-t.start)*float64(t.frames)/360)) + 1
	}
	if i < 0 || i >= t.frames {
		l.Push(lua.LNil)
		return 1
	}
	l.Push(lua.LNumber(t.angle(i)))
	l.Push(lua.LNumber(i + 1))
	return 2
}

func (*turntable) kind() string     { return kindTurntable }
func (*turntable) maker() string    { return "turntable" }
func (*turntable) fields() []string { return namesOf(turntableKeys) }

func (t *turntable) field(_ *Env, _ *lua.LState, name string) lua.LValue {
	if name == "frames" {
		return lua.LNumber(t.frames)
	}
	return lua.LNumber(t.start)
}
