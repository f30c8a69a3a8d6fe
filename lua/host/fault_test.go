package host

import (
	"errors"
	"strings"
	"testing"
)

// The mistakes that people make, with the line and the words of the error that tells them.
var faults = []struct{ name, script, want string }{
	{"nil local", "local lamp\n\nlamp.radius = 1", "scene.lua:3: 'lamp' is nil, so it has no field 'radius'"},
	{"nil global table field", "shop = { lamps = {} }\nprint(shop.lamp.size)", "scene.lua:2: 'shop.lamp' is nil, so it has no field 'size'; did you mean \"lamps\"?"},
	{"number indexed", "local n = 5\nprint(n.x)", "scene.lua:2: 'n' is a number, so it has no field 'x'"},
	{"upvalue indexed", "local u\nlocal function f()\n  return u.x\nend\nf()", "scene.lua:3: 'u' is nil, so it has no field 'x'"},
	{"one of two on a line", "local a, b = {}, nil\nprint(a.x, b.x)", "scene.lua:2: 'b' is nil, so it has no field 'x'"},
	{"result of a call", "local function f() end\nprint(f().x)", "scene.lua:2: 'f(…)' is nil, so it has no field 'x'"},
	{"list item", "local rows = {}\nprint(rows[1].name)", "scene.lua:2: 'rows[1]' is nil, so it has no field 'name'"},
	{"method of nil", "local rig\nrig:turned(5)", "scene.lua:2: 'rig' is nil, so it has no field 'turned'"},
	{"unknown method", "local rig = {}\nrig:turned(5)", "scene.lua:2: 'rig:turned' is no function and cannot be called"},
	{"call of nil field", "local t = { area = 1 }\nt.aria()", "scene.lua:2: 't.aria' is nil and cannot be called; did you mean \"area\"?"},
	{"call of a number", "local n = 1\nn()", "scene.lua:2: 'n' is a number and cannot be called"},
	{"misspelt global", "local gloss = 1\n\nprint(glos)", "scene.lua:3: 'glos' is not defined; did you mean \"gloss\"?"},
	{"misspelt function", "pritn(1)", "scene.lua:1: 'pritn' is not defined; did you mean \"print\"?"},
	{"unknown global", "print(quux)", "scene.lua:1: 'quux' is not defined"},
	{"local out of scope", "do local depth = 1 end\nprint(depht)", "scene.lua:2: 'depht' is not defined; did you mean \"depth\"?"},
	{"own global misspelt", "counter = 1\nprint(countr)", "scene.lua:2: 'countr' is not defined; did you mean \"counter\"?"},
	{"io", "io.open('x')", "scene.lua:1: 'io' is not available in a scene: files are read by"},
	{"os", "print(os.time())", "scene.lua:1: 'os' is not available in a scene"},
	{"loadstring", "loadstring('x = 1')()", "scene.lua:1: 'loadstring' is not available in a scene: code is loaded by require alone"},
	{"coroutine", "coroutine.create(print)", "scene.lua:1: 'coroutine' is not available in a scene"},
	{"random", "print(math.random())", `scene.lua:1: math.random is not available in a scene: write local r = random("name")`},
	{"math function misspelt", "print(math.flor(1))", `scene.lua:1: math has no "flor"; did you mean "floor"?`},
	{"string method misspelt", "print(('x'):uper())", `scene.lua:1: string has no "uper"; did you mean "upper"?`},
	{"over a library name", "print = 1", "scene.lua:1: 'print' belongs to the scene language and cannot be assigned to"},
	{"into a library", "\nfunction math.double(x) return 2 * x end", "scene.lua:2: math cannot be changed"},
	{"rawset over a name", "rawset(_G, 'print', 1)", "scene.lua:1: rawset: the names of the scene language cannot be changed"},
	{"arithmetic on nil", "local size\nlocal x = size * 2", "scene.lua:2: 'size' is nil, and '*' needs numbers"},
	{"arithmetic, right side", "local step = {}\nlocal x = 2 + step", "scene.lua:2: 'step' is a table, and '+' needs numbers"},
	{"arithmetic on a field", "local t = { width = 1 }\nlocal x = t.widht / 2", "scene.lua:2: 't.widht' is nil, and '/' needs numbers; did you mean \"width\"?"},
	{"arithmetic on text", "local x = 'abc' + 1", "scene.lua:1: the text \"abc\" is no number, and '+' needs numbers"},
	{"text and nil", "local x = '5' + nil", "scene.lua:1: nil and a string cannot take part in '+'"},
	{"minus of nil", "local n\nlocal y = 1 local x = -n", "scene.lua:2: 'n' is nil and cannot be negated"},
	{"length of nil", "local n\nlocal x = #n", "scene.lua:2: 'n' is no table and no text and has no length"},
	{"length of a number", "local n = 5\nlocal x = 1 x = #n", "scene.lua:2: 'n' is a number and has no length"},
	{"comparison", "local limit = '5'\nif 3 < limit then end", "scene.lua:2: a number cannot be compared with a string (… < limit)"},
	{"comparison turned round", "local limit\nif limit > 3 then end", "scene.lua:2: a number cannot be compared with nil (limit > …)"},
	{"joining nil", "local name\nlocal x = 'a ' .. name .. '!'", "scene.lua:2: 'name' is nil, and '..' joins texts and numbers"},
	{"joining a table", "local x = 'a ' .. {}", "scene.lua:1: operand 2 of '..' is a table, and '..' joins texts and numbers"},
	{"for over a table", "local rows = {}\nfor i, r in rows do end", "scene.lua:2: 'rows' is a table, and 'for … in' needs an iterator: write pairs(rows) or ipairs(rows)"},
	{"for to nil", "local count\nfor i = 1, count do end", "scene.lua:2: the last value of 'for i' must be a number, 'count' is nil"},
	{"nil key", "local t, k = {}, nil\nt[k] = 1", "scene.lua:2: a table key is nil"},
	{"not-a-number key", "local t = {}\nt[0/0] = 1", "scene.lua:2: a table key is not a number (0/0)"},
	{"argument type", "print(('x'):rep({}))", "scene.lua:1: string.rep: argument 2 must be a number, got a table"},
	{"argument missing", "print(math.max())", "scene.lua:1: math.max: argument 1 must be a number, got nothing"},
	{"%d of a fraction", "print(string.format('%d', 2.5))", "scene.lua:1: string.format: %d needs a whole number, argument 2 is 2.5"},
	{"format without value", "print(string.format('%s %s', 1))", "scene.lua:1: string.format: the format asks for 2 values or more, got 1"},
	{"sorting a mixture", "table.sort({ 1, 'a' })", "scene.lua:1: table.sort: a string cannot be compared with a number"},
	{"own error", "\nerror('no such glaze')", "scene.lua:2: no such glaze"},
	{"own error, level 2", "local function f()\n  error('bad row', 2)\nend\nf()", "scene.lua:4: bad row"},
	{"own error, no place", "error('plain', 0)", "scene.lua:1: plain"},
	{"assertion", "assert(false, 'two lamps at least')", "scene.lua:1: two lamps at least"},
	{"bare assertion", "\nassert(nil)", "scene.lua:2: assertion failed"},
	{"error with a table", "error({})", "scene.lua:1: error was called with a table instead of a text"},
	{"inside pcall and thrown on", "local ok, e = pcall(function()\n  local x\n  x.y = 1\nend)\nerror(e, 0)", "scene.lua:3: 'x' is nil, so it has no field 'y'"},

	{"unclosed function", "local x = 1\nlocal function f()\n  return x\n", "scene.lua:3: the file ends before 'function' of line 2 is closed by 'end'"},
	{"unclosed brace", "local t = {\n  1,\n", "scene.lua:2: the file ends before '{' of line 1 is closed by '}'"},
	{"unclosed string", "local s = 'abc\nprint(s)", "scene.lua:1: the text that begins with 'abc' has no closing quote on its line"},
	{"unclosed long string", "local s = [[abc\n", "scene.lua:1: a long text or comment that begins with [[ has no closing ]]"},
	{"assignment in a condition", "local x\nif x = 2 then end", "scene.lua:2: unexpected '=': 'equal' is written =="},
	{"missing comma", "local t = {\n  width = 1\n  height = 2\n}", "scene.lua:3: unexpected 'height': is a comma missing at the end of line 2?"},
	{"!=", "if 1 != 2 then end", "scene.lua:1: unexpected character '!': 'not equal' is written ~="},
	{"+=", "local x = 1\nx += 1", "scene.lua:2: unexpected '+': write x = x + … in full"},
	{"++", "local x = 1\nx++", "scene.lua:2: unexpected '+': write x = x + 1 in full"},
	{"else if", "if a then\nelse if b then\nend", "scene.lua:3: the file ends before"},
	{"one end too many", "do end\nend", "scene.lua:2: unexpected 'end'"},
	{"curly quotes", "print(“hello”)", "scene.lua:1: unexpected character"},
	{"&&", "if a && b then end", "scene.lua:1: unexpected character '&': write and, or"},
	{"malformed number", "local x = 12e", "scene.lua:1:"},
	{"vararg outside", "local function f() return ... end", "scene.lua:1: '...' stands in a function that takes no '...'"},
	{"goto nowhere", "goto out", "no visible label 'out'"},
	{"not UTF-8", "print('caf\xe9')", "scene.lua:1: byte 0xe9 is no UTF-8 text"},
	{"not UTF-8, later", "\n\r\n--\xff", "scene.lua:3: byte 0xff is no UTF-8 text"},
	{"UTF-16", "\xff\xfel\x00", "scene.lua:1: the file is UTF-16"},
	{"compiled", "\x1bLua\x51\x00", "scene.lua:1:"},
	{"zero byte", "x = 1\nx = \x00", "scene.lua:2: a zero byte is no text"},

	{"unknown module", "require 'rigz'", "scene.lua:1: require:"},
	{"method of a module, misspelt", "\nrequire('tools').hafl(4)", "scene.lua:2: 'require(\"tools\").hafl' is nil and cannot be called; did you mean \"half\"?"},
	{"method of a module in a folder", "require 'more.tools'.hafl(4)", "scene.lua:1: 'require(\"more.tools\").hafl' is nil and cannot be called; did you mean \"half\"?"},
	{"comment of another language", "local x = 1 // half of it", "scene.lua:1: unexpected '/': a comment begins with --"},
	{"comment line of another language", "\n// a lamp\n", "scene.lua:2: unexpected '/': a comment begins with --"},
	{"block comment of another language", "/* a lamp */", "scene.lua:1: unexpected '/': a comment begins with --"},
	{"short word, two letters off", "print(patch)", "scene.lua:1: 'patch' is not defined"},
	{"module out of the folder", "require '../secret'", "scene.lua:1: require: '../secret' is no module name"},
	{"module by absolute path", "require '/etc/passwd'", "is no module name"},
	{"fault in a module", "\nrequire 'faulty'", "faulty.lua:2: 'x' is nil, so it has no field 'y'"},
	{"syntax fault in a module", "\nrequire 'broken'", "broken.lua:2: unexpected '='"},
	{"fault in a called module", "local m = require 'tools'\n\nm.half('x')", "tools.lua:3:"},
}

