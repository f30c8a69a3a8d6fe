package bind

import (
	"strings"
	"testing"
	"unicode/utf8"

	lua "github.com/yuin/gopher-lua"
)

var dataErrorTests = []struct{ file, content, options, want string }{
	{"a.csv", "", "", `data.csv: a.csv:1: the table is empty: its first line must name the columns`},
	{"a.csv", "\ufeff\n \n", "", `data.csv: a.csv:1: the table is empty: its first line must name the columns`},
	{"a.csv", "a,b\n1,2\n3\n", "", `data.csv: a.csv:3: 1 cell, and the header on line 1 names 2 columns`},
	{"a.csv", "a,b\n\"1\n2\",3\n4,5,6\n", "", `data.csv: a.csv:4: 3 cells, and the header on line 1 names 2 columns`},
	{"a.csv", "a,,c\n", "", `data.csv: a.csv:1: column 2 has no name`},
	{"a.csv", "a,a\n", "", `data.csv: a.csv:1: two columns are named "a"`},
	{"a.csv", "a,_line\n", "", `data.csv: a.csv:1: column 2 is named "_line", which is the row's line`},
	{"a.csv", "a\nx\n\"open\n", "", `data.csv: a.csv:3: extraneous or missing " in quoted-field`},
	{"a.csv", "a\nx\nh\xf6he\n", "", `data.csv: a.csv:3: the file is not UTF-8 text: save it as "CSV UTF-8" or as UTF-8`},
	{"a.csv", "a\rx\rh\xf6he\r", "", `data.csv: a.csv:3: the file is not UTF-8 text: save it as "CSV UTF-8" or as UTF-8`},
	{"a.csv", "a,b\r1,2\r3\r", "", `data.csv: a.csv:3: 1 cell, and the header on line 1 names 2 columns`},
	{"a.json", "[1,\r2", "", `data.json: a.json:2: the file ends in the middle of the data`},
	{"a.csv", "a,b\n1,2\n3,x\x00y\n", "", `data.csv: a.csv:3: b: the cell holds a zero byte, which is no text: if the file is UTF-16, save it as UTF-8`},
	{"a.csv", "a\x00,\x00b\x00\n", "", `data.csv: a.csv:1: the name of column 1 holds a zero byte, which is no text: if the file is UTF-16, save it as UTF-8`},
	{"a.json", "[\n\"h\xf6he\"]", "", `data.json: a.json:2: the file is not UTF-8 text: save it as UTF-8`},
	{"a.csv", "a\n12 cm\n", `, { numbers = "a" }`, `data.csv: a.csv:2: a: must be a number, got "12 cm"`},
	{"a.csv", "a\n0x10\n", `, { numbers = "a" }`, `data.csv: a.csv:2: a: must be a number, got "0x10"`},
	{"a.csv", "a\nNaN\n", `, { numbers = "a" }`, `data.csv: a.csv:2: a: must be a number, got "NaN"`},
	{"a.csv", "a\n1e999\n", `, { numbers = "a" }`, `data.csv: a.csv:2: a: must be a number, got "1e999"`},
	{"a.csv", "a\n1.5\n", `, { numbers = "a", decimal = "," }`, `data.csv: a.csv:2: a: must be a number with a decimal comma, got "1.5"`},
	{"a.csv", "a\n7.5E+11\n", `, { text = "a" }`, `data.csv: a.csv:2: a: "7.5E+11" is what a spreadsheet makes of a long number: the digits are lost; format the column as text and enter it again`},
	{"a.json", "", "", `data.json: a.json:1: the file ends in the middle of the data`},
	{"a.json", "[1,\n2", "", `data.json: a.json:2: the file ends in the middle of the data`},
	{"a.json", "[1,\n2]\n3", "", `data.json: a.json:3: something follows the end of the data`},
	{"a.json", "[\n{\"a\": 1,\n\"a\": 2}]", "", `data.json: a.json:3: the field "a" is given twice`},
	{"a.json", "[1, null]", "", `data.json: a.json:1: null in a list: a Lua list has no gaps`},
	{"a.json", "1e999", "", `data.json: a.json:1: 1e999 is beyond the numbers that fit`},
	{"a.json", "[{\"_line\": 1}]", "", `data.json: a.json:1: a field is named "_line", which is the row's line`},
	{"a.json", strings.Repeat("[", 100), "", `data.json: a.json:1: lists and objects stand in one another deeper than 64`},
}

