package sheet

import (
	"fmt"
	"slices"
	"strings"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
)

// fairness is what a sheet's frames have in common and where they differ.
type fairness struct {
	same   []string     // settings that every frame shares
	vary   []string     // parts of the scene that differ from frame to frame, as they should on a sheet
	tagged []string     // settings that differ and are named by a tag of an axis
	unfair map[int]bool // by frame: a setting differs from the sheet's commonest and no tag of an axis says so
	notes  []string     // one a setting: "samples 64, marked tiles 16"
}

// comparedSettings are what must not differ unnoticed: each with the tags that announce it, what is compared, and how a value reads, to
// the given significant digits where it is no whole number.
var comparedSettings = [...]struct {
	name  string
	tags  []string
	value func(s *model.Settings) any // comparable
	text  func(s *model.Settings, digits int) string
}{
	{"size", []string{"size", "width", "height", "resolution"}, func(s *model.Settings) any { return [2]int{s.Width, s.Height} },
		func(s *model.Settings, _ int) string { return sizeText(s.Width, s.Height) }},
	{"samples", []string{"samples"}, func(s *model.Settings) any { return s.Samples },
		func(s *model.Settings, _ int) string { return number(float64(s.Samples), 17) }},
	{"noise", []string{"noise"}, func(s *model.Settings) any { return s.Noise },
		func(s *model.Settings, digits int) string { return noiseText(s.Noise, digits) }},
	{"light samples", []string{"light_samples"}, func(s *model.Settings) any { return s.LightSamples },
		func(s *model.Settings, _ int) string { return number(float64(s.LightSamples), 17) }},
	{"seed", []string{"seed"}, func(s *model.Settings) any { return s.Seed },
		func(s *model.Settings, _ int) string { return number(float64(s.Seed), 17) }},
	{"filter", []string{"filter"}, func(s *model.Settings) any { return s.Filter },
		func(s *model.Settings, _ int) string { return nameAt(int(s.Filter), "Blackman-Harris", "box") }},
	{"tone", []string{"tone", "white"}, func(s *model.Settings) any { return toneOf(s) }, func(s *model.Settings, digits int) string {
		text := nameAt(int(s.Tone), "shoulder", "neutral", "clip", "Reinhard", "ACES")
		if s.Tone == model.ToneReinhard {
			text += " to " + number(s.White, digits)
		}
		return text
	}},
	{"exposure", []string{"exposure", "ev100"}, func(s *model.Settings) any { return s.Exposure },
		func(s *model.Settings, digits int) string { return number(s.Exposure, digits) + thinSpace + "stops" }},
	{"background", []string{"background", "ground"}, func(s *model.Settings) any { return groundOf(s) },
		func(s *model.Settings, _ int) string {
			if s.Background.Transparent {
				return "transparent"
			}
			return tint.Hex(s.Background.Color)
		}},
}

// toneOf is the tone with what of its parameters counts.
func toneOf(s *model.Settings) [2]float64 {
	if s.Tone == model.ToneReinhard {
		return [2]float64{float64(s.Tone), s.White}
	}
	return [2]float64{float64(s.Tone)}
}

// groundOf is the background with its colour only where that shows.
func groundOf(s *model.Settings) model.Background {
	if s.Background.Transparent {
		return model.Background{Transparent: true}
	}
	return s.Background
}

// noNoise is how a target for noise reads that was not set.
const noNoise = "none"

func noiseText(target float64, digits int) string {
	if target == 0 {
		return noNoise
	}
	return number(target, digits) + thinSpace + "L*"
}

func nameAt(i int, names ...string) string {
	if i < len(names) {
		return names[i]
	}
	return fmt.Sprint(i)
}

func sizeText(w, h int) string {
	return number(float64(w), 17) + thinSpace + times + thinSpace + number(float64(h), 17)
}

