package host

import (
	"context"
	"errors"
	"fmt"
	"runtime"
	"strings"
	"testing"
	"time"

	lua "github.com/yuin/gopher-lua"
)

// tight are limits that a hostile script meets soon, so that the tests are quick.
// The net of time is wide, as a busy machine must not decide which bound is met.
var tight = Limits{Steps: 2_000_000, Memory: 24 << 20, Time: 20 * time.Second}

// netTime is the bound of what costs far more than its instructions and allocations show: processor time ends it.
const netTime = "processor time"

// limitsFor are tight limits for a script.
func limitsFor(bound string) Limits {
	l := tight
	if bound == netTime {
		l.Time = 100 * time.Millisecond
	}
	return l
}

// The hostile scripts. bound says which resource would be without bound, want what the error says, and pcall whether a script that
// wraps the attack in pcall must end too: a bound that is a plain error of the script may be caught.
var hostile = []struct {
	name, script, bound, want string
	fatal                     bool
}{
	{"endless loop", `while true do end`, "time", "does not come to an end", true},
	{"endless repeat", `repeat until false`, "time", "does not come to an end", true},
	{"endless goto", `::a:: goto a`, "time", "does not come to an end", true},
	{"for without step", `for i = 2, 1, 0 do end`, "time", "does not come to an end", true},
	{"for to infinity", `for i = 1, math.huge do end`, "time", "does not come to an end", true},
	{"endless tail calls", `local function f() return f() end f()`, "time", "does not come to an end", true},
	{"mutual tail calls", `local f, g function f() return g() end function g() return f() end f()`, "time", "does not come to an end", true},
	{"endless iterator", `for x in function() return 1 end do end`, "time", "does not come to an end", true},
	{"loop inside pcall", `pcall(function() while true do end end)`, "time", "does not come to an end", true},
	{"loop that catches the limit", `while true do pcall(function() while true do end end) end`, "time", "does not come to an end", true},
	{"loop in an error handler", `xpcall(error, function() while true do end end)`, "time", "does not come to an end", true},
	{"loop in __index", `local t = setmetatable({}, {__index = function() while true do end end}) local x = t.a`, "time", "does not come to an end", true},
	{"loop in __tostring", `tostring(setmetatable({}, {__tostring = function() while true do end end}))`, "time", "does not come to an end", true},
	{"loop in __concat", `local t = setmetatable({}, {__concat = function() while true do end end}) local x = t .. "a"`, "time", "does not come to an end", true},
	{"loop in a comparison", `table.sort({3, 2, 1}, function() while true do end end)`, "time", "does not come to an end", true},
	{"loop in gsub", `string.gsub("a", "a", function() while true do end end)`, "time", "does not come to an end", true},
	{"loop in a module", `require "endless"`, "time", "does not come to an end", true},
	{"comparison without order", `local t = {} for i = 1, 3e4 do t[i] = i % 7 end for i = 1, 1e6 do table.sort(t, function(a, b) return i % 2 == 0 end) end`, "time", "does not come to an end", true},
	{"sorting again and again", `local t = {} for i = 1, 1e5 do t[i] = -i end while true do table.sort(t) table.insert(t, 1, 0) end`, "time", "does not come to an end", true},
	{"inserting at the front", `local t = {} for i = 1, 1e9 do table.insert(t, 1, i) end`, "time", "does not come to an end", true},
	{"backtracking", `string.find(string.rep("a", 3000), string.rep("a-", 30) .. "b")`, "time", "", true},
	{"backtracking in gsub", `string.gsub(string.rep("a", 1000), ".-.-.-.-.-.-b", "")`, "time", "", true},
	{"backtracking in gmatch", `for x in string.gmatch(string.rep("a", 1000), ".-.-.-.-.-.-b") do end`, "time", "", true},
	{"quadratic gsub", `local s = string.rep("a", 1e6) while true do s:gsub("a", "b") end`, "time", "does not come to an end", true},
	{"balance over and over", `local s = string.rep("(", 1e6) s:find("%b()")`, "time", "", true},
	{"length of a hollow table", `local t = {} t[131071] = 1 t[131071] = nil while true do local n = #t end`, netTime, "does not come to an end", true},
	{"walking a hollow table", `local t = {} t[131071] = 1 t[131071] = nil while true do next(t) end`, netTime, "does not come to an end", true},
	{"comparing long texts", `local a, b = ("x"):rep(4e6), ("x"):rep(4e6) while true do local c = a < b end`, netTime, "does not come to an end", true},
	{"hollow tables", `while true do local t = {} t[1048575] = 1 end`, "time and memory", "", true},

	{"hollow tables kept", `local keep = {} while true do local t = {} t[131071] = 1 keep[#keep + 1] = t end`, "memory", "", true},
	{"growing table", `local t = {} for i = 1, 1e9 do t[i] = {i} end`, "memory", "", true},
	{"growing keys", `local t = {} for i = 1, 1e9 do t["k" .. i] = i end`, "memory", "", true},
	{"keys set and cleared", `local t = {} for i = 1, 1e9 do t[i + 0.5] = 1 t[i + 0.5] = nil end`, "memory", "", true},
	{"closures kept", `local t = {} for i = 1, 1e9 do t[i] = function() return i end end`, "memory", "", true},
	{"doubling text", `local s = "x" while true do s = s .. s end`, "memory", "longer than 16 MiB", false},
	{"texts kept", `local t, s = {}, ("x"):rep(1e6) for i = 1, 1e9 do t[i] = s .. i end`, "memory", "", true},
	{"join of many", `local s = ("x"):rep(8e6) local t = s .. s .. s`, "memory", "longer than 16 MiB", false},
	{"string.rep", `string.rep("x", 1e10)`, "memory", "longer than 16 MiB", false},
	{"method rep", `("x"):rep(1e300)`, "memory", "longer than 16 MiB", false},
	{"rep of rep", `string.rep(string.rep("x", 1e6), 1e6)`, "memory", "longer than 16 MiB", false},
	{"table.concat", `local t, s = {}, ("x"):rep(1e6) for i = 1, 1000 do t[i] = s end table.concat(t)`, "memory", "longer than 16 MiB", false},
	{"concat with a long separator", `table.concat({1, 2, 3}, ("x"):rep(1e7))`, "memory", "longer than 16 MiB", false},
	{"concat over a huge range", `table.concat({}, "", 1, 1e15)`, "time", "", false},
	{"gsub that grows", `string.gsub(("x"):rep(1e4), "x", ("y"):rep(1e4))`, "memory", "longer than 16 MiB", false},
	{"gsub template that grows", `string.gsub(("x"):rep(1e6), ".*", ("%0"):rep(100))`, "memory", "longer than 16 MiB", false},
	{"format width", `string.format("%1000000000d", 1)`, "memory", "is no directive", false},
	{"format precision", `string.format("%.1000000000f", 1)`, "memory", "is no directive", false},
	{"format of long texts", `string.format(("%s"):rep(100), unpack((function() local t = {} for i = 1, 100 do t[i] = ("x"):rep(1e6) end return t end)()))`, "memory", "", false},
	{"unpack", `unpack({}, 1, 1e8)`, "memory", "at most 8,000", false},
	{"string.byte", `string.byte(("x"):rep(1e6), 1, -1)`, "memory", "at most 8,000", false},
	{"growing varargs", `local function f(...) return f(1, ...) end f()`, netTime, "", false},
	{"many arguments", `local function f(n, ...) if n == 0 then return ... end return f(n - 1, n, ...) end f(1e6)`, netTime, "", false},

	{"recursion", `local function f() return 1 + f() end f()`, "stack", "too deep", false},
	{"mutual recursion", `local f, g function f() return g() + 1 end function g() return f() + 1 end f()`, "stack", "too deep", false},
	{"recursion in __index", `local t = {} setmetatable(t, {__index = function(t, k) return t[k .. "x"] end}) local x = t.a`, "stack", "too deep", false},
	{"recursion in __tostring", `local t = {} setmetatable(t, {__tostring = function(t) return tostring(t) end}) tostring(t)`, "stack", "too deep", false},
	{"recursion in __call", `local t = {} setmetatable(t, {__call = function(t) return t() + 1 end}) t()`, "stack", "too deep", false},
	{"recursion in sort", `local function f() table.sort({2, 1}, f) return true end f()`, "stack", "too deep", false},
	{"recursion in gsub", `local function f() return ("a"):gsub("a", f) end f()`, "stack", "too deep", false},
	{"pcall within pcall", `local function f() return assert(pcall(f)) end local ok, e = pcall(f) error(e, 0)`, "stack", "", false},
	{"circle of __index", `local a, b = {}, {} setmetatable(a, {__index = b}) setmetatable(b, {__index = a}) local x = a.y`, "time", "circle", false},
	{"circle of __newindex", `local a, b = {}, {} setmetatable(a, {__newindex = b}) setmetatable(b, {__newindex = a}) a.y = 1`, "time", "circle", false},
	{"deep pattern", `string.find(("a"):rep(1000), ("a?"):rep(1000))`, "stack", "", false},
	{"many captures", `string.find("a", ("()"):rep(100))`, "stack", "more than 32 captures", false},
	{"module loop", `require "a"`, "time", "a → b → a", false},
	{"module that needs itself", `require "me"`, "time", "me → me", false},
	{"huge error", `error(("x"):rep(1e7), 0)`, "output", "xxx", false},
	{"error with an evil table", `error(setmetatable({}, {__tostring = function() while true do end end}))`, "time", "with a table", false},
	{"print without end", `while true do print(("x"):rep(1e4)) end`, "output", "does not come to an end", true},
	{"finaliser", `setmetatable({}, {__gc = function() while true do end end}) error("after", 0)`, "time", "after", false},
}

