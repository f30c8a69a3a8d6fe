package host

import "github.com/yuin/gopher-lua/ast"

// joinName is the global that stands for the operator "..": no Lua name can be written so.
const joinName = "(..)"

// joinMost is how many operands one call joins: each takes a register.
const joinMost = 50

// join replaces a chain a .. b .. c by a call of our own function: the virtual machine's operator cannot be bounded, and writes
// numbers otherwise than Lua does.
func (c *checker) join(x *ast.StringConcatOpExpr) ast.Expr {
	line := x.Line()
	var parts []ast.Expr
	for {
		parts = append(parts, x.Lhs)
		next, ok := x.Rhs.(*ast.StringConcatOpExpr)
		if !ok {
			parts = append(parts, x.Rhs)
			break
		}
		x = next
	}
	names := make([]string, len(parts))
	for i, p := range parts {
		names[i] = describe(p)
	}
	c.notes.add(line, note{kind: noteJoin, names: names})
	c.exprs(parts)
	for len(parts) > joinMost {
		var groups []ast.Expr
		for i := 0; i < len(parts); i += joinMost {
			groups = append(groups, c.joined(line, parts[i:min(i+joinMost, len(parts))]))
		}
		parts = groups
	}
	return c.joined(line, parts)
}

// joined is the call that joins the parts; of each only the first value counts.
func (c *checker) joined(line int, parts []ast.Expr) ast.Expr {
	if len(parts) == 1 {
		return parts[0]
	}
	switch last := parts[len(parts)-1].(type) {
	case *ast.FuncCallExpr:
		last.AdjustRet = true
	case *ast.Comma3Expr:
		last.AdjustRet = true
	}
	c.constant("s" + joinName)
	name := &ast.IdentExpr{Value: joinName}
	name.SetLine(line)
	call := &ast.FuncCallExpr{Func: name, Args: parts, AdjustRet: true}
	call.SetLine(line)
	return call
}

// table walks a table constructor. Where it has both named fields and fifty or more positional ones, the named ones go first: the
// compiler stores the positional ones in batches of fifty, and a named field right after a batch makes it store the batch again from registers
// that the field's value has overwritten.
func (c *checker) table(x *ast.TableExpr) {
	items := 0
	for _, f := range x.Fields {
		if f.Key == nil {
			items++
		} else {
			f.Key = c.expr(f.Key)
		}
		f.Value = c.expr(f.Value)
	}
	switch {
	case items > maxArrayItems:
		c.fail(x.Line(), "a table written with %s items is too long, at most %s are accepted: put them into a file of their own and read it with data.csv",
			grouped(int64(items)), grouped(maxArrayItems))
	case items >= batch && items < len(x.Fields):
		fields := make([]*ast.Field, 0, len(x.Fields))
		for _, f := range x.Fields {
			if f.Key != nil {
				fields = append(fields, f)
			}
		}
		for _, f := range x.Fields {
			if f.Key == nil {
				fields = append(fields, f)
			}
		}
		x.Fields = fields
	}
}

// batch is the script library's FieldsPerFlush.
const batch = 50
