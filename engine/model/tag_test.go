package model

import "testing"

func TestValueString(t *testing.T) {
	for _, test := range []struct {
		value Value
		want  string
	}{
		{Value{Text: "celadon"}, "celadon"},
		{Value{Text: ""}, ""},
		{Value{Kind: NumberValue, Number: 16}, "16"},
		{Value{Kind: NumberValue, Number: 0.1}, "0.1"},
		{Value{Kind: NumberValue, Number: -2.5}, "-2.5"},
		{Value{Kind: TruthValue, Truth: true}, "true"},
		{Value{Kind: TruthValue}, "false"},
	} {
		if got := test.value.String(); got != test.want {
			t.Errorf("%#v: got %q, want %q", test.value, got, test.want)
		}
	}
}

func TestSheetShows(t *testing.T) {
	number := func(n float64) Value { return Value{Kind: NumberValue, Number: n} }
	f := &Frame{Tags: []Tag{{"gloss", number(16)}, {"glaze", Value{Text: "slate"}}}}
	for _, test := range []struct {
		where []TagChoice
		want  bool
	}{
		{nil, true},
		{[]TagChoice{{"gloss", []Value{number(4), number(16)}}}, true},
		{[]TagChoice{{"gloss", []Value{number(4)}}}, false},
		{[]TagChoice{{"gloss", []Value{{Text: "16"}}}}, false},
		{[]TagChoice{{"gloss", []Value{number(16)}}, {"glaze", []Value{{Text: "celadon"}}}}, false},
		{[]TagChoice{{"kiln", []Value{{Text: ""}}}}, false},
	} {
		s := Sheet{Where: test.where}
		if got := s.Shows(f); got != test.want {
			t.Errorf("where %v: got %v, want %v", test.where, got, test.want)
		}
	}
}
