package bind

import (
	lua "github.com/yuin/gopher-lua"
)

// lineKey is how a row of data tells its line in the file: row._line.
const lineKey = "_line"

// rowMeta makes rows of data strict: reading a column that the table has not is an error with the nearest name, and _line
// gives the row's line without being one of its columns, so that pairs and tags pass it by.
type rowMeta struct {
	args  *args
	keys  []string
	known map[string]bool
	lines map[*lua.LTable]int
	table *lua.LTable
}

func (a *args) rowMeta(keys []string) *rowMeta {
	m := &rowMeta{args: a, keys: keys, known: map[string]bool{}, lines: map[*lua.LTable]int{}}
	for _, k := range keys {
		m.known[k] = true
	}
	env := a.env
	m.table = a.l.NewTable()
	m.table.RawSetString("__metatable", lua.LString("row"))
	m.table.RawSetString("__index", a.l.NewFunction(func(l *lua.LState) int {
		row, _ := l.Get(1).(*lua.LTable)
		key := l.Get(2)
		name, text := key.(lua.LString)
		switch {
		case text && name == lineKey && row != nil:
			l.Push(lua.LNumber(m.lines[row]))
		case text && m.known[string(name)]:
			l.Push(lua.LNil) // a column of numbers, or a field of JSON, that is empty here
		default:
			env.raise(l, "the row of line %d has no column %s%s", m.lines[row], describe(key), Hint(key.String(), keys))
		}
		return 1
	}))
	return m
}

// own makes a table a row.
func (m *rowMeta) own(row *lua.LTable, line int) {
	m.lines[row] = line
	row.Metatable = m.table
}

// Limits of data. A table takes the room of many values.
const (
	maxCells   = 4_000_000
	tableCells = 16
	chargeEach = 4096 // cells between two questions to the host: about a megabyte of Lua values
)

// tally counts the cells of data that become Lua values, and lets the host look on while they do.
type tally struct {
	args          *args
	cells, unpaid int
}

// add counts cells and reports whether the data may still be as long. It ends the script where the host has enough of it.
func (t *tally) add(cells int) bool {
	t.cells += cells
	if t.unpaid += cells; t.unpaid >= chargeEach {
		if charge := t.args.env.Charge; charge != nil && !charge(t.unpaid) {
			t.args.failf("the scene may use no more")
		}
		t.unpaid = 0
	}
	return t.cells <= maxCells
}
