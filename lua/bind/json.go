package bind

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io"

	lua "github.com/yuin/gopher-lua"
)

func jsonCalls() []call {
	return []call{{name: "data.json", params: "path!", run: dataJSON}}
}

const maxJSONDepth = 64

// dataJSON gives what a JSON file holds: lists and tables in the file's order. Where the file is a list of objects these are rows, which
// know their line.
func dataJSON(a *args) lua.LValue {
	file, content := a.readData()
	r := &jsonReader{args: a, content: content, dec: json.NewDecoder(bytes.NewReader(content))}
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
	r.rows(v)
	return v
}

// jsonReader builds Lua values of JSON tokens, because a decoder into maps loses the order of fields.
type jsonReader struct {
	args    *args
	content []byte
	dec     *json.Decoder
	cells   int
	lines   map[*lua.LTable]int // where objects of the outermost list begin
	nulls   map[*lua.LTable][]string
	counted int // bytes whose line breaks have been counted
	breaks  int
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
	if r.cells++; r.cells > maxCells {
		return nil, fmt.Errorf("more than %d values", maxCells)
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

func (r *jsonReader) array(depth int) (lua.LValue, error) {
	list := r.args.l.NewTable()
	for r.dec.More() {
		v, err := r.value(depth + 1)
		if err != nil {
			return nil, err
		}
		if v == lua.LNil {
			return nil, errors.New("null in a list: a Lua list has no gaps")
		}
		list.Append(v)
	}
	_, err := r.dec.Token()
	return list, err
}

func (r *jsonReader) object(depth int) (lua.LValue, error) {
	table := r.args.l.NewTable()
	if depth == 1 {
		if r.lines == nil {
			r.lines, r.nulls = map[*lua.LTable]int{}, map[*lua.LTable][]string{}
		}
		r.lines[table] = r.line()
	}
	seen := map[string]bool{}
	for r.dec.More() {
		token, err := r.dec.Token()
		if err != nil {
			return nil, err
		}
		key, ok := token.(string)
		switch {
		case !ok:
			return nil, fmt.Errorf("not JSON: a field needs a name in quotes, got %v", token)
		case key == lineKey && depth == 1:
			return nil, fmt.Errorf("a field is named %q, which is the row's line", key)
		case seen[key]:
			return nil, fmt.Errorf("the field %s is given twice", quote(key))
		}
		seen[key] = true
		v, err := r.value(depth + 1)
		if err != nil {
			return nil, err
		}
		if v == lua.LNil {
			if depth == 1 {
				r.nulls[table] = append(r.nulls[table], key)
			}
			continue
		}
		table.RawSetString(key, v)
	}
	_, err := r.dec.Token()
	return table, err
}

// rows makes rows of the objects in an outermost list. Any field that one of them has may be asked of all.
func (r *jsonReader) rows(v lua.LValue) {
	list, ok := v.(*lua.LTable)
	if !ok || r.lines == nil {
		return
	}
	var objects []*lua.LTable
	var keys []string
	seen := map[string]bool{}
	know := func(key string) {
		if !seen[key] {
			seen[key] = true
			keys = append(keys, key)
		}
	}
	for i := 1; i <= list.Len(); i++ {
		o, ok := list.RawGetInt(i).(*lua.LTable)
		if _, isObject := r.lines[o]; !ok || !isObject {
			continue
		}
		objects = append(objects, o)
		for k, _ := o.Next(lua.LNil); k != lua.LNil; k, _ = o.Next(k) {
			know(k.String())
		}
		for _, k := range r.nulls[o] {
			know(k)
		}
	}
	meta := r.args.rowMeta(keys)
	for _, o := range objects {
		meta.own(o, r.lines[o])
	}
}
