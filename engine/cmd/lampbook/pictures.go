package main

import (
	"fmt"
	"io"
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
	plan   *model.Plan
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
}

func newPictures(folder *runFolder, p *model.Plan) *pictures {
	w := &pictures{folder: folder, plan: p, hasher: model.NewHasher(p), on: onSheets(p), taken: make([]outcome, len(p.Frames))}
	for i := range w.taken {
		w.taken[i].state = report.Waiting
	}
	return w
}

// take writes a frame's files, each whole or not at all. The error names the file.
func (w *pictures) take(f run.Finished) error {
	o := outcome{seconds: f.Time.Seconds(), rays: f.Stats, samples: f.Samples, noise: f.Noise}
	if f.Failure != "" {
		o.state, o.failure = report.Failed, f.Failure
		w.taken[f.Frame] = o
		return nil
	}
	frame := &w.plan.Frames[f.Frame]
	options := made(w.plan, w.hasher, f.Frame)
	for _, file := range w.files(f.Frame) {
		err := encode.WriteFile(w.folder.path(file.name), func(to io.Writer) error {
			return encodePicture(to, file, frame.Settings, f.Linear, f.Display, options)
		})
		if err != nil {
			return err
		}
		o.files = append(o.files, file.name)
	}
	o.state = report.Done
	w.taken[f.Frame] = o
	return nil
}

// files lists the files of a frame.
func (w *pictures) files(frame int) []pictureFile { return filesOf(&w.plan.Frames[frame], w.on[frame]) }

// encodePicture writes one file of a frame.
func encodePicture(to io.Writer, file pictureFile, s model.Settings, linear, display *pixmap.Image, o encode.Options) error {
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
	switch file.format {
	case model.FormatPNG16:
		o.Bits = 16
	case model.FormatEXRHalf:
		o.Bits = 16
		return encode.EXR(to, linear, o)
	case model.FormatEXR:
		return encode.EXR(to, linear, o)
	}
	return encode.PNG(to, display, o)
}

// software is what pictures and sheets say made them.
var software = fmt.Sprintf("lampbook, picture version %d", model.PictureVersion)

// made says in a picture's own metadata what made it.
func made(p *model.Plan, h *model.Hasher, i int) encode.Options {
	f := &p.Frames[i]
	var tags, params []string
	for _, t := range f.Tags {
		tags = append(tags, t.Key+"="+t.Value.String())
	}
	for _, q := range p.Params {
		params = append(params, q.Name+"="+q.Value)
	}
	s := f.Settings
	return encode.Options{
		Text: []encode.KeyValue{
			{Key: "Software", Value: software},
			{Key: "scene", Value: p.Scene},
			{Key: "parameters", Value: strings.Join(params, "\n")},
			{Key: "frame", Value: f.Name},
			{Key: "tags", Value: strings.Join(tags, "\n")},
			{Key: "frameHash", Value: h.Frame(i).String()},
			{Key: "settings", Value: fmt.Sprintf("size=%dx%d\nsamples=%d\nnoise=%v\nlight_samples=%d\nseed=%d", s.Width, s.Height, s.Samples, s.Noise, s.LightSamples, s.Seed)},
		},
		Numbers: []encode.KeyNumber{{Key: "exposure", Value: float32(s.Exposure)}},
	}
}
