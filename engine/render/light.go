package render

import (
	"math"

	"lampbook/engine/aim"
	"lampbook/engine/kernel/bvh"
	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/lamp"
	"lampbook/engine/kernel/sample"
	"lampbook/engine/model"
)

// lampOf returns the light's shape. The light must have one: not ambient.
func lampOf(l model.Light) lamp.Lamp {
	spec, ok := aim.LampSpec(l)
	if !ok {
		panic("render: ambient light has no shape")
	}
	return lamp.New(spec)
}

// beforeLight is how far short of the light a shadow ray ends, as a share of its length: a thing that touches the light does not
// hide it by a rounding error.
const beforeLight = 1 - 1.0/(1<<14)

// aimShadows fills w.shadows and w.shots with the rays from w.points to light l, and adds the light's ambient share to the sums.
// A point that faces away from a sample of the light needs no ray.
func (c *cast) aimShadows(w *worker, px sample.Pixel, l int) {
	cl := &c.lights[l]
	stream := px.For(cl.purpose, c.settings.Samples*cl.rays)
	w.shadows, w.shots = grow(w.shadows, len(w.points)*cl.rays), grow(w.shots, len(w.points)*cl.rays)
	aimed := 0
	share := 1 / float32(cl.rays)
	var q lamp.Prepared
	delta := cl.lamp.Delta()
	if !delta {
		w.lightUV = grow(w.lightUV, w.batch*cl.rays)
		stream.Points(w.first*uint32(cl.rays), w.lightUV)
	}
	for i := range w.points {
		pt := &w.points[i]
		cl.lamp.Prepare(pt.p, &q)
		if q.Dark() {
			continue
		}
		for j := range cl.rays {
			number := pt.index*uint32(cl.rays) + uint32(j)
			var uv [2]float32
			if !delta {
				uv = w.lightUV[number-w.first*uint32(cl.rays)]
			}
			wi, dist, weight := q.Sample(uv[0], uv[1])
			weight *= share
			if cl.ambient {
				w.sums.ambient[int(pt.local)*len(c.lights)+l] += float64(weight)
			}
			nl := pt.n.Dot(wi)
			if !(nl > 0 && weight > 0) {
				continue
			}
			w.shadows[aimed] = shadowRay{weight: weight, nl: nl, point: int32(i), number: number}
			w.shots[aimed] = geom.Ray{Org: pt.shadow, Dir: wi, TMax: dist * beforeLight}
			aimed++
		}
	}
	w.shadows, w.shots = w.shadows[:aimed], w.shots[:aimed]
}

// occluded tells which of w.shots are stopped on their way to light l.
func (c *cast) occluded(w *worker, px sample.Pixel, l int, blocked []bool) {
	if !c.translucent {
		c.scene.Occluded(&w.walker, bvh.CastsShadow, w.shots, blocked)
		return
	}
	w.probes = grow(w.probes, len(w.shots))
	c.closestOpaque(w, bvh.CastsShadow, w.shots, w.probes, px.For(c.lights[l].purpose, c.settings.Samples*c.lights[l].rays).Layer(purposeOpacity), func(i int) uint32 { return w.shadows[i].number })
	for i := range blocked {
		blocked[i] = w.probes[i].Placement != bvh.NoHit
	}
}

// nearestGlobe returns the light that the ray sees before anything else, or -1. A light's back is not seen unless it emits too.
func (c *cast) nearestGlobe(ray *geom.Ray, h *bvh.Hit) int {
	nearest, found := float32(math.MaxFloat32), -1
	if h.Placement != bvh.NoHit {
		nearest = h.T * (1 + 1.0/(1<<16)) // a light let into a surface is seen, not mixed with it by rounding
	}
	for g := range c.globes {
		if t, ok := c.globes[g].meet(ray); ok && t < nearest {
			nearest, found = t, g
		}
	}
	return found
}

// meet returns where the ray meets the globe's emitting side, in the ray's own measure.
func (g *globe) meet(ray *geom.Ray) (t float32, ok bool) {
	org, dir := ray.Org.Wide(), ray.Dir.Wide()
	toCentre := g.shape.Position.Sub(org)
	if g.shape.Kind == lamp.Sphere {
		along := toCentre.Dot(dir)
		// The distance from the axis, by a difference of vectors: exact also for a small sphere far away.
		miss := toCentre.Sub(dir.Scale(along))
		half := float64(g.shape.Radius*g.shape.Radius) - miss.Dot(miss)
		if half < 0 || along <= 0 {
			return 0, false
		}
		t := along - math.Sqrt(half)
		return float32(t), t > 0
	}
	slope := dir.Dot(g.shape.Axis)
	if slope == 0 || slope > 0 && !g.twoSided {
		return 0, false
	}
	along := toCentre.Dot(g.shape.Axis) / slope
	if !(along > 0) {
		return 0, false
	}
	p := dir.Scale(along).Sub(toCentre)
	x, y := p.Dot(g.shape.U), p.Dot(g.shape.V)
	if g.shape.Kind == lamp.Disk {
		return float32(along), float64(x*x)+float64(y*y) <= float64(g.shape.Radius*g.shape.Radius)
	}
	return float32(along), math.Abs(x) <= g.shape.HalfWidth && math.Abs(y) <= g.shape.HalfHeight
}
