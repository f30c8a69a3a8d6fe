package render

import (
	"context"
	"errors"
	"fmt"
	"runtime"

	"lampbook/engine/kernel/bvh"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/pixmap"
)

// Engine renders casts and keeps the hierarchies of the meshes that it has built. Safe to share; casts may run at once.
type Engine struct {
	meshes store
}

// NewEngine returns an engine that takes its meshes from the library. The library is the engine's from then on.
func NewEngine(source *mesh.Library) *Engine {
	return &Engine{meshes: store{source: source, most: defaultStore, built: map[model.Hash]*builtMesh{}, keys: map[meshRef]model.Hash{}}}
}

// Options tune Render. The zero value uses every core.
type Options struct {
	Threads  int              // goroutines; 0 means one a core
	Progress func(more Stats) // called now and then from many goroutines with the rays cast since its last call; nil: none
}

// threads is how many goroutines to use.
func (o Options) threads() int {
	if o.Threads > 0 {
		return o.Threads
	}
	return runtime.GOMAXPROCS(0)
}

// Result is one frame's outcome.
type Result struct {
	Frame   int           // index into the plan's frames
	Linear  *pixmap.Image // planes R G B A and the passes asked for; see pixmap.Image
	Display *pixmap.Image // planes R G B A, sRGB-encoded, straight
	Stats   Stats         // of the whole cast, shared by its frames
	Samples float64       // camera rays that a pixel took for this frame, in the mean
	Noise   float64       // standard error, L*, as estimated: root mean square over the picture; 0 unless the settings ask for noise
	Err     error         // why there is no picture; Linear and Display are then nil
}

// ErrNotFinite is the error of a picture that holds NaN or infinity.
var ErrNotFinite = errors.New("picture has pixels that are not finite numbers: look for extreme light intensities or exposures")

// Render casts the group once and returns a result for each of its frames, in their order. What concerns one frame or all of them
// (a mesh that cannot be built) is in the results; the error is the context's, when it ended before the cast was done, or says that
// frames of different casts were mixed.
func (e *Engine) Render(ctx context.Context, c Cast, o Options) ([]Result, error) {
	if len(c.Frames) == 0 {
		return nil, errors.New("a cast needs at least one frame")
	}
	results := make([]Result, len(c.Frames))
	for k, i := range c.Frames {
		results[k].Frame = i
		if reason := c.Plan.Frames[i].Failure; reason != "" {
			return nil, fmt.Errorf("frame %q cannot be rendered: %s", c.Plan.Frames[i].Name, reason)
		}
	}
	compiled, err := compile(c, func(id model.MeshID) (*mesh.Mesh, *bvh.Tree, error) { return e.meshes.get(c.Plan, id, o.threads()) })
	if err != nil {
		for k := range results {
			results[k].Err = err
		}
		return results, nil
	}
	films, stats, err := compiled.render(ctx, o)
	if err != nil {
		return nil, err
	}
	for k, f := range films {
		results[k].Stats = stats
		if s := compiled.looks[k].settings; s.Noise > 0 || wants(s, model.PassNoise) {
			results[k].Samples, results[k].Noise = f.sampled()
		} else {
			results[k].Samples = float64(s.Samples)
		}
		if !f.linear.Finite() {
			results[k].Err = ErrNotFinite
			continue
		}
		results[k].Linear, results[k].Display = f.linear, f.display
	}
	return results, nil
}

// render casts every tile and returns a film a look.
func (c *cast) render(ctx context.Context, o Options) ([]*film, Stats, error) {
	films := make([]*film, len(c.looks))
	for k := range films {
		films[k] = newFilm(c.looks[k].settings)
	}
	threads := o.threads()
	tiles := tilesOf(c.settings.Width, c.settings.Height)
	threads = min(threads, len(tiles))
	workers := make([]worker, threads)
	for i := range workers {
		workers[i].ctx = ctx
	}
	err := eachTile(ctx, threads, tiles, func(n int, t tile) {
		w := &workers[n]
		before := w.stats
		for y := t.y0; y < t.y1; y += blockSide {
			for x := t.x0; x < t.x1; x += blockSide {
				if ctx.Err() != nil {
					return // eachTile says so
				}
				c.drawBlock(w, films, tile{x, y, min(x+blockSide, t.x1), min(y+blockSide, t.y1)})
			}
		}
		if o.Progress != nil {
			o.Progress(Stats{CameraRays: w.stats.CameraRays - before.CameraRays, ShadowRays: w.stats.ShadowRays - before.ShadowRays})
		}
	})
	var sum Stats
	for i := range workers {
		sum.CameraRays += workers[i].stats.CameraRays
		sum.ShadowRays += workers[i].stats.ShadowRays
	}
	return films, sum, err
}