var faultModules = map[string]string{
	"faulty": "local x\nx.y = 1", "broken": "\nlocal x = = 1",
	"more.tools": "return { half = function(v) return v / 2 end }",
	"tools":      "local m = {}\nfunction m.half(v)\n  return v / 2\nend\nreturn m",
}

func TestFaults(t *testing.T) {
	for _, f := range faults {
		t.Run(f.name, func(t *testing.T) {
			_, err := trial{modules: faultModules}.run(f.script)
			var e *Error
			if !errors.As(err, &e) {
				t.Fatalf("got %v, want an *Error", err)
			}
			if !strings.HasPrefix(e.Error(), f.want) && !(f.want[0] != 's' && strings.Contains(e.Error(), f.want)) {
				t.Errorf("\n got %s\nwant %s", e, f.want)
			}
			if strings.Contains(e.Error(), "goroutine") || strings.Contains(e.Error(), "0x0") || strings.Contains(e.Error(), ".go:") {
				t.Errorf("the message shows the host: %s", e)
			}
		})
	}
}

func TestTrace(t *testing.T) {
	_, err := trial{modules: faultModules}.run("local tools = require 'tools'\nlocal function outer(v)\n  local x = tools.half(v)\n  return x\nend\nouter('x')")
	var e *Error
	if !errors.As(err, &e) {
		t.Fatal(err)
	}
	var at []string
	for _, p := range e.Trace {
		at = append(at, p.File+":"+formatNumber(float64(p.Line)))
	}
	if got := strings.Join(at, " "); got != "tools.lua:3 scene.lua:3 scene.lua:6" {
		t.Errorf("trace %q", got)
	}
}

func TestBlameFallsOnTheScene(t *testing.T) {
	limits := Limits{}.withDefaults()
	s := newSandbox(newMeter(t.Context(), limits), limits, nil)
	s.find = func(module string) (string, []byte, error) {
		return shippedFolder + module + ".lua", []byte("local m = {}\nfunction m.double(x)\n  return x * 2\nend\nfunction m.strict(x)\n  if not x then error('strict: x is missing', 2) end\nend\nreturn m"), nil
	}
	err := s.run("scene.lua", []byte("local rigs = require 'rigs'\n\nrigs.double(nil)"))
	if err == nil || err.Error() != "scene.lua:3: 'x' is nil, and '*' needs numbers (in prelude/rigs.lua:3)" {
		t.Errorf("got %v", err)
	}
}
