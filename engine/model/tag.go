package model

import (
	"math"
	"slices"
	"strconv"
)

// String returns the value as text: a number in the fewest digits that read back the same, without an exponent from a hundred-thousandth
// to a thousand million million, a truth value as "true" or "false".
func (v Value) String() string {
	switch v.Kind {
	case NumberValue:
		form := byte('f')
		if size := math.Abs(v.Number); size != 0 && (size < 1e-5 || size >= 1e15) {
			form = 'g'
		}
		return strconv.FormatFloat(v.Number, form, -1, 64)
	case TruthValue:
		return strconv.FormatBool(v.Truth)
	}
	return v.Text
}

// String returns the pass's name in the scene language.
func (p Pass) String() string {
	names := [...]string{
		PassDiffuse: "diffuse", PassSpecular: "specular", PassAmbient: "ambient", PassEmission: "emission", PassDepth: "depth", PassNormal: "normal",
		PassSamples: "samples", PassNoise: "noise",
	}
	if int(p) < len(names) {
		return names[p]
	}
	return "pass " + strconv.Itoa(int(p))
}

// Tag returns the frame's value of a tag; ok is false where it has none.
func (f *Frame) Tag(key string) (v Value, ok bool) {
	for _, t := range f.Tags {
		if t.Key == key {
			return t.Value, true
		}
	}
	return Value{}, false
}

// Shows reports whether the sheet's choice of frames admits this one.
func (s *Sheet) Shows(f *Frame) bool {
	for _, c := range s.Where {
		v, ok := f.Tag(c.Key)
		if !ok || !slices.Contains(c.Values, v) {
			return false
		}
	}
	return true
}
