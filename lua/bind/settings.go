package bind

import (
	"strings"

	lua "github.com/yuin/gopher-lua"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// settings are those in force, and whether an exposure was stated.
type settings struct {
	model.Settings
	exposure exposure
}

const settingsKeys = "size samples noise light_samples seed filter exposure tone white background passes formats"

func settingsCalls() []call {
	return []call{{name: "settings", keys: settingsKeys, run: func(a *args) lua.LValue {
		a.readSettings(&a.env.settings)
		return nil
	}}}
}

// defaultSettings are those of a scene that states none. The ground is 18 % grey, which neither tints nor dazzles.
func defaultSettings() settings {
	return settings{Settings: model.Settings{
		Width: 640, Height: 480, Samples: 64, LightSamples: 1, White: 4,
		Background: model.Background{Color: tint.Grey(0.18)}, Formats: []model.Format{model.FormatPNG},
	}}
}

// aspect is width over height.
func (s settings) aspect() float64 { return float64(s.Width) / float64(s.Height) }

// aspect is that of the size in force, the command line's word included.
func (e *Env) aspect() float64 {
	s := e.settings
	e.Forced.apply(&s)
	return s.aspect()
}

// Words for the choices of settings, by the values of model.
var (
	filterWords = []string{model.BlackmanHarris: "blackman_harris", model.BoxFilter: "box"}
	toneWords   = []string{model.ToneShoulder: "shoulder", model.ToneNeutral: "neutral", model.ToneClip: "clip", model.ToneReinhard: "reinhard", model.ToneACES: "aces"}
	passWords   = wordsFrom(model.PassDiffuse, model.PassNoise)
	formatWords = []string{model.FormatPNG: "png", model.FormatPNG16: "png16", model.FormatEXR: "exr", model.FormatEXRHalf: "exr_half"}
)

// wordsFrom lists the names of the passes from the first to the last.
func wordsFrom(first, last model.Pass) []string {
	var words []string
	for p := first; p <= last; p++ {
		words = append(words, p.String())
	}
	return words
}

// FormatNames lists the words for picture formats, by the values of model.Format.
func FormatNames() []string { return append([]string(nil), formatWords...) }

// readSettings reads the keys over what s holds.
func (a *args) readSettings(s *settings) {
	if v := a.get("size"); v != lua.LNil {
		var size [2]float64
		a.checkNumbers("size", v, size[:], "{width, height} in pixels", limit{})
		for i, dst := range []*int{&s.Width, &s.Height} {
			if size[i] != float64(int(size[i])) || size[i] < 1 || size[i] > model.MaxSide {
				a.failf("size must be whole numbers of pixels from 1 to %d, got %s", model.MaxSide, describe(v))
			}
			*dst = int(size[i])
		}
	}
	a.integer("samples", &s.Samples, 1, model.MaxSamples)
	if v := a.get("noise"); v != lua.LNil {
		if n, ok := v.(lua.LNumber); !ok || n != 0 && !between(model.MinNoise, model.MaxNoise, "").admits(float64(n)) {
			a.failf("noise must be a number from %s to %s L*, or 0 for none, got %s", number(model.MinNoise), number(model.MaxNoise), describe(v))
		} else {
			s.Noise = float64(n)
		}
	}
	a.integer("light_samples", &s.LightSamples, 1, model.MaxLightSamples)
	seed := int(s.Seed)
	a.integer("seed", &seed, 0, 1<<32-1)
	s.Seed = uint32(seed)
	filter, tone := int(s.Filter), int(s.Tone)
	a.oneOf("filter", filterWords, &filter)
	a.oneOf("tone", toneWords, &tone)
	s.Filter, s.Tone = model.Filter(filter), model.Tone(tone)
	s.exposure.given = a.number("exposure", &s.exposure.stops, between(-100, 100, "stops")) || s.exposure.given
	a.number("white", &s.White, above0(1e9, ""))
	if v := a.get("background"); v != lua.LNil {
		if w, ok := v.(lua.LString); ok && w == "transparent" {
			s.Background = model.Background{Transparent: true}
		} else {
			if _, ok := valueOf[color](v); !ok {
				a.failf("background must be a colour or \"transparent\", got %s%s", describe(v), colorAdvice(v))
			}
			s.Background = model.Background{Color: a.checkColor("background", v, 1)}
		}
	}
	if v := a.get("passes"); v != lua.LNil {
		s.Passes = wordSet[model.Pass](a, "passes", v, passWords)
	}
	if v := a.get("formats"); v != lua.LNil {
		s.Formats = wordSet[model.Format](a, "formats", hyphens(a, v), formatWords)
		if len(s.Formats) == 0 {
			a.failf("formats must name at least one of %s", quoted(formatWords))
		}
	}
}

// hyphens is a word or a list of words as formats are written: "exr-half" reads as "exr_half".
func hyphens(a *args, v lua.LValue) lua.LValue {
	plain := func(v lua.LValue) lua.LValue {
		if w, ok := v.(lua.LString); ok {
			return lua.LString(strings.ReplaceAll(string(w), "-", "_"))
		}
		return v
	}
	t, ok := v.(*lua.LTable)
	if !ok {
		return plain(v)
	}
	out := &lua.LTable{}
	for i, x := range a.list("formats", t, "words", 100) {
		out.RawSetInt(i+1, plain(x))
	}
	return out
}

// wordSet reads a word or a list of words, none twice.
func wordSet[T ~uint8](a *args, name string, v lua.LValue, words []string) []T {
	if w, ok := v.(lua.LString); ok {
		return []T{T(a.checkWord(name, w, words))}
	}
	var out []T
	for _, x := range a.list(name, v, "words", 100) {
		w := T(a.checkWord(name, x, words))
		for _, o := range out {
			if o == w {
				a.failf("%s names %s twice", name, describe(x))
			}
		}
		out = append(out, w)
	}
	return out
}

// apply changes the settings to what the command line says.
func (f Forced) apply(s *settings) {
	sized := f.Width > 0 && f.Height > 0
	if sized {
		s.Width, s.Height = f.Width, f.Height
	} else if f.Draft {
		s.Width, s.Height = max(1, s.Width/2), max(1, s.Height/2)
	}
	if f.Samples > 0 {
		s.Samples = f.Samples
	} else if f.Draft {
		s.Samples = max(1, s.Samples/4)
	}
	if len(f.Formats) > 0 {
		s.Formats = f.Formats
	}
	if f.Draft {
		s.Noise = min(2*s.Noise, model.MaxNoise) // a quarter of the rays doubles the error
	}
}
