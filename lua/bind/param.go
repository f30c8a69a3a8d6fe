package bind

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

func paramCalls() []call {
	return []call{{name: "param", params: "name! default!", keys: "min max integer choices help", run: param}}
}

const maxParams = 1000

// param declares a parameter and gives its value: the default, or what the command line says, which must be of the same type.
func param(a *args) lua.LValue {
	p := model.Param{}
	a.text("name", &p.Name)
	if !plainName(p.Name) {
		a.failf("name must be letters, digits and _, beginning with a letter, got %s", quote(p.Name))
	}
	e := a.env
	if i, ok := e.params[p.Name]; ok {
		a.failf("%q is declared already%s", p.Name, suffix(e.paramPos[i]))
	}
	if len(e.plan.Params) == maxParams {
		a.failf("at most %d parameters are accepted", maxParams)
	}
	a.text("help", &p.Help)
	rule := a.paramRule(p.Name)
	v := a.get("default")
	if err := rule.check(v); err != nil {
		a.failf("the default of %q: %v", p.Name, err)
	}
	for _, o := range e.Overrides {
		if o.Name != p.Name {
			continue
		}
		set, err := rule.parse(o.Text)
		if err == nil {
			err = rule.check(set)
		}
		if err != nil {
			a.failf("--set %s=%s: %v", o.Name, short(o.Text), err)
		}
		v, p.Set = set, true
	}
	p.Value = canonical(v)
	e.params[p.Name] = len(e.plan.Params)
	e.plan.Params = append(e.plan.Params, p)
	e.paramPos = append(e.paramPos, e.callSite(a.l))
	return v
}

// paramRule is what a parameter accepts.
type paramRule struct {
	args     *args
	kind     string // "number", "text", "boolean", "color"
	min, max float64
	integer  bool
	choices  []lua.LValue
}

func (a *args) paramRule(name string) paramRule {
	r := paramRule{args: a, min: math.Inf(-1), max: math.Inf(1)}
	switch d := a.get("default").(type) {
	case lua.LNumber:
		r.kind = "number"
	case lua.LString:
		r.kind = "text"
	case lua.LBool:
		r.kind = "boolean"
	default:
		if _, ok := valueOf[color](d); !ok {
			a.failf("the default of %q must be a number, a text, true or false, or a colour, got %s", name, describe(d))
		}
		r.kind = "color"
	}
	for _, key := range []string{"min", "max", "integer"} {
		if a.given(key) && r.kind != "number" {
			a.failf("%s is for numbers, and %q is a %s", key, name, r.kind)
		}
	}
	a.number("min", &r.min, limit{})
	a.number("max", &r.max, limit{})
	if r.min > r.max {
		a.failf("min must be at most max, %s, got %s", number(r.max), number(r.min))
	}
	a.boolean("integer", &r.integer)
	if v := a.get("choices"); v != lua.LNil {
		if r.kind == "boolean" || r.kind == "color" {
			a.failf("choices are for numbers and texts, and %q is a %s", name, r.kind)
		}
		r.choices = a.list("choices", v, r.kind+"s", 1000)
		if len(r.choices) == 0 {
			a.failf("choices must not be empty")
		}
		for _, c := range r.choices {
			if c.Type() != a.get("default").Type() {
				a.failf("choices must be %ss like the default, got %s", r.kind, describe(c))
			}
		}
	}
	return r
}

// check says whether a value of the right type is accepted.
func (r paramRule) check(v lua.LValue) error {
	if n, ok := v.(lua.LNumber); ok {
		x := float64(n)
		switch {
		case math.IsNaN(x) || math.IsInf(x, 0):
			return fmt.Errorf("must be a finite number, got %s", number(x))
		case r.integer && x != math.Trunc(x):
			return fmt.Errorf("must be a whole number, got %s", number(x))
		case x < r.min || x > r.max:
			return fmt.Errorf("must be %s, got %s", spanText(r.min, r.max), number(x))
		}
	}
	if len(r.choices) == 0 {
		return nil
	}
	var words []string
	for _, c := range r.choices {
		if c == v {
			return nil
		}
		words = append(words, canonical(c))
	}
	return fmt.Errorf("must be one of %s, got %s", joined(words), canonical(v))
}

// numbers says which numbers are accepted.
func (r paramRule) numbers() string {
	what := "a number"
	if r.integer {
		what = "a whole number"
	}
	if math.IsInf(r.min, -1) && math.IsInf(r.max, 1) {
		return what
	}
	return what + ", " + spanText(r.min, r.max)
}

func spanText(low, high float64) string {
	switch {
	case math.IsInf(low, -1):
		return "at most " + number(high)
	case math.IsInf(high, 1):
		return "at least " + number(low)
	}
	return number(low) + " to " + number(high)
}

// parse reads a value as the command line gives it.
func (r paramRule) parse(text string) (lua.LValue, error) {
	switch r.kind {
	case "number":
		v, err := strconv.ParseFloat(strings.TrimSpace(text), 64)
		if err != nil && !errors.Is(err, strconv.ErrRange) {
			return nil, fmt.Errorf("must be %s, got %s", r.numbers(), quote(text))
		}
		return lua.LNumber(v), nil
	case "boolean":
		switch text {
		case "true":
			return lua.LTrue, nil
		case "false":
			return lua.LFalse, nil
		}
		return nil, fmt.Errorf("must be true or false, got %s", quote(text))
	case "color":
		c, err := tint.ParseHex(text)
		if err != nil {
			return nil, err
		}
		return r.args.pushColor(c), nil
	}
	return lua.LString(text), nil
}

// canonical is a parameter's value as text.
func canonical(v lua.LValue) string {
	switch v := v.(type) {
	case lua.LNumber:
		return number(float64(v))
	case lua.LString:
		return string(v)
	case lua.LBool:
		return strconv.FormatBool(bool(v))
	}
	if c, ok := valueOf[color](v); ok {
		if back, err := tint.ParseHex(tint.Hex(c.RGB)); err == nil && back == c.RGB {
			return tint.Hex(c.RGB)
		}
		return c.text()
	}
	return describe(v)
}

// checkOverrides refuses values from the command line for parameters that the scene has not.
func (e *Env) checkOverrides() error {
	var known []string
	for _, p := range e.plan.Params {
		known = append(known, p.Name)
	}
	for _, o := range e.Overrides {
		if _, ok := e.params[o.Name]; ok {
			continue
		}
		if len(known) == 0 {
			return fmt.Errorf("--set %s=%s: %s has no parameters", short(o.Name), short(o.Text), e.Scene)
		}
		return fmt.Errorf("--set %s=%s: %s has no parameter %s%s", short(o.Name), short(o.Text), e.Scene, quote(o.Name), Hint(o.Name, known))
	}
	return nil
}

// plainName reports whether s is a name as Lua forms them, at most 64 letters long.
func plainName(s string) bool {
	if s == "" || len(s) > 64 {
		return false
	}
	for i, r := range s {
		letter := r == '_' || r >= 'a' && r <= 'z' || r >= 'A' && r <= 'Z'
		if !letter && !(i > 0 && r >= '0' && r <= '9') {
			return false
		}
	}
	return true
}

// suffix is how a place reads in the middle of a message.
func suffix(p model.Pos) string {
	if p.File == "" {
		return ""
	}
	return fmt.Sprintf(", at %s:%d", p.File, p.Line)
}