var hostileModules = map[string]string{
	"a": `require "b"`, "b": `require "a"`, "me": `require "me"`, "endless": `while true do end`,
}

func TestHostileScripts(t *testing.T) {
	if n := len(hostile); n < 40 {
		t.Fatalf("only %d hostile scripts", n)
	}
	for _, h := range hostile {
		t.Run(h.name, func(t *testing.T) {
			began := processorTime()
			out, err := trial{modules: hostileModules, limits: limitsFor(h.bound)}.run(h.script)
			spent := processorTime() - began
			var e *Error
			if !errors.As(err, &e) {
				t.Fatalf("%s is without bound: the script ended with %v, printing %d bytes", h.bound, err, len(out))
			}
			if !strings.Contains(e.Msg, h.want) {
				t.Errorf("error %q does not say %q", e.Msg, h.want)
			}
			if e.Pos.File == "" || e.Pos.Line == 0 {
				t.Errorf("error %q has no place", e.Msg)
			}
			if len(e.Error()) > maxMessage+200 || len(out) > maxPrinted+200 {
				t.Errorf("message of %d bytes, %d bytes printed", len(e.Error()), len(out))
			}
			// A net for hangs; each takes a second at most.
			if spent > time.Minute {
				t.Errorf("took %v of processor time", spent)
			}
		})
	}
}

