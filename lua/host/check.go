package host

import (
	"fmt"
	"math"
	"strconv"
	"strings"

	"github.com/yuin/gopher-lua/ast"

	"lampbook/engine/model"
)

// checker walks a syntax tree once: it refuses what the compiler could not bear, notes what stands on each line, and
// rewrites what the compiler would get wrong (rewrite.go).
type checker struct {
	file    string
	notes   notes
	depth   int
	jumps   int
	work    int64 // an estimate of the compiler's searches
	names   []string
	locals  map[string]int // how often a name is visible as a local
	visible int
	funcs   []constants
	err     error
}

// constants counts what the compiler stores for one function: it searches the list for each reference.
type constants struct {
	seen map[string]struct{}
	refs int64
}

// check walks the tree, changes it in place and returns its notes.
func check(file string, tree []ast.Stmt) (notes, error) {
	c := &checker{file: file, locals: map[string]int{}, notes: notes{lines: map[int][]note{}}}
	c.funcs = []constants{{seen: map[string]struct{}{}}}
	c.block(tree)
	c.leaveFunction(1)
	return c.notes, c.err
}

// fail keeps the first error.
func (c *checker) fail(line int, format string, args ...any) {
	if c.err == nil {
		c.err = &Error{Pos: model.Pos{File: c.file, Line: line}, Msg: fmt.Sprintf(format, args...)}
	}
}

// deeper enters a level of nesting; it reports false where the walk must not go on.
func (c *checker) deeper(line int) bool {
	c.depth++
	if c.depth > maxDepth {
		c.fail(line, "expressions or blocks are nested more than %d deep", maxDepth)
	}
	return c.err == nil
}

// block walks the statements in a scope of their own.
func (c *checker) block(list []ast.Stmt) {
	mark := len(c.names)
	c.statements(list)
	c.forget(mark)
}

func (c *checker) statements(list []ast.Stmt) {
	for _, s := range list {
		if c.err != nil {
			return
		}
		if c.deeper(s.Line()) {
			c.statement(s)
		}
		c.depth--
	}
}

// declare makes names visible as locals.
func (c *checker) declare(line int, names ...string) {
	for _, n := range names {
		c.names = append(c.names, n)
		c.locals[n]++
		c.visible++
		c.notes.locals = append(c.notes.locals, local{n, line})
	}
}

// forget ends the scope of the locals declared since mark.
func (c *checker) forget(mark int) {
	for _, n := range c.names[mark:] {
		c.locals[n]--
		c.visible--
	}
	c.names = c.names[:mark]
}

func (c *checker) statement(s ast.Stmt) {
	switch s := s.(type) {
	case *ast.AssignStmt:
		c.exprs(s.Lhs)
		c.exprs(s.Rhs)
	case *ast.LocalAssignStmt:
		if len(s.Exprs) == 1 && len(s.Names) == 1 {
			if _, ok := s.Exprs[0].(*ast.FunctionExpr); ok {
				c.declare(s.Line(), s.Names...)
				c.exprs(s.Exprs)
				return
			}
		}
		c.exprs(s.Exprs)
		c.declare(s.Line(), s.Names...)
	case *ast.FuncCallStmt:
		s.Expr = c.expr(s.Expr)
	case *ast.DoBlockStmt:
		c.block(s.Stmts)
	case *ast.WhileStmt:
		s.Condition = c.expr(s.Condition)
		c.block(s.Stmts)
	case *ast.RepeatStmt:
		mark := len(c.names)
		c.statements(s.Stmts)
		s.Condition = c.expr(s.Condition)
		c.forget(mark)
	case *ast.IfStmt:
		s.Condition = c.expr(s.Condition)
		c.block(s.Then)
		c.block(s.Else)
	case *ast.NumberForStmt:
		s.Init, s.Limit = c.expr(s.Init), c.expr(s.Limit)
		if s.Step != nil {
			s.Step = c.expr(s.Step)
		}
		c.notes.add(s.Line(), note{kind: noteFor, key: s.Name, names: []string{describe(s.Init), describe(s.Limit), describe(s.Step)}})
		mark := len(c.names)
		c.declare(s.Line(), s.Name)
		c.block(s.Stmts)
		c.forget(mark)
	case *ast.GenericForStmt:
		if len(s.Exprs) == 1 {
			c.notes.add(s.Line(), note{kind: noteEach, names: []string{describe(s.Exprs[0])}})
		}
		c.exprs(s.Exprs)
		// The script library clears only as many of the three values behind a loop (iterator, state, control) as the loop has names,
		// and finds the others as an earlier loop left them: a second loop over the same iterator would not run.
		for len(s.Names) < 3 {
			s.Names = append(s.Names, unnamed)
		}
		mark := len(c.names)
		c.declare(s.Line(), s.Names...)
		c.block(s.Stmts)
		c.forget(mark)
	case *ast.FuncDefStmt:
		if s.Name.Func != nil {
			s.Name.Func = c.expr(s.Name.Func)
		}
		if s.Name.Receiver != nil {
			c.constant("s" + s.Name.Method)
			s.Name.Receiver = c.expr(s.Name.Receiver)
		}
		c.function(s.Func, s.Name.Receiver != nil)
	case *ast.ReturnStmt:
		c.exprs(s.Exprs)
	case *ast.LabelStmt, *ast.GotoStmt:
		if c.jumps++; c.jumps > maxJumps {
			c.fail(s.Line(), "more than %d labels and gotos in one file", maxJumps)
		}
	}
}

func (c *checker) exprs(list []ast.Expr) {
	for i := range list {
		if c.err != nil {
			return
		}
		list[i] = c.expr(list[i])
	}
}

