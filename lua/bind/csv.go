package bind

import (
	"bytes"
	"encoding/csv"
	"errors"
	"fmt"
	"io"
	"regexp"
	"strconv"
	"strings"
	"unicode/utf8"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/model"
)

func csvCalls() []call {
	return []call{{name: "data.csv", params: "path!", keys: "numbers text separator decimal", run: dataCSV}}
}

// Limits of a table of data.
const (
	maxTableBytes = 64 << 20
	maxColumns    = 1000
	maxFields     = 32_768 // cells of one line, the empty ones included that spreadsheets leave at its end
)

// readData reads a file of data; advice is how to save it as UTF-8.
func (a *args) readData(advice string) (file string, content []byte) {
	var path string
	a.text("path", &path)
	file, err := a.env.Files.Find(path)
	if err == nil {
		content, err = a.env.Files.Read(file)
	}
	if err != nil {
		a.failf("%v", err)
	}
	if len(content) > maxTableBytes {
		a.failf("%s: %d bytes, at most %d are accepted", path, len(content), maxTableBytes)
	}
	content = lineBreaks(bytes.TrimPrefix(content, []byte("\ufeff")))
	if bad := badUTF8(content); bad > 0 {
		a.failf("%s:%d: the file is not UTF-8 text: %s", path, bad, advice)
	}
	return path, content
}

// lineBreaks gives text whose lines end in LF or CR LF: a CR that stands alone ends a line too, as some spreadsheets write it.
// The content itself is left as it is.
func lineBreaks(content []byte) []byte {
	out, owned := content, false
	for i, b := range content {
		if b != '\r' || i+1 < len(content) && content[i+1] == '\n' {
			continue
		}
		if !owned {
			out, owned = bytes.Clone(content), true
		}
		out[i] = '\n'
	}
	return out
}

// badUTF8 is the first line that is not UTF-8; 0 if all are.
func badUTF8(b []byte) int {
	if utf8.Valid(b) {
		return 0
	}
	for line := 1; ; line++ {
		end := bytes.IndexByte(b, '\n')
		if end < 0 || !utf8.Valid(b[:end]) {
			return line
		}
		b = b[end+1:]
	}
}

// record is a row of a table and its line in the file.
type record struct {
	line  int
	cells []string
}

// csvOptions is how a table is to be read.
type csvOptions struct {
	separator rune // 0: what the first line suggests
	decimal   rune // '.' or ','
	numbers   []string
	text      []string
}

// dataCSV gives the rows of a table as a list. Cells are texts unless their column is named in numbers.
func dataCSV(a *args) lua.LValue {
	o := csvOptions{decimal: '.'}
	if v := a.get("numbers"); v != lua.LNil {
		o.numbers = a.words("numbers", v, maxColumns)
	}
	if v := a.get("text"); v != lua.LNil {
		o.text = a.words("text", v, maxColumns)
	}
	separators, which := []string{",", ";", "\t"}, 0
	if a.oneOf("separator", separators, &which) {
		o.separator = rune(separators[which][0])
	}
	marks, mark := []string{".", ","}, 0
	if a.oneOf("decimal", marks, &mark) {
		o.decimal = rune(marks[mark][0])
	}
	file, content := a.readData(`save it as "CSV UTF-8" or as UTF-8`)
	count := tally{args: a}
	header, records, err := parseCSV(content, o.separator, &count)
	if err != nil {
		a.failf("%s:%v", file, err)
	}
	isNumber := a.columns("numbers", file, header, o.numbers)
	isCode := a.columns("text", file, header, o.text)

	meta := a.rowMeta(header.cells)
	rows := a.l.CreateTable(len(records), 0)
	count.cells = 0 // the same cells again, now for Lua
	for n, rec := range records {
		records[n] = record{} // its texts live on in the row alone
		count.add(tableCells + len(rec.cells))
		row := a.l.CreateTable(0, len(header.cells))
		for i, cell := range rec.cells {
			v, err := cellValue(cell, isNumber[i], isCode[i], o.decimal)
			if err != nil {
				a.failf("%s:%d: %s: %v", file, rec.line, header.cells[i], err)
			}
			if v != lua.LNil {
				row.RawSetString(header.cells[i], v)
			}
		}
		meta.own(row, rec.line)
		rows.Append(row)
	}
	return rows
}