// TestDataMeetsTheBound: the meter ends a binding that fills the heap while it reads data, not only the script after it.
func TestDataMeetsTheBound(t *testing.T) {
	for _, c := range []struct{ call, content string }{
		{"data.json", "[" + strings.Repeat("{\"a\":1},", 200_000) + "{}]"},
		{"data.csv", strings.Join(strings.Fields(numbered(20, "c%d ")), ",") + "\n" + strings.Repeat("1"+strings.Repeat(",1", 19)+"\n", 100_000)},
	} {
		path := scene(t, "scene.lua", "pcall("+c.call+", \"x\")", "x", c.content)
		var before, after runtime.MemStats
		runtime.ReadMemStats(&before)
		_, _, err := Evaluate(t.Context(), path, Options{Limits: Limits{Memory: 16 << 20}})
		runtime.ReadMemStats(&after)
		if err == nil || !strings.HasSuffix(err.Error(), "scene.lua:1: the scene holds more than 16 MiB") {
			t.Errorf("%s: got %v", c.call, err)
		}
		// Each would take 100 MB and more.
		if mb := (after.TotalAlloc - before.TotalAlloc) >> 20; mb > 96 {
			t.Errorf("%s: %d MB were allocated before the bound of 16", c.call, mb)
		}
	}
}

// TestPcallCannotHideABound runs each attack on a bound that is final inside pcall: the scene must end all the same.
func TestPcallCannotHideABound(t *testing.T) {
	for _, h := range hostile {
		if !h.fatal {
			continue
		}
		quick := limitsFor(h.bound)
		quick.Steps, quick.Memory = 50_000, 8<<20
		t.Run(h.name, func(t *testing.T) {
			out, err := trial{modules: hostileModules, limits: quick}.run(
				"print(pcall(function() " + h.script + " end)) print(xpcall(function() end, print)) print('survived')")
			if err == nil || strings.Contains(out, "survived") {
				t.Errorf("the scene went on after its bound: %v, printed %q", err, out)
			}
		})
	}
}

