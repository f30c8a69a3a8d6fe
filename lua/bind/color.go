package bind

import (
	"fmt"
	"math"
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
)

// color is linear light, Rec. 709 primaries.
type color struct{ tint.RGB }

func colorCalls() []call {
	return []call{
		{name: "color", params: "hex!", usage: `color takes "#rrggbb"; for three numbers write color.srgb(r/255, g/255, b/255)`, run: colorHex},
		{name: "color.srgb", params: "r! g! b!", run: colorSRGB},
		{name: "color.linear", params: "r! g! b!", run: colorLinear},
		{name: "color.grey", params: "y!", run: colorGrey},
		{name: "color.kelvin", params: "temperature!", run: colorKelvin},
		{name: "color.lab", params: "L! a! b!", run: colorLab},
		{name: "color:scaled", params: "factor!", run: colorScaled},
		{name: "color:mixed", params: "other! share!", run: colorMixed},
		{name: "color:with", change: true, run: colorWith},
	}
}

// Limits of colours: brighter than any light source is a slip of the finger; temperatures are those that tint.Kelvin takes.
const (
	maxComponent = 1e6
	minKelvin    = 1000
	maxKelvin    = 40_000
)

func (color) kind() string     { return kindColor }
func (color) maker() string    { return "color.linear" }
func (color) fields() []string { return []string{"r", "g", "b", "hex"} }

func (c color) field(_ *Env, _ *lua.LState, name string) lua.LValue {
	switch name {
	case "r":
		return lua.LNumber(c.R)
	case "g":
		return lua.LNumber(c.G)
	case "b":
		return lua.LNumber(c.B)
	}
	return lua.LString(tint.Hex(c.RGB))
}

// text is the colour as a scene would write it, to the digits that float32 holds.
func (c color) text() string {
	return fmt.Sprintf("color.linear(%s, %s, %s)", number32(c.R), number32(c.G), number32(c.B))
}

func number32(v float32) string { return strings.TrimPrefix(fmt.Sprint(v), "+") }

func (a *args) pushColor(c tint.RGB) lua.LValue { return a.env.push(a.l, color{c}) }

func colorHex(a *args) lua.LValue {
	v := a.get("hex")
	if v.Type() != lua.LTString {
		a.failf("takes \"#rrggbb\", got %s%s", describe(v), colorAdvice(v))
	}
	hex := a.checkText("hex", v)
	c, err := tint.ParseHex(hex)
	if err != nil {
		a.failf("%v", err)
	}
	return a.pushColor(c)
}

// triple reads three components, each from 0 to most.
func (a *args) triple(names [3]string, most float64) (t [3]float64) {
	for i, n := range names {
		a.number(n, &t[i], atLeast0(most, ""))
	}
	return t
}

func colorSRGB(a *args) lua.LValue {
	var t [3]float64
	for i, n := range []string{"r", "g", "b"} {
		v := a.get(n)
		if x, ok := v.(lua.LNumber); ok && x > 1 && x <= 255 {
			a.failf("%s must be 0 to 1, got %s: divide by 255, or write color \"#rrggbb\"", n, describe(v))
		}
		a.number(n, &t[i], between(0, 1, ""))
	}
	return a.pushColor(tint.FromSRGB(float32(t[0]), float32(t[1]), float32(t[2])))
}

func colorLinear(a *args) lua.LValue {
	t := a.triple([3]string{"r", "g", "b"}, maxComponent)
	return a.pushColor(tint.RGB{R: float32(t[0]), G: float32(t[1]), B: float32(t[2])})
}

func colorGrey(a *args) lua.LValue {
	var y float64
	a.number("y", &y, atLeast0(maxComponent, ""))
	return a.pushColor(tint.Grey(float32(y)))
}

func colorKelvin(a *args) lua.LValue {
	var k float64
	a.number("temperature", &k, between(minKelvin, maxKelvin, "kelvin"))
	return a.pushColor(tint.Kelvin(k))
}