// unnamed is a loop variable that no Lua name can reach.
const unnamed = "(unnamed)"

// expr walks an expression and returns what stands in its place.
func (c *checker) expr(e ast.Expr) ast.Expr {
	if c.deeper(e.Line()) {
		e = c.inner(e)
	}
	c.depth--
	return e
}

func (c *checker) inner(e ast.Expr) ast.Expr {
	line := e.Line()
	switch x := e.(type) {
	case *ast.NumberExpr:
		c.number(x)
	case *ast.StringExpr:
		c.constant("s" + x.Value)
	case *ast.IdentExpr:
		c.work += int64(c.visible) + 1
		if c.locals[x.Value] == 0 {
			c.constant("s" + x.Value)
		}
	case *ast.AttrGetExpr:
		c.notes.add(line, note{kind: noteIndex, key: keyText(x.Key), names: []string{describe(x.Object)}})
		x.Object, x.Key = c.expr(x.Object), c.expr(x.Key)
	case *ast.TableExpr:
		c.table(x)
	case *ast.FuncCallExpr:
		if x.Func != nil {
			c.notes.add(line, note{kind: noteCall, names: []string{describe(x.Func)}})
			x.Func = c.expr(x.Func)
		} else {
			c.constant("s" + x.Method)
			c.notes.add(line, note{kind: noteIndex, key: x.Method, names: []string{describe(x.Receiver)}})
			c.notes.add(line, note{kind: noteCall, names: []string{describe(x.Receiver) + ":" + x.Method}})
			x.Receiver = c.expr(x.Receiver)
		}
		c.exprs(x.Args)
	case *ast.LogicalOpExpr:
		x.Lhs, x.Rhs = c.expr(x.Lhs), c.expr(x.Rhs)
	case *ast.RelationalOpExpr:
		c.notes.add(line, note{kind: noteCompare, key: x.Operator, names: []string{describe(x.Lhs), describe(x.Rhs)}})
		x.Lhs, x.Rhs = c.expr(x.Lhs), c.expr(x.Rhs)
	case *ast.ArithmeticOpExpr:
		c.notes.add(line, note{kind: noteArith, key: x.Operator, names: []string{describe(x.Lhs), describe(x.Rhs)}})
		x.Lhs, x.Rhs = c.expr(x.Lhs), c.expr(x.Rhs)
	case *ast.StringConcatOpExpr:
		return c.join(x)
	case *ast.UnaryMinusOpExpr:
		c.notes.add(line, note{kind: noteMinus, names: []string{describe(x.Expr)}})
		x.Expr = c.expr(x.Expr)
	case *ast.UnaryLenOpExpr:
		c.notes.add(line, note{kind: noteLen, names: []string{describe(x.Expr)}})
		x.Expr = c.expr(x.Expr)
	case *ast.UnaryNotOpExpr:
		x.Expr = c.expr(x.Expr)
	case *ast.FunctionExpr:
		c.function(x, false)
	}
	return e
}

// function walks a function's body with its parameters in scope.
func (c *checker) function(f *ast.FunctionExpr, method bool) {
	c.funcs = append(c.funcs, constants{seen: map[string]struct{}{}})
	mark := len(c.names)
	if method {
		c.declare(f.Line(), "self")
	}
	c.declare(f.Line(), f.ParList.Names...)
	c.block(f.Stmts)
	c.forget(mark)
	c.leaveFunction(f.Line())
}

// constant counts a reference to a constant of the function at hand.
func (c *checker) constant(key string) {
	f := &c.funcs[len(c.funcs)-1]
	f.seen[key] = struct{}{}
	f.refs++
}

// leaveFunction adds up what the compiler will search for a function.
func (c *checker) leaveFunction(line int) {
	f := c.funcs[len(c.funcs)-1]
	c.funcs = c.funcs[:len(c.funcs)-1]
	c.work += f.refs * int64(len(f.seen))
	if c.work > compileWork {
		c.fail(line, "too many different numbers, texts and names in one function (%d): put the values into a file of their own and read it with data.csv", len(f.seen))
	}
}

// number gives a number the value that the manual gives it: the library would read 010 as 8 and 1e as not-a-number.
func (c *checker) number(x *ast.NumberExpr) {
	v, ok := parseNumber(x.Value)
	if !ok {
		c.fail(x.Line(), "%s is no number", quote(x.Value))
		return
	}
	x.Value = strconv.FormatFloat(v, 'g', -1, 64)
	c.constant("n" + x.Value)
}

// parseNumber reads a number as Lua 5.1 writes it: decimal, or hexadecimal without a fraction; blanks around it do not count.
func parseNumber(s string) (float64, bool) {
	s = strings.Trim(s, " \t\n\r\v\f")
	digits := strings.TrimLeft(s, "+-")
	if len(s)-len(digits) > 1 || digits == "" || strings.ContainsAny(digits, "_pPnN") {
		return 0, false
	}
	negative := s[0] == '-'
	var v float64
	if len(digits) > 2 && digits[0] == '0' && (digits[1] == 'x' || digits[1] == 'X') {
		for _, d := range strings.ToLower(digits[2:]) {
			at := strings.IndexRune("0123456789abcdef", d)
			if at < 0 {
				return 0, false
			}
			v = float64(v*16) + float64(at)
		}
	} else {
		var err error
		if v, err = strconv.ParseFloat(digits, 64); err != nil && !math.IsInf(v, 0) {
			return 0, false
		}
	}
	if negative {
		v = -v
	}
	return v, true
}
