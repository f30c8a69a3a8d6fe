package sheet

import (
	"fmt"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/model"
)

// wordings finds how the values of each tag that the sheet writes are written.
func wordings(p *model.Plan, s *model.Sheet, pv *pivot) map[string]wording {
	words := map[string]wording{}
	for _, key := range append(pv.keys(), captionKeys(s)...) {
		if _, ok := words[key]; !ok {
			words[key] = wordingOf(key, valuesOf(p, pv.frames, key))
		}
	}
	return words
}

// valuesOf lists the values of a tag among frames, each once, in first-seen order.
func valuesOf(p *model.Plan, frames []int, key string) []model.Value {
	var values []model.Value
	seen := map[model.Value]bool{}
	for _, i := range frames {
		if v, ok := p.Frames[i].Tag(key); ok && !seen[v] {
			seen[v] = true
			values = append(values, v)
		}
	}
	return values
}

// title is the sheet's title, or its name made readable.
func (c *composer) title() string {
	if c.sheet.Title != "" {
		return c.sheet.Title
	}
	words := strings.Map(func(r rune) rune {
		if r == '_' || r == '-' {
			return ' '
		}
		return r
	}, c.sheet.Name)
	return strings.ToUpper(words[:min(1, len(words))]) + words[min(1, len(words)):]
}

// subject says in one line what a page holds, beside what its headings say: "glaze slate: 12 frames, 3 failed". failed are those of which that
// is known.
func (c *composer) subject(p part, failed map[int]bool) string {
	seen := map[int]bool{}
	lost := 0
	for r := p.row0; r < p.row1; r++ {
		for k := p.col0; k < p.col1; k++ {
			frame := p.table.cells[r*len(p.table.columns)+k].frame
			if frame < 0 || seen[frame] {
				continue
			}
			seen[frame] = true
			if failed[frame] {
				lost++
			}
		}
	}
	text := strconv.Itoa(len(seen)) + " frames"
	if len(seen) == 1 {
		text = "1 frame"
	}
	if lost > 0 {
		text += ", " + strconv.Itoa(lost) + " failed"
	}
	if c.pageCount > 1 {
		text += fmt.Sprintf(", page %d of %d", c.page+1, c.pageCount)
	}
	var page []string
	for i, key := range c.pivot.pageKeys {
		label, _ := labelOf(key)
		page = append(page, label+" "+c.words[key].text(p.table.page[i]))
	}
	if len(page) > 0 {
		text = list(page, "and") + ": " + text
	}
	return text
}

// headingOf is the heading of a tile on a sheet with one axis.
func (c *composer) headingOf(values []model.Value) string {
	if c.pivot.byName {
		return values[0].Text
	}
	var all []string
	for i, v := range values {
		all = append(all, c.words[c.pivot.columnKeys[i]].text(v))
	}
	return strings.Join(all, ", ")
}

// footOf writes the foot: what was rendered and how, then whether the tiles may be compared.
func footOf(p *model.Plan, s *model.Sheet, pv *pivot, j fairness, r *references, f Foot) [][]string {
	var first []string
	add := func(text string) {
		if text != "" {
			first = append(first, text)
		}
	}
	add(p.Scene)
	var sizes, samples, noises []string
	for _, i := range pv.frames {
		if fr := &p.Frames[i]; fr.Failure == "" {
			if t := sizeText(fr.Settings.Width, fr.Settings.Height); !slices.Contains(sizes, t) {
				sizes = append(sizes, t)
			}
			if t := number(float64(fr.Settings.Samples), 17); !slices.Contains(samples, t) {
				samples = append(samples, t)
			}
			if t := noiseText(fr.Settings.Noise, 4); !slices.Contains(noises, t) {
				noises = append(noises, t)
			}
		}
	}
	one := func(values []string, unit, vary string) string {
		switch {
		case len(values) == 0:
			return ""
		case len(values) > 3:
			return vary
		}
		return list(values, "and") + unit
	}
	add(one(sizes, " pixels", "various sizes"))
	rays := " samples"
	if len(samples) == 1 && samples[0] == "1" {
		rays = " sample"
	}
	if len(noises) == 0 || len(noises) == 1 && noises[0] == noNoise {
		add(one(samples, rays, "various numbers of samples"))
	} else {
		add(one(samples, rays+" at most", "various numbers of samples at most"))
		add("noise " + one(noises, "", "various"))
	}
	if f.PlanHash != "" {
		add("plan " + f.PlanHash)
	}
	add(f.Stamp)
	second := []string{}
	if text := j.line(); text != "" {
		second = append(second, text)
	}
	if pv.leftOut > 0 {
		second = append(second, fmt.Sprintf("Left out for want of a tag: %d", pv.leftOut))
	}
	if r != nil {
		second = append(second, "ΔE2000 from "+r.said()+": mean and 95th percentile of the pixels")
	}
	second = append(second, "Simulation, not a colour proof")
	foot := [][]string{first, second}
	for _, l := range f.Lines {
		foot = append(foot, []string{l})
	}
	return foot
}
