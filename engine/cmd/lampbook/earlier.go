package main

import (
	"encoding/json"
	"io"
	"os"
	"path/filepath"
	"slices"

	"lampbook/output/report"
)

// earlierRun is what the folder's manifest says of the run before this one, where there was one.
type earlierRun struct {
	files  []string // that it or those before it left and that are still there; slash-separated, each once
	frames map[string]earlierFrame
}

// earlierFrame is a frame's entry in the manifest.
type earlierFrame struct {
	Name    string       `json:"name"`
	State   report.State `json:"state"`
	Hash    string       `json:"hash"`
	Files   []string     `json:"files"`
	Samples float64      `json:"samples"`
	Noise   float64      `json:"noise"`
}

// maxManifest is the size of the largest manifest of an earlier run that is read: that of a plan with the most frames.
const maxManifest = 1 << 30

// readEarlier reads the folder's manifest. One that is missing, is no ordinary file or cannot be read says nothing.
func readEarlier(f *runFolder) *earlierRun {
	e := &earlierRun{frames: map[string]earlierFrame{}}
	if !isFile(f.path(manifestName)) {
		return e
	}
	file, err := os.Open(f.path(manifestName))
	if err != nil {
		return e
	}
	defer file.Close()
	var m struct {
		Frames []earlierFrame `json:"frames"`
		Sheets []struct {
			Files []string `json:"files"`
		} `json:"sheets"`
		EarlierFiles []string `json:"earlier_files"`
	}
	if err := json.NewDecoder(io.LimitReader(file, maxManifest)).Decode(&m); err != nil {
		return e
	}
	var listed []string
	for _, frame := range m.Frames {
		e.frames[frame.Name] = frame
		listed = append(listed, frame.Files...)
	}
	for _, s := range m.Sheets {
		listed = append(listed, s.Files...)
	}
	seen := map[string]bool{}
	for _, name := range append(listed, m.EarlierFiles...) {
		if info, err := os.Lstat(f.path(name)); !seen[name] && err == nil && info.Mode().IsRegular() && filepath.IsLocal(filepath.FromSlash(name)) {
			e.files = append(e.files, name)
		}
		seen[name] = true
	}
	return e
}

// unlisted returns the files of earlier runs that a record does not list for a frame or a sheet, so that it can carry them on.
func (e *earlierRun) unlisted(r *report.Run) []string {
	listed := map[string]bool{}
	for i := range r.Frames {
		for _, name := range r.Frames[i].Files {
			listed[name] = true
		}
	}
	for _, s := range r.Sheets {
		for _, name := range s.Files {
			listed[name] = true
		}
	}
	var out []string
	for _, name := range e.files {
		if !listed[name] {
			out = append(out, name)
		}
	}
	return out
}

// keep takes the frames that this run has not come to as the earlier run left them: those that it made from the same description and
// whose files are all there.
func (w *pictures) keep(e *earlierRun) {
	there := map[string]bool{}
	for _, name := range e.files {
		there[name] = true
	}
	for i := range w.taken {
		before, known := e.frames[w.plan.Frames[i].Name]
		if w.taken[i].state != report.Waiting || !known || before.State != report.Done && before.State != report.Kept {
			continue
		}
		var files []string
		for _, f := range w.files(i) {
			files = append(files, f.name)
		}
		lost := func(name string) bool { return !there[name] || !slices.Contains(before.Files, name) }
		if before.Hash == w.hasher.Frame(i).String() && !slices.ContainsFunc(files, lost) {
			w.taken[i] = outcome{state: report.Kept, files: files, samples: before.Samples, noise: before.Noise}
		}
	}
}

// isFile reports whether a path leads to an ordinary file, which can be opened without waiting for anyone.
func isFile(path string) bool {
	info, err := os.Stat(path)
	return err == nil && info.Mode().IsRegular()
}