func colorLab(a *args) lua.LValue {
	var lab [3]float64
	a.number("L", &lab[0], between(0, 100, ""))
	a.number("a", &lab[1], between(-200, 200, ""))
	a.number("b", &lab[2], between(-200, 200, ""))
	c := tint.FromLab(lab[0], lab[1], lab[2])
	// A grey of L* = 100 may leave [0, 1] by a rounding; anything further lies outside Rec. 709.
	const slack = 1e-4
	for _, v := range []float32{c.R, c.G, c.B} {
		if !(v >= -slack && v <= 1+slack) {
			a.failf("L* %s, a* %s, b* %s lies outside the Rec. 709 gamut: it would be r %.4f, g %.4f, b %.4f linear, 0 to 1 are accepted",
				number(lab[0]), number(lab[1]), number(lab[2]), c.R, c.G, c.B)
		}
	}
	clip := func(v float32) float32 { return min(max(v, 0), 1) }
	return a.pushColor(tint.RGB{R: clip(c.R), G: clip(c.G), B: clip(c.B)})
}

func colorScaled(a *args) lua.LValue {
	var k float64
	a.number("factor", &k, atLeast0(maxComponent, ""))
	c := a.self.(color).Scale(float32(k))
	if max(c.R, c.G, c.B) > maxComponent {
		a.failf("components must be at most %s, got %s", number(maxComponent), color{c}.text())
	}
	return a.pushColor(c)
}

func colorMixed(a *args) lua.LValue {
	other := a.checkColor("other", a.get("other"), maxComponent)
	var t float64
	a.number("share", &t, between(0, 1, ""))
	return a.pushColor(a.self.(color).Scale(float32(1 - t)).Add(other.Scale(float32(t))))
}

func colorWith(a *args) lua.LValue {
	c := a.self.(color).RGB
	b := a.changing("color", "r g b")
	for _, f := range []struct {
		name string
		dst  *float32
	}{{"r", &c.R}, {"g", &c.G}, {"b", &c.B}} {
		v := float64(*f.dst)
		b.number(f.name, &v, atLeast0(maxComponent, ""))
		*f.dst = float32(v)
	}
	return a.pushColor(c)
}

// colorAdvice is what to write instead, where a number, a triple or a text stands for a colour.
func colorAdvice(v lua.LValue) string {
	switch v := v.(type) {
	case lua.LNumber:
		return ": write color.grey(" + number(float64(v)) + ")"
	case lua.LString:
		if _, err := tint.ParseHex(string(v)); err == nil {
			return ": write color " + quote(string(v))
		}
		return ": write color \"#rrggbb\""
	case *lua.LTable:
		var t [3]string
		encoded := true
		for i := range t {
			n, ok := v.RawGetInt(i + 1).(lua.LNumber)
			if !ok {
				return ""
			}
			t[i] = number(float64(n))
			encoded = encoded && n >= 0 && n <= 1
		}
		list := strings.Join(t[:], ", ")
		if encoded {
			return fmt.Sprintf(": write color.linear(%s) if these are amounts of light, color.srgb(%s) if they were read off a screen", list, list)
		}
		if hex, ok := bytesAsHex(v); ok {
			return fmt.Sprintf(": write color.linear(%s) if these are amounts of light, color \"%s\" if they were read off a screen", list, hex)
		}
		return fmt.Sprintf(": write color.linear(%s) if these are amounts of light; color.srgb(r, g, b) takes screen values from 0 to 1", list)
	}
	return ""
}

// bytesAsHex reads a triple of screen values from 0 to 255.
func bytesAsHex(t *lua.LTable) (string, bool) {
	hex := "#"
	for i := 1; i <= 3; i++ {
		n, ok := t.RawGetInt(i).(lua.LNumber)
		if !ok || n < 0 || n > 255 || float64(n) != math.Trunc(float64(n)) {
			return "", false
		}
		hex += fmt.Sprintf("%02x", int(n))
	}
	return hex, true
}
