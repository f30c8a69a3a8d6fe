package host

import (
	"errors"
	"fmt"
)

// matcher matches one Lua pattern against one text. It goes the way the Lua 5.1 manual describes (section 5.4.1): greedy
// repetition first, backtracking where that fails. Each step is counted, so that no pattern runs for ever.
type matcher struct {
	text, pattern string
	steps         int        // left to take; at 0 the match gives up with errSteps
	depth         int        // of recursion
	level         int        // captures begun
	capture       [32]region // of the text
}

// region is a capture; its length may be one of the marks below.
type region struct{ from, length int }

const (
	captureOpen     = -1 // begun, not ended
	capturePosition = -2 // (): the place alone
	maxMatchDepth   = 200
)

var (
	errSteps = errors.New("pattern takes too many steps")
	errDeep  = errors.New("the pattern is too complex for this text")
)

// patternError is a pattern that is not well formed.
type patternError string

func (e patternError) Error() string { return string(e) }

// fail ends a match; find recovers it.
func fail(format string, args ...any) { panic(patternError(fmt.Sprintf(format, args...))) }

// find looks for the first match at or after start. from is -1 where there is none. Captures are those of the match.
func (m *matcher) find(start int) (from, to int, err error) {
	defer func() {
		switch r := recover().(type) {
		case nil:
		case patternError:
			err = r
		case error:
			if r != errSteps && r != errDeep {
				panic(r)
			}
			err = r
		default:
			panic(r)
		}
	}()
	p := 0
	anchored := m.pattern != "" && m.pattern[0] == '^'
	if anchored {
		p = 1
	}
	for s := start; ; s++ {
		m.level, m.depth = 0, 0
		if end := m.match(s, p); end >= 0 {
			return s, end, nil
		}
		if anchored || s >= len(m.text) {
			return -1, -1, nil
		}
	}
}

// step counts.
func (m *matcher) step() {
	if m.steps--; m.steps < 0 {
		panic(errSteps)
	}
}

// match matches the pattern from p at s and returns where the match ends, or -1.
func (m *matcher) match(s, p int) int {
	if m.depth++; m.depth > maxMatchDepth {
		panic(errDeep)
	}
	r := m.along(s, p)
	m.depth--
	return r
}

// along is match without the count of the depth.
func (m *matcher) along(s, p int) int {
	for p < len(m.pattern) {
		m.step()
		switch m.pattern[p] {
		case '(':
			if p+1 < len(m.pattern) && m.pattern[p+1] == ')' {
				return m.begin(s, p+2, capturePosition)
			}
			return m.begin(s, p+1, captureOpen)
		case ')':
			return m.end(s, p+1)
		case '$':
			if p+1 == len(m.pattern) {
				if s == len(m.text) {
					return s
				}
				return -1
			}
		case '%':
			if p+1 < len(m.pattern) {
				switch c := m.pattern[p+1]; {
				case c == 'b':
					if s = m.balance(s, p+2); s < 0 {
						return -1
					}
					p += 4
					continue
				case c == 'f':
					p += 2
					if p >= len(m.pattern) || m.pattern[p] != '[' {
						fail("'[' is missing after '%%f'")
					}
					end := m.classEnd(p)
					var before, here byte
					if s > 0 {
						before = m.text[s-1]
					}
					if s < len(m.text) {
						here = m.text[s]
					}
					if m.inSet(before, p, end-1) || !m.inSet(here, p, end-1) {
						return -1
					}
					p = end
					continue
				case c >= '0' && c <= '9':
					if s = m.again(s, c); s < 0 {
						return -1
					}
					p += 2
					continue
				}
			}
		}
		end := m.classEnd(p)
		var suffix byte
		if end < len(m.pattern) {
			suffix = m.pattern[end]
		}
		switch suffix {
		case '?':
			if m.single(s, p, end) {
				if r := m.match(s+1, end+1); r >= 0 {
					return r
				}
			}
			p = end + 1
		case '*':
			return m.longest(s, p, end, 0)
		case '+':
			return m.longest(s, p, end, 1)
		case '-':
			return m.shortest(s, p, end)
		default:
			if !m.single(s, p, end) {
				return -1
			}
			s, p = s+1, end
		}
	}
	return s
}

// classEnd returns where the single-character class at p ends.
func (m *matcher) classEnd(p int) int {
	c := m.pattern[p]
	p++
	switch c {
	case '%':
		if p >= len(m.pattern) {
			fail("the pattern ends with '%%'")
		}
		return p + 1
	case '[':
		if p < len(m.pattern) && m.pattern[p] == '^' {
			p++
		}
		for first := true; first || p >= len(m.pattern) || m.pattern[p] != ']'; first = false {
			if p >= len(m.pattern) {
				fail("']' is missing in the pattern")
			}
			p++
			if m.pattern[p-1] == '%' {
				if p >= len(m.pattern) {
					fail("']' is missing in the pattern")
				}
				p++
			}
		}
		return p + 1
	}
	return p
}

