package report

import (
	"math"
	"reflect"
	"slices"
	"testing"

	"lampbook/engine/model"
)

// TestSettingLinesSayEverySetting changes every field of the settings, those inside its structs too, and looks for the change in the lines:
// a setting that a picture's metadata would not tell is found by itself.
func TestSettingLinesSayEverySetting(t *testing.T) {
	base := model.Settings{Width: 480, Height: 360, Samples: 64, LightSamples: 1, Tone: model.ToneReinhard, White: 4, Passes: []model.Pass{model.PassDepth}}
	var visit func(name string, field func(*model.Settings) reflect.Value)
	visit = func(name string, field func(*model.Settings) reflect.Value) {
		changed := base
		changed.Passes = slices.Clone(base.Passes)
		switch v := field(&changed); v.Kind() {
		case reflect.Struct:
			for i := range v.NumField() {
				visit(name+"."+v.Type().Field(i).Name, func(s *model.Settings) reflect.Value { return field(s).Field(i) })
			}
			return
		case reflect.Bool:
			v.SetBool(!v.Bool())
		case reflect.Int:
			v.SetInt(v.Int() + 1)
		case reflect.Uint8, reflect.Uint32:
			if v.Uint() > 0 { // not beyond the last word of an enumeration
				v.SetUint(v.Uint() - 1)
			} else {
				v.SetUint(1)
			}
		case reflect.Float32, reflect.Float64:
			v.SetFloat(v.Float() + 0.25)
		case reflect.Slice:
			v.Set(reflect.Append(v, reflect.Zero(v.Type().Elem())))
		default:
			t.Fatalf("%s is a %s: this test does not know how to change one", name, v.Kind())
		}
		if slices.Equal(SettingLines(changed), SettingLines(base)) != (name == "Formats") {
			t.Errorf("%s: lines %q", name, SettingLines(changed))
		}
	}
	kind := reflect.TypeFor[model.Settings]()
	for i := range kind.NumField() {
		visit(kind.Field(i).Name, func(s *model.Settings) reflect.Value { return reflect.ValueOf(s).Elem().Field(i) })
	}
}

func TestSettingLines(t *testing.T) {
	glossy := workshop().Frames[2].Settings
	for _, test := range []struct {
		settings model.Settings
		want     []string
	}{
		{workshop().Frames[0].Settings, []string{"size=480x360", "samples=64", "noise=0.5", "light_samples=16", "seed=7", "filter=blackman_harris", "exposure=-1.5",
			"tone=shoulder", "background=0.25 0.25 0.25", "passes=diffuse depth samples noise"}},
		{glossy, []string{"size=480x360", "samples=64", "noise=0", "light_samples=16", "seed=7", "filter=box", "exposure=-1.5", "tone=reinhard", "white=4",
			"background=transparent", "passes=diffuse depth samples noise"}},
	} {
		if got := SettingLines(test.settings); !slices.Equal(got, test.want) {
			t.Errorf("got %q, want %q", got, test.want)
		}
	}
	for given, want := range map[float64]float64{-7.123456789: -7.1235, -0.00004: 0, 3: 3} {
		if got := Stops(given); got != want || math.Signbit(got) != (want < 0) {
			t.Errorf("%v stops are said to be %v, want %v", given, got, want)
		}
	}
}
