package run

import (
	"cmp"
	"context"
	"errors"
	"fmt"
	"runtime"
	"sync"
	"sync/atomic"
	"time"

	"lampbook/engine/model"
	"lampbook/engine/pixmap"
	"lampbook/engine/render"
)

// Options tunes a run. The zero value suits most.
type Options struct {
	Threads int          // goroutines that cast and that write, [1, 1024]; 0 means one for each core
	Alone   bool         // cast every frame by itself; the pictures are the same, to the byte
	Memory  int64        // bytes of finished pictures held at a time, >= 0; 0 means DefaultMemory. A frame that exceeds it is held alone; see Refuse
	Events  chan<- Event // news; nil for none. Sends wait for the reader. Run does not close it
}

// Engine renders the frames of one cast; *render.Engine is one.
type Engine interface {
	Render(ctx context.Context, c render.Cast, o render.Options) ([]render.Result, error)
}

// Finished is a frame that has been rendered, or has failed.
type Finished struct {
	Frame           int           // index in the plan
	Linear, Display *pixmap.Image // nil where the frame failed
	Failure         string        // why the frame failed; empty where it did not
	Stats           render.Stats  // rays of its cast, in equal shares over the cast's frames
	Samples, Noise  float64       // see render.Result; 0 where the frame failed
	Time            time.Duration // wall time of its cast, likewise
}

// Sink takes finished frames, failed ones too. It is called from several goroutines at once, once for each frame; the
// pictures are the sink's to keep. An error ends the run.
type Sink func(Finished) error

// Summary says how a run went. Done + Failed + Left is the number of the plan's frames.
type Summary struct {
	Done, Failed int
	Left         int   // not rendered, or not written, when the run stopped
	Rays         int64 // camera and shadow rays cast, those of unfinished casts too
}

// Run renders every frame of a valid plan and hands each to the sink. Frames that fail are counted, not returned as an error.
// The error is the sink's, or, if frames are left, the cause of ctx's end; pictures that were finished by then have been given to
// the sink, unless the sink itself had failed.
func Run(ctx context.Context, eng Engine, p *model.Plan, o Options, sink Sink) (Summary, error) {
	if o.Threads < 0 || o.Threads > 1024 {
		return Summary{Left: len(p.Frames)}, fmt.Errorf("threads: 0 to 1024 are accepted, got %d", o.Threads)
	}
	if o.Threads == 0 {
		o.Threads = runtime.GOMAXPROCS(0)
	}
	ctx, stop := context.WithCancelCause(ctx)
	defer stop(nil)
	d := delivery{options: o, sink: sink, summary: Summary{Left: len(p.Frames)}}

	var rays atomic.Int64
	d.deliver(failedInPlan(p))
	parts := make(chan []Finished)  // unbuffered: one part is rendered while another is written
	taken := make(chan struct{}, 1) // one entry when the part at hand is written
	written := make(chan struct{})
	go func() {
		defer close(written)
		for part := range parts {
			if d.err == nil {
				d.deliver(part)
			}
			if d.err != nil {
				stop(d.err)
			}
			taken <- struct{}{}
		}
	}()
	if d.err == nil {
		held, writing := int64(0), false // bytes of the part that is being written
		release := func() {
			if writing {
				<-taken
			}
			held, writing = 0, false
		}
		for i, c := range Casts(p, o) {
			if castBytes(c)+held > cmp.Or(o.Memory, DefaultMemory) {
				release()
			}
			if ctx.Err() != nil {
				break
			}
			o.send(Event{Kind: CastStarted, Cast: i, Frames: len(c.Frames)})
			part, ok := renderCast(ctx, eng, c, o, func(more render.Stats) {
				rays.Add(more.CameraRays + more.ShadowRays)
				o.send(Event{Kind: RaysCast, Rays: more})
			})
			if !ok {
				break
			}
			release()
			parts <- part
			held, writing = castBytes(c), true
		}
	}
	close(parts)
	<-written
	d.summary.Rays = rays.Load()
	if d.err != nil {
		return d.summary, d.err
	}
	if d.summary.Left == 0 {
		return d.summary, nil
	}
	return d.summary, context.Cause(ctx)
}

// failedInPlan lists the frames that the scene could not describe.
func failedInPlan(p *model.Plan) []Finished {
	var out []Finished
	for i := range p.Frames {
		if reason := p.Frames[i].Failure; reason != "" {
			out = append(out, Finished{Frame: i, Failure: reason})
		}
	}
	return out
}

// renderCast renders one cast. It returns false if ctx ended first. A fault of the cast as a whole is a fault of each of its frames.
func renderCast(ctx context.Context, eng Engine, c render.Cast, o Options, progress func(render.Stats)) ([]Finished, bool) {
	start := time.Now()
	results, err := guarded(ctx, eng, c, render.Options{Threads: o.Threads, Progress: progress})
	if ctx.Err() != nil && err != nil {
		return nil, false
	}
	share := time.Since(start) / time.Duration(len(c.Frames))
	part := make([]Finished, len(c.Frames))
	for i, frame := range c.Frames {
		part[i] = Finished{Frame: frame, Time: share}
		if err != nil {
			part[i].Failure = err.Error()
			continue
		}
		r := results[i]
		n := int64(len(c.Frames))
		part[i].Stats = render.Stats{CameraRays: r.Stats.CameraRays / n, ShadowRays: r.Stats.ShadowRays / n}
		if r.Err != nil {
			part[i].Failure = r.Err.Error()
			continue
		}
		part[i].Linear, part[i].Display = r.Linear, r.Display
		part[i].Samples, part[i].Noise = r.Samples, r.Noise
	}
	return part, true
}

// guarded renders a cast and makes an error of a panic: a fault of the engine's on one cast must not stop a night's run.
func guarded(ctx context.Context, eng Engine, c render.Cast, o render.Options) (results []render.Result, err error) {
	defer func() {
		if r := recover(); r != nil {
			err = fmt.Errorf("a fault of the program's own, please report it with the scene: %v", r)
		}
	}()
	return eng.Render(ctx, c, o)
}

// delivery hands frames to the sink and keeps the count. Its fields are read and written by one goroutine at a time.
type delivery struct {
	options Options
	sink    Sink
	summary Summary
	err     error // the sink's
}

// deliver calls the sink for each frame of a part, on up to Threads goroutines, and waits. After an error no further call begins.
func (d *delivery) deliver(part []Finished) {
	errs := make([]error, len(part))
	var next atomic.Int64
	var failed atomic.Bool
	var writers sync.WaitGroup
	for range min(d.options.Threads, len(part)) {
		writers.Go(func() {
			for !failed.Load() {
				i := next.Add(1) - 1
				if i >= int64(len(part)) {
					return
				}
				if errs[i] = d.sink(part[i]); errs[i] != nil {
					failed.Store(true)
				}
			}
		})
	}
	writers.Wait()
	for i, f := range part {
		if errs[i] != nil {
			d.err = errors.Join(d.err, errs[i])
			continue
		}
		d.summary.Left--
		if f.Failure != "" {
			d.summary.Failed++
			d.options.send(Event{Kind: FrameFailed, Frame: f.Frame, Reason: f.Failure})
		} else {
			d.summary.Done++
			d.options.send(Event{Kind: FrameDone, Frame: f.Frame})
		}
	}
}
