package host

import (
	"strconv"

	"github.com/yuin/gopher-lua/ast"
)

// notes says what stands on the lines of a file, so that an error which knows only its line can name the variable.
type notes struct {
	lines  map[int][]note
	locals []local // every local of the file
}

// local is a local variable and the line that declares it.
type local struct {
	name string
	line int
}

// note is one operation.
type note struct {
	kind  noteKind
	key   string   // the key of an index, the operator, the variable of a for
	names []string // the operands, as written; "" where an operand has no short name
}

// noteKind is a sort of operation that can fail.
type noteKind uint8

const (
	noteIndex noteKind = iota
	noteCall
	noteArith
	noteMinus
	noteLen
	noteCompare
	noteJoin
	noteFor
	noteEach
)

func (n *notes) add(line int, what note) { n.lines[line] = append(n.lines[line], what) }

// describe writes an expression as a reader would name it: lights.key, stands.table(…), rows[…]; "" where it has no short name.
func describe(e ast.Expr) string { return named(e, 8) }

func named(e ast.Expr, depth int) string {
	if depth == 0 {
		return ""
	}
	switch x := e.(type) {
	case *ast.IdentExpr:
		return x.Value
	case *ast.AttrGetExpr:
		object := named(x.Object, depth-1)
		if object == "" {
			return ""
		}
		switch key := x.Key.(type) {
		case *ast.StringExpr:
			if identifier(key.Value) {
				return object + "." + key.Value
			}
			return object + "[" + strconv.Quote(short(key.Value)) + "]"
		case *ast.NumberExpr:
			return object + "[" + short(key.Value) + "]"
		case *ast.IdentExpr:
			return object + "[" + key.Value + "]"
		}
		return object + "[…]"
	case *ast.FuncCallExpr:
		if x.Func != nil {
			if m := required(x); m != "" {
				return requireHead + m + requireTail
			}
			if f := named(x.Func, depth-1); f != "" {
				return f + "(…)"
			}
			return ""
		}
		if r := named(x.Receiver, depth-1); r != "" {
			return r + ":" + x.Method + "(…)"
		}
	}
	return ""
}

// A module that is used where it is required reads as in the source: require("stands").table(…).
const requireHead, requireTail = `require("`, `")`

// required is the name of the module that a call requires, "" where it is no require of a plain name.
func required(x *ast.FuncCallExpr) string {
	if f, ok := x.Func.(*ast.IdentExpr); !ok || f.Value != "require" || len(x.Args) != 1 {
		return ""
	}
	if name, ok := x.Args[0].(*ast.StringExpr); ok && moduleName(name.Value) {
		return name.Value
	}
	return ""
}

// keyText is the key of an index as the virtual machine's message shows it; "" where only the run knows it.
func keyText(e ast.Expr) string {
	switch k := e.(type) {
	case *ast.StringExpr:
		return k.Value
	case *ast.NumberExpr:
		return k.Value
	}
	return ""
}

// short keeps names in messages short.
func short(s string) string {
	if r := []rune(s); len(r) > 40 {
		return string(r[:40]) + "…"
	}
	return s
}

// identifier reports whether s can be written as a Lua name.
func identifier(s string) bool {
	for i, c := range []byte(s) {
		if !(c == '_' || c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z' || i > 0 && c >= '0' && c <= '9') {
			return false
		}
	}
	return s != ""
}