func TestDataErrors(t *testing.T) {
	for _, c := range dataErrorTests {
		e := newEnv()
		e.Files = memFiles{c.file: c.content}
		call := "data.csv"
		if c.file == "a.json" {
			call = "data.json"
		}
		err := run(t, newState(t, e), call+`("`+c.file+`"`+c.options+`)`)
		if got, want := message(err), "scenes/test.lua:1: "+c.want; got != want {
			t.Errorf("%q\n got %s\nwant %s", c.content, got, want)
		}
	}
}

func TestParseCSV(t *testing.T) {
	for _, c := range []struct{ content, want, source string }{
		{"a,b\n1,2\n", "a|b 2:1|2", "RFC 4180"},
		{"a;b\n1,5;2\n", "a|b 2:1,5|2", "the header's separator counts"},
		{"a\tb\n1\t2", "a|b 2:1|2", "tabs, no last line break"},
		{"\"x;y;z\",b\n1,2\n", "x;y;z|b 2:1|2", "separators in quotes do not count"},
		{"a,b\r\n\"1\r\n2\",3\r\n4,5\r\n", "a|b 2:1\n2|3 4:4|5", "a line break in quotes, read as \\n; lines go on counting"},
		{"a,b,,\n1,2,,\n", "a|b 2:1|2", "empty columns at the end, as spreadsheets leave them"},
		{"a,b\n,\n1,2\n", "a|b 3:1|2", "rows without text are left out"},
		{" a , b\n 1 ,2\n", "a|b 2:1|2", "cells are trimmed"},
		{"name\nx\n", "name 2:x", "one column"},
		{"a;b\r1;2\r\r\"3\r4\";5", "a|b 2:1|2 4:3\n4|5", "a line may end in CR alone, also in quotes"},
		{"a\rx\r\ny\nz\r", "a 2:x 3:y 4:z", "three kinds of line break in one file"},
		{"a,b\n\"say \"\"so\"\"\",2\n", `a|b 2:say "so"|2`, "RFC 4180: doubled quotes"},
	} {
		header, rows, err := parseCSV(lineBreaks([]byte(c.content)), 0, &tally{args: &args{env: newEnv()}})
		if err != nil {
			t.Errorf("%q: %v", c.content, err)
			continue
		}
		got := strings.Join(header.cells, "|")
		for _, r := range rows {
			got += " " + number(float64(r.line)) + ":" + strings.Join(r.cells, "|")
		}
		if got != c.want {
			t.Errorf("%q\n got %q\nwant %q (%s)", c.content, got, c.want, c.source)
		}
	}
}

// TestDataIsCounted: a table counts as many values, and the host is asked while data is read.
func TestDataIsCounted(t *testing.T) {
	objects := func(n int) string { return "[" + strings.Repeat("{},", n-1) + "{}]" }
	table := "a,b\n" + strings.Repeat("1,2\n", 50_000)
	for _, c := range []struct {
		file, content string
		patience      int // steps until the host says no; 0: it never does
		want          string
	}{
		{"a.json", objects(maxCells / (1 + tableCells)), 0, "data.json: a.json:1: more than 4000000 values, where a list or an object counts as 16"},
		{"a.json", objects(100_000), 100_000, "data.json: the scene may use no more"},
		{"a.json", "[" + strings.Repeat("1,", 500_000) + "1]", 100_000, "data.json: the scene may use no more"},
		{"a.json", `{"a": {"_line": 1}}`, 0, ""},
		{"a.csv", table, 500_000, "data.csv: the scene may use no more"},
		{"a.csv", table, 1_000_000, "data.csv: the scene may use no more"}, // read, and not yet all given to Lua
		{"a.csv", table, 0, ""},
		{"a.csv", "a\n1" + strings.Repeat(",", maxFields), 0, "data.csv: a.csv:2: more than 32768 cells on one line: at most 1000 columns are accepted"},
		{"a.csv", "a\n\"1" + strings.Repeat(",", maxFields) + "\"\n", 0, ""},
	} {
		e := newEnv()
		e.Files = memFiles{c.file: c.content}
		used, most := 0, 0
		e.Charge = func(steps int) bool {
			used, most = used+steps, max(most, steps)
			return c.patience == 0 || used <= c.patience
		}
		call := "data.csv"
		if c.file == "a.json" {
			call = "data.json"
		}
		err := run(t, newState(t, e), call+`("`+c.file+`")`)
		if got := strings.TrimPrefix(message(err), "scenes/test.lua:1: "); got != c.want {
			t.Errorf("%.20q: got %q, want %q", c.content, got, c.want)
		}
		if most > chargeEach+maxColumns+tableCells || c.patience > 0 && used > c.patience+most {
			t.Errorf("%.20q: %d steps between two questions, %d in all, %d were allowed", c.content, most, used, c.patience)
		}
	}
}

