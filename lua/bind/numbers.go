package bind

import (
	"strconv"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/num"
	"lampbook/engine/model"
)

func numberCalls() []call {
	return []call{
		{name: "mm", params: "length!", run: func(a *args) lua.LValue { return a.metres(1, 1000) }},
		{name: "cm", params: "length!", run: func(a *args) lua.LValue { return a.metres(1, 100) }},
		{name: "inch", params: "length!", run: func(a *args) lua.LValue { return a.metres(254, 10_000) }},
		{name: "steps", params: "from! to! count!", run: steps},
		{name: "geometric", params: "from! to! count!", run: geometric},
	}
}

// metres converts a length to metres by a fraction of whole numbers, so that cm(12) is the number nearest to 0.12.
func (a *args) metres(over, under float64) lua.LValue {
	var length float64
	a.number("length", &length, limit{})
	return lua.LNumber(length * over / under)
}

// steps is a list of evenly spaced numbers, both ends included.
func steps(a *args) lua.LValue {
	from, to, count := a.span(limit{})
	list := a.l.CreateTable(count, 0)
	for i := range count {
		list.Append(lua.LNumber(rounded(from + float64((to-from)*share(i, count)))))
	}
	return list
}

// geometric is a list of numbers of equal ratio, both ends included.
func geometric(a *args) lua.LValue {
	from, to, count := a.span(limit{})
	if from == 0 || to == 0 || (from < 0) != (to < 0) {
		a.failf("from and to must both be > 0 or both be < 0, got %s and %s", number(from), number(to))
	}
	list := a.l.CreateTable(count, 0)
	for i := range count {
		list.Append(lua.LNumber(rounded(from * num.PowWide(to/from, share(i, count)))))
	}
	return list
}

// span reads the ends and the count of a list of numbers.
func (a *args) span(r limit) (from, to float64, count int) {
	a.number("from", &from, r)
	a.number("to", &to, r)
	a.integer("count", &count, 1, model.MaxFrames)
	return from, to, count
}

// share is how far along the i-th of count numbers lies, [0, 1].
func share(i, count int) float64 {
	if count == 1 {
		return 0
	}
	return float64(i) / float64(count-1)
}

// rounded keeps twelve significant digits: a third of the way from 4 to 256 is 16, not 15.999999999999998, on every machine.
func rounded(v float64) float64 {
	r, err := strconv.ParseFloat(strconv.FormatFloat(v, 'g', 12, 64), 64)
	if err != nil {
		return v
	}
	return r
}