// single reports whether the character at s is in the class from p to end.
func (m *matcher) single(s, p, end int) bool {
	m.step()
	if s >= len(m.text) {
		return false
	}
	c := m.text[s]
	switch m.pattern[p] {
	case '.':
		return true
	case '%':
		return inClass(c, m.pattern[p+1])
	case '[':
		return m.inSet(c, p, end-1)
	}
	return m.pattern[p] == c
}

// inSet reports whether c is in the set that begins with '[' at p and ends with ']' at last.
func (m *matcher) inSet(c byte, p, last int) bool {
	in := true
	p++
	if m.pattern[p] == '^' {
		in = false
		p++
	}
	for ; p < last; p++ {
		m.step()
		switch {
		case m.pattern[p] == '%':
			p++
			if inClass(c, m.pattern[p]) {
				return in
			}
		case p+2 < last && m.pattern[p+1] == '-':
			if m.pattern[p] <= c && c <= m.pattern[p+2] {
				return in
			}
			p += 2
		case m.pattern[p] == c:
			return in
		}
	}
	return !in
}

// inClass reports whether c is in the class that a letter after '%' names; a capital names the complement. ASCII alone counts.
func inClass(c, class byte) bool {
	lower := class | 0x20
	var in bool
	switch lower {
	case 'a':
		in = c|0x20 >= 'a' && c|0x20 <= 'z'
	case 'c':
		in = c < 0x20 || c == 0x7f
	case 'd':
		in = c >= '0' && c <= '9'
	case 'l':
		in = c >= 'a' && c <= 'z'
	case 'p':
		in = c > 0x20 && c < 0x7f && !(c >= '0' && c <= '9' || c|0x20 >= 'a' && c|0x20 <= 'z')
	case 's':
		in = c == ' ' || c >= '\t' && c <= '\r'
	case 'u':
		in = c >= 'A' && c <= 'Z'
	case 'w':
		in = c >= '0' && c <= '9' || c|0x20 >= 'a' && c|0x20 <= 'z'
	case 'x':
		in = c >= '0' && c <= '9' || c|0x20 >= 'a' && c|0x20 <= 'f'
	case 'z':
		in = c == 0
	default:
		return class == c
	}
	if class >= 'A' && class <= 'Z' {
		return !in
	}
	return in
}

// longest matches as many of the class as it can and gives back one after the other.
func (m *matcher) longest(s, p, end, least int) int {
	n := 0
	for m.single(s+n, p, end) {
		n++
	}
	for ; n >= least; n-- {
		if r := m.match(s+n, end+1); r >= 0 {
			return r
		}
	}
	return -1
}

// shortest matches as few of the class as it can.
func (m *matcher) shortest(s, p, end int) int {
	for {
		if r := m.match(s, end+1); r >= 0 {
			return r
		}
		if !m.single(s, p, end) {
			return -1
		}
		s++
	}
}

// begin opens a capture.
func (m *matcher) begin(s, p, mark int) int {
	if m.level >= len(m.capture) {
		fail("more than %d captures in the pattern", len(m.capture))
	}
	m.capture[m.level] = region{s, mark}
	m.level++
	r := m.match(s, p)
	if r < 0 {
		m.level--
	}
	return r
}

// end closes the innermost open capture.
func (m *matcher) end(s, p int) int {
	l := m.level - 1
	for l >= 0 && m.capture[l].length != captureOpen {
		l--
	}
	if l < 0 {
		fail("')' without '(' in the pattern")
	}
	m.capture[l].length = s - m.capture[l].from
	r := m.match(s, p)
	if r < 0 {
		m.capture[l].length = captureOpen
	}
	return r
}

// balance matches %bxy at s and returns its end, or -1.
func (m *matcher) balance(s, p int) int {
	if p+1 >= len(m.pattern) {
		fail("'%%b' needs two characters in the pattern")
	}
	if s >= len(m.text) || m.text[s] != m.pattern[p] {
		return -1
	}
	for depth := 1; ; {
		m.step()
		if s++; s >= len(m.text) {
			return -1
		}
		switch m.text[s] {
		case m.pattern[p+1]:
			if depth--; depth == 0 {
				return s + 1
			}
		case m.pattern[p]:
			depth++
		}
	}
}

// again matches what an earlier capture holds.
func (m *matcher) again(s int, digit byte) int {
	l := int(digit) - '1'
	if l < 0 || l >= m.level || m.capture[l].length < 0 {
		fail("%%%c refers to no finished capture of the pattern", digit)
	}
	was := m.text[m.capture[l].from:][:m.capture[l].length]
	m.steps -= len(was) / 8
	m.step()
	if len(m.text)-s < len(was) || m.text[s:s+len(was)] != was {
		return -1
	}
	return s + len(was)
}
