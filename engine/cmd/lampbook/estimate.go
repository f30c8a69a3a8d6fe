package main

import (
	"context"
	"errors"
	"math"
	"runtime"
	"slices"
	"sync/atomic"
	"time"

	"lampbook/engine/model"
	"lampbook/engine/render"
	"lampbook/output/encode"
)

// cost is what a plan is likely to take, from and to.
type cost struct {
	seconds [2]float64
	bytes   [2]float64
}

// How an estimate is made: a few of the plan's casts are rendered very small.
const (
	probeCasts  = 3                       // first, middle and last
	probeLooks  = 4                       // frames of each
	probeTries  = 3                       // of each, of which the fastest counts: the others met the machine's other work
	probeRays   = 100_000                 // at most, in each
	probePause  = 1500 * time.Millisecond // a probe that takes longer is cut off, and what it did by then counts
	probePixels = 5_000                   // at least, with fewer samples if need be: a smaller picture says little of how a file compresses
)

// How far a run may differ from its probes: the machine's other work, frames unlike those probed, small pictures that compress less well than
// large ones. Chosen so that the example scenes fall well inside.
const (
	timeLow, timeHigh = 0.6, 1.8
	diskLow, diskHigh = 0.25, 1.2
)

// What the files of a run cost besides their pixels.
const (
	frameBytes   = 1_000  // a picture's metadata, its lines of the record
	sheetBytes   = 15_000 // a sheet's margins and words
	sheetSeconds = 0.05   // setting its type
)

// probe is what one small cast showed.
type probe struct {
	secondsPerRay   float64 // wall time to a ray of the estimate
	secondsPerPixel float64 // time of one core to encode a pixel in every format
	bytesPerPixel   float64 // of files
	pngPerPixel     float64 // bytes of an 8-bit PNG
}

// estimate renders a few of the casts very small, in memory, and says what the whole plan is likely to take.
func estimate(ctx context.Context, j *job, casts []render.Cast, threads int) (cost, error) {
	if threads == 0 {
		threads = runtime.GOMAXPROCS(0)
	}
	engine := render.NewEngine(j.library)
	on := onSheets(j.plan)
	var probes []probe
	var once time.Duration
	for _, c := range spread(casts, probeCasts) {
		looks := c.Frames[:min(len(c.Frames), probeLooks)]
		small := shrink(j.plan, looks)
		shown := make([]showing, len(looks))
		for k, i := range looks {
			shown[k] = on[i]
		}
		// The first time round builds the meshes' hierarchies and the encoders' tables, which a run does once, too.
		started := time.Now()
		if _, _, err := try(ctx, engine, resized(small, 1, 1, 1), shown, threads); err != nil {
			return cost{}, err
		}
		once += time.Since(started)
		var best probe
		tried := false
		for range probeTries {
			p, ok, err := try(ctx, engine, small, shown, threads)
			if err != nil {
				return cost{}, err
			}
			if ok && tried {
				p = p.with(best, math.Min)
			}
			if ok {
				best, tried = p, true
			}
		}
		if tried {
			probes = append(probes, best)
		}
	}
	if len(probes) == 0 {
		return cost{}, nil
	}
	var w work
	for _, c := range casts {
		w.rays += float64(total(render.Estimate(c)))
		for _, i := range c.Frames {
			s := j.plan.Frames[i].Settings
			pixels := float64(s.Width) * float64(s.Height)
			w.frames++
			w.pixels += pixels
			if on[i].shown {
				w.onSheets += pixels
			}
			if on[i].passes {
				w.onSheets += pixels * float64(len(s.Passes))
			}
		}
	}
	w.sheets = float64(len(j.plan.Sheets))
	least, most := probes[0], probes[0]
	for _, p := range probes[1:] {
		least, most = least.with(p, math.Min), most.with(p, math.Max)
	}
	return cost{
		seconds: [2]float64{timeLow * (once.Seconds() + w.seconds(least, threads)), timeHigh * (once.Seconds() + w.seconds(most, threads))},
		bytes:   [2]float64{w.bytes(least, diskLow), w.bytes(most, diskHigh)},
	}, nil
}

// with joins two probes value by value.
func (p probe) with(q probe, join func(a, b float64) float64) probe {
	return probe{
		secondsPerRay:   join(p.secondsPerRay, q.secondsPerRay),
		secondsPerPixel: join(p.secondsPerPixel, q.secondsPerPixel),
		bytesPerPixel:   join(p.bytesPerPixel, q.bytesPerPixel),
		pngPerPixel:     join(p.pngPerPixel, q.pngPerPixel),
	}
}

