package host

import (
	"context"
	"fmt"
	"strings"
	"testing"

	lua "github.com/yuin/gopher-lua"
)

// fifty is a list of fifty numbers, as many as the library stores at once.
var fifty = strings.Repeat("1, ", 49) + "1"

// Faults of the script library against the Lua 5.1 manual that this package works round. bare is what the library itself gives: should it
// mend a fault, the test says so, and the way round can go.
var libraryFaults = []struct{ name, script, want, bare string }{
	{"a caught error leaves closures and their variables together", `local n = 0 local function inc() n = n + 1 end pcall(error, "x") inc() out = n`, "1", "0"},
	{"a named field behind fifty items changes none of them", `local function f(x) return x end local t = {` + fifty + `, x = f(5), y = f(6)} out = t[1] + t[2]`, "2", "fault"},
	{"a number with a leading zero is decimal", `out = 0010`, "10", "8"},
	{"a text with a leading zero is decimal", `out = "010" + 0`, "10", "8"},
	{"an exponent without a point is a number", `out = tonumber("1e5")`, "100000", "nil"},
	{"an underscore makes no number", `out = tonumber("1_0") == nil and pcall(function() return "1_0" + 1 end) == false`, "true", "false"},
	{"math.huge is infinite", `out = math.huge == 1/0`, "true", "false"},
	{"numbers join as %.14g", `out = 1/3 .. ""`, "0.33333333333333", "0.3333333333333333"},
	{"sets of a pattern hold what is in them", `out = ("a-b"):gsub("[a%-]", "")`, "b", "b"},
	{"upper leaves other letters alone", `out = ("é"):upper()`, "é", "É"},
}

func TestLibraryFaults(t *testing.T) {
	for _, c := range libraryFaults {
		got, err := trial{}.run(c.script + " print(out)")
		if err != nil || strings.TrimSuffix(got, "\n") != c.want {
			t.Errorf("%s: got %q (%v), want %q", c.name, got, err, c.want)
		}
		l := lua.NewState()
		bare := ""
		if err := l.DoString(c.script); err != nil {
			bare = "fault"
		} else {
			bare = l.GetGlobal("out").String()
		}
		l.Close()
		if bare != c.bare {
			t.Errorf("%s: the library gives %q now, it gave %q", c.name, bare, c.bare)
		}
	}
}

// TestOrderOfPairs: a list's items first, then the other keys in the order in which they were first set.
func TestOrderOfPairs(t *testing.T) {
	var script strings.Builder
	script.WriteString("local t = {}\n")
	want := ""
	for i := range 200 {
		fmt.Fprintf(&script, "t.k%d = %d\n", i*7919%1000, i)
		want += fmt.Sprintf("k%d ", i*7919%1000)
	}
	script.WriteString("t[2] = 0 t[1] = 0 t[0.5] = 0 local s = '' for k in pairs(t) do s = s .. k .. ' ' end print(s)")
	for range 20 {
		out, err := trial{}.run(script.String())
		if err != nil || strings.TrimSpace(out) != plain("1 2 "+want+"0.5") {
			t.Fatalf("got %q, %v", out, err)
		}
	}
}

func TestProtectedCalls(t *testing.T) {
	for _, c := range []struct{ script, want string }{
		{`print(pcall(function(...) return select("#", ...), ... end, 1, nil, 3))`, "true 3 1 nil 3"},
		{`print(pcall(error))`, "false nil"},
		{`local t = {} local ok, e = pcall(error, t) print(ok, e == t)`, "false true"},
		{`print(pcall(error, "x", 0))`, "false x"},
		{`print(pcall(nil))`, "false scene.lua:1: pcall: argument 1 is nil and cannot be called"},
		{`print(xpcall(function() return 1, 2 end, print))`, "true 1 2"},
		{`print(xpcall(function() error("x", 0) end, function(e) return "<" .. e .. ">", 7 end))`, "false <x> 7"},
		{`print(xpcall(function() error("x", 0) end, function(e) error("y", 0) end))`, "false y"},
		{`local f local ok = pcall(function() local n = 1 f = function() n = n + 1 return n end error "x" end) f() print(ok, f())`, "false 3"},
		{`local n = 0 for i = 1, 3 do pcall(function() n = n + i if i == 2 then error "x" end end) end print(n)`, "6"},
		{`local function deep(k) if k == 0 then error("bottom", 0) end return (pcall(deep, k - 1)) and deep(k - 1) end print(pcall(deep, 3))`, "true false"},
		{`local ok, e = pcall(pcall) print(ok, e)`, "false scene.lua:1: pcall: argument 1 must be given, got nothing"},
		{`print(select("#", pcall(unpack, {}, 1, 300)))`, "301"},
	} {
		out, err := trial{}.run(c.script)
		got := strings.TrimSpace(strings.ReplaceAll(out, "\t", " "))
		if err != nil || got != c.want {
			t.Errorf("%s\nprinted %q (%v), want %q", c.script, got, err, c.want)
		}
	}
}