// TestStepsAreTheSameEachTime: what is counted of instructions hangs on the script alone. Allocations, which the meter adds when a pulse has
// passed, are kept out by a pulse that does not pass.
func TestStepsAreTheSameEachTime(t *testing.T) {
	first := ""
	for range 3 {
		limits := Limits{Steps: 2_000}.withDefaults()
		m := newMeter(t.Context(), limits)
		m.last = m.last.Add(1000 * time.Hour)
		s := newSandbox(m, limits, nil)
		var out strings.Builder
		s.printer.w = &out
		if err := s.run("scene.lua", []byte(`local n = 0 while true do n = n + 1 print(n) end`)); err == nil {
			t.Fatal("no bound")
		}
		if first == "" {
			first = out.String()
		}
		if first == "" || out.String() != first {
			t.Fatalf("the loop ran %d lines, then %d", strings.Count(first, "\n"), strings.Count(out.String(), "\n"))
		}
	}
}

func TestBigSources(t *testing.T) {
	items := func(n int) string {
		var b strings.Builder
		b.WriteString("local t = {")
		for i := range n {
			fmt.Fprintf(&b, "%d,", i%9)
		}
		b.WriteString("} print(#t, t[#t])")
		return b.String()
	}
	for _, c := range []struct {
		name, script, want string // want empty: it runs
	}{
		{"list as long as may be", items(maxArrayItems), ""},
		{"list one longer", items(maxArrayItems + 1), "data.csv"},
		{"file too long", "--" + strings.Repeat("x", 1<<20), "data.csv"},
		{"many constants", "local t = {}\n" + numbered(60_000, "t[%d] = %d.5\n"), "data.csv"},
		{"many names", numbered(60_000, "x%d = %d\n"), "data.csv"},
		{"nested tables", strings.Repeat("x={", 300_000), "nested more than"},
		{"nested tables, closed", "x=" + strings.Repeat("{", 300_000) + strings.Repeat("}", 300_000), "nested more than"},
		{"nested brackets", "x=" + strings.Repeat("(", 300_000) + "1" + strings.Repeat(")", 300_000), "nested more than"},
		{"nested functions", strings.Repeat("return function() ", 20_000) + strings.Repeat(" end", 20_000), "nested more than"},
		{"nested blocks", strings.Repeat("do ", 100_000) + strings.Repeat("end ", 100_000), "nested more than"},
		{"nested calls", "x=" + strings.Repeat("type(", 100_000) + "1" + strings.Repeat(")", 100_000), "nested more than"},
		{"chain of calls", "x=type" + strings.Repeat("()", 300_000), "nested more than"},
		{"chain of fields", "x=a" + strings.Repeat(".b", 300_000), "nested more than"},
		{"chain of not", "x=" + strings.Repeat("not ", 200_000) + "1", "nested more than"},
		{"chain of minus", "x=" + strings.Repeat("- ", 300_000) + "1", "nested more than"},
		{"chain of plus", "x=1" + strings.Repeat("+1", 300_000), "nested more than"},
		{"chain of powers", "x=1" + strings.Repeat("^1", 300_000), "nested more than"},
		{"chain of and", "x=1" + strings.Repeat(" and 1", 100_000), "nested more than"},
		{"chain of joins", "local x='a'" + strings.Repeat("..'b'", 2_000) + " print(#x)", ""},
		{"chain of elseif", "if x1 then" + strings.Repeat(" elseif x1 then", 50_000) + " end", "nested more than"},
		{"many labels", numbered(5_000, "::l%d::"), "labels and gotos"},
		{"many locals", numbered(300, "local v%d = %[1]d\n"), "local variables"},
		{"many upvalues", numbered(150, "local v%d = %[1]d\n") + "return function() return {" + numbered(150, "v%d,") + "} end", "local variables of the functions around"},
		{"many parameters", "local function f(" + numbered(300, "a%d,") + "z) end", ""},
		{"long function", "while x1 do\n" + strings.Repeat("x1=x1\n", 100_000) + "end", ""},
	} {
		t.Run(c.name, func(t *testing.T) {
			began := processorTime()
			out, err := trial{limits: tight}.run("x1 = false " + c.script)
			if spent := processorTime() - began; spent > time.Minute {
				t.Errorf("took %v", spent)
			}
			switch c.want {
			case "":
				if e := new(Error); err != nil && !errors.As(err, &e) {
					t.Error(err)
				} else if strings.HasPrefix(c.name, "list") && out != "25550\t7\n" {
					t.Errorf("printed %q, error %v", out, err)
				} else if c.name == "chain of joins" && out != "2001\n" {
					t.Errorf("printed %q, error %v", out, err)
				}
			default:
				if err == nil || !strings.Contains(err.Error(), c.want) {
					t.Errorf("error %v, want %q", err, c.want)
				}
			}
		})
	}
}

