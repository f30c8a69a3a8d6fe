package main

import (
	"fmt"
	"path"
	"slices"
	"strings"

	"lampbook/engine/model"
)

// pictureFile is one file that a frame is written to.
type pictureFile struct {
	name   string // slash-separated, relative to the run's folder
	format model.Format
	pass   string // the name of the pass that it shows; "" for the picture
}

// filesOf lists the files of a frame: the formats that it asks for, with a PNG of each of its passes where PNG is among them, and what
// its sheets show, for sheets are laid from the files.
func filesOf(f *model.Frame, on showing) []pictureFile {
	formats := f.Settings.Formats
	if on.shown && !slices.ContainsFunc(formats, isPNG) {
		formats = append(slices.Clone(formats), model.FormatPNG)
	}
	var files []pictureFile
	for _, format := range formats {
		files = append(files, pictureFile{name: path.Join(framesFolder, f.Name+fileEnding(format)), format: format})
	}
	if i := slices.IndexFunc(formats, isPNG); i >= 0 && (on.passes || slices.ContainsFunc(f.Settings.Formats, isPNG)) {
		for _, pass := range f.Settings.Passes {
			name := path.Join(framesFolder, f.Name+"."+pass.String()+".png")
			files = append(files, pictureFile{name: name, format: formats[i], pass: pass.String()})
		}
	}
	return files
}

func isPNG(f model.Format) bool { return f == model.FormatPNG || f == model.FormatPNG16 }

// fileEnding returns the ending of a format's files.
func fileEnding(f model.Format) string {
	if isPNG(f) {
		return ".png"
	}
	return ".exr"
}

// planFiles lists every file that the plan's pictures and sheets are written to. Two that would be written to one file are an error.
func planFiles(p *model.Plan) ([]string, error) {
	var all []string
	owner := map[string]string{}
	on := onSheets(p)
	for i := range p.Frames {
		f := &p.Frames[i]
		for _, file := range filesOf(f, on[i]) {
			key := strings.ToLower(file.name) // some file systems take names that differ in case for one
			if other, taken := owner[key]; taken && other == f.Name {
				return nil, fmt.Errorf("%sframe %s: two of its formats would be written to %s: choose one of them", place(f.Pos), f.Name, file.name)
			} else if taken {
				return nil, fmt.Errorf("%sframe %s would be written to %s, as would frame %s: give it another name", place(f.Pos), f.Name, file.name, other)
			}
			owner[key] = f.Name
			all = append(all, file.name)
		}
	}
	pages, err := sheetPages(p)
	return append(all, pages...), err
}

// place is how a line of the scene stands at the head of a message.
func place(pos model.Pos) string {
	if pos.File == "" {
		return ""
	}
	return fmt.Sprintf("%s:%d: ", pos.File, pos.Line)
}