func TestTables(t *testing.T) {
	for _, c := range []struct{ script, want string }{
		{`local t = {1, 2, 3} table.insert(t, 1, 0) table.insert(t, 9) print(table.concat(t, ","))`, "0,1,2,3,9"},
		{`local t = {1, 2, 3} print(table.remove(t, 1), table.remove(t), #t, t[1])`, "1 3 1 2"},
		{`print(table.remove({}))`, ""},
		{`local t = {3, 1, 2} table.sort(t) print(table.concat(t, ","))`, "1,2,3"},
		{`local t = {"b", "a"} table.sort(t, function(a, b) return a > b end) print(table.concat(t, ","))`, "b,a"},
		{`print(table.concat({1, 2, 3}, "-", 2, 3), table.concat({}), table.concat({"x"}, "-", 2))`, "2-3"},
		{`print(table.maxn{1, 2, [10] = 1})`, "10"},
		{`print(unpack({1, 2, 3}, 2))`, "2 3"},
		{`print(#table.concat({(("x"):rep(100))}, ""))`, "100"},
		{`print(rawequal("a", "a"), rawget(setmetatable({}, {__index = {x = 1}}), "x"), rawset({}, "x", 1).x)`, "true nil 1"},
		{`print(getmetatable(""), getmetatable({}))`, "false nil"},
		{`for i, v in ipairs{1, 2, nil, 4} do io_ = i end print(io_)`, "2"},
		{`print(next({}), next({5}))`, "nil 1 5"},
		{`_G.fresh = 5 print(fresh, _G.fresh, rawget(_G, "fresh"))`, "5 5 5"},
		{`print(math.max(1, 3, 2), math.min(2, 1), math.fmod(-7, 3), math.modf(-3.5))`, "3 1 -1 -3 -0.5"},
		{`print(math.deg(math.pi), math.rad(180) == math.pi, math.ldexp(1, 10), math.frexp(8))`, "180 true 1024 0.5 4"},
	} {
		out, err := trial{}.run(c.script)
		got := strings.Join(strings.Fields(out), " ")
		if err != nil || got != c.want {
			t.Errorf("%s\nprinted %q (%v), want %q", c.script, got, err, c.want)
		}
	}
}

// TestSandboxCannotBeChanged tries to reach what all scripts share.
func TestSandboxCannotBeChanged(t *testing.T) {
	for _, script := range []string{
		`setmetatable(_G, nil)`, `setmetatable(math, {})`, `rawset(math, "floor", 1)`, `rawset(string, "rep", 1)`, `getmetatable("").__index = nil`,
		`setmetatable("", {})`, `string.rep = nil`, `getmetatable(_G).__index = nil`, `_G.print = 1`, `rawset(_G, "(..)", print)`, `table.sort = nil`,
	} {
		if _, err := (trial{}).run(script); err == nil {
			t.Errorf("%s is accepted", script)
		}
	}
	out, err := trial{}.run(`for k in pairs(_G) do print(k) end print(rawget(_G, "print"))`)
	if err != nil || out != "nil\n" {
		t.Errorf("printed %q, %v", out, err)
	}
}

// BenchmarkEvaluate measures what the sandbox adds: a loop of table, text and arithmetic work.
func BenchmarkEvaluate(b *testing.B) {
	script := `local t, s = {}, 0 for i = 1, 1e5 do t[i] = i * 2 s = s + t[i] local name = "k" .. i end`
	for b.Loop() {
		limits := Limits{}.withDefaults()
		if err := newSandbox(newMeter(context.Background(), limits), limits, nil).run("scene.lua", []byte(script)); err != nil {
			b.Fatal(err)
		}
	}
}
