package main

import (
	"slices"
	"testing"

	"lampbook/engine/model"
)

func TestChooseByValue(t *testing.T) {
	number := func(n float64) model.Value { return model.Value{Kind: model.NumberValue, Number: n} }
	plan := func() *model.Plan {
		return &model.Plan{Frames: []model.Frame{
			{Name: "a", Tags: []model.Tag{{Key: "gloss", Value: number(16)}, {Key: "lit", Value: model.Value{Kind: model.TruthValue, Truth: true}}}},
			{Name: "b", Tags: []model.Tag{{Key: "gloss", Value: number(15.874)}, {Key: "lit", Value: model.Value{Kind: model.TruthValue}}}},
			{Name: "c", Tags: []model.Tag{{Key: "gloss", Value: number(31.748)}, {Key: "glaze", Value: model.Value{Text: "16"}}}},
			{Name: "d"},
		}}
	}
	for _, test := range []struct {
		only []assignment
		want []string // nil: an error
	}{
		{[]assignment{{"gloss", "16"}}, []string{"a"}}, // as it stands, though b rounds to it
		{[]assignment{{"gloss", "1.6e1"}}, []string{"a"}},
		{[]assignment{{"gloss", "15.9"}}, []string{"b"}}, // as a heading may show it
		{[]assignment{{"gloss", "15.874"}}, []string{"b"}},
		{[]assignment{{"gloss", "32"}, {"gloss", "16"}}, []string{"a", "c"}},
		{[]assignment{{"lit", "true"}}, []string{"a"}},
		{[]assignment{{"glaze", "16"}}, []string{"c"}},
		{[]assignment{{"glaze", "16.0"}}, nil}, // a text is met letter by letter
		{[]assignment{{"gloss", "16"}, {"lit", "false"}}, nil},
		{[]assignment{{"gloss", "17"}}, nil},
		{[]assignment{{"kiln", "1"}}, nil},
	} {
		p := plan()
		err := choose(p, test.only)
		var got []string
		for _, f := range p.Frames {
			got = append(got, f.Name)
		}
		if test.want == nil && statusOf(err) != statusWrong || test.want != nil && (err != nil || !slices.Equal(got, test.want)) {
			t.Errorf("%v: frames %v, error %v; want %v", test.only, got, err, test.want)
		}
	}
}
