package main

import (
	"fmt"
	"io"
	"path"
	"path/filepath"
	"regexp"
	"slices"
	"strings"

	"lampbook/engine/model"
	"lampbook/engine/pixmap"
	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/output/encode"
	"lampbook/output/report"
)

// pictures writes a run's finished frames. Its take may be called from several goroutines at once, each with a frame of its own.
type pictures struct {
	folder *runFolder
	inside []typedFolder
	plan   *model.Plan // free of the path under which the scene was named, so that the files are the same whatever it was
	hasher *model.Hasher
	on     []showing // by frame
	taken  []outcome // by frame
}

// outcome is what became of a frame.
type outcome struct {
	state   report.State
	failure string
	files   []string // slash-separated, relative to the run's folder
	seconds float64  // its share of its cast, as are the rays
	rays    render.Stats
	samples float64 // that a pixel took, in the mean
	noise   float64 // L*, as estimated; 0 where it was not asked for
	blank   bool    // the camera sees nothing
}

func newPictures(folder *runFolder, p *model.Plan, assets []string) *pictures {
	inside := foldersOf(p.Scene, assets)
	p = pathless(p, inside)
	w := &pictures{folder: folder, inside: inside, plan: p, hasher: model.NewHasher(p), on: onSheets(p), taken: make([]outcome, len(p.Frames))}
	for i := range w.taken {
		w.taken[i].state = report.Waiting
	}
	return w
}

// take writes a frame's files, each whole or not at all. The error names the file, and the frame has failed with those written before it.
func (w *pictures) take(f run.Finished) error {
	o := outcome{seconds: f.Time.Seconds(), rays: f.Stats, samples: f.Samples, noise: f.Noise}
	if f.Failure != "" {
		o.state, o.failure = report.Failed, f.Failure
		w.taken[f.Frame] = o
		return nil
	}
	frame := &w.plan.Frames[f.Frame]
	o.blank = blank(f.Linear)
	about := made(w.plan, w.hasher, f.Frame)
	for _, file := range w.files(f.Frame) {
		options := about
		if file.pass != "" {
			options.Text = append(slices.Clone(about.Text), encode.KeyValue{Key: "pass", Value: file.pass})
		}
		err := encode.WriteFile(w.folder.path(file.name), func(to io.Writer) error {
			return encodePicture(to, file, frame.Settings, f.Linear, f.Display, options)
		})
		if err != nil {
			cause := strings.TrimPrefix(err.Error(), w.folder.path(file.name)+": ")
			o.state, o.failure = report.Failed, file.name+": "+cause
			w.taken[f.Frame] = o
			return err
		}
		o.files = append(o.files, file.name)
	}
	o.state = report.Done
	w.taken[f.Frame] = o
	return nil
}

// recount counts the frames whose files could not be written as failed, not as left.
func (w *pictures) recount(s *run.Summary) {
	failed := 0
	for _, o := range w.taken {
		if o.state == report.Failed {
			failed++
		}
	}
	s.Left -= failed - s.Failed
	s.Failed = failed
}

// files lists the files of a frame.
func (w *pictures) files(frame int) []pictureFile { return filesOf(&w.plan.Frames[frame], w.on[frame]) }

// blank reports whether a picture shows nothing but its ground.
func blank(linear *pixmap.Image) bool {
	cover := linear.Plane("A")
	return cover != nil && !slices.ContainsFunc(cover, func(a float32) bool { return a > 0 })
}

// blankFrames words which frames show nothing, as remarks about where the scene registers them.
func (w *pictures) blankFrames(p *model.Plan) []model.Warning {
	var out []model.Warning
	names := map[model.Pos][]string{}
	for i, o := range w.taken {
		if pos := p.Frames[i].Pos; o.blank {
			if names[pos] == nil {
				out = append(out, model.Warning{Pos: pos})
			}
			names[pos] = append(names[pos], p.Frames[i].Name)
		}
	}
	for i := range out {
		out[i].Text = framesText(names[out[i].Pos]) + ": the camera sees nothing: look at its position, its target and where the things stand"
	}
	return out
}

