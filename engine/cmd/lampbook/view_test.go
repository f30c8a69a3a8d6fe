package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"strings"
	"testing"
	"time"

	"lampbook/engine/model"
	"lampbook/engine/render"
	"lampbook/engine/run"
	"lampbook/output/report"
)

// twoCasts is a plan of three frames in two casts, of 100 and 300 camera rays.
func twoCasts() (*model.Plan, []render.Cast) {
	settings := func(width int) model.Settings {
		return model.Settings{Width: width, Height: 10, Samples: 1, LightSamples: 1, Formats: []model.Format{model.FormatPNG}}
	}
	p := &model.Plan{Frames: []model.Frame{
		{Name: "a", Settings: settings(10)}, {Name: "b", Settings: settings(10)}, {Name: "c", Settings: settings(30)},
	}}
	return p, []render.Cast{{Plan: p, Frames: []int{0, 1}}, {Plan: p, Frames: []int{2}}}
}

func cameraRays(n int64) run.Event {
	return run.Event{Kind: run.RaysCast, Rays: render.Stats{CameraRays: n, ShadowRays: 2 * n}}
}

func TestMeterCountsWork(t *testing.T) {
	p, casts := twoCasts()
	m := newMeter(len(p.Frames), casts)
	for _, step := range []struct {
		event run.Event
		share float64
		line  string // after two seconds
	}{
		{run.Event{Kind: run.CastStarted, Cast: 0, Frames: 2}, 0, "0 %, 0 of 3 frames"},
		{cameraRays(50), 0.125, "12 %, 0 of 3 frames, 0.1 krays/s, 14 s left"},
		{cameraRays(50), 0.25, "25 %, 0 of 3 frames, 0.1 krays/s, 6.0 s left"},
		{run.Event{Kind: run.FrameDone}, 0.25, "25 %, 1 of 3 frames, 0.1 krays/s, 6.0 s left"},
		{run.Event{Kind: run.CastStarted, Cast: 1, Frames: 1}, 0.25, "25 %, 1 of 3 frames, 0.1 krays/s, 6.0 s left"},
		{run.Event{Kind: run.FrameFailed, Frame: 1}, 0.25, "25 %, 2 of 3 frames, 0.1 krays/s, 6.0 s left"},
		{cameraRays(300), 1, "100 %, 2 of 3 frames, 0.6 krays/s, under 1 s left"},
	} {
		m.take(step.event)
		if got := m.share(); got != step.share {
			t.Errorf("after %+v: share %v, want %v", step.event, got, step.share)
		}
		if got := m.line(2 * time.Second); got != step.line {
			t.Errorf("after %+v: line %q, want %q", step.event, got, step.line)
		}
	}
}

func TestMeterOfAPlanWithoutRays(t *testing.T) {
	m := newMeter(2, nil)
	m.take(run.Event{Kind: run.FrameFailed})
	if got := m.line(time.Hour); got != "0 %, 1 of 2 frames" {
		t.Errorf("got %q, want the share and the frames", got)
	}
}

// followed runs a view over events.
func followed(ctx context.Context, v *view, events ...run.Event) {
	p, casts := twoCasts()
	c := make(chan run.Event, len(events))
	for _, e := range events {
		c <- e
	}
	close(c)
	w := newPictures(&runFolder{dir: "out"}, p, nil)
	w.taken[0].state = report.Done
	v.follow(ctx, newMeter(len(p.Frames), casts), c, w.frameLine)
}

func TestLogHasNoCarriageReturns(t *testing.T) {
	var out, errs bytes.Buffer
	v := newView(&out, &errs, &request{})
	followed(t.Context(), v, run.Event{Kind: run.CastStarted}, cameraRays(40))
	v.progress()
	if v.bar != nil || strings.ContainsAny(errs.String(), "\r\x1b") || !strings.HasPrefix(errs.String(), "10 %, 0 of 3 frames, ") || out.Len() > 0 {
		t.Errorf("log %q, results %q; want one plain line in the log", errs.String(), out.String())
	}
}

func TestBarIsDrawnAndTakenAway(t *testing.T) {
	var out, errs bytes.Buffer
	v := newView(&out, &errs, &request{})
	v.bar = newBar(&errs)
	followed(t.Context(), v, run.Event{Kind: run.CastStarted}, cameraRays(100))
	v.progress()
	if !strings.Contains(errs.String(), "25% |") || !strings.Contains(errs.String(), "0 of 3 frames") || strings.Contains(errs.String(), "\n") {
		t.Errorf("bar %q, want one line with 25%% and the frames", errs.String())
	}
	v.remark("a remark")
	lines := strings.Split(errs.String(), "\r")
	if last := lines[len(lines)-1]; last != "a remark\n" {
		t.Errorf("remark stands as %q, want it on a clean line", last)
	}
}

