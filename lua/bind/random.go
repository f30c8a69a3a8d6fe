package bind

import (
	"crypto/sha256"
	"encoding/binary"
	"math/rand/v2"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

// random is a generator of its own. It is the one value with a state: each number drawn is another.
type random struct {
	name string
	rng  *rand.Rand
}

func randomCalls() []call {
	return []call{
		{name: "random", params: "name!", run: newRandom},
		{name: "random:number", params: "from to", run: randomNumber},
		{name: "random:integer", params: "from! to!", run: randomInteger},
		{name: "random:pick", params: "list!", run: randomPick},
		{name: "random:shuffle", params: "list!", run: randomShuffle},
	}
}

// newRandom seeds a generator (PCG-DXSM) by the scene and the name, and by nothing else.
func newRandom(a *args) lua.LValue {
	r := &random{}
	a.text("name", &r.name)
	seed := sha256.Sum256(append(binary.LittleEndian.AppendUint64(nil, a.env.Seed()), r.name...))
	r.rng = rand.New(rand.NewPCG(binary.LittleEndian.Uint64(seed[:]), binary.LittleEndian.Uint64(seed[8:])))
	return a.env.push(a.l, r)
}

func randomNumber(a *args) lua.LValue {
	from, to := 0.0, 1.0
	a.number("from", &from, between(-1e15, 1e15, ""))
	a.number("to", &to, between(-1e15, 1e15, ""))
	if from > to {
		a.failf("from must be at most to, %s, got %s", number(to), number(from))
	}
	return lua.LNumber(from + float64((to-from)*a.self.(*random).rng.Float64()))
}

func randomInteger(a *args) lua.LValue {
	const most = 1 << 50
	var from, to int
	a.integer("from", &from, -most, most)
	a.integer("to", &to, -most, most)
	if from > to {
		a.failf("from must be at most to, %d, got %d", to, from)
	}
	return lua.LNumber(from + a.self.(*random).rng.IntN(to-from+1))
}

func randomPick(a *args) lua.LValue {
	list := a.list("list", a.get("list"), "values", model.MaxFrames)
	if len(list) == 0 {
		a.failf("list must not be empty")
	}
	return list[a.self.(*random).rng.IntN(len(list))]
}

// randomShuffle gives a new list; the old one stays as it is.
func randomShuffle(a *args) lua.LValue {
	list := a.list("list", a.get("list"), "values", model.MaxFrames)
	a.self.(*random).rng.Shuffle(len(list), func(i, j int) { list[i], list[j] = list[j], list[i] })
	t := a.l.CreateTable(len(list), 0)
	for _, v := range list {
		t.Append(v)
	}
	return t
}

func (*random) kind() string     { return kindRandom }
func (*random) maker() string    { return "random" }
func (*random) fields() []string { return []string{"name"} }

func (r *random) field(_ *Env, _ *lua.LState, _ string) lua.LValue { return lua.LString(r.name) }