// encodePicture writes one file of a frame.
func encodePicture(to io.Writer, file pictureFile, s model.Settings, linear, display *pixmap.Image, o encode.Options) error {
	if file.format == model.FormatPNG16 || file.format == model.FormatEXRHalf {
		o.Bits = 16
	}
	if file.pass != "" {
		for _, pass := range s.Passes {
			if pass.String() == file.pass {
				shown, err := render.ShowPass(linear, pass, s)
				if err != nil {
					return err
				}
				return encode.PNG(to, shown, o)
			}
		}
	}
	if isPNG(file.format) {
		return encode.PNG(to, display, o)
	}
	return encode.EXR(to, linear, o)
}

// software is what pictures and sheets say made them.
var software = fmt.Sprintf("lampbook, picture version %d", model.PictureVersion)

// made says in a picture's own metadata what made it.
func made(p *model.Plan, h *model.Hasher, i int) encode.Options {
	f := &p.Frames[i]
	var tags []string
	for _, t := range f.Tags {
		tags = append(tags, t.Key+"="+t.Value.String())
	}
	return encode.Options{
		Text: []encode.KeyValue{
			{Key: "Software", Value: software},
			{Key: "scene", Value: p.Scene},
			{Key: "parameters", Value: paramLines(p)},
			{Key: "frame", Value: f.Name},
			{Key: "tags", Value: strings.Join(tags, "\n")},
			{Key: "frameHash", Value: h.Frame(i).String()},
			{Key: "settings", Value: strings.Join(report.SettingLines(f.Settings), "\n")},
		},
		Numbers: []encode.KeyNumber{{Key: "exposure", Value: float32(report.Stops(f.Settings.Exposure))}},
	}
}

// paramLines lists the plan's parameters with their values, one a line.
func paramLines(p *model.Plan) string {
	var lines []string
	for _, q := range p.Params {
		lines = append(lines, q.Name+"="+q.Value)
	}
	return strings.Join(lines, "\n")
}

// pathless is a plan without the path under which its scene was named: only the file's name is left, also in what made frames fail.
// Pictures, sheets and hashes are made from it.
func pathless(p *model.Plan, folders []typedFolder) *model.Plan {
	out := *p
	out.Scene = path.Base(p.Scene)
	out.Frames = slices.Clone(p.Frames)
	for i := range out.Frames {
		out.Frames[i].Failure = shortened(folders, p.Frames[i].Failure)
	}
	return &out
}

// typedFolder is a folder of the scene's files, as typed, and how pictures name it: which folder that is depends on where the run was
// started, and pictures must not.
type typedFolder struct{ typed, shown string }

// foldersOf lists the folders that a scene's files lie in: its own, which needs no name, and those of --assets, each by its last name. A
// folder inside another stands before it.
func foldersOf(scene string, assets []string) []typedFolder {
	folders := []typedFolder{{path.Dir(scene), ""}}
	for _, a := range assets {
		a = path.Clean(filepath.ToSlash(a))
		folders = append(folders, typedFolder{a, path.Base(a) + "/"})
	}
	folders = slices.DeleteFunc(folders, func(f typedFolder) bool { return f.typed == "." || f.typed == "/" })
	slices.SortStableFunc(folders, func(a, b typedFolder) int { return len(b.typed) - len(a.typed) })
	return folders
}

// shortened names the folders in a text as pictures do.
func shortened(folders []typedFolder, text string) string {
	for _, f := range folders {
		name := regexp.QuoteMeta(f.typed)
		text = regexp.MustCompile(`(^|[^\pL\pN_./-])`+name+`/`).ReplaceAllString(text, "${1}"+f.shown)
		text = regexp.MustCompile(`, in `+name+`($|[^\pL\pN_./-])`).ReplaceAllString(text, "${1}") // no such file beside the scene, in …
	}
	return text
}
