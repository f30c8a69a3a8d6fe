package host

import (
	"bytes"
	"fmt"

	"github.com/yuin/gopher-lua/parse"

	"lampbook/engine/model"
)

// maxChain is how many operators that group from the right may follow one another in an expression.
const maxChain = 5_000

// shallow refuses, before the parser sees the text, what would make its stack grow without bound: it keeps about a kilobyte for
// each bracket or block that is open and for each operator that waits for its right side.
func shallow(name string, text []byte) error {
	type level struct {
		closer string
		chain  int
	}
	levels := []level{{}}
	sc := parse.NewScanner(bytes.NewReader(text), "")
	lx := &parse.Lexer{}
	pendingElseif := false
	for {
		t, err := sc.Scan(lx)
		if err != nil || t.Type == parse.EOF {
			return nil // the parser says what is wrong, if anything is
		}
		lx.PrevTokenType = t.Type
		if t.Type == parse.TString || t.Type == parse.TIdent || t.Type == parse.TNumber {
			continue
		}
		top := &levels[len(levels)-1]
		switch t.Str {
		case "^", "..", "-", "#", "not":
			if top.chain++; top.chain > maxChain {
				return &Error{Pos: model.Pos{File: name, Line: t.Pos.Line}, Msg: fmt.Sprintf("expressions or blocks are nested more than %d deep: more than %d operators wait for their right side", maxDepth, maxChain)}
			}
		case ",", ";", "=", "local", "return", "if", "while", "for", "else", "in":
			top.chain = 0
		case "elseif":
			top.chain, pendingElseif = 0, true
		}
		closer, opens := closers[t.Str]
		switch {
		case t.Str == "then" && pendingElseif:
			top.chain, pendingElseif = 0, false
		case opens:
			top.chain = 0
			levels = append(levels, level{closer: closer})
			if len(levels) > maxDepth {
				return &Error{Pos: model.Pos{File: name, Line: t.Pos.Line}, Msg: fmt.Sprintf("expressions or blocks are nested more than %d deep", maxDepth)}
			}
		case len(levels) > 1 && t.Str == top.closer:
			levels = levels[:len(levels)-1]
		}
	}
}
