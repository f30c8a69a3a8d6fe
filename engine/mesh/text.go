package mesh

import (
	"bytes"
	"fmt"
	"math"
	"strconv"
)

// lineReader gives the statements of an OBJ or MTL file: its lines, without comments, a "\" at the end of a line joining the
// next to it. Lines end with LF, CR LF or CR. A comment begins with "#" at the start of a line or after a blank, and is never continued.
type lineReader struct {
	rest   []byte
	feed   int    // where the next LF of rest is; < 0 when it must be looked for, len(rest) if there is none
	line   int    // 1-based number of the line at which the statement begins
	taken  int    // lines read so far
	joined []byte // holds a statement of several lines
}

// newLineReader checks that data is text. File names it in errors.
func newLineReader(file string, data []byte) (*lineReader, error) {
	if len(data) > MaxFileBytes {
		return nil, &PosError{file, 0, fmt.Errorf("%d bytes, at most %d are accepted", len(data), MaxFileBytes)}
	}
	if bytes.HasPrefix(data, []byte{0xFE, 0xFF}) || bytes.HasPrefix(data, []byte{0xFF, 0xFE}) {
		return nil, &PosError{file, 1, fmt.Errorf("the text is UTF-16: save it as UTF-8 or ASCII")}
	}
	data = bytes.TrimPrefix(data, []byte{0xEF, 0xBB, 0xBF})
	if i := bytes.IndexByte(data, 0); i >= 0 {
		line := 1 + bytes.Count(data[:i], []byte{'\n'})
		return nil, &PosError{file, line, fmt.Errorf("a zero byte: this is not UTF-8 or ASCII text (UTF-16 and binary files are not read)")}
	}
	return &lineReader{rest: data, feed: -1}, nil
}

// next returns the keyword of the next statement and what follows it, without blanks around it. Neither is valid after the
// next call.
func (r *lineReader) next() (keyword, rest []byte, ok bool) {
	for len(r.rest) > 0 {
		r.line = r.taken + 1
		statement := stripComment(r.physical())
		if n := len(statement); n > 0 && statement[n-1] == '\\' {
			r.joined = r.joined[:0]
			for n > 0 && statement[n-1] == '\\' {
				r.joined = append(append(r.joined, statement[:n-1]...), ' ')
				statement = stripComment(r.physical())
				n = len(statement)
			}
			r.joined = append(r.joined, statement...)
			statement = bytes.TrimSpace(r.joined)
		}
		if keyword, rest = field(statement); len(keyword) > 0 {
			return keyword, bytes.TrimLeft(rest, blanks), true
		}
	}
	return nil, nil, false
}

// physical returns the next line of the file, without its end; nil at the end of the file.
func (r *lineReader) physical() []byte {
	if len(r.rest) == 0 {
		return nil
	}
	if r.feed < 0 {
		if r.feed = bytes.IndexByte(r.rest, '\n'); r.feed < 0 {
			r.feed = len(r.rest)
		}
	}
	r.taken++
	line := r.rest[:r.feed]
	cut := r.feed + 1
	if cr := bytes.IndexByte(line, '\r'); cr >= 0 && cr != r.feed-1 {
		cut = cr + 1 // a CR on its own
	}
	line = line[:min(cut-1, len(line))]
	r.rest = r.rest[min(cut, len(r.rest)):]
	r.feed -= cut
	return line
}

const blanks = " \t\v\f\r"

// stripComment returns the line without blanks around it and without a comment.
func stripComment(line []byte) []byte {
	for from := 0; ; {
		i := bytes.IndexByte(line[from:], '#')
		if i < 0 {
			return bytes.TrimSpace(line)
		}
		from += i
		if from == 0 || blank(line[from-1]) {
			return bytes.TrimSpace(line[:from])
		}
		from++
	}
}

func blank(c byte) bool { return c == ' ' || c >= '\t' && c <= '\r' }

// field cuts the first word off.
func field(text []byte) (word, rest []byte) {
	i := 0
	for i < len(text) && blank(text[i]) {
		i++
	}
	j := i
	for j < len(text) && !blank(text[j]) {
		j++
	}
	return text[i:j], text[j:]
}

// numbers reads up to len(into) numbers and returns how many there were, with the text after them. Only finite decimal numbers
// are accepted.
func numbers(text []byte, into []float64) (n int, err error) {
	for n < len(into) {
		var word []byte
		if word, text = field(text); len(word) == 0 {
			return n, nil
		}
		v, ok := number(word)
		if !ok {
			return n, fmt.Errorf("%s is not a finite decimal number", quote(word))
		}
		into[n] = v
		n++
	}
	return n, nil
}

var powersOf10 = [...]float64{1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20, 1e21, 1e22}

// number reads a decimal number such as -1.5e-3, correctly rounded. Up to 15 digits with a power of ten up to 22 take one rounding,
// that of a product or quotient of two exact values (Clinger 1990); the rest goes the long way.
func number(word []byte) (v float64, ok bool) {
	i, n := 0, len(word)
	negative := false
	if i < n && (word[i] == '-' || word[i] == '+') {
		negative = word[i] == '-'
		i++
	}
	digits, power, kept := 0, 0, uint64(0)
	point := false
	for ; i < n; i++ {
		c := word[i]
		if c == '.' && !point {
			point = true
			continue
		}
		if c < '0' || c > '9' {
			break
		}
		digits++
		if kept < 100_000_000_000_000 {
			kept = 10*kept + uint64(c-'0')
			if point {
				power--
			}
		} else {
			return slowNumber(word)
		}
	}
	if digits == 0 {
		return 0, false
	}
	if i < n {
		if word[i] != 'e' && word[i] != 'E' {
			return 0, false
		}
		exponent, err := strconv.Atoi(string(word[i+1:]))
		if err != nil {
			return slowNumber(word)
		}
		power += exponent
	}
	v = float64(kept)
	switch {
	case power < -22 || power > 22:
		return slowNumber(word)
	case power < 0:
		v /= powersOf10[-power]
	default:
		v *= powersOf10[power]
	}
	if negative {
		v = -v
	}
	return v, true
}

// slowNumber reads what number cannot; words such as "inf", "nan" and "0x1p3" are no decimal numbers.
func slowNumber(word []byte) (v float64, ok bool) {
	for _, c := range word {
		if (c < '0' || c > '9') && c != '.' && c != '-' && c != '+' && c != 'e' && c != 'E' {
			return 0, false
		}
	}
	v, err := strconv.ParseFloat(string(word), 64)
	if err != nil || math.IsInf(v, 0) {
		return 0, false
	}
	return v, true
}

// quote makes text from a file safe and short enough for a message.
func quote(text []byte) string {
	const most = 40
	if len(text) > most {
		return strconv.Quote(string(text[:most])) + "…"
	}
	return strconv.Quote(string(text))
}
