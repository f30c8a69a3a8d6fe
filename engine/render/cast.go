package render

import (
	"context"

	"lampbook/engine/kernel/bvh"
	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
	"lampbook/engine/kernel/shade"
	"lampbook/engine/model"
)

// Purposes of sample points. Lights have their own, from their names.
var (
	purposeFilter  = sample.Name("pixel filter")
	purposeLens    = sample.Name("lens")
	purposeOpacity = sample.Name("opacity")
)

// Rays of one batch, at most: enough that rays of a pixel go together, small enough to stay in the core's nearest memory.
const (
	maxCameraBatch = 256
	maxShadowBatch = 1024
)

// maxLayers is how many see-through surfaces a ray passes before it is stopped.
const maxLayers = 64

// hit is what a look may need of a camera ray's end. World space.
type hit struct {
	p      geom.Vec3 // point
	shadow geom.Vec3 // where shadow rays start: off the surface, and off its facets where it is smooth
	n      geom.Vec3 // unit shading normal, towards the camera
	wo     geom.Vec3 // unit, towards the camera
	local  int32     // which of the pixel's surfaces
	index  uint32    // which of the pixel's samples
}

// worker is one goroutine's scratch.
type worker struct {
	ctx     context.Context
	first   uint32 // first sample of the batch at hand
	batch   int    // and how many it has
	walker  bvh.Walker
	uv      [][2]float32
	lens    [][2]float32
	rays    []geom.Ray
	hits    []bvh.Hit
	points  []hit
	lightUV [][2]float32
	shadows []shadowRay
	shots   []geom.Ray
	blocked []bool
	probes  []bvh.Hit
	single  [1]geom.Ray
	sums    *pixelSums // of the pixel at hand
	block   []pixelSums
	errors  []adaptive // by look
	stats   Stats      // rays cast so far
}

// shadowRay is the light that a shadow ray carries if nothing stops it; worker.shots has the ray.
type shadowRay struct {
	weight float32 // E0 of the unit light, divided by the light's rays
	nl     float32 // N·L, > 0
	point  int32   // into worker.points
	number uint32  // which of the pixel's rays to this light
}

// pixelSums is what a pixel's rays found, for every look: sums over its samples, by surface seen.
//
// Sums are float64, so that four thousand samples lose nothing.
type pixelSums struct {
	surfaces []int32     // the cast's surfaces that the pixel sees, in the order of its samples
	count    []float64   // by local surface: camera rays that ended there
	diffuse  []float64   // by local surface and light: Σ E0·(N·L)·V for the unit light
	ambient  []float64   // by local surface and light: Σ E0
	lobe     [][]float64 // by local surface: by light and lobe: Σ E0·lobe·V
	globe    []float64   // by globe: camera rays that ended there
	covered  float64
	depth    float64
	normal   [3]float64
}

// reset makes the sums empty.
func (s *pixelSums) reset(globes int) {
	s.surfaces, s.count = s.surfaces[:0], s.count[:0]
	s.diffuse, s.ambient = s.diffuse[:0], s.ambient[:0]
	s.globe = append(s.globe[:0], make([]float64, globes)...)
	s.covered, s.depth, s.normal = 0, 0, [3]float64{}
}

// local returns the pixel's number for a surface of the cast, and makes room for its sums at first sight.
func (s *pixelSums) local(c *cast, surface int32) int32 {
	for k, have := range s.surfaces {
		if have == surface {
			return int32(k)
		}
	}
	k := len(s.surfaces)
	s.surfaces = append(s.surfaces, surface)
	s.count = append(s.count, 0)
	for range c.lights {
		s.diffuse = append(s.diffuse, 0)
		s.ambient = append(s.ambient, 0)
	}
	if k == len(s.lobe) {
		s.lobe = append(s.lobe, nil)
	}
	s.lobe[k] = append(s.lobe[k][:0], make([]float64, len(c.lights)*len(c.surfaces[surface].lobes))...)
	return int32(k)
}

// castPixel casts the rays of pixel (x, y) from sample first to before sample end, and adds what they find to sums.
func (c *cast) castPixel(w *worker, sums *pixelSums, x, y, first, end int) {
	s := &c.settings
	px := sample.PixelAt(s.Seed, x, y)
	w.sums = sums
	batch := min(maxCameraBatch, max(1, maxShadowBatch/s.LightSamples))
	for ; first < end; first += batch {
		if w.ctx.Err() != nil {
			return // the picture is thrown away; at many samples and lights a pixel alone takes seconds
		}
		c.castCamera(w, px, x, y, uint32(first), min(batch, end-first))
		if len(w.points) == 0 {
			continue
		}
		for l := range c.lights {
			c.castLight(w, px, l)
		}
	}
}

