package render

import (
	"context"
	"math"
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

// sheetPlan is a turned form on a floor under an area light and a point light, at half the size of a usual tile; vary changes what
// one of its frames differs in.
func sheetPlan(s *studio, frames int, vary func(i int, paint *model.Material, lights []model.Light, set *model.Settings)) []int {
	ground := s.thing(floor, matt(0.4))
	base := s.thing(model.Mesh{Kind: model.MeshTestForm}, gloss)
	cam := lens([3]float64{0, 0.25, 0.6}, [3]float64{0, 0.09, 0}, 70)
	var list []int
	for i := range frames {
		lights := []model.Light{
			{Name: "key", Kind: model.LightArea, Shape: model.AreaRectangle, Width: 0.6, Height: 0.6, Intensity: 2500, Position: [3]float64{0.7, 0.9, 0.6}},
			{Name: "lamp", Kind: model.LightPoint, Intensity: 100, Position: [3]float64{-1, 1, 0.5}},
		}
		set := model.Settings{Width: 240, Height: 180, Samples: 64, Exposure: -9}
		paint := gloss
		paint.Opacity = 1
		vary(i, &paint, lights, &set)
		s.plan.Materials = append(s.plan.Materials, paint)
		thing := base
		thing.Materials = []model.MaterialID{model.MaterialID(len(s.plan.Materials) - 1)}
		list = append(list, s.frame(cam, set, s.lights(lights...), ground, thing))
	}
	return list
}

// What the frames of a sheet may differ in.
var (
	byMaterial = func(i int, paint *model.Material, _ []model.Light, _ *model.Settings) {
		paint.Shininess = float64(int(4) << (i % 6))
		paint.Diffuse = tint.RGB{R: 0.1 * float32(i/6), G: 0.3, B: 0.2}
	}
	byLight = func(i int, _ *model.Material, lights []model.Light, set *model.Settings) {
		lights[0].Color = tint.RGB{R: 1, G: 0.5 + 0.1*float32(i%6), B: 0.7}
		set.Exposure += 0.25 * float64(i/6)
	}
	byPlace = func(i int, _ *model.Material, lights []model.Light, _ *model.Settings) {
		sin, cos := math.Sincos(2 * math.Pi * float64(i) / 12)
		lights[0].Position = [3]float64{0.9 * sin, 0.9, 0.9 * cos}
		lights[1].Position = [3]float64{-cos, 1, sin}
	}
)

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

// BenchmarkSheet renders a sheet as one cast, and one of its tiles, on one thread. "x/tile" is the ratio of the two.
func BenchmarkSheet(b *testing.B) {
	for _, sheet := range []struct {
		name   string
		frames int
		vary   func(int, *model.Material, []model.Light, *model.Settings)
	}{
		{"materials=12", 12, byMaterial}, {"materials=36", 36, byMaterial}, {"colours=36", 36, byLight}, {"places=12", 12, byPlace},
	} {
		b.Run(sheet.name, func(b *testing.B) {
			var s studio
			frames := sheetPlan(&s, sheet.frames, sheet.vary)
			e := s.engine(b)
			for id := range s.plan.Meshes {
				if _, _, err := e.meshes.get(&s.plan, model.MeshID(id), 1); err != nil {
					b.Fatal(err)
				}
			}
			var whole, tile time.Duration
			var rays Stats
			for b.Loop() {
				one, _ := castTime(b, e, &s.plan, frames[:1])
				all, stats := castTime(b, e, &s.plan, frames)
				whole, tile, rays = whole+all, tile+one, stats
			}
			b.ReportMetric(whole.Seconds()/tile.Seconds(), "x/tile")
			b.ReportMetric(float64(b.N)*float64(rays.CameraRays+rays.ShadowRays)/whole.Seconds()/1e6, "Mrays/s")
			b.ReportMetric(tile.Seconds()/float64(b.N), "s/tile")
		})
	}
}

// BenchmarkThreads renders one tile on one thread and on two. "x/thread" is how many times faster two are.
func BenchmarkThreads(b *testing.B) {
	var s studio
	frames := sheetPlan(&s, 1, byMaterial)
	e := s.engine(b)
	var took [2]time.Duration
	for b.Loop() {
		for n := range took {
			start := time.Now()
			if _, err := e.Render(context.Background(), Cast{Plan: &s.plan, Frames: frames}, Options{Threads: n + 1}); err != nil {
				b.Fatal(err)
			}
			took[n] += time.Since(start)
		}
	}
	b.ReportMetric(took[0].Seconds()/took[1].Seconds(), "x/thread")
}

// tape holds a cast's rays as they were cast, batch by batch.
type tape struct {
	camera, shadow [][]geom.Ray
}

// record casts frame i of a plan pixel by pixel and keeps its rays.
func record(b *testing.B, e *Engine, plan *model.Plan, i int) (*cast, *tape) {
	b.Helper()
	c, err := compile(Cast{Plan: plan, Frames: []int{i}}, func(id model.MeshID) (*mesh.Mesh, *bvh.Tree, error) { return e.meshes.get(plan, id, 1) })
	if err != nil {
		b.Fatal(err)
	}
	var rays tape
	w := worker{ctx: context.Background()}
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
		i := sheetPlan(&s, 1, byMaterial)[0]
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
