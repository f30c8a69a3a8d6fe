package main

import (
	"context"
	"errors"
	"fmt"
	"time"

	"github.com/spf13/cobra"

	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/output/report"
)

func newRender() *cobra.Command {
	var r request
	cmd := &cobra.Command{
		Use:   "render SCENE [options]",
		Short: "Renders a scene's pictures and lays its contact sheets",
		Long: `Evaluates a scene, renders every frame that it registers and lays its contact sheets.
The pictures go to DIR/frames, the sheets to DIR/sheets, the record to DIR/run.json and
DIR/frames.csv. Exit status 0: done; 1: something failed; 2: the command line or the scene is
wrong; 3: stopped by a signal with work left. Ctrl-C stops in good order, twice at once.`,
		Example: `  lampbook render scenes/first_sheet.lua
  lampbook render scenes/first_sheet.lua --draft --only glaze=celadon`,
		RunE: func(cmd *cobra.Command, args []string) error {
			return answer(cmd, &r, args[0], renderScene)
		},
	}
	addOptions(cmd, &r)
	return cmd
}

// renderScene renders a job into its folder.
func renderScene(ctx context.Context, r *request, v *view) error {
	j, err := load(ctx, r, v)
	if err != nil {
		return err
	}
	folder, err := openFolder(r.out)
	if err != nil {
		return failed(err)
	}
	defer folder.close()
	v.warn(j.plan)

	start := time.Now()
	earlier := readEarlier(folder)
	w := newPictures(folder, j.plan, r.assets)
	done, err := renderFrames(ctx, j, r, v, w)
	stopped := errors.Is(err, errStopped)
	w.keep(earlier)
	if err != nil && !stopped {
		w.recount(&done)
		v.summary = totals(done, 0, start)
		return failed(errors.Join(err, writeRecord(j, w, nil, earlier, r, start)))
	}
	for _, line := range faultyFrames(j.plan, func(i int) string { return w.taken[i].failure }) {
		v.fault(line)
	}
	sheets, sheetsKept, err := laySheets(w, r, v)
	err = errors.Join(err, writeRecord(j, w, sheets, earlier, r, start))
	for _, warning := range w.blankFrames(j.plan) {
		v.warning(warning)
	}
	tellLeftOver(v, folder, earlier, j, w)
	status := statusDone
	switch {
	case err != nil || done.Failed > 0 && !stopped:
		status = statusFailed
	case stopped:
		status = statusStopped
	}
	v.summary = totals(done, sheetsKept, start)
	v.say("%s", endText(done, sheets, sheetsKept, folder, time.Since(start)))
	if err != nil {
		return failed(err)
	}
	if status != statusDone {
		return fault{status: status}
	}
	return nil
}

// renderFrames runs the plan and shows how it goes.
func renderFrames(ctx context.Context, j *job, r *request, v *view, w *pictures) (run.Summary, error) {
	events := make(chan run.Event, 256)
	o := run.Options{Threads: r.threads, Alone: r.alone, Memory: r.memory, Events: events}
	shown := make(chan struct{})
	m := newMeter(len(j.plan.Frames), run.Casts(j.plan, o))
	go func() {
		defer close(shown)
		v.follow(ctx, m, events, w.frameLine)
	}()
	summary, err := run.Run(ctx, render.NewEngine(j.library), j.plan, o, w.take)
	close(events)
	<-shown
	return summary, err
}

// frameLine is the JSON line of a frame that the sink has taken.
func (w *pictures) frameLine(e run.Event) any {
	f, o := &w.plan.Frames[e.Frame], &w.taken[e.Frame]
	return frameLine{"frame", f.Name, report.TagObject(f.Tags), string(o.state), o.failure, o.files, o.seconds}
}

type frameLine struct {
	Event   string           `json:"event"`
	Name    string           `json:"name"`
	Tags    report.TagObject `json:"tags"`
	State   string           `json:"state"`            // "done" or "failed"
	Reason  string           `json:"reason,omitempty"` // why it failed
	Files   []string         `json:"files,omitempty"`  // relative to the run's folder
	Seconds float64          `json:"seconds"`          // its share of its cast
}

// totals is what the last JSON line of a run says of it.
func totals(s run.Summary, sheetsKept int, start time.Time) summary {
	return runSummary{Done: s.Done, Failed: s.Failed, Left: s.Left, SheetsKept: sheetsKept, Rays: s.Rays, Seconds: time.Since(start).Seconds()}
}

func (s runSummary) ended(e ending) any {
	s.ending = e
	return s
}

type runSummary struct {
	ending
	Done       int     `json:"done"`
	Failed     int     `json:"failed"`
	Left       int     `json:"left"`
	SheetsKept int     `json:"sheets_kept,omitempty"` // pages left as an earlier run laid them
	Rays       int64   `json:"rays"`
	Seconds    float64 `json:"seconds"`
}

// endText is the line that a run ends with: frames, time, rays per second, whether pages were kept, where the sheets are.
func endText(s run.Summary, sheets []report.SheetRecord, sheetsKept int, folder *runFolder, took time.Duration) string {
	text := count(s.Done, "frame") + " done"
	if s.Failed > 0 {
		text += fmt.Sprintf(", %d failed", s.Failed)
	}
	if s.Left > 0 {
		text += fmt.Sprintf(", %d left", s.Left)
	}
	text += " in " + span(took)
	if s.Rays > 0 {
		text += ", " + rate(s.Rays, took)
	}
	if sheetsKept > 0 {
		text += "; sheets of the earlier run left as they were"
	}
	var pages []string
	for _, sheet := range sheets {
		pages = append(pages, sheet.Files...)
	}
	switch len(pages) {
	case 0:
		return text + ": " + folder.path(framesFolder)
	case 1:
		return text + ": " + folder.path(pages[0])
	}
	return fmt.Sprintf("%s: %s in %s", text, count(len(pages), "sheet"), folder.path(sheetsFolder))
}