// castCamera casts n camera rays from sample first on and fills w.points.
func (c *cast) castCamera(w *worker, px sample.Pixel, x, y int, first uint32, n int) {
	w.first, w.batch = first, n
	w.uv = grow(w.uv, n)
	px.For(purposeFilter, c.settings.Samples).Points(first, w.uv)
	w.lens = grow(w.lens, n)
	if c.camera.lensX != (geom.Vec3{}) {
		px.For(purposeLens, c.settings.Samples).Points(first, w.lens)
	}
	w.rays, w.hits = grow(w.rays, n), grow(w.hits, n)
	for i := range n {
		dx, dy := filterOffset(c.settings.Filter, w.uv[i])
		w.rays[i] = c.camera.ray(float32(x)+dx, float32(y)+dy, w.lens[i][0], w.lens[i][1])
	}
	w.stats.CameraRays += int64(n)
	if c.translucent {
		c.closestOpaque(w, bvh.SeenByCamera, w.rays, w.hits, px.For(purposeOpacity, c.settings.Samples), func(i int) uint32 { return first + uint32(i) })
	} else {
		c.scene.Closest(&w.walker, bvh.SeenByCamera, w.rays, w.hits)
	}

	w.points = grow(w.points, n)
	found := 0
	for i := range n {
		h, ray := &w.hits[i], &w.rays[i]
		if len(c.globes) > 0 {
			if g := c.nearestGlobe(ray, h); g >= 0 {
				w.sums.globe[g]++
				w.sums.covered++
				continue
			}
		}
		if h.Placement == bvh.NoHit {
			continue
		}
		pt := &w.points[found]
		found++
		surface := c.interact(h, ray, pt)
		pt.local = w.sums.local(c, surface)
		pt.index = first + uint32(i)
		w.sums.count[pt.local]++
		w.sums.covered++
		if c.wantDepth {
			w.sums.depth += float64(pt.p.Sub(c.camera.eye).Dot(c.camera.forward))
		}
		if c.wantNormal {
			w.sums.normal[0] += float64(pt.n.X)
			w.sums.normal[1] += float64(pt.n.Y)
			w.sums.normal[2] += float64(pt.n.Z)
		}
	}
	w.points = w.points[:found]
}

// castLight casts the shadow rays from w.points to light l and adds what arrives to the sums.
func (c *cast) castLight(w *worker, px sample.Pixel, l int) {
	c.aimShadows(w, px, l)
	blocked := w.blocked[:0]
	if c.lights[l].shadow {
		w.stats.ShadowRays += int64(len(w.shots))
		w.blocked = grow(w.blocked, len(w.shots))
		blocked = w.blocked
		c.occluded(w, px, l, blocked)
	}
	for i := range w.shadows {
		if len(blocked) > 0 && blocked[i] {
			continue
		}
		ray := &w.shadows[i]
		pt := &w.points[ray.point]
		w.sums.diffuse[int(pt.local)*len(c.lights)+l] += float64(ray.weight * ray.nl)
		lobes := c.surfaces[w.sums.surfaces[pt.local]].lobes
		if len(lobes) == 0 {
			continue
		}
		logNH := shade.LogHalf(shade.HalfCosine(pt.n, w.shots[i].Dir, pt.wo))
		sums := w.sums.lobe[pt.local][l*len(lobes):]
		for k := range lobes {
			sums[k] += float64(ray.weight * lobes[k].AtLog(logNH, ray.nl))
		}
	}
}

// closestOpaque is Closest for casts with see-through surfaces: each surface stops its share of rays, chosen by a
// number of the ray's own. sampleOf gives the sample point of ray i. Of surfaces at the very same distance the first alone counts.
func (c *cast) closestOpaque(w *worker, mask bvh.Mask, rays []geom.Ray, hits []bvh.Hit, stream sample.Stream, sampleOf func(i int) uint32) {
	c.scene.Closest(&w.walker, mask, rays, hits)
	for i := range hits {
		w.single[0] = rays[i]
		for layer := uint32(1); hits[i].Placement != bvh.NoHit && layer <= maxLayers; layer++ {
			opacity := c.surfaces[c.surfaceOf(&hits[i])].opacity
			if opacity >= 1 || stream.Layer(layer).Float(sampleOf(i)) < opacity {
				break
			}
			w.single[0].TMin = hits[i].T
			c.scene.Closest(&w.walker, mask, w.single[:], hits[i:i+1])
		}
	}
}

// grow returns a slice of n values, reusing s where it is long enough. The values are not cleared.
func grow[T any](s []T, n int) []T {
	if cap(s) < n {
		return make([]T, n)
	}
	return s[:n]
}

// filterOffset returns where in the raster a sample falls, in pixels from the pixel's upper left corner.
func filterOffset(f model.Filter, uv [2]float32) (x, y float32) {
	if f == model.BoxFilter {
		return uv[0], uv[1]
	}
	return 0.5 + sample.BlackmanHarrisOffset(uv[0]), 0.5 + sample.BlackmanHarrisOffset(uv[1])
}
