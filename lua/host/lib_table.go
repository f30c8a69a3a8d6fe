package host

import (
	"math"
	"sort"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// openTable gives the state the table library of Lua 5.1.
func (s *sandbox) openTable() {
	s.seal("table", map[string]lua.LGFunction{
		"concat": s.tableConcat, "insert": s.tableInsert, "remove": s.tableRemove, "sort": s.tableSort,
		"maxn": func(l *lua.LState) int {
			most := 0.0
			t := s.table(l, "table.maxn", 1)
			for key, _ := t.Next(lua.LNil); key != lua.LNil; key, _ = t.Next(key) {
				s.charge(l, 1)
				if n, ok := key.(lua.LNumber); ok {
					most = max(most, float64(n))
				}
			}
			l.Push(lua.LNumber(most))
			return 1
		},
	}, nil, map[string]string{
		"getn": "write #t", "foreach": "write for key, value in pairs(t)", "foreachi": "write for i, value in ipairs(t)",
		"unpack": "it is called unpack", "pack": "write { … }", "setn": "lists know their length",
	})
}

func (s *sandbox) tableConcat(l *lua.LState) int {
	const name = "table.concat"
	t := s.table(l, name, 1)
	between := ""
	if l.Get(2) != lua.LNil {
		between = s.text(l, name, 2)
	}
	from, to := s.wholeOr(l, name, 3, 1), s.wholeOr(l, name, 4, t.Len())
	if to >= from && to-from >= maxString {
		s.reserve(l, name, maxString+1)
	}
	size := 0
	for i := from; i <= to; i++ {
		v := t.RawGet(lua.LNumber(i))
		if !joinable(v) {
			s.raise(l, "%s: item %d must be a text or a number, it is %s", name, i, article(kind(v)))
		}
		if size += writtenSize(v) + len(between); size > maxString+len(between)+24 {
			break
		}
	}
	s.charge(l, max(to-from, 0))
	s.reserve(l, name, max(size-len(between), 0))
	var b strings.Builder
	for i := from; i <= to; i++ {
		if i > from {
			b.WriteString(between)
		}
		b.WriteString(joinedText(t.RawGet(lua.LNumber(i))))
	}
	l.Push(lua.LString(b.String()))
	return 1
}

// tableInsert moves the items behind the place up by one.
func (s *sandbox) tableInsert(l *lua.LState) int {
	const name = "table.insert"
	t := s.table(l, name, 1)
	n := t.Len()
	at := n + 1
	var v lua.LValue
	switch l.GetTop() {
	case 2:
		v = l.Get(2)
	case 3:
		at, v = s.whole(l, name, 2), l.Get(3)
	default:
		s.raise(l, "%s: takes a table, perhaps a place, and a value; got %d arguments", name, l.GetTop())
	}
	if at < 1 || at > n+1 {
		s.raise(l, "%s: place %d is outside the list, which has %d items", name, at, n)
	}
	if n+1 >= lua.MaxArrayIndex {
		s.raise(l, "%s: a list holds at most %s items", name, grouped(int64(lua.MaxArrayIndex)-1))
	}
	s.charge(l, (n+1-at)/8)
	for i := n; i >= at; i-- {
		t.RawSetInt(i+1, t.RawGetInt(i))
	}
	t.RawSetInt(at, v)
	return 0
}

// tableRemove moves the items behind the place down by one.
func (s *sandbox) tableRemove(l *lua.LState) int {
	const name = "table.remove"
	t := s.table(l, name, 1)
	n := t.Len()
	at := s.wholeOr(l, name, 2, n)
	if n == 0 || at < 1 || at > n {
		return 0
	}
	s.charge(l, (n-at)/8)
	l.Push(t.RawGetInt(at))
	for i := at; i < n; i++ {
		t.RawSetInt(i, t.RawGetInt(i+1))
	}
	t.Remove(n)
	return 1
}

// tableSort sorts a list. Equal items keep their order, whatever the comparison says: the result is the same everywhere.
func (s *sandbox) tableSort(l *lua.LState) int {
	const name = "table.sort"
	t := s.table(l, name, 1)
	n := t.Len()
	items := make([]lua.LValue, n)
	for i := range items {
		if items[i] = t.RawGetInt(i + 1); items[i] == lua.LNil {
			s.raise(l, "%s: item %d is nil: a list has no holes", name, i+1)
		}
	}
	s.charge(l, n+int(float64(n)*math.Log2(float64(n)+1)))
	less := func(a, b lua.LValue) bool { return s.less(l, a, b) }
	if by := l.Get(2); by != lua.LNil {
		if _, ok := by.(*lua.LFunction); !ok {
			s.bad(l, name, 2, "a function")
		}
		less = func(a, b lua.LValue) bool {
			l.Push(by)
			l.Push(a)
			l.Push(b)
			l.Call(2, 1)
			yes := lua.LVAsBool(l.Get(-1))
			l.Pop(1)
			return yes
		}
	}
	sort.SliceStable(items, func(i, j int) bool { return less(items[i], items[j]) })
	for i, v := range items {
		t.RawSetInt(i+1, v)
	}
	return 0
}

// less is the operator "<" for table.sort.
func (s *sandbox) less(l *lua.LState, a, b lua.LValue) bool {
	switch x := a.(type) {
	case lua.LNumber:
		if y, ok := b.(lua.LNumber); ok {
			return x < y
		}
	case lua.LString:
		if y, ok := b.(lua.LString); ok {
			s.charge(l, min(len(x), len(y))/64)
			return x < y
		}
	default:
		if m, ok := s.metatable(a).(*lua.LTable); ok && m.RawGetString("__lt") != lua.LNil {
			return l.LessThan(a, b)
		}
	}
	s.raise(l, "table.sort: %s cannot be compared with %s: give a function that compares", article(kind(a)), article(kind(b)))
	return false
}
