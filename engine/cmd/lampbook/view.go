package main

import (
	"context"
	"encoding/json"
	"fmt"
	"io"
	"os"
	"time"

	"github.com/schollz/progressbar/v3"
	"golang.org/x/term"

	"lampbook/engine/model"
	"lampbook/engine/run"
)

// How often a run is heard of.
const (
	barPause  = 100 * time.Millisecond // a bar is redrawn at most ten times a second
	linePause = 10 * time.Second       // a log gets a line every ten seconds
)

// view is what a run shows while it goes: a bar on a terminal, a line now and then in a log, JSON lines, or nothing. One goroutine at a
// time uses it, the one that reads the run's events.
type view struct {
	out, errs io.Writer // results; progress and remarks
	quiet     bool
	json      *json.Encoder // nil: for people
	bar       *progressbar.ProgressBar
	meter     *meter
	start     time.Time
	summary   summary // what the end says besides the status; nil: nothing
	wrongOut  error   // the first error of writing to out
}

// newView chooses how to show a run.
func newView(out, errs io.Writer, r *request) *view {
	v := &view{out: out, errs: errs, quiet: r.quiet, start: time.Now()}
	if r.json {
		v.json = json.NewEncoder(out)
		v.json.SetEscapeHTML(false)
	} else if f, ok := errs.(*os.File); ok && !r.quiet && term.IsTerminal(int(f.Fd())) {
		v.bar = newBar(f)
	}
	return v
}

// barSteps is how finely the bar moves.
const barSteps = 1000

// newBar makes the bar. It draws whenever it is told something: barPause is what keeps that seldom.
func newBar(w io.Writer) *progressbar.ProgressBar {
	return progressbar.NewOptions64(barSteps,
		progressbar.OptionSetWriter(w),
		progressbar.OptionSetWidth(24),
		progressbar.OptionSetPredictTime(false),
		progressbar.OptionSetElapsedTime(false),
		progressbar.OptionShowDescriptionAtLineEnd(),
		progressbar.OptionClearOnFinish(),
		progressbar.OptionSetTheme(progressbar.Theme{Saucer: "=", SaucerPadding: " ", BarStart: "|", BarEnd: "|"}),
	)
}

// follow shows events until the channel is closed. frame words a frame that the sink has taken, for JSON.
func (v *view) follow(ctx context.Context, m *meter, events <-chan run.Event, frame func(run.Event) any) {
	v.meter, v.start = m, time.Now()
	pause := linePause
	if v.bar != nil {
		pause = barPause
	}
	tick := time.NewTicker(pause)
	defer tick.Stop()
	stopping := ctx.Done()
	for {
		select {
		case e, ok := <-events:
			if !ok {
				v.clearBar()
				return
			}
			m.take(e)
			if v.json != nil && (e.Kind == run.FrameDone || e.Kind == run.FrameFailed) {
				v.emit(frame(e))
			}
		case <-tick.C:
			v.progress()
		case <-stopping:
			stopping = nil
			v.remark("stopping: what is finished is being written; once more stops at once")
		}
	}
}

// progress shows where the run stands.
func (v *view) progress() {
	elapsed := time.Since(v.start)
	switch {
	case v.json != nil:
		left, _ := v.meter.left(elapsed)
		v.emit(progressLine{"progress", v.meter.share(), v.meter.finished, v.meter.frames, v.meter.rays, elapsed.Seconds(), left.Seconds()})
	case v.bar != nil:
		v.bar.Describe(v.meter.details(elapsed))
		_ = v.bar.Set64(min(int64(v.meter.share()*barSteps), barSteps-1)) // the last step would end the bar
	case !v.quiet:
		fmt.Fprintln(v.errs, v.meter.line(elapsed))
	}
}

// progressLine is the JSON line of a run under way.
type progressLine struct {
	Event       string  `json:"event"`
	Share       float64 `json:"share"` // of the rays, 0 to 1
	Finished    int     `json:"finished"`
	Frames      int     `json:"frames"`
	Rays        int64   `json:"rays"`
	Seconds     float64 `json:"seconds"`
	SecondsLeft float64 `json:"seconds_left"` // 0: not known yet
}

// remark tells something beside the results.
func (v *view) remark(format string, args ...any) {
	v.emit(textLine{"remark", fmt.Sprintf(format, args...)})
	if v.quiet || v.json != nil {
		return
	}
	v.clearBar()
	fmt.Fprintf(v.errs, format+"\n", args...)
}

// fault tells what went wrong, in any mode.
func (v *view) fault(text string) {
	v.clearBar()
	fmt.Fprintln(v.errs, text)
}

// say writes a line of results.
func (v *view) say(format string, args ...any) {
	if v.quiet || v.json != nil {
		return
	}
	if _, err := fmt.Fprintf(v.out, format+"\n", args...); err != nil && v.wrongOut == nil {
		v.wrongOut = err
	}
}

// emit writes a JSON line.
func (v *view) emit(line any) {
	if v.json == nil {
		return
	}
	if err := v.json.Encode(line); err != nil && v.wrongOut == nil {
		v.wrongOut = err
	}
}

// warn tells what the plan warns of, though it is no error. What makes frames fail is told with these.
func (v *view) warn(p *model.Plan) {
	failures := map[string]bool{}
	for _, f := range p.Frames {
		failures[f.Failure] = true
	}
	for _, w := range p.Warnings {
		if !failures[place(w.Pos)+w.Text] {
			v.warning(w)
		}
	}
}

// warning tells what the scene's author should know about a place in it.
func (v *view) warning(w model.Warning) {
	if v.json != nil {
		v.emit(warningLine{"warning", w.Pos.File, w.Pos.Line, w.Text})
		return
	}
	v.remark("%s%s", place(w.Pos), w.Text)
}

// unwritten is the error of results that could not be written, or nil.
func (v *view) unwritten() error {
	if v.wrongOut == nil {
		return nil
	}
	return fmt.Errorf("lampbook: standard output: %w", v.wrongOut)
}

// clearBar takes the bar off the terminal's line.
func (v *view) clearBar() {
	if v.bar != nil {
		_ = v.bar.Clear()
	}
}