// TestLineBreaksLeaveTheFile: what Files gave may be used elsewhere, so it is not written over.
func TestLineBreaksLeaveTheFile(t *testing.T) {
	content := []byte("a\rb\r\nc")
	if got := string(lineBreaks(content)); got != "a\nb\r\nc" || string(content) != "a\rb\r\nc" {
		t.Errorf("got %q of what is now %q", got, content)
	}
}

// FuzzCSV looks for tables that panic or come out crooked.
func FuzzCSV(f *testing.F) {
	for _, c := range dataErrorTests {
		f.Add(c.content, false)
	}
	f.Add(workshop["products.csv"], true)
	f.Add("a;b\n\"1\n\";−2,5\n", true)
	f.Fuzz(func(t *testing.T, content string, comma bool) {
		e := newEnv()
		e.Files = memFiles{"a.csv": content}
		l := newState(t, e)
		scene := `local rows = data.csv("a.csv") for i, r in ipairs(rows) do assert(r._line >= 2) for k, v in pairs(r) do assert(type(v) == "string") end end return rows`
		if comma {
			scene = `return data.csv("a.csv", { decimal = "," })`
		}
		err := run(t, l, scene)
		if e.Fatal() != nil {
			t.Fatal(e.Fatal())
		}
		if err != nil {
			if m := message(err); !strings.HasPrefix(m, "scenes/test.lua:1: data.csv: a.csv:") || !utf8.ValidString(m) {
				t.Fatalf("%q: %s", content, m)
			}
			return
		}
		last := 1
		rows := l.Get(-1).(*lua.LTable)
		for i := 1; i <= rows.Len(); i++ {
			row := rows.RawGetInt(i).(*lua.LTable)
			line := int(l.GetField(row, lineKey).(lua.LNumber))
			if line <= last || line > strings.Count(content, "\n")+strings.Count(content, "\r")+1 {
				t.Fatalf("%q: row %d is said to be on line %d", content, i, line)
			}
			last = line
		}
	})
}

// FuzzJSON looks for files that panic.
func FuzzJSON(f *testing.F) {
	for _, c := range dataErrorTests {
		f.Add(c.content)
	}
	f.Add(workshop["products.json"])
	f.Add(`{"a": [1, {"b": null}], "c": "\u00e9"}`)
	f.Fuzz(func(t *testing.T, content string) {
		e := newEnv()
		e.Files = memFiles{"a.json": content}
		l := newState(t, e)
		err := run(t, l, `local v = data.json("a.json") if type(v) == "table" then for k, x in pairs(v) do tostring(x) if type(x) == "table" then for _ in pairs(x) do end end end end`)
		if e.Fatal() != nil {
			t.Fatal(e.Fatal())
		}
		if m := message(err); err != nil && (!strings.HasPrefix(m, "scenes/test.lua:1: data.json: a.json:") || !utf8.ValidString(m)) {
			t.Fatalf("%q: %s", content, m)
		}
	})
}
