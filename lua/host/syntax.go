package host

import (
	"bytes"
	"fmt"
	"strings"

	"github.com/yuin/gopher-lua/parse"

	"lampbook/engine/model"
)

// opener is a word or bracket that waits for its end.
type opener struct {
	text string
	line int
}

// closers says what ends what.
var closers = map[string]string{"function": "end", "do": "end", "then": "end", "repeat": "until", "(": ")", "[": "]", "{": "}"}

// syntaxError puts a complaint of the parser into plain words: the line, the offending text, and what is likely missing.
func syntaxError(name string, text []byte, fault *parse.Error) *Error {
	line := fault.Pos.Line
	if line == parse.EOF {
		line = lastLine(text)
	}
	e := &Error{Pos: model.Pos{File: name, Line: line}}
	quoted := quote(fault.Token)
	switch msg := strings.ToLower(fault.Message); {
	case strings.Contains(msg, "unterminated string"):
		if fault.Pos.Line != parse.EOF {
			e.Pos.Line-- // the scanner has read the line break
		}
		e.Msg = fmt.Sprintf("the text that begins with %s has no closing quote on its line", quoted)
	case strings.Contains(msg, "unterminated multiline string"), strings.Contains(msg, "invalid multiline comment"):
		e.Msg = "a long text or comment that begins with [[ has no closing ]]"
	case strings.Contains(msg, "invalid multiline string"):
		e.Msg = "a long text begins with [[ or [=["
	case strings.Contains(msg, "invalid '~'"):
		e.Msg = "'~' alone means nothing here: 'not equal' is written ~="
	case strings.Contains(msg, "hexadecimal"):
		e.Msg = fmt.Sprintf("%s is no number: digits 0-9 and a-f follow 0x", quoted)
	case strings.Contains(msg, "invalid token"):
		e.Msg = fmt.Sprintf("unexpected character %s%s", quoted, strange(fault.Token))
	case strings.Contains(msg, "ambiguous"):
		e.Msg = "a line that begins with '(' reads as a call of the line before: put ';' before it"
	default:
		at, tokens := unfinished(text)
		switch {
		case fault.Pos.Line == parse.EOF && len(at) > 0:
			o := at[len(at)-1]
			e.Msg = fmt.Sprintf("the file ends before '%s' of line %d is closed by '%s'", o.text, o.line, closers[o.text])
		case fault.Pos.Line == parse.EOF:
			e.Msg = "the file ends in the middle of a statement"
		default:
			e.Msg = fmt.Sprintf("unexpected %s%s", quoted, advice(tokens, fault.Token, line, fault.Pos.Column))
		}
	}
	return e
}

// lastLine is the last line with text on it.
func lastLine(text []byte) int {
	t := bytes.TrimRight(text, " \t\r\n")
	return lineAt(t, len(t))
}

// quote shows the offending text in quotes, short.
func quote(token string) string {
	if r := []rune(token); len(r) > 40 {
		token = string(r[:40]) + "…"
	}
	return "'" + strings.ReplaceAll(plain(token), "\n", " ") + "'"
}

// strange names characters that come from other languages or from word processors.
func strange(token string) string {
	switch token {
	case "!":
		return ": 'not equal' is written ~=, 'not' is written not"
	case "&", "|":
		return ": write and, or"
	case "\xe2":
		return ": are these curly quotes or a long dash? Lua takes \" ' and -"
	case "\xc2":
		return ": is this a hard space? Lua takes plain ones"
	}
	return ""
}

// token is a word of the source with its line.
type token struct {
	text         string
	line, column int
}

