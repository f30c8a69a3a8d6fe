package render

import (
	"context"
	"fmt"
	"slices"
	"testing"
	"time"

	"lampbook/engine/kernel/bvh"
	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
	"lampbook/engine/kernel/tint"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
)

// sheetPlan is a turned form on a floor under an area light and a point light, in so many materials, at the size of a sheet's tile.
func sheetPlan(s *studio, materials int) []int {
	ground := s.thing(floor, matt(0.4))
	form := model.Mesh{Kind: model.MeshTestForm}
	cam := lens([3]float64{0, 0.25, 0.6}, [3]float64{0, 0.09, 0}, 70)
	lights := s.lights(
		model.Light{Kind: model.LightArea, Shape: model.AreaRectangle, Width: 0.6, Height: 0.6, Intensity: 2500, Position: [3]float64{0.7, 0.9, 0.6}},
		model.Light{Kind: model.LightPoint, Intensity: 100, Position: [3]float64{-1, 1, 0.5}})
	set := model.Settings{Width: 480, Height: 360, Samples: 64, Exposure: -9}
	var frames []int
	base := s.thing(form, gloss)
	for i := range materials {
		thing := base
		paint := gloss
		paint.Shininess = float64(int(4) << (i % 6))
		paint.Diffuse = tint.RGB{R: 0.1 * float32(i/6), G: 0.3, B: 0.2}
		paint.Opacity = 1
		s.plan.Materials = append(s.plan.Materials, paint)
		thing.Materials = []model.MaterialID{model.MaterialID(len(s.plan.Materials) - 1)}
		frames = append(frames, s.frame(cam, set, lights, ground, thing))
	}
	return frames
}

// castTime renders frames as one cast and returns the time that it took, meshes built before.
func castTime(b *testing.B, e *Engine, plan *model.Plan, frames []int) (time.Duration, Stats) {
	b.Helper()
	start := time.Now()
	results, err := e.Render(context.Background(), Cast{Plan: plan, Frames: frames}, Options{Threads: 1})
	if err != nil {
		b.Fatal(err)
	}
	return time.Since(start), results[0].Stats
}

// BenchmarkSheet renders a sheet over materials alone, and one of its tiles, on one thread. "x/tile" is the ratio of the two.
func BenchmarkSheet(b *testing.B) {
	for _, materials := range []int{12, 36} {
		b.Run(fmt.Sprintf("materials=%d", materials), func(b *testing.B) {
			var s studio
			frames := sheetPlan(&s, materials)
			e := s.engine(b)
			if _, _, err := e.build(model.Mesh{Kind: model.MeshTestForm}); err != nil {
				b.Fatal(err)
			}
			var sheet, tile time.Duration
			var rays Stats
			for b.Loop() {
				one, _ := castTime(b, e, &s.plan, frames[:1])
				all, stats := castTime(b, e, &s.plan, frames)
				sheet, tile, rays = sheet+all, tile+one, stats
			}
			b.ReportMetric(sheet.Seconds()/tile.Seconds(), "x/tile")
			b.ReportMetric(float64(b.N)*float64(rays.CameraRays+rays.ShadowRays)/sheet.Seconds()/1e6, "Mrays/s")
			b.ReportMetric(tile.Seconds()/float64(b.N), "s/tile")
		})
	}
}

// tape holds a cast's rays as they were cast, batch by batch.
type tape struct {
	camera, shadow [][]geom.Ray
}

// record casts frame i of a plan pixel by pixel and keeps its rays.
func record(b *testing.B, e *Engine, plan *model.Plan, i int) (*cast, *tape) {
	b.Helper()
	c, err := compile(Cast{Plan: plan, Frames: []int{i}}, func(id model.MeshID) (*mesh.Mesh, *bvh.Tree, error) { return e.build(plan.Meshes[id]) })
	if err != nil {
		b.Fatal(err)
	}
	var rays tape
	var w worker
	var sums pixelSums
	w.sums = &sums
	s := c.settings
	for _, t := range tilesOf(s.Width, s.Height) {
		for y := t.y0; y < t.y1; y++ {
			for x := t.x0; x < t.x1; x++ {
				sums.reset(0)
				px := sample.PixelAt(s.Seed, x, y)
				c.castCamera(&w, px, x, y, 0, s.Samples)
				rays.camera = append(rays.camera, slices.Clone(w.rays))
				for l := range c.lights {
					c.castLight(&w, px, l)
					if len(w.shots) > 0 {
						rays.shadow = append(rays.shadow, slices.Clone(w.shots))
					}
				}
			}
		}
	}
	return c, &rays
}

// BenchmarkFrame renders a small frame on one thread, and then casts the same rays again with nothing else to do. "x/rays" is the ratio of the
// two times: what a frame costs beside its rays.
func BenchmarkFrame(b *testing.B) {
	b.Run("form/160x120x64spp", func(b *testing.B) {
		var s studio
		i := sheetPlan(&s, 1)[0]
		s.plan.Frames[i].Settings.Width, s.plan.Frames[i].Settings.Height = 160, 120
		e := s.engine(b)
		c, rays := record(b, e, &s.plan, i)
		var w bvh.Walker
		hits, blocked := make([]bvh.Hit, 4096), make([]bool, 4096)
		var frame, bare time.Duration
		count := 0
		for b.Loop() {
			took, stats := castTime(b, e, &s.plan, []int{i})
			frame += took
			start := time.Now()
			for _, batch := range rays.camera {
				c.scene.Closest(&w, bvh.SeenByCamera, batch, hits[:len(batch)])
			}
			for _, batch := range rays.shadow {
				c.scene.Occluded(&w, bvh.CastsShadow, batch, blocked[:len(batch)])
			}
			bare += time.Since(start)
			count = int(stats.CameraRays + stats.ShadowRays)
		}
		b.ReportMetric(frame.Seconds()/bare.Seconds(), "x/rays")
		b.ReportMetric(float64(b.N*count)/frame.Seconds()/1e6, "Mrays/s")
		b.ReportMetric(float64(b.N*count)/bare.Seconds()/1e6, "bare-Mrays/s")
	})
}
