package main

import (
	"bytes"
	"encoding/json"

	"lampbook/engine/model"
)

// tagList is a frame's tags as a JSON object that keeps their order and their types.
type tagList []model.Tag

func tagsObject(f *model.Frame) tagList { return f.Tags }

// MarshalJSON writes {"gloss":16,"glaze":"slate"}.
func (l tagList) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	b.WriteByte('{')
	for i, t := range l {
		if i > 0 {
			b.WriteByte(',')
		}
		key, err := json.Marshal(t.Key)
		if err != nil {
			return nil, err
		}
		var v any = t.Value.Text
		switch t.Value.Kind {
		case model.NumberValue:
			v = t.Value.Number
		case model.TruthValue:
			v = t.Value.Truth
		}
		value, err := json.Marshal(v)
		if err != nil {
			return nil, err
		}
		b.Write(key)
		b.WriteByte(':')
		b.Write(value)
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}