// unfinished scans the text as far as it can and returns the openers that no closer followed, outermost first, and the words.
func unfinished(text []byte) (open []opener, words []token) {
	sc := parse.NewScanner(bytes.NewReader(text), "")
	for lx := (&parse.Lexer{}); ; {
		t, err := sc.Scan(lx)
		if err != nil || t.Type == parse.EOF {
			return open, words
		}
		lx.PrevTokenType = t.Type
		if t.Type == parse.TString {
			words = append(words, token{"\x00text", t.Pos.Line, t.Pos.Column})
			continue
		}
		words = append(words, token{t.Str, t.Pos.Line, t.Pos.Column})
		if _, ok := closers[t.Str]; ok {
			if t.Str == "then" && len(words) > 1 && elseif(words) {
				continue
			}
			open = append(open, opener{t.Str, t.Pos.Line})
			continue
		}
		if n := len(open); n > 0 && closers[open[n-1].text] == t.Str {
			open = open[:n-1]
		}
	}
}

// elseif reports whether the last word, a then, belongs to an elseif, which opens nothing new.
func elseif(words []token) bool {
	for i := len(words) - 2; i >= 0; i-- {
		switch words[i].text {
		case "elseif":
			return true
		case "if", "then", "do", "end", "function":
			return false
		}
	}
	return false
}

// advice guesses what led to an unexpected word: the commonest slips of people who come from other languages.
func advice(words []token, unexpected string, line, column int) string {
	at := -1
	for i, w := range words {
		if (w.line < line || w.line == line && w.column <= column) && w.text == unexpected {
			at = i
		}
	}
	before, after := "", ""
	if at > 0 {
		before = words[at-1].text
	}
	if at >= 0 && at+1 < len(words) {
		after = words[at+1].text
	}
	switch {
	case unexpected == "/" && (before == "/" || after == "/" || after == "*"):
		return ": a comment begins with --"
	case after == "=" && strings.Contains(" + - * / .. ", " "+unexpected+" "):
		return fmt.Sprintf(": write x = x %s … in full", unexpected)
	case (unexpected == "+" || unexpected == "-") && after == unexpected:
		return ": write x = x + 1 in full"
	case unexpected == "=" && before == "!":
		return ": 'not equal' is written ~="
	case unexpected == "=" && at >= 0 && inCondition(words, at):
		return ": 'equal' is written =="
	case unexpected == "else" && before == "end":
		return ": no 'end' stands before 'else'"
	case unexpected == "if" && before == "else":
		return ": write elseif in one word"
	case unexpected == "{" && (before == ")" || before == "else"), unexpected == "}" && before == "{":
		return ": blocks are written then … end, do … end"
	case unexpected == "end":
		return ": is one 'end' too many, or is something missing before it?"
	case at > 0 && words[at-1].line < line && isWord(unexpected) && openTable(words, at):
		return fmt.Sprintf(": is a comma missing at the end of line %d?", words[at-1].line)
	case at > 0 && openTable(words, at) && isWord(unexpected):
		return ": is a comma missing before it?"
	case before != "" && before != "\x00text":
		return fmt.Sprintf(" after %s", quote(before))
	}
	return ""
}

// inCondition reports whether word i stands between if or while and its then or do.
func inCondition(words []token, i int) bool {
	for i--; i >= 0; i-- {
		switch words[i].text {
		case "if", "elseif", "while", "until":
			return true
		case "then", "do", "end", "local", "function", "{":
			return false
		}
	}
	return false
}

// openTable reports whether word i stands inside { }.
func openTable(words []token, i int) bool {
	depth := 0
	for i--; i >= 0; i-- {
		switch words[i].text {
		case "}", ")":
			depth++
		case "{":
			if depth == 0 {
				return true
			}
			depth--
		case "(":
			if depth == 0 {
				return false
			}
			depth--
		case "end", "then", "do":
			if depth == 0 {
				return false
			}
		}
	}
	return false
}

// isWord reports whether a token could begin a table item.
func isWord(s string) bool {
	return s != "" && (s[0] == '_' || s[0] == '{' || s[0] == '[' || s[0] >= '0' && s[0] <= '9' || s[0] >= 'A' && s[0] <= 'Z' || s[0] >= 'a' && s[0] <= 'z') &&
		s != "end" && s != "then" && s != "do"
}
