package main

import (
	"errors"
	"fmt"
	"image"
	"image/png"
	"io"
	"os"
	"path"
	"slices"
	"strconv"
	"strings"

	"lampbook/engine/model"
	"lampbook/output/encode"
	"lampbook/output/report"
	"lampbook/output/sheet"
)

// sheetPages lists the files of the plan's sheets, slash-separated, in the order in which they are laid. Two sheets of which pages
// would have one name are an error.
func sheetPages(p *model.Plan) ([]string, error) {
	var files []string
	owner := map[string]model.Sheet{}
	for _, s := range p.Sheets {
		names, err := sheet.Names(p, s, sheet.Options{})
		if err != nil {
			return nil, err
		}
		for _, n := range names {
			if other, taken := owner[n]; taken {
				return nil, fmt.Errorf("%ssheet %s: its page %s would have the name of one of sheet %s: give it another name", place(s.Pos), s.Name, n, other.Name)
			}
			owner[n] = s
			files = append(files, path.Join(sheetsFolder, n+".png"))
		}
	}
	return files, nil
}

// laySheets lays every sheet of the plan from the pictures on disk and returns what became of each. A sheet that cannot be laid
// does not keep the others from it. A page with frames that a stopped run has not rendered does not replace one that is there already:
// kept is the number of those.
func laySheets(w *pictures, r *request, v *view) (records []report.SheetRecord, kept int, faults error) {
	p := w.plan
	planHash := w.hasher.Plan()
	for _, s := range p.Sheets {
		record := report.SheetRecord{Name: s.Name}
		o := sheet.Options{Foot: sheet.Foot{PlanHash: planHash.Short(), Stamp: r.stamp, Lines: r.footLines(p)}}
		whole := true // this run has rendered every frame of the page
		source := func(frame int, pass string) (sheet.Tile, error) {
			state := w.taken[frame].state
			whole = whole && (state == report.Done || state == report.Failed)
			return w.tile(frame, pass)
		}
		err := sheet.Lay(p, s, source, o, func(page sheet.Page) error {
			name := path.Join(sheetsFolder, page.Name+".png")
			if !whole && isFile(w.folder.path(name)) {
				record.Files = append(record.Files, name)
				record.Reason = "the run was stopped: pages of an earlier run left as they were"
				kept++
				whole = true
				return nil
			}
			whole = true
			about := encode.Options{Text: []encode.KeyValue{
				{Key: "Software", Value: software},
				{Key: "scene", Value: p.Scene},
				{Key: "parameters", Value: paramLines(p)},
				{Key: "sheet", Value: s.Name},
				{Key: "only", Value: assignmentLines(r.only)},
				{Key: "draft", Value: strconv.FormatBool(r.draft)},
				{Key: "planHash", Value: planHash.String()},
			}}
			err := encode.WriteFile(w.folder.path(name), func(to io.Writer) error { return encode.PNGImage(to, page.Image, about) })
			if err != nil {
				return err
			}
			record.Files = append(record.Files, name)
			v.emit(sheetLine{"sheet", s.Name, name})
			return nil
		})
		if err != nil {
			record.Reason = err.Error()
			faults = errors.Join(faults, err)
		}
		records = append(records, record)
	}
	return records, kept, faults
}

// footLines says at a sheet's foot how the command line changed what the scene says: what was set, that it is a draft, what was left out.
func (r *request) footLines(p *model.Plan) []string {
	var lines, set []string
	for _, q := range p.Params {
		if q.Set {
			set = append(set, q.Name+" = "+cut(q.Value))
		}
	}
	if len(set) > 0 {
		lines = append(lines, "set "+strings.Join(set, ", "))
	}
	if r.draft {
		lines = append(lines, "draft")
	}
	if len(r.only) > 0 {
		var only []string
		for i, a := range r.only {
			name := a.name + " "
			if i > 0 && r.only[i-1].name == a.name {
				name = ""
			}
			only = append(only, name+cut(a.value))
		}
		lines = append(lines, "only "+strings.Join(only, ", "))
	}
	return lines
}

// cut keeps a value to what a line can bear.
func cut(text string) string {
	const most = 60
	if runes := []rune(text); len(runes) > most {
		return string(runes[:most-1]) + "…"
	}
	return text
}

// assignmentLines lists assignments as they were given, one a line.
func assignmentLines(list []assignment) string {
	var lines []string
	for _, a := range list {
		lines = append(lines, a.name+"="+a.value)
	}
	return strings.Join(lines, "\n")
}

// sheetLine is the JSON line of a page of a sheet.
type sheetLine struct {
	Event string `json:"event"`
	Name  string `json:"name"`
	File  string `json:"file"` // relative to the run's folder
}

// notRendered stands on a sheet where a stopped run has left a frame and none is there of an earlier one.
const notRendered = "not rendered: the run was stopped"

// tile fetches what a sheet shows of a frame: the picture, or one of its passes, as it was written.
func (w *pictures) tile(frame int, pass string) (sheet.Tile, error) {
	o := w.taken[frame]
	switch o.state {
	case report.Failed:
		return sheet.Tile{Failure: shortened(w.inside, o.failure)}, nil
	case report.Waiting:
		return sheet.Tile{Failure: notRendered}, nil
	}
	for _, file := range w.files(frame) {
		if file.pass == pass && isPNG(file.format) {
			picture, err := readPNG(w.folder.path(file.name))
			if err != nil && o.state == report.Kept {
				return sheet.Tile{Failure: notRendered}, nil
			}
			return sheet.Tile{Image: picture}, err
		}
	}
	return sheet.Tile{}, fmt.Errorf("frame %s has no picture of %q", w.plan.Frames[frame].Name, pass)
}

func readPNG(path string) (image.Image, error) {
	f, err := os.Open(path)
	if err != nil {
		return nil, err
	}
	picture, err := png.Decode(f)
	if err = errors.Join(err, f.Close()); err != nil {
		return nil, fmt.Errorf("%s: %w", path, err)
	}
	return picture, nil
}

// showing is how the plan's sheets show a frame.
type showing struct {
	shown  bool // some sheet shows it
	passes bool // some sheet shows its passes
}

// onSheets returns how the plan's sheets show each frame.
func onSheets(p *model.Plan) []showing {
	out := make([]showing, len(p.Frames))
	for _, s := range p.Sheets {
		passes := slices.Contains(slices.Concat(s.Rows, s.Columns, s.Pages), model.AxisPass)
		for i := range p.Frames {
			if s.Shows(&p.Frames[i]) {
				out[i].shown = true
				out[i].passes = out[i].passes || passes
			}
		}
	}
	return out
}
