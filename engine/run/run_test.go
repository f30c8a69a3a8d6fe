package run

import (
	"context"
	"errors"
	"fmt"
	"runtime"
	"slices"
	"sync"
	"sync/atomic"
	"syscall"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/model"
	"lampbook/engine/pixmap"
	"lampbook/engine/render"
)

// scripted is an engine whose casts do what a test says.
type scripted struct {
	mu     sync.Mutex
	casts  [][]int // the frames of each cast rendered, in order
	before func(ctx context.Context, c render.Cast) error
	result func(frame int) error
}

func (e *scripted) Render(ctx context.Context, c render.Cast, o render.Options) ([]render.Result, error) {
	e.mu.Lock()
	e.casts = append(e.casts, c.Frames)
	e.mu.Unlock()
	if e.before != nil {
		if err := e.before(ctx, c); err != nil {
			return nil, err
		}
	}
	results := make([]render.Result, len(c.Frames))
	for k, i := range c.Frames {
		results[k] = render.Result{Frame: i, Stats: render.Stats{CameraRays: 100}}
		if e.result != nil {
			results[k].Err = e.result(i)
		}
		if results[k].Err == nil {
			results[k].Linear, results[k].Display = pixmap.New(1, 1, "R"), pixmap.New(1, 1, "R")
		}
	}
	o.Progress(render.Stats{CameraRays: 60})
	o.Progress(render.Stats{CameraRays: 40})
	return results, ctx.Err()
}

// planOf makes a plan whose frame i is seen by camera cameras[i]: frames of one camera share a cast.
func planOf(cameras ...int) *model.Plan {
	p := &model.Plan{
		Meshes:    []model.Mesh{{Kind: model.MeshSphere, Size: [3]float64{1, 0, 0}}},
		Materials: []model.Material{{Opacity: 1}},
	}
	for i, c := range cameras {
		p.Frames = append(p.Frames, model.Frame{
			Name:     fmt.Sprintf("frame%d", i),
			Camera:   model.Camera{Position: [3]float64{0, 0, float64(c + 2)}, Up: [3]float64{0, 1, 0}, FocalMM: 50, SensorMM: 36},
			Things:   []model.Placement{{Materials: []model.MaterialID{0}, Scale: [3]float64{1, 1, 1}}},
			Settings: model.Settings{Width: 8, Height: 8, Samples: 1, LightSamples: 1, Formats: []model.Format{model.FormatPNG}},
		})
	}
	return p
}

// collector is a sink that notes what it is given.
type collector struct {
	mu    sync.Mutex
	given []Finished
	fails func(Finished) error
}

func (c *collector) sink(f Finished) error {
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.fails != nil {
		if err := c.fails(f); err != nil {
			return err
		}
	}
	c.given = append(c.given, f)
	return nil
}

// frames lists the frames given, in the plan's order.
func (c *collector) frames() []int {
	var out []int
	for _, f := range c.given {
		out = append(out, f.Frame)
	}
	slices.Sort(out)
	return out
}

func TestCastsGroupInPlanOrder(t *testing.T) {
	for _, test := range []struct {
		name    string
		cameras []int
		options Options
		failing int // a frame with a failure; -1: none
		want    [][]int
	}{
		{"one camera", []int{0, 0, 0}, Options{}, -1, [][]int{{0, 1, 2}}},
		{"cameras in turn", []int{0, 1, 0, 1, 2}, Options{}, -1, [][]int{{0, 2}, {1, 3}, {4}}},
		{"alone", []int{0, 0, 1}, Options{Alone: true}, -1, [][]int{{0}, {1}, {2}}},
		{"a failure is left out", []int{0, 0, 0}, Options{}, 1, [][]int{{0, 2}}},
		// A frame of 8 × 8 with 8 planes of 4 bytes holds 2048 bytes; half of 8192 is room for two.
		{"parts by memory", []int{0, 0, 0, 0, 0}, Options{Memory: 8192}, -1, [][]int{{0, 1}, {2, 3}, {4}}},
		{"one frame may exceed the memory", []int{0, 0}, Options{Memory: 1}, -1, [][]int{{0}, {1}}},
	} {
		p := planOf(test.cameras...)
		if test.failing >= 0 {
			p.Frames[test.failing].Failure = "no such file"
		}
		var got [][]int
		for _, c := range Casts(p, test.options) {
			got = append(got, c.Frames)
		}
		if fmt.Sprint(got) != fmt.Sprint(test.want) {
			t.Errorf("%s: got casts %v, want %v", test.name, got, test.want)
		}
	}
}

