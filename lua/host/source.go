package host

import (
	"bytes"
	"errors"
	"fmt"
	"strings"
	"unicode/utf8"

	lua "github.com/yuin/gopher-lua"
	"github.com/yuin/gopher-lua/ast"
	"github.com/yuin/gopher-lua/parse"

	"lampbook/engine/model"
)

// chunk is one Lua file, checked and compiled, with what its syntax tree says about its lines.
type chunk struct {
	name  string // as errors show it
	proto *lua.FunctionProto
	notes notes
}

// load checks and compiles the text of one Lua file. The error is an *Error with the file's name and the line.
func load(name string, text []byte, limits Limits) (*chunk, error) {
	text, err := clean(name, text, limits)
	if err != nil {
		return nil, err
	}
	if err := shallow(name, text); err != nil {
		return nil, err
	}
	tree, err := parsed(name, text)
	if err != nil {
		return nil, err
	}
	notes, err := check(name, tree)
	if err != nil {
		return nil, err
	}
	proto, err := compiled(name, tree)
	if err != nil {
		return nil, err
	}
	return &chunk{name: name, proto: proto, notes: notes}, nil
}

// clean strips a byte-order mark, blanks a shebang line and refuses what is no text.
func clean(name string, text []byte, limits Limits) ([]byte, error) {
	if len(text) > limits.Source {
		return nil, &Error{Pos: model.Pos{File: name}, Msg: fmt.Sprintf("the file has %s bytes, at most %s are accepted in one Lua file: "+
			"put long tables into a file of their own and read it with data.csv", grouped(int64(len(text))), grouped(int64(limits.Source)))}
	}
	text = bytes.TrimPrefix(text, []byte("\xef\xbb\xbf"))
	if bytes.HasPrefix(text, []byte("#")) {
		end := bytes.IndexAny(text, "\r\n")
		if end < 0 {
			end = len(text)
		}
		text = text[end:]
	}
	for i := 0; i < len(text); {
		r, n := utf8.DecodeRune(text[i:])
		if r == utf8.RuneError && n == 1 {
			msg := fmt.Sprintf("byte 0x%02x is no UTF-8 text: save the file as UTF-8", text[i])
			if bytes.HasPrefix(text, []byte("\x1bLua")) {
				msg = "compiled Lua is not accepted, only its text"
			} else if bytes.HasPrefix(text, []byte("\xff\xfe")) || bytes.HasPrefix(text, []byte("\xfe\xff")) {
				msg = "the file is UTF-16: save it as UTF-8"
			}
			return nil, &Error{Pos: model.Pos{File: name, Line: lineAt(text, i)}, Msg: msg}
		}
		if r == 0 {
			return nil, &Error{Pos: model.Pos{File: name, Line: lineAt(text, i)}, Msg: "a zero byte is no text: is this a Lua file?"}
		}
		i += n
	}
	return text, nil
}

// lineAt returns the line of byte i, counting as the scanner does: \n, \r, \r\n and \n\r each end one line.
func lineAt(text []byte, i int) int {
	line := 1
	for j := 0; j < i; j++ {
		if c := text[j]; c == '\n' || c == '\r' {
			line++
			if j+1 < i && (text[j+1] == '\n' || text[j+1] == '\r') && text[j+1] != c {
				j++
			}
		}
	}
	return line
}

// parsed makes the syntax tree.
func parsed(name string, text []byte) (tree []ast.Stmt, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = &Error{Pos: model.Pos{File: name}, Msg: fmt.Sprintf("internal error in the parser (%s), please report it", plain(fmt.Sprint(r)))}
		}
	}()
	tree, err = parse.Parse(bytes.NewReader(text), name)
	if err == nil {
		return tree, nil
	}
	var fault *parse.Error
	if !errors.As(err, &fault) {
		return nil, &Error{Pos: model.Pos{File: name}, Msg: fmt.Sprintf("internal error in the parser (%s), please report it", plain(err.Error()))}
	}
	return nil, syntaxError(name, text, fault)
}

// compiled makes the tree into instructions and refuses what the virtual machine would silently run wrong.
func compiled(name string, tree []ast.Stmt) (proto *lua.FunctionProto, err error) {
	defer func() {
		if r := recover(); r != nil {
			proto, err = nil, &Error{Pos: model.Pos{File: name}, Msg: fmt.Sprintf("internal error in the compiler (%s), please report it", plain(fmt.Sprint(r)))}
		}
	}()
	proto, err = lua.Compile(tree, name)
	var fault *lua.CompileError
	if errors.As(err, &fault) {
		msg := fault.Message
		switch {
		case strings.Contains(msg, "local variables") || strings.Contains(msg, "register overflow"):
			msg = "too many local variables in one function, about 190 are accepted: put some into a table"
		case strings.Contains(msg, "outside a vararg"):
			msg = "'...' stands in a function that takes no '...': add it to the parameters"
		}
		return nil, &Error{Pos: model.Pos{File: name, Line: max(fault.Line, 0)}, Msg: plain(msg)}
	}
	if err != nil {
		return nil, &Error{Pos: model.Pos{File: name}, Msg: plain(err.Error())}
	}
	return proto, fits(name, proto)
}

// fits checks each function against the reach of the instructions.
func fits(name string, p *lua.FunctionProto) error {
	at := model.Pos{File: name, Line: p.LineDefined}
	if len(p.Code) > codeLength {
		return &Error{Pos: at, Msg: fmt.Sprintf("a function of %s instructions is too long, at most %s are accepted: split it, or read long tables with data.csv",
			grouped(int64(len(p.Code))), grouped(codeLength))}
	}
	if n := len(p.DbgUpvalues); n > maxUpvalues {
		return &Error{Pos: at, Msg: fmt.Sprintf("a function uses %d local variables of the functions around it, at most %d are accepted: put some into a table", n, maxUpvalues)}
	}
	for _, child := range p.FunctionPrototypes {
		if err := fits(name, child); err != nil {
			return err
		}
	}
	return nil
}