// columns marks the columns that are named.
func (a *args) columns(key, file string, header record, names []string) []bool {
	marked := make([]bool, len(header.cells))
	for _, n := range names {
		found := false
		for i, h := range header.cells {
			if h == n {
				marked[i], found = true, true
			}
		}
		if !found {
			a.failf("%s: %s has no column %s%s", key, file, quote(n), Hint(n, header.cells))
		}
	}
	return marked
}

// mangled is how a spreadsheet writes a long article number that it took for a quantity.
var mangled = regexp.MustCompile(`^[0-9]+([.,][0-9]+)?[Ee]\+[0-9]+$`)

// cellValue is a cell for Lua; an empty cell of a column of numbers is nil.
func cellValue(cell string, number, code bool, decimal rune) (lua.LValue, error) {
	switch {
	case code && mangled.MatchString(cell):
		return nil, fmt.Errorf("%s is what a spreadsheet makes of a long number: the digits are lost; format the column as text and enter it again", quote(cell))
	case !number:
		return lua.LString(cell), nil
	case cell == "":
		return lua.LNil, nil
	}
	text := cell
	if decimal == ',' {
		if strings.Contains(text, ".") {
			return nil, fmt.Errorf("must be a number with a decimal comma, got %s", quote(cell))
		}
		text = strings.Replace(text, ",", ".", 1)
	}
	text = strings.Replace(text, "−", "-", 1) // the true minus sign
	if strings.ContainsAny(text, "_xXpPnN") {
		return nil, fmt.Errorf("must be a number, got %s", quote(cell)) // of Go's spellings, only the plain ones
	}
	v, err := strconv.ParseFloat(text, 64)
	if err != nil {
		if decimal == '.' && strings.Contains(cell, ",") {
			return nil, fmt.Errorf("must be a number, got %s; decimal = \",\" reads a decimal comma", quote(cell))
		}
		return nil, fmt.Errorf("must be a number, got %s", quote(cell))
	}
	return lua.LNumber(v), nil
}

// parseCSV reads a table: a header line, then rows of as many cells, trimmed. Rows without any text are left out.
// Errors begin with the line: "7: …".
func parseCSV(content []byte, separator rune, count *tally) (header record, rows []record, err error) {
	r := csv.NewReader(bytes.NewReader(content))
	r.Comma = separator
	if separator == 0 {
		r.Comma = guessSeparator(content)
	}
	r.FieldsPerRecord = -1
	if line := overlong(content, byte(r.Comma)); line > 0 {
		return header, nil, fmt.Errorf("%d: more than %d cells on one line: at most %d columns are accepted", line, maxFields, maxColumns)
	}
	for {
		fields, err := r.Read()
		if errors.Is(err, io.EOF) {
			break
		}
		if err != nil {
			var at *csv.ParseError
			if errors.As(err, &at) {
				return header, nil, fmt.Errorf("%d: %v", at.StartLine, at.Err)
			}
			return header, nil, fmt.Errorf("1: %v", err)
		}
		line, _ := r.FieldPos(0)
		empty := true
		for i, f := range fields {
			fields[i] = strings.TrimSpace(f)
			empty = empty && fields[i] == ""
		}
		if empty {
			continue
		}
		if header.cells == nil {
			if header, err = headerOf(line, fields); err != nil {
				return header, nil, err
			}
			continue
		}
		fields, err = completed(header, line, fields)
		if err != nil {
			return header, nil, err
		}
		for i, f := range fields {
			if strings.IndexByte(f, 0) >= 0 {
				return header, nil, fmt.Errorf("%d: %s: the cell holds a zero byte, which is no text: %s", line, header.cells[i], zeroAdvice)
			}
		}
		if !count.add(tableCells+len(fields)) || len(rows) == model.MaxFrames {
			return header, nil, fmt.Errorf("%d: the table goes on: at most %d rows and %d cells are accepted, where a row counts as %d more", line, model.MaxFrames, maxCells, tableCells)
		}
		rows = append(rows, record{line, fields})
	}
	if header.cells == nil {
		return header, nil, errors.New("1: the table is empty: its first line must name the columns")
	}
	return header, rows, nil
}