func numbered(n int, format string) string {
	var b strings.Builder
	for i := range n {
		if strings.Count(format, "%") == 2 && !strings.Contains(format, "[1]") {
			fmt.Fprintf(&b, format, i, i)
		} else {
			fmt.Fprintf(&b, format, i)
		}
	}
	return b.String()
}

// TestEngineTimeIsNotTheScenes: long work of the engine leaves the scene its time, and has a bound of its own.
func TestEngineTimeIsNotTheScenes(t *testing.T) {
	burn := func() {
		for began := processorTime(); processorTime()-began < 150*time.Millisecond; {
		}
	}
	for _, c := range []struct {
		run   func(m *meter)
		build time.Duration
		want  string
	}{
		{func(m *meter) { m.compute(burn) }, time.Hour, ""},
		{func(m *meter) { m.engine(burn) }, time.Hour, ""},
		{func(m *meter) { m.compute(func() { m.engine(burn) }) }, time.Hour, ""},
		{func(m *meter) { m.compute(burn) }, 100 * time.Millisecond, "reading files, building meshes and framing them takes more than 100ms of processor time"},
		{func(*meter) { burn() }, time.Hour, "the scene does not come to an end: stopped after 100ms of processor time"},
	} {
		m := newMeter(t.Context(), Limits{Time: 100 * time.Millisecond, Build: c.build}.withDefaults())
		c.run(m)
		m.last = time.Time{} // a pulse has passed
		m.look()
		got := ""
		if m.stopped != nil {
			got = m.stopped.Msg
		}
		if got != c.want {
			t.Errorf("got %q, want %q", got, c.want)
		}
	}
}

func TestCancellation(t *testing.T) {
	ctx, cancel := context.WithCancel(context.Background())
	s := newSandbox(newMeter(ctx, Limits{}.withDefaults()), Limits{}.withDefaults(), func(l *lua.LState) {
		l.SetGlobal("cancel", l.NewFunction(func(*lua.LState) int { cancel(); return 0 }))
	})
	err := s.run("scene.lua", []byte("pcall(function()\n cancel()\n while true do pcall(function() while true do end end) end end)"))
	if !errors.Is(err, context.Canceled) {
		t.Fatalf("got %v", err)
	}
	if !strings.Contains(err.Error(), "scene.lua:3: stopped") {
		t.Errorf("got %v", err)
	}
}

func TestPanicsInBindings(t *testing.T) {
	for _, script := range []string{"local x = 1\nbroken()", "local x = 1\nprint(pcall(broken)) print('survived')", "local x = 1\npcall(table.sort, {2, 1}, broken) print('survived')"} {
		out, err := trial{open: func(l *lua.LState) {
			l.SetGlobal("broken", l.NewFunction(func(*lua.LState) int {
				var none []int
				return none[len(none)] // the bug
			}))
		}}.run(script)
		if err == nil || !strings.Contains(err.Error(), "scene.lua:2: internal error in") || strings.Contains(err.Error(), "goroutine") || out != "" {
			t.Errorf("error %v, printed %q", err, out)
		}
	}
}

func TestNothingIsLeftRunning(t *testing.T) {
	before := runtime.NumGoroutine()
	for range 20 {
		if _, err := (trial{}).run(`for i = 1, 10 do pcall(error) end`); err != nil {
			t.Fatal(err)
		}
	}
	if after := runtime.NumGoroutine(); after > before {
		t.Errorf("%d goroutines, then %d", before, after)
	}
}
