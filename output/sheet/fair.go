package sheet

import (
	"fmt"
	"slices"
	"strings"

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

// comparedSettings are what must not differ unnoticed: each with the tags that announce it and how a value reads.
var comparedSettings = [...]struct {
	name string
	tags []string
	text func(s *model.Settings) string
}{
	{"size", []string{"size", "width", "height", "resolution"}, func(s *model.Settings) string { return sizeText(s.Width, s.Height) }},
	{"samples", []string{"samples"}, func(s *model.Settings) string { return number(float64(s.Samples), 17) }},
	{"noise", []string{"noise"}, func(s *model.Settings) string { return noiseText(s.Noise) }},
	{"light samples", []string{"light_samples"}, func(s *model.Settings) string { return number(float64(s.LightSamples), 17) }},
	{"seed", []string{"seed"}, func(s *model.Settings) string { return number(float64(s.Seed), 17) }},
	{"filter", []string{"filter"}, func(s *model.Settings) string {
		return nameAt(int(s.Filter), "Blackman-Harris", "box")
	}},
	{"tone", []string{"tone", "white"}, func(s *model.Settings) string {
		text := nameAt(int(s.Tone), "shoulder", "neutral", "clip", "Reinhard", "ACES")
		if s.Tone == model.ToneReinhard {
			text += " to " + number(s.White, 4)
		}
		return text
	}},
	{"exposure", []string{"exposure", "ev100"}, func(s *model.Settings) string {
		return number(s.Exposure, 4) + thinSpace + "stops"
	}},
}

// noNoise is how a target for noise reads that was not set.
const noNoise = "none"

func noiseText(target float64) string {
	if target == 0 {
		return noNoise
	}
	return number(target, 4) + thinSpace + "L*"
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
		count := map[string]int{}
		texts := make([]string, len(frames))
		for n, i := range frames {
			texts[n] = c.text(&p.Frames[i].Settings)
			count[texts[n]]++
		}
		if len(count) == 1 {
			if texts[0] != noNoise { // a target that nobody set is no news
				j.same = append(j.same, c.name)
			}
			continue
		}
		if slices.ContainsFunc(pv.keys(), func(key string) bool { return announces(key, c.tags) }) {
			j.tagged = append(j.tagged, c.name)
			continue
		}
		common := texts[0] // the commonest; of equals the one met first
		for _, t := range texts {
			if count[t] > count[common] {
				common = t
			}
		}
		var others []string
		for n, i := range frames {
			if texts[n] != common {
				j.unfair[i] = true
				if !slices.Contains(others, texts[n]) {
					others = append(others, texts[n])
				}
			}
		}
		const most = 3
		if len(others) > most {
			others = append(others[:most:most], "others")
		}
		j.notes = append(j.notes, fmt.Sprintf("%s %s, marked tiles %s", c.name, common, list(others, "and")))
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
		{"background", func(a, b *model.Frame) bool { return a.Settings.Background == b.Settings.Background }},
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