// Every frame without a failure is in exactly one cast, casts stand in the order of their first frames, and no cast of more than
// one frame exceeds its half of the memory.
func TestCastsPartition(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		p := planOf(rapid.SliceOfN(rapid.IntRange(0, 4), 1, 30).Draw(t, "cameras")...)
		for i := range p.Frames {
			p.Frames[i].Settings.Width = 1 << rapid.IntRange(0, 6).Draw(t, "width")
			if rapid.IntRange(0, 9).Draw(t, "fails") == 0 {
				p.Frames[i].Failure = "broken"
			}
		}
		o := Options{Memory: 1 << rapid.IntRange(8, 20).Draw(t, "memory"), Alone: rapid.Bool().Draw(t, "alone")}
		seen := map[int]bool{}
		last := -1
		for _, c := range Casts(p, o) {
			bytes := int64(0)
			for _, i := range c.Frames {
				if seen[i] || p.Frames[i].Failure != "" {
					t.Fatalf("frame %d is in two casts, or failed", i)
				}
				seen[i] = true
				bytes += PictureBytes(p.Frames[i].Settings)
			}
			if len(c.Frames) > 1 && (o.Alone || bytes > o.Memory/2) {
				t.Fatalf("cast of %d frames holds %d bytes of %d", len(c.Frames), bytes, o.Memory)
			}
			if c.Frames[0] <= last {
				t.Fatalf("cast of frame %d comes after that of frame %d", c.Frames[0], last)
			}
			last = c.Frames[0]
		}
		for i, f := range p.Frames {
			if !seen[i] && f.Failure == "" {
				t.Fatalf("frame %d is in no cast", i)
			}
		}
	})
}

func TestPictureBytes(t *testing.T) {
	s := model.Settings{Width: 10, Height: 5}
	if got := PictureBytes(s); got != 50*8*4 {
		t.Errorf("no passes: got %d, want %d", got, 50*8*4)
	}
	s.Passes = []model.Pass{model.PassDiffuse, model.PassDepth, model.PassNormal}
	if got := PictureBytes(s); got != 50*(8+3+1+3)*4 {
		t.Errorf("three passes: got %d, want %d", got, 50*15*4)
	}
}

func TestRunHandsOverEveryFrameOnce(t *testing.T) {
	p := planOf(0, 1, 0, 2, 1, 0)
	p.Frames[3].Failure = "no such file"
	var got collector
	eng := &scripted{result: func(frame int) error {
		if frame == 4 {
			return render.ErrNotFinite
		}
		return nil
	}}
	events := make(chan Event, 100)
	sum, err := Run(t.Context(), eng, p, Options{Threads: 3, Events: events}, got.sink)
	close(events)
	if err != nil {
		t.Fatal(err)
	}
	if want := (Summary{Done: 4, Failed: 2, Rays: 200}); sum != want {
		t.Errorf("summary %+v, want %+v", sum, want)
	}
	if want := []int{0, 1, 2, 3, 4, 5}; !slices.Equal(got.frames(), want) {
		t.Errorf("sink was given %v, want %v", got.frames(), want)
	}
	for _, f := range got.given {
		wantFailure := map[int]string{3: "no such file", 4: render.ErrNotFinite.Error()}[f.Frame]
		if f.Failure != wantFailure || (f.Display == nil) != (wantFailure != "") {
			t.Errorf("frame %d: failure %q, want %q; picture given: %v", f.Frame, f.Failure, wantFailure, f.Display != nil)
		}
	}
	var rays int64
	settled := map[int]EventKind{}
	for e := range events {
		switch e.Kind {
		case RaysCast:
			rays += e.Rays.CameraRays
		case FrameDone, FrameFailed:
			if _, twice := settled[e.Frame]; twice {
				t.Errorf("frame %d was settled twice", e.Frame)
			}
			settled[e.Frame] = e.Kind
		}
	}
	if rays != 200 || len(settled) != 6 || settled[3] != FrameFailed || settled[4] != FrameFailed || settled[0] != FrameDone {
		t.Errorf("events: %d rays, want 200; settled %v", rays, settled)
	}
}

func TestCastFaultFailsItsFramesAlone(t *testing.T) {
	for _, test := range []struct {
		name   string
		before func(context.Context, render.Cast) error
	}{
		{"error", func(_ context.Context, c render.Cast) error {
			if c.Frames[0] == 1 {
				return errors.New("broken")
			}
			return nil
		}},
		{"panic", func(_ context.Context, c render.Cast) error {
			if c.Frames[0] == 1 {
				panic("broken")
			}
			return nil
		}},
	} {
		var got collector
		sum, err := Run(t.Context(), &scripted{before: test.before}, planOf(0, 1, 1, 2), Options{}, got.sink)
		if err != nil || sum.Done != 2 || sum.Failed != 2 || sum.Left != 0 {
			t.Errorf("%s: summary %+v, error %v; want 2 done, 2 failed", test.name, sum, err)
		}
	}
}

func TestSinkErrorEndsTheRun(t *testing.T) {
	full := fmt.Errorf("frames/frame1.png: %w", syscall.ENOSPC)
	got := collector{fails: func(f Finished) error {
		if f.Frame >= 1 {
			return full
		}
		return nil
	}}
	eng := &scripted{}
	p := planOf(0, 1, 2, 3, 4, 5, 6, 7)
	sum, err := Run(t.Context(), eng, p, Options{Threads: 1}, got.sink)
	if !errors.Is(err, syscall.ENOSPC) || err.Error() != full.Error() {
		t.Errorf("error %v, want %v once", err, full)
	}
	if sum.Done != 1 || sum.Failed != 0 || sum.Left != 7 {
		t.Errorf("summary %+v, want 1 done, 7 left", sum)
	}
	if len(eng.casts) > 4 {
		t.Errorf("%d casts were rendered after a disk that was full at the second", len(eng.casts))
	}
}