// zeroAdvice helps with the file that most often has zero bytes.
const zeroAdvice = "if the file is UTF-16, save it as UTF-8"

// overlong is the first line with more than maxFields cells, which the reader would take in whole; 0 if none has. Line breaks and
// separators in quotes do not count.
func overlong(content []byte, separator byte) int {
	line, begin, cells, quoted := 1, 1, 1, false
	for _, b := range content {
		if b == '\n' {
			line++
		}
		switch {
		case b == '"':
			quoted = !quoted
		case quoted:
		case b == '\n':
			begin, cells = line, 1
		case b == separator:
			if cells++; cells > maxFields {
				return begin
			}
		}
	}
	return 0
}

// headerOf checks the names of the columns; nameless columns at the end, which spreadsheets leave behind, are dropped.
func headerOf(line int, names []string) (record, error) {
	for len(names) > 0 && names[len(names)-1] == "" {
		names = names[:len(names)-1]
	}
	if len(names) > maxColumns {
		return record{}, fmt.Errorf("%d: %d columns, at most %d are accepted", line, len(names), maxColumns)
	}
	seen := map[string]bool{}
	for i, n := range names {
		switch {
		case n == "":
			return record{}, fmt.Errorf("%d: column %d has no name", line, i+1)
		case strings.IndexByte(n, 0) >= 0:
			return record{}, fmt.Errorf("%d: the name of column %d holds a zero byte, which is no text: %s", line, i+1, zeroAdvice)
		case n == lineKey:
			return record{}, fmt.Errorf("%d: column %d is named %q, which is the row's line", line, i+1, n)
		case seen[n]:
			return record{}, fmt.Errorf("%d: two columns are named %s", line, quote(n))
		}
		seen[n] = true
	}
	return record{line, names}, nil
}

// completed gives a row as many cells as the header has.
func completed(header record, line int, cells []string) ([]string, error) {
	n := len(header.cells)
	for len(cells) > n && cells[len(cells)-1] == "" {
		cells = cells[:len(cells)-1]
	}
	if len(cells) != n {
		return nil, fmt.Errorf("%d: %s, and the header on line %d names %s", line, counted(len(cells), "cell"), header.line, counted(n, "column"))
	}
	return cells, nil
}

// counted is a number of things: "1 cell", "3 cells".
func counted(n int, thing string) string {
	if n == 1 {
		return "1 " + thing
	}
	return fmt.Sprintf("%d %ss", n, thing)
}

// guessSeparator takes the mark that stands most often in the first line, outside quotes; a comma where none does.
func guessSeparator(content []byte) rune {
	counts := map[rune]int{}
	quoted := false
scan:
	for _, r := range string(firstLines(content)) {
		switch {
		case r == '"':
			quoted = !quoted
		case quoted:
		case r == '\n' && counts[',']+counts[';']+counts['\t'] > 0:
			break scan
		case r == ',' || r == ';' || r == '\t':
			counts[r]++
		}
	}
	best := ','
	for _, r := range ";\t" {
		if counts[r] > counts[best] {
			best = r
		}
	}
	return best
}

// firstLines is enough of a file to hold its header.
func firstLines(content []byte) []byte { return content[:min(len(content), 64<<10)] }
