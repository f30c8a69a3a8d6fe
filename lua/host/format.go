package host

import (
	"math"
	"strconv"
	"strings"

	lua "github.com/yuin/gopher-lua"
)

// formatNumber writes a number as Lua 5.1 does: C's %.14g.
func formatNumber(v float64) string {
	if v == math.Trunc(v) && math.Abs(v) < 1e14 && (v != 0 || !math.Signbit(v)) {
		return strconv.FormatInt(int64(v), 10)
	}
	return formatG(v, 14, false, false)
}

// formatG is C's %g: precision significant digits, an exponent of at least two digits where it is below -4 or not below the
// precision, no trailing zeros unless alternate.
func formatG(v float64, precision int, alternate, upper bool) string {
	if s, ok := unusual(v, upper); ok {
		return s
	}
	precision = max(precision, 1)
	mantissa, exponent, _ := strings.Cut(strconv.FormatFloat(v, 'e', precision-1, 64), "e")
	x, err := strconv.Atoi(exponent)
	if err != nil {
		panic(err) // FormatFloat writes whole exponents
	}
	out := ""
	if x < -4 || x >= precision {
		if !alternate {
			mantissa = trimZeros(mantissa)
		} else if !strings.Contains(mantissa, ".") {
			mantissa += "."
		}
		out = mantissa + "e" + exponent // FormatFloat writes two digits at least, as C does
	} else {
		out = strconv.FormatFloat(v, 'f', precision-1-x, 64)
		if !alternate {
			out = trimZeros(out)
		} else if !strings.Contains(out, ".") {
			out += "."
		}
	}
	if upper {
		out = strings.ToUpper(out)
	}
	return out
}

func trimZeros(s string) string {
	if strings.Contains(s, ".") {
		s = strings.TrimRight(strings.TrimRight(s, "0"), ".")
	}
	return s
}

// unusual writes infinities and not-a-number as C does on all systems that matter here.
func unusual(v float64, upper bool) (string, bool) {
	s := ""
	switch {
	case math.IsNaN(v):
		s = "nan"
	case math.IsInf(v, 1):
		s = "inf"
	case math.IsInf(v, -1):
		s = "-inf"
	default:
		return "", false
	}
	if upper {
		s = strings.ToUpper(s)
	}
	return s, true
}

// directive is one % of a format.
type directive struct {
	minus, plus, space, alternate, zero bool
	width, precision                    int // precision -1: not given
	verb                                byte
}

// readDirective reads what follows a % and returns how many bytes it took; 0 means that it is not well formed.
func readDirective(s string) (d directive, n int) {
	d.precision = -1
	for ; n < len(s); n++ {
		switch s[n] {
		case '-':
			d.minus = true
		case '+':
			d.plus = true
		case ' ':
			d.space = true
		case '#':
			d.alternate = true
		case '0':
			d.zero = true
		default:
			goto width
		}
		if n >= 5 {
			return d, 0
		}
	}
width:
	digits := func() (v int) {
		for i := 0; i < 2 && n < len(s) && s[n] >= '0' && s[n] <= '9'; i++ {
			v = v*10 + int(s[n]-'0')
			n++
		}
		return v
	}
	d.width = digits()
	if n < len(s) && s[n] == '.' {
		n++
		d.precision = digits()
	}
	if n >= len(s) {
		return d, 0
	}
	d.verb = s[n]
	return d, n + 1
}

// luaFormat is string.format with the directives of Lua 5.1; widths and precisions have two digits at most. A %d of a number
// with a fraction is an error: C would cut it off in silence.
func (s *sandbox) luaFormat(l *lua.LState) int {
	format := s.text(l, "string.format", 1)
	var out strings.Builder
	arg := 1
	for i := 0; i < len(format); {
		next := strings.IndexByte(format[i:], '%')
		if next < 0 {
			next = len(format) - i
		}
		out.WriteString(format[i : i+next])
		if i += next; i >= len(format) {
			break
		}
		i++
		if i < len(format) && format[i] == '%' {
			out.WriteByte('%')
			i++
			continue
		}
		d, n := readDirective(format[i:])
		if n == 0 || !strings.ContainsRune("cdiouxXeEfgGqs", rune(d.verb)) {
			s.raise(l, "string.format: '%s' in the format is no directive; accepted: %%c %%d %%i %%u %%o %%x %%X %%e %%E %%f %%g %%G %%q %%s %%%%, with widths up to 99",
				show(lua.LString("%"+format[i:min(i+8, len(format))])))
		}
		i += n
		if arg++; arg > l.GetTop() {
			s.raise(l, "string.format: the format asks for %d values or more, got %d", arg-1, l.GetTop()-1)
		}
		out.WriteString(s.directive(l, d, arg))
		s.reserve(l, "string.format", out.Len())
	}
	l.Push(lua.LString(out.String()))
	return 1
}