func TestSinkErrorOnAFailedFrame(t *testing.T) {
	p := planOf(0, 1)
	p.Frames[0].Failure = "broken"
	full := errors.New("full")
	eng := &scripted{}
	got := collector{fails: func(Finished) error { return full }}
	sum, err := Run(t.Context(), eng, p, Options{}, got.sink)
	if !errors.Is(err, full) || sum.Left != 2 || len(eng.casts) != 0 {
		t.Errorf("summary %+v, error %v, %d casts; want 2 left, %v, none", sum, err, len(eng.casts), full)
	}
}

func TestCancelKeepsWhatIsFinished(t *testing.T) {
	stopped := errors.New("stopped")
	ctx, cancel := context.WithCancelCause(t.Context())
	defer cancel(nil)
	eng := &scripted{before: func(_ context.Context, c render.Cast) error {
		if c.Frames[0] == 2 {
			cancel(stopped)
		}
		return nil
	}}
	var got collector
	sum, err := Run(ctx, eng, planOf(0, 1, 2, 3), Options{}, got.sink)
	if !errors.Is(err, stopped) || sum.Done != 2 || sum.Left != 2 {
		t.Errorf("summary %+v, error %v; want 2 done, 2 left, stopped", sum, err)
	}
	if want := []int{0, 1}; !slices.Equal(got.frames(), want) {
		t.Errorf("sink was given %v, want %v", got.frames(), want)
	}
}

func TestCancelAfterTheLastFrameIsNoStop(t *testing.T) {
	ctx, cancel := context.WithCancelCause(t.Context())
	got := collector{fails: func(f Finished) error {
		if f.Frame == 1 {
			cancel(errors.New("stopped"))
		}
		return nil
	}}
	sum, err := Run(ctx, &scripted{}, planOf(0, 1), Options{Threads: 1}, got.sink)
	if err != nil || sum.Done != 2 {
		t.Errorf("summary %+v, error %v; want 2 done and no error", sum, err)
	}
}

// TestMemoryHolds: where two parts do not fit into the memory together, the next is begun after the one before is written; where they do,
// while it is.
func TestMemoryHolds(t *testing.T) {
	p := planOf(0, 1, 2, 3) // of 2048 bytes each
	var written atomic.Int64
	eng := &scripted{before: func(_ context.Context, c render.Cast) error {
		if n := written.Load(); n < int64(c.Frames[0]) {
			t.Errorf("frame %d is begun when %d are written", c.Frames[0], n)
		}
		return nil
	}}
	slow := collector{fails: func(Finished) error {
		for range 10_000 {
			runtime.Gosched() // lets the next cast begin, if nothing holds it
		}
		written.Add(1)
		return nil
	}}
	if sum, err := Run(t.Context(), eng, p, Options{Memory: 4095}, slow.sink); err != nil || sum.Done != 4 {
		t.Errorf("summary %+v, error %v", sum, err)
	}
	begun := make(chan struct{}, 4)
	eng = &scripted{before: func(context.Context, render.Cast) error { begun <- struct{}{}; return nil }}
	waits := collector{fails: func(f Finished) error {
		<-begun // its own
		if f.Frame == 0 {
			<-begun // and the next one's
			begun <- struct{}{}
		}
		return nil
	}}
	if sum, err := Run(t.Context(), eng, p, Options{Memory: 4096}, waits.sink); err != nil || sum.Done != 4 {
		t.Errorf("summary %+v, error %v", sum, err)
	}
}

func TestRefuse(t *testing.T) {
	p := planOf(0, 1, 2)
	p.Frames[1].Settings.Width, p.Frames[1].Settings.Height = 1024, 1024
	p.Frames[2].Failure = "broken"
	Refuse(p, 32<<20)
	if got := p.Frames[1].Failure; got != "" {
		t.Errorf("a picture of 32 MiB is refused 32 MiB: %s", got)
	}
	Refuse(p, 32<<20-1)
	const want = "the picture of 1024 × 1024 pixels needs 32 MiB of memory, and 32 MiB are allowed: make it smaller, or allow more by --memory"
	if p.Frames[0].Failure != "" || p.Frames[1].Failure != want || p.Frames[2].Failure != "broken" {
		t.Errorf("failures %q, %q, %q; want %q for the second alone", p.Frames[0].Failure, p.Frames[1].Failure, p.Frames[2].Failure, want)
	}
}

func TestThreadsOutOfRange(t *testing.T) {
	for _, n := range []int{-1, 1025} {
		var got collector
		if _, err := Run(t.Context(), &scripted{}, planOf(0), Options{Threads: n}, got.sink); err == nil || len(got.given) != 0 {
			t.Errorf("threads %d: got error %v and %d frames, want an error and none", n, err, len(got.given))
		}
	}
}
