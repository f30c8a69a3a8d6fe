package host

import (
	"fmt"
	"regexp"
	"strconv"
	"strings"
	"unicode"
	"unicode/utf8"

	"lampbook/engine/model"
)

// Error is a scene that could not be evaluated: a mistake in it, or a bound that it hit.
type Error struct {
	Pos   model.Pos   // the zero Pos where no line is to blame
	Msg   string      // lower case, one line unless the scene's own text has more
	Trace []model.Pos // the calls that led there, innermost first
	Cause error       // what lies beneath, for errors.Is: a missing file, context.Canceled; may be nil
}

// Error reads as "scenes/lamp.lua:12: sphere: radius must be > 0, got -1".
func (e *Error) Error() string {
	switch {
	case e.Pos.File == "":
		return e.Msg
	case e.Pos.Line == 0:
		return e.Pos.File + ": " + e.Msg
	}
	return fmt.Sprintf("%s:%d: %s", e.Pos.File, e.Pos.Line, e.Msg)
}

// Unwrap returns the cause.
func (e *Error) Unwrap() error { return e.Cause }

// plain makes a text fit for a terminal: valid UTF-8, no control characters but line breaks, no longer than a message may be.
func plain(s string) string {
	cut := len(s) > maxMessage
	if cut {
		s = s[:maxMessage]
		for len(s) > 0 && !utf8.RuneStart(s[len(s)-1]) {
			s = s[:len(s)-1]
		}
		if r, n := utf8.DecodeLastRuneInString(s); r == utf8.RuneError && n == 1 {
			s = s[:len(s)-1]
		}
	}
	var b strings.Builder
	for _, r := range strings.ToValidUTF8(s, "\uFFFD") {
		switch {
		case r == '\n':
			b.WriteRune(r)
		case r == '\t':
			b.WriteByte(' ')
		case unicode.IsControl(r) || unicode.Is(unicode.Bidi_Control, r):
			fmt.Fprintf(&b, "\\x%02x", r)
		default:
			b.WriteRune(r)
		}
	}
	if cut {
		b.WriteString("…")
	}
	return strings.TrimRight(b.String(), " \n")
}

// marked finds the place at the head of a message of the virtual machine: "file:line: text".
var marked = regexp.MustCompile(`^([^\n:][^\n]*?\.lua):(\d+):\s*`)

// splitPlace takes the place off the head of a message. Without one it returns the zero Pos and the whole message.
func splitPlace(msg string) (model.Pos, string) {
	m := marked.FindStringSubmatch(msg[:min(len(msg), 4096)])
	if m == nil {
		return model.Pos{}, msg
	}
	line, err := strconv.Atoi(m[2])
	if err != nil {
		return model.Pos{}, msg
	}
	return model.Pos{File: m[1], Line: line}, msg[len(m[0]):]
}
