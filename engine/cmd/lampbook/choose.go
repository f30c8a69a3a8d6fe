package main

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/model"
	"lampbook/output/sheet"
)

// choose keeps only the frames for which every tag named has one of the values given for it, and the sheets that still have something to
// show. An unknown tag, or a value that no frame has, is an error that names what there is. A number is met as it stands, or else
// as it reads when rounded to the decimals typed.
func choose(p *model.Plan, only []assignment) error {
	var keys []string
	for _, a := range only {
		if !slices.Contains(keys, a.name) {
			keys = append(keys, a.name)
		}
	}
	for _, key := range keys {
		var admitted []model.Value
		for _, a := range only {
			if a.name != key {
				continue
			}
			values, err := meant(p, a)
			if err != nil {
				return err
			}
			admitted = append(admitted, values...)
		}
		p.Frames = slices.DeleteFunc(p.Frames, func(f model.Frame) bool {
			v, ok := f.Tag(key)
			return !ok || !slices.Contains(admitted, v)
		})
	}
	if len(p.Frames) == 0 {
		return wrongf("--only: no frame has all of these tags at once")
	}
	p.Sheets = slices.DeleteFunc(p.Sheets, func(s model.Sheet) bool { return !speaksOf(s, p) })
	return nil
}

// speaksOf reports whether a sheet of the whole plan still has something to show in the narrowed one: frames, with the tags of its axes.
func speaksOf(s model.Sheet, p *model.Plan) bool {
	if !slices.ContainsFunc(p.Frames, func(f model.Frame) bool { return s.Shows(&f) }) {
		return false
	}
	_, err := sheet.Names(p, s, sheet.Options{})
	return err == nil
}

// meant lists the values of the tag that the text can mean.
func meant(p *model.Plan, a assignment) ([]model.Value, error) {
	var values []model.Value
	var keys []string
	for _, f := range p.Frames {
		for _, t := range f.Tags {
			if t.Key == a.name && !slices.Contains(values, t.Value) {
				values = append(values, t.Value)
			}
			if !slices.Contains(keys, t.Key) {
				keys = append(keys, t.Key)
			}
		}
	}
	if len(values) == 0 {
		return nil, wrongf("--only: no frame has a tag %q%s%s", a.name, didYouMean(a.name, keys), accepted("tags", keys))
	}
	for _, same := range []func(model.Value, string) bool{isValue, roundsTo} {
		var met []model.Value
		for _, v := range values {
			if same(v, a.value) {
				met = append(met, v)
			}
		}
		if len(met) > 0 {
			return met, nil
		}
	}
	var texts []string
	for _, v := range values {
		texts = append(texts, v.String())
	}
	return nil, wrongf("--only: no frame has %s = %q%s%s", a.name, a.value, didYouMean(a.value, texts), accepted("values", texts))
}

// isValue reports whether the text says exactly this value.
func isValue(v model.Value, text string) bool {
	if v.Kind == model.NumberValue {
		n, err := strconv.ParseFloat(text, 64)
		return err == nil && n == v.Number
	}
	return v.String() == text
}

// roundsTo reports whether a number reads as the text when rounded to the text's decimals, as a heading may show it.
func roundsTo(v model.Value, text string) bool {
	if v.Kind != model.NumberValue {
		return false
	}
	_, decimals, _ := strings.Cut(text, ".")
	return strconv.FormatFloat(v.Number, 'f', len(decimals), 64) == text
}

// accepted lists what there is, as far as a line takes it.
func accepted(what string, names []string) string {
	const most = 20
	if len(names) == 0 {
		return "; the frames have no " + what
	}
	rest := ""
	if len(names) > most {
		rest = fmt.Sprintf(" and %d more", len(names)-most)
		names = names[:most]
	}
	return fmt.Sprintf("; %s are %s%s", what, strings.Join(names, ", "), rest)
}