// judge compares the frames of a sheet. Frames with a failure are left out: what they ask for may be incomplete.
func judge(p *model.Plan, pv *pivot) fairness {
	j := fairness{unfair: map[int]bool{}}
	var frames []int
	for _, i := range pv.frames {
		if p.Frames[i].Failure == "" {
			frames = append(frames, i)
		}
	}
	if len(frames) == 0 {
		return j
	}
	for _, c := range comparedSettings {
		count := map[any]int{}
		var met []int // the first frame of each value
		values := make([]any, len(frames))
		for n, i := range frames {
			values[n] = c.value(&p.Frames[i].Settings)
			if count[values[n]]++; count[values[n]] == 1 {
				met = append(met, i)
			}
		}
		if len(count) == 1 {
			if first := &p.Frames[frames[0]].Settings; c.name != "noise" || first.Noise != 0 { // a target that nobody set is no news
				j.same = append(j.same, c.name)
			}
			continue
		}
		if slices.ContainsFunc(pv.keys(), func(key string) bool { return announces(key, c.tags) }) {
			j.tagged = append(j.tagged, c.name)
			continue
		}
		common := values[0] // the commonest; of equals the one met first
		for _, v := range values {
			if count[v] > count[common] {
				common = v
			}
		}
		text := tellingApart(p, met, c.text)
		var commonText string
		var others []string
		for n, i := range frames {
			if values[n] != common {
				j.unfair[i] = true
			}
		}
		for n, i := range met {
			if c.value(&p.Frames[i].Settings) == common {
				commonText = text[n]
			} else {
				others = append(others, text[n])
			}
		}
		const most = 3
		if len(others) > most {
			others = append(others[:most:most], "others")
		}
		j.notes = append(j.notes, fmt.Sprintf("%s %s, marked tiles %s", c.name, commonText, list(others, "and")))
	}
	first := &p.Frames[frames[0]]
	for _, part := range [...]struct {
		name string
		same func(a, b *model.Frame) bool
	}{
		{"camera", func(a, b *model.Frame) bool { return a.Camera == b.Camera }},
		{"lights", func(a, b *model.Frame) bool {
			return slices.EqualFunc(a.Lights, b.Lights, func(x, y model.LightID) bool { return x == y || p.Lights[x] == p.Lights[y] })
		}},
		{"things", func(a, b *model.Frame) bool { return slices.EqualFunc(a.Things, b.Things, samePlace) }},
		{"materials", func(a, b *model.Frame) bool {
			return slices.EqualFunc(a.Things, b.Things, func(x, y model.Placement) bool { return sameMaterials(p, x, y) })
		}},
	} {
		for _, i := range frames[1:] {
			if !part.same(first, &p.Frames[i]) {
				j.vary = append(j.vary, part.name)
				break
			}
		}
	}
	return j
}

// tellingApart writes a setting of frames in which it differs, in as many digits as that takes, four at least.
func tellingApart(p *model.Plan, frames []int, text func(s *model.Settings, digits int) string) []string {
	var texts []string
	for digits := 4; digits <= 17; digits++ {
		texts = texts[:0]
		alike := false
		for _, i := range frames {
			t := text(&p.Frames[i].Settings, digits)
			alike = alike || slices.Contains(texts, t)
			texts = append(texts, t)
		}
		if !alike {
			break
		}
	}
	return texts
}

// announces reports whether a tag's name, with or without a unit, says that a setting differs.
func announces(key string, names []string) bool {
	for _, n := range names {
		if key == n || strings.HasPrefix(key, n+"_") {
			return true
		}
	}
	return false
}

func samePlace(a, b model.Placement) bool {
	return a.Mesh == b.Mesh && a.At == b.At && a.Turn == b.Turn && a.Scale == b.Scale && a.Hidden == b.Hidden && a.NoShadow == b.NoShadow
}

func sameMaterials(p *model.Plan, a, b model.Placement) bool {
	return slices.EqualFunc(a.Materials, b.Materials, func(x, y model.MaterialID) bool { return x == y || p.Materials[x] == p.Materials[y] })
}

// line says it in one sentence or two.
func (j fairness) line() string {
	var parts []string
	if len(j.vary) > 0 {
		parts = append(parts, "What differs: "+list(j.vary, "and"))
	}
	if len(j.notes) > 0 {
		parts = append(parts, "Not alike: "+strings.Join(j.notes, "; "))
	}
	if len(j.same) > 0 && len(j.notes) == 0 && len(j.tagged) == 0 {
		parts = append(parts, "Settings alike")
	} else if len(j.same) > 0 {
		parts = append(parts, "Same "+list(j.same, "and"))
	}
	return strings.Join(parts, ". ")
}
