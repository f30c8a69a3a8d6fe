package run

import (
	"testing"
	"time"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/mesh"
	"lampbook/engine/model"
	"lampbook/engine/render"
)

// BenchmarkCasts divides a plan of a hundred thousand frames, a hundred to a cast.
func BenchmarkCasts(b *testing.B) {
	cameras := make([]int, 100_000)
	for i := range cameras {
		cameras[i] = i % 1000
	}
	p := planOf(cameras...)
	b.Run("frames=100k", func(b *testing.B) {
		for b.Loop() {
			if n := len(Casts(p, Options{})); n != 1000 {
				b.Fatalf("%d casts, want 1000", n)
			}
		}
		b.ReportMetric(float64(b.N)*float64(len(cameras))/b.Elapsed().Seconds(), "frames/s")
	})
}

// turntable is a plan of n small pictures of one ball of a quarter of a million triangles, a further turn of it in each.
func turntable(n int) *model.Plan {
	p := &model.Plan{
		Meshes:    []model.Mesh{{Kind: model.MeshSphere, Size: [3]float64{1}, Segments: 512}},
		Materials: []model.Material{{Diffuse: tint.Grey(0.5), Specular: tint.Grey(0.1), Shininess: 50, Opacity: 1}},
		Lights: []model.Light{{
			Name: "key", Kind: model.LightPoint, Color: tint.Grey(1), Intensity: 40, Position: [3]float64{2, 3, 4},
			Components: model.Components{Diffuse: tint.Grey(1), Specular: tint.Grey(1)},
		}},
	}
	for i := range n {
		p.Frames = append(p.Frames, model.Frame{
			Camera:   model.Camera{Position: [3]float64{0, 1, 6}, Up: [3]float64{0, 1, 0}, FocalMM: 60, SensorMM: 36},
			Lights:   []model.LightID{0},
			Things:   []model.Placement{{Materials: []model.MaterialID{0}, Scale: [3]float64{1, 1, 1}, Turn: [3]float64{0, 360 * float64(i) / float64(n), 0}}},
			Settings: model.Settings{Width: 96, Height: 72, Samples: 16, LightSamples: 1, Formats: []model.Format{model.FormatPNG}},
		})
	}
	return p
}

// BenchmarkTurntable renders a turn of 36 views and one view alone, each with an engine that has built nothing. "x/first" is what the
// turn costs in times of its first view; "x/view" the same without the making of the mesh and its hierarchy on either side, and so 36 where
// they are made once.
func BenchmarkTurntable(b *testing.B) {
	const views = 36
	b.Run("frames=36", func(b *testing.B) {
		render1 := func(eng *render.Engine, p *model.Plan) time.Duration {
			start := time.Now()
			sum, err := Run(b.Context(), eng, p, Options{}, func(Finished) error { return nil })
			if err != nil || sum.Done != len(p.Frames) {
				b.Fatalf("summary %+v, error %v", sum, err)
			}
			return time.Since(start)
		}
		var first, turn, again float64
		for b.Loop() {
			first += render1(render.NewEngine(mesh.NewLibrary(nil)), turntable(1)).Seconds()
			eng, plan := render.NewEngine(mesh.NewLibrary(nil)), turntable(views)
			turn += render1(eng, plan).Seconds()
			for i := range views { // one by one, under the same load of the machine
				one := *plan
				one.Frames = plan.Frames[i : i+1]
				again += render1(eng, &one).Seconds()
			}
		}
		view := again / views
		build := first - view
		b.ReportMetric(turn/first, "x/first")
		b.ReportMetric((turn-build)/view, "x/view")
		b.ReportMetric(build*1e3/float64(b.N), "build-ms")
		b.ReportMetric(view*1e3/float64(b.N), "view-ms")
	})
}