// work is what a plan asks for.
type work struct {
	rays, frames, pixels float64
	sheets, onSheets     float64 // how many; pixels of the pictures that they show
}

// seconds is the time that the work takes at a probe's pace. Sheets are laid by one core.
func (w work) seconds(p probe, threads int) float64 {
	return w.rays*p.secondsPerRay + w.pixels*p.secondsPerPixel/float64(threads) + w.onSheets*p.secondsPerPixel + w.sheets*sheetSeconds
}

// bytes is the disk that the work takes, if pixels take the given share of what they take in a probe.
func (w work) bytes(p probe, share float64) float64 {
	return share*(w.pixels*p.bytesPerPixel+w.onSheets*p.pngPerPixel) + w.frames*frameBytes + w.sheets*sheetBytes
}

// try renders and encodes one small cast. ok is false where it has nothing to tell: its frames fail, or none was done in time.
func try(ctx context.Context, engine *render.Engine, c render.Cast, on []showing, threads int) (p probe, ok bool, err error) {
	short, cancel := context.WithTimeout(ctx, probePause)
	defer cancel()
	var cast atomic.Int64
	started := time.Now()
	results, err := engine.Render(short, c, render.Options{Threads: threads, Progress: func(more render.Stats) { cast.Add(more.CameraRays) }})
	elapsed := time.Since(started).Seconds()
	if ctx.Err() != nil {
		return p, false, wrong(context.Cause(ctx))
	}
	if err != nil && !errors.Is(err, context.DeadlineExceeded) {
		return p, false, failed(err)
	}
	whole := render.Estimate(c)
	if cast.Load() == 0 {
		return p, false, nil
	}
	p.secondsPerRay = elapsed * float64(whole.CameraRays) / float64(cast.Load()) / float64(total(whole))
	for _, r := range results {
		if r.Err != nil {
			continue
		}
		f := &c.Plan.Frames[r.Frame]
		started := time.Now()
		var all, png counter
		for _, file := range filesOf(f, on[r.Frame]) {
			var size counter
			if err := encodePicture(&size, file, f.Settings, r.Linear, r.Display, encode.Options{}); err != nil {
				return p, false, failed(err)
			}
			all += size
			if isPNG(file.format) {
				png = size
			}
		}
		pixels := float64(f.Settings.Width * f.Settings.Height)
		p = p.with(probe{
			secondsPerRay:   p.secondsPerRay,
			secondsPerPixel: time.Since(started).Seconds() / pixels,
			bytesPerPixel:   float64(all) / pixels,
			pngPerPixel:     float64(png) / pixels,
		}, math.Max)
	}
	return p, true, nil
}

// spread takes up to n of the casts: the first, the last and those evenly between.
func spread(casts []render.Cast, n int) []render.Cast {
	if len(casts) <= n {
		return casts
	}
	out := make([]render.Cast, n)
	for i := range out {
		out[i] = casts[i*(len(casts)-1)/(n-1)]
	}
	return out
}

// shrink returns a cast of the frames, which share one, in a plan that holds them alone, small enough for a probe: fewer pixels
// first, then fewer samples.
func shrink(p *model.Plan, frames []int) render.Cast {
	plan := *p
	plan.Frames = nil
	small := render.Cast{Plan: &plan}
	for k, i := range frames {
		plan.Frames = append(plan.Frames, p.Frames[i])
		small.Frames = append(small.Frames, k)
	}
	s := plan.Frames[0].Settings
	pixels := float64(s.Width) * float64(s.Height)
	keep := probeRays / float64(total(render.Estimate(small))) // of the rays
	scale := math.Sqrt(min(1, max(keep, probePixels/pixels)))
	small = resized(small, int(float64(s.Width)*scale), int(float64(s.Height)*scale), s.Samples)
	keep = probeRays / float64(total(render.Estimate(small)))
	return resized(small, small.Plan.Frames[small.Frames[0]].Settings.Width, small.Plan.Frames[small.Frames[0]].Settings.Height, int(float64(s.Samples)*min(1, keep)))
}

// resized returns the cast with pictures of another size and number of samples, at least 1 of each.
func resized(c render.Cast, width, height, samples int) render.Cast {
	plan := *c.Plan
	plan.Frames = slices.Clone(plan.Frames)
	for _, i := range c.Frames {
		s := &plan.Frames[i].Settings
		s.Width, s.Height, s.Samples = max(width, 1), max(height, 1), max(samples, 1)
	}
	return render.Cast{Plan: &plan, Frames: c.Frames}
}

// counter counts what is written to it.
type counter int64

func (c *counter) Write(b []byte) (int, error) {
	*c += counter(len(b))
	return len(b), nil
}