// directive writes one argument.
func (s *sandbox) directive(l *lua.LState, d directive, arg int) string {
	switch d.verb {
	case 's':
		text := s.written(l, l.Get(arg))
		if d.precision >= 0 && d.precision < len(text) {
			text = text[:d.precision]
		}
		return d.padded(text, false)
	case 'q':
		return quoted(s.text(l, "string.format", arg))
	case 'c':
		return d.padded(string([]byte{byte(s.whole(l, "string.format", arg))}), false)
	case 'd', 'i':
		return d.signed(strconv.FormatInt(s.integer(l, d, arg), 10), true)
	case 'u', 'o', 'x', 'X':
		v := s.integer(l, d, arg)
		base := map[byte]int{'u': 10, 'o': 8, 'x': 16, 'X': 16}[d.verb]
		text := strconv.FormatUint(uint64(v), base)
		if d.alternate && v != 0 && base != 10 {
			text = map[byte]string{'o': "0", 'x': "0x", 'X': "0x"}[d.verb] + text
		}
		if d.verb == 'X' {
			text = strings.ToUpper(text)
		}
		d.plus, d.space = false, false
		return d.signed(text, true)
	}
	v := s.number(l, "string.format", arg)
	precision := d.precision
	if precision < 0 {
		precision = 6
	}
	if text, ok := unusual(v, d.verb == 'E' || d.verb == 'G'); ok {
		d.zero, d.precision = false, -1
		return d.signed(text, false)
	}
	text := ""
	switch d.verb {
	case 'g', 'G':
		text = formatG(v, precision, d.alternate, d.verb == 'G')
	default:
		text = strconv.FormatFloat(v, d.verb, precision, 64)
		if d.alternate && precision == 0 {
			whole, exponent, has := strings.Cut(text, string(d.verb))
			text = whole + "."
			if has {
				text += string(d.verb) + exponent
			}
		}
	}
	return d.signed(text, false)
}

// integer takes a whole number for a directive.
func (s *sandbox) integer(l *lua.LState, d directive, arg int) int64 {
	v := s.number(l, "string.format", arg)
	if v != math.Trunc(v) || math.Abs(v) >= 1<<63 {
		s.raise(l, "string.format: %%%c needs a whole number, argument %d is %s: write %%g, or math.floor it", d.verb, arg, formatNumber(v))
	}
	return int64(v)
}

// signed adds sign, least digits and padding to a number.
func (d directive) signed(text string, whole bool) string {
	digits, negative := strings.CutPrefix(text, "-")
	if whole && d.precision >= 0 {
		d.zero = false
		digits = strings.Repeat("0", max(d.precision-len(digits), 0)) + digits
	}
	switch {
	case negative:
		text = "-" + digits
	case d.plus:
		text = "+" + digits
	case d.space:
		text = " " + digits
	default:
		text = digits
	}
	return d.padded(text, d.zero)
}

// padded fills a text up to the width.
func (d directive) padded(text string, zeros bool) string {
	n := d.width - len(text)
	switch {
	case n <= 0:
		return text
	case d.minus:
		return text + strings.Repeat(" ", n)
	case zeros:
		head := 0
		if text != "" && strings.ContainsRune("+- ", rune(text[0])) {
			head = 1
		}
		if strings.HasPrefix(text[head:], "0x") || strings.HasPrefix(text[head:], "0X") {
			head += 2
		}
		return text[:head] + strings.Repeat("0", n) + text[head:]
	}
	return strings.Repeat(" ", n) + text
}

// quoted writes a text so that Lua reads it back.
func quoted(s string) string {
	var b strings.Builder
	b.WriteByte('"')
	for _, c := range []byte(s) {
		switch c {
		case '"', '\\', '\n':
			b.WriteByte('\\')
			b.WriteByte(c)
		case '\r':
			b.WriteString("\\r")
		case 0:
			b.WriteString("\\000")
		default:
			b.WriteByte(c)
		}
	}
	b.WriteByte('"')
	return b.String()
}
