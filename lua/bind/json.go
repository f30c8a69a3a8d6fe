package bind

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"slices"

	lua "github.com/yuin/gopher-lua"
)

func jsonCalls() []call {
	return []call{{name: "data.json", params: "path!", run: dataJSON}}
}

const maxJSONDepth = 64

// dataJSON gives what a JSON file holds: lists and tables in the file's order. Where the file is a list of objects these are rows, which
// know their line.
func dataJSON(a *args) lua.LValue {
	file, content := a.readData("save it as UTF-8")
	r := &jsonReader{args: a, content: content, dec: json.NewDecoder(bytes.NewReader(content)), tally: tally{args: a}, isKnown: map[string]bool{}}
	r.dec.UseNumber()
	v, err := r.value(0)
	if err == nil {
		if _, more := r.dec.Token(); !errors.Is(more, io.EOF) {
			err = errors.New("something follows the end of the data")
		}
	}
	if err != nil {
		a.failf("%s:%d: %v", file, r.line(), jsonProblem(err))
	}
	r.rows()
	return v
}

// jsonReader builds Lua values of JSON tokens, because a decoder into maps loses the order of fields.
type jsonReader struct {
	args    *args
	content []byte
	dec     *json.Decoder
	tally   tally
	values  []lua.LValue // of the lists and objects that are open, outermost first
	names   []string     // the fields of values, "" in a list
	listed  bool         // the outermost value is a list, whose objects are rows
	objects []jsonObject // the rows
	known   []string     // their fields, in the order of first appearance
	isKnown map[string]bool
	counted int // bytes whose line breaks have been counted
	breaks  int
}

// jsonObject is a row and the line where it begins.
type jsonObject struct {
	table *lua.LTable
	line  int
}

// line is the line that the decoder has come to.
func (r *jsonReader) line() int {
	at := int(min(r.dec.InputOffset(), int64(len(r.content))))
	if at > r.counted {
		r.breaks += bytes.Count(r.content[r.counted:at], []byte("\n"))
		r.counted = at
	}
	return r.breaks + 1
}

// jsonProblem puts the decoder's errors in plain words.
func jsonProblem(err error) error {
	if errors.Is(err, io.EOF) || errors.Is(err, io.ErrUnexpectedEOF) {
		return errors.New("the file ends in the middle of the data")
	}
	var syntax *json.SyntaxError
	if errors.As(err, &syntax) {
		return fmt.Errorf("not JSON: %v", syntax)
	}
	return err
}

func (r *jsonReader) value(depth int) (lua.LValue, error) {
	if depth > maxJSONDepth {
		return nil, fmt.Errorf("lists and objects stand in one another deeper than %d", maxJSONDepth)
	}
	if !r.tally.add(1) {
		return nil, errTooManyValues
	}
	token, err := r.dec.Token()
	if err != nil {
		return nil, err
	}
	switch t := token.(type) {
	case json.Delim:
		if t == '[' {
			return r.array(depth)
		}
		return r.object(depth)
	case string:
		return lua.LString(t), nil
	case bool:
		return lua.LBool(t), nil
	case json.Number:
		v, err := t.Float64()
		if err != nil {
			return nil, fmt.Errorf("%s is beyond the numbers that fit", short(t.String()))
		}
		return lua.LNumber(v), nil
	}
	return lua.LNil, nil
}

var errTooManyValues = fmt.Errorf("more than %d values, where a list or an object counts as %d", maxCells, tableCells)

// array reads a list. Its elements wait in values until their number is known, so that the table holds no more than them.
func (r *jsonReader) array(depth int) (lua.LValue, error) {
	if !r.tally.add(tableCells) {
		return nil, errTooManyValues
	}
	r.listed = r.listed || depth == 0
	first := len(r.values)
	for r.dec.More() {
		v, err := r.value(depth + 1)
		if err != nil {
			return nil, err
		}
		if v == lua.LNil {
			return nil, errors.New("null in a list: a Lua list has no gaps")
		}
		r.keep("", v)
	}
	list := r.args.l.CreateTable(len(r.values)-first, 0)
	for _, v := range r.values[first:] {
		list.Append(v)
	}
	r.drop(first)
	_, err := r.dec.Token()
	return list, err
}

// object reads an object, as array does.
func (r *jsonReader) object(depth int) (lua.LValue, error) {
	if !r.tally.add(tableCells) {
		return nil, errTooManyValues
	}
	row := depth == 1 && r.listed
	begin, first := r.line(), len(r.values)
	var many map[string]bool // the fields, once they are more than a glance finds
	fields := 0              // with a value
	for r.dec.More() {
		token, err := r.dec.Token()
		if err != nil {
			return nil, err
		}
		key, ok := token.(string)
		if !ok {
			return nil, fmt.Errorf("not JSON: a field needs a name in quotes, got %v", token)
		}
		if key == lineKey && row {
			return nil, fmt.Errorf("a field is named %q, which is the row's line", key)
		}
		if many == nil && len(r.names)-first >= glance {
			many = map[string]bool{}
			for _, n := range r.names[first:] {
				many[n] = true
			}
		}
		if many[key] || many == nil && slices.Contains(r.names[first:], key) {
			return nil, fmt.Errorf("the field %s is given twice", quote(key))
		}
		if many != nil {
			many[key] = true
		}
		v, err := r.value(depth + 1)
		if err != nil {
			return nil, err
		}
		if v != lua.LNil {
			fields++
		}
		r.keep(key, v)
	}
	table := r.args.l.CreateTable(0, fields)
	for i, v := range r.values[first:] {
		if v != lua.LNil {
			table.RawSetString(r.names[first+i], v)
		}
	}
	if row {
		r.objects = append(r.objects, jsonObject{table, begin})
		for _, key := range r.names[first:] {
			if !r.isKnown[key] {
				r.isKnown[key] = true
				r.known = append(r.known, key)
			}
		}
	}
	r.drop(first)
	_, err := r.dec.Token()
	return table, err
}

// glance is how many names are compared one by one.
const glance = 16

// keep puts a value with the others of the list or object that is open.
func (r *jsonReader) keep(name string, v lua.LValue) {
	r.values, r.names = append(r.values, v), append(r.names, name)
}

// drop forgets the values of a list or object that is closed.
func (r *jsonReader) drop(first int) {
	clear(r.values[first:])
	clear(r.names[first:])
	r.values, r.names = r.values[:first], r.names[:first]
}

// rows makes rows of the objects in an outermost list. Any field that one of them has may be asked of all.
func (r *jsonReader) rows() {
	meta := r.args.rowMeta(r.known)
	for _, o := range r.objects {
		meta.own(o.table, o.line)
	}
}