func TestQuietShowsFaultsAlone(t *testing.T) {
	var out, errs bytes.Buffer
	v := newView(&out, &errs, &request{quiet: true})
	followed(t.Context(), v, run.Event{Kind: run.CastStarted}, cameraRays(100))
	v.progress()
	v.remark("a remark")
	v.say("a result")
	v.fault("a fault")
	if out.Len() > 0 || errs.String() != "a fault\n" {
		t.Errorf("results %q, errors %q; want the fault alone", out.String(), errs.String())
	}
}

func TestJSONLines(t *testing.T) {
	var out, errs bytes.Buffer
	v := newView(&out, &errs, &request{json: true})
	followed(t.Context(), v, run.Event{Kind: run.CastStarted}, cameraRays(100), run.Event{Kind: run.FrameDone, Frame: 0})
	v.progress()
	v.say("a result")
	v.remark("a remark")
	if errs.Len() > 0 {
		t.Errorf("errors %q, want none", errs.String())
	}
	var events []string
	for _, line := range strings.Split(strings.TrimSpace(out.String()), "\n") {
		var object struct {
			Event string
			Name  string
			State string
			Rays  int64
		}
		if err := json.Unmarshal([]byte(line), &object); err != nil {
			t.Fatalf("%q: %v", line, err)
		}
		events = append(events, object.Event)
		if object.Event == "frame" && (object.Name != "a" || object.State != "done") || object.Event == "progress" && object.Rays != 300 {
			t.Errorf("line %q says something else than the events", line)
		}
	}
	if got := strings.Join(events, " "); got != "frame progress remark" {
		t.Errorf("events %q, want frame progress remark", got)
	}
}

func TestStopIsSaidOnce(t *testing.T) {
	var out, errs bytes.Buffer
	ctx, cancel := context.WithCancelCause(t.Context())
	cancel(errStopped)
	v := newView(&out, &errs, &request{})
	events := make(chan run.Event)
	done := make(chan struct{})
	p, casts := twoCasts()
	go func() {
		defer close(done)
		v.follow(ctx, newMeter(len(p.Frames), casts), events, nil)
	}()
	events <- run.Event{Kind: run.CastStarted}
	for range 100 { // each send gives the other ready case, that of the stop, another chance to be taken
		events <- cameraRays(1)
	}
	close(events)
	<-done
	if n := strings.Count(errs.String(), "stopping"); n != 1 {
		t.Errorf("stopping was said %d times: %q", n, errs.String())
	}
}

func TestUnwritableResultsAreAFailure(t *testing.T) {
	v := newView(brokenPipe{}, &bytes.Buffer{}, &request{})
	v.say("a result")
	if err := v.unwritten(); err == nil || !strings.Contains(err.Error(), "standard output") {
		t.Errorf("error %v, want a failure that names standard output", err)
	}
}

// brokenPipe cannot be written to.
type brokenPipe struct{}

func (brokenPipe) Write([]byte) (int, error) { return 0, errors.New("broken pipe") }

func TestWords(t *testing.T) {
	for _, test := range []struct{ got, want string }{
		{span(3 * time.Millisecond), "3 ms"},
		{span(1500 * time.Millisecond), "1.5 s"},
		{span(95 * time.Second), "95 s"},
		{span(5 * time.Minute), "5 min"},
		{span(90 * time.Hour), "90.0 h"},
		{rate(3_400_000, time.Second), "3.4 Mrays/s"},
		{rate(5000, time.Second), "5.0 krays/s"},
		{bytesText(900), "0.9 KB"},
		{bytesText(1_234_567), "1.2 MB"},
		{bytesText(45_000_000_000), "45 GB"},
		{raysText(18432), "18432"},
		{raysText(22_100_000), "22.1 million"},
		{raysText(22_100_000_000), "22.1 thousand million"},
		{count(1, "frame"), "1 frame"},
		{count(0, "frame"), "0 frames"},
		{framesText([]string{"a"}), "frame a"},
		{framesText([]string{"a", "b"}), "2 frames (a, b)"},
		{framesText([]string{"a", "b", "c", "d", "e"}), "5 frames (a, b, c, …)"},
	} {
		if test.got != test.want {
			t.Errorf("got %q, want %q", test.got, test.want)
		}
	}
}
