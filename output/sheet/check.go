package sheet

import (
	"cmp"
	"fmt"
	"slices"

	"lampbook/engine/model"
)

// Check reports what is wrong with a sheet before anything is rendered: a tag that no frame has, a tag on two axes, frames that would stand
// in one place, a choice that admits nothing, a caption that names no tag. The error begins with the sheet's file and line.
func Check(p *model.Plan, s model.Sheet) error {
	_, err := checked(p, &s)
	return err
}

func checked(p *model.Plan, s *model.Sheet) (*pivot, error) {
	pv, err := check(p, s)
	if err != nil {
		at := ""
		if s.Pos.File != "" {
			at = fmt.Sprintf("%s:%d: ", s.Pos.File, s.Pos.Line)
		}
		return nil, fmt.Errorf("%ssheet %q: %w", at, s.Name, err)
	}
	return pv, nil
}

func check(p *model.Plan, s *model.Sheet) (*pivot, error) {
	known := tagKeys(p)
	seen := map[string]string{}
	for _, axis := range [...]struct {
		name string
		keys []string
	}{{"rows", s.Rows}, {"columns", s.Columns}, {"pages", s.Pages}} {
		for _, k := range axis.keys {
			if before, ok := seen[k]; ok {
				return nil, fmt.Errorf("%s: tag %q stands in %s already", axis.name, k, before)
			}
			seen[k] = axis.name
			if err := knownTag(axis.name, k, known, true); err != nil {
				return nil, err
			}
		}
	}
	for _, o := range s.Order {
		if err := knownTag("order", o.Key, known, true); err != nil {
			return nil, err
		}
	}
	for _, c := range s.Where {
		if err := knownTag("where", c.Key, known, false); err != nil {
			return nil, err
		}
	}
	for _, k := range captionKeys(s.Caption) {
		if k != captionName {
			if err := knownTag("caption", k, known, true); err != nil {
				return nil, err
			}
		}
	}
	if s.PerLine < 0 {
		return nil, fmt.Errorf("per_line: a number of tiles of at least 1 is accepted, got %d", s.PerLine)
	}
	if s.PerLine > 0 && len(s.Rows) > 0 && len(s.Columns) > 0 {
		return nil, fmt.Errorf("per_line: a sheet with rows and columns has its lines from them; leave it out")
	}
	if w, h := s.Tile[0], s.Tile[1]; (w != 0 || h != 0) && (min(w, h) < minTileSide || max(w, h) > maxTileSide) {
		return nil, fmt.Errorf("tile: %d to %d pixels a side are accepted, got %d × %d", minTileSide, maxTileSide, w, h)
	}
	return newPivot(p, s)
}

// tagKeys lists the plan's tags in first-seen order.
func tagKeys(p *model.Plan) []string {
	var keys []string
	seen := map[string]bool{}
	for i := range p.Frames {
		for _, t := range p.Frames[i].Tags {
			if !seen[t.Key] {
				seen[t.Key] = true
				keys = append(keys, t.Key)
			}
		}
	}
	return keys
}

func knownTag(where, key string, known []string, pass bool) error {
	if slices.Contains(known, key) || pass && key == model.AxisPass {
		return nil
	}
	if len(known) == 0 {
		return fmt.Errorf("%s: no frame has a tag %q: the frames have no tags", where, key)
	}
	near := slices.MinFunc(known, func(a, b string) int { return cmp.Compare(editDistance(key, a), editDistance(key, b)) })
	if editDistance(key, near) <= max(1, len(key)/3) {
		return fmt.Errorf("%s: no frame has a tag %q; did you mean %q?", where, key, near)
	}
	return fmt.Errorf("%s: no frame has a tag %q: the tags are %s", where, key, list(known, "and"))
}

// editDistance is the number of letters to put in, take out or change that makes b of a (Levenshtein 1966).
func editDistance(a, b string) int {
	x, y := []rune(a), []rune(b)
	row := make([]int, len(y)+1)
	for j := range row {
		row[j] = j
	}
	for i := range x {
		diagonal := row[0]
		row[0] = i + 1
		for j := range y {
			change := diagonal
			if x[i] != y[j] {
				change++
			}
			diagonal = row[j+1]
			row[j+1] = min(change, row[j]+1, row[j+1]+1)
		}
	}
	return row[len(y)]
}
