package bind

import (
	"math"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// limit bounds a number. The zero value admits every finite one.
type limit struct {
	low, high   float64 // with set: admitted from low to high
	set         bool
	above       bool // low itself is not admitted, nor what is less than least over it
	solid       bool // low is admitted, and nothing else that is less than least over it
	unit        string
	unboundedUp bool // messages leave out high, which only keeps slips of the finger out
}

// maxLength is the longest length accepted: a million metres is beyond any stage, and float32 still resolves a tenth of a metre there.
const maxLength = 1e6

// least is how far above a bound that is itself excluded a number must be: a billionth, which of a
// metre no product's detail reaches. What is smaller is a slip, and would be lost in the engine's squares and quotients.
const least = 1e-9

func lengthAbove0() limit {
	return limit{low: 0, high: maxLength, set: true, above: true, unit: "metres", unboundedUp: true}
}
func between(low, high float64, unit string) limit {
	return limit{low: low, high: high, set: true, unit: unit}
}
func above0(high float64, unit string) limit {
	return limit{low: 0, high: high, set: true, above: true, unit: unit, unboundedUp: true}
}
func length0OrMore() limit {
	return limit{low: 0, high: maxLength, set: true, solid: true, unit: "metres", unboundedUp: true}
}
func atLeast0(high float64, unit string) limit {
	return limit{low: 0, high: high, set: true, unit: unit, unboundedUp: true}
}

// rule is the limit in words, after "must be".
func (r limit) rule(v float64) string {
	unit := r.unit
	if unit != "" {
		unit = " " + unit
	}
	switch {
	case r.tooSmall(v) && r.solid:
		return number(r.low) + " or at least " + number(r.low+least) + unit
	case r.tooSmall(v):
		return "at least " + number(r.low+least) + unit
	case !r.set:
		return "a finite number" + strings.TrimSuffix(" of"+unit, " of")
	case r.unboundedUp && v > r.high:
		return "at most " + number(r.high) + unit
	case r.unboundedUp && r.above:
		return "> " + number(r.low) + unit
	case r.unboundedUp:
		return "at least " + number(r.low) + unit
	case r.above:
		return "> " + number(r.low) + " and at most " + number(r.high) + unit
	}
	return number(r.low) + " to " + number(r.high) + unit
}

func (r limit) admits(v float64) bool {
	if math.IsNaN(v) || math.IsInf(v, 0) {
		return false
	}
	return !r.set || (v >= r.low && v <= r.high && !(r.above && v == r.low) && !r.tooSmall(v))
}

// tooSmall reports whether v is above the low bound, but by less than least.
func (r limit) tooSmall(v float64) bool {
	return (r.above || r.solid) && v > r.low && v < r.low+least
}

// number reads a number within the limit.
func (a *args) number(name string, dst *float64, r limit) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkNumber(name, v, r)
	return true
}

// checkNumber returns v as a number within the limit; what names it in messages.
func (a *args) checkNumber(what string, v lua.LValue, r limit) float64 {
	n, ok := v.(lua.LNumber)
	if !ok {
		rule := r.rule(0)
		if r.set {
			rule = "a number " + rule
		}
		a.failf("%s must be %s, got %s", what, rule, describe(v))
	}
	if !r.admits(float64(n)) {
		a.failf("%s must be %s, got %s", what, r.rule(float64(n)), describe(v))
	}
	return float64(n)
}

// integer reads a whole number from low to high.
func (a *args) integer(name string, dst *int, low, high int) bool {
	v := a.get(name)
	if v == lua.LNil {
		return false
	}
	*dst = a.checkInteger(name, v, low, high)
	return true
}

func (a *args) checkInteger(what string, v lua.LValue, low, high int) int {
	n, ok := v.(lua.LNumber)
	if !ok || float64(n) != math.Trunc(float64(n)) || !between(float64(low), float64(high), "").admits(float64(n)) {
		a.failf("%s must be a whole number from %d to %d, got %s", what, low, high, describe(v))
	}
	return int(n)
}
