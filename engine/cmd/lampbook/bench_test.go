package main

import (
	"fmt"
	"io"
	"math"
	"os"
	"path/filepath"
	"runtime"
	"runtime/metrics"
	"testing"
	"time"

	"lampbook/engine/kernel/tint"
	"lampbook/engine/model"
	"lampbook/engine/render"
	"lampbook/lua/bind"
	"lampbook/lua/host"
)

// manyFrames is a scene of a hundred thousand frames: a hundred views of a ball in a thousand glosses, on sheets of a view each.
const manyFrames = `
local ball = mesh.sphere{ radius = 0.1 }
local lights = rig{ light.point{ name = "key", position = {1, 2, 1}, intensity = 10 }, light.ambient{ name = "room" } }
settings{ size = {64, 48}, samples = 16, exposure = 0 }
for step in sweep{ {"view", steps(1, 100, 100)}, {"gloss", steps(1, 1000, 1000)} } do
  local glaze = material.blinn_phong{ diffuse = color.grey(0.5), specular = color.grey(0.1), shininess = step.gloss }
  frame{ tags = step, things = { place{ mesh = ball, material = glaze } }, lights = lights, camera = camera{ position = {0, step.view / 100, 2} } }
end
sheet{ title = "Glosses", pages = "view", columns = "gloss" }
`

// BenchmarkPlan evaluates a scene of a hundred thousand frames, divides it into casts, estimates and lists it. "cpu-s" is the processor time,
// which other work on the machine does not change; "peak-MiB" the most that live and not yet collected values took.
func BenchmarkPlan(b *testing.B) {
	b.Run("frames=100k", func(b *testing.B) {
		scene := filepath.Join(b.TempDir(), "many.lua")
		if err := os.WriteFile(scene, []byte(manyFrames), 0o666); err != nil {
			b.Fatal(err)
		}
		peak := uint64(0)
		cpu := processorSeconds()
		for b.Loop() {
			runtime.GC()
			stop, stopped := make(chan struct{}), make(chan struct{})
			go func() {
				defer close(stopped)
				heap := []metrics.Sample{{Name: "/memory/classes/heap/objects:bytes"}}
				for {
					metrics.Read(heap)
					peak = max(peak, heap[0].Value.Uint64())
					select {
					case <-stop:
						return
					case <-time.After(5 * time.Millisecond):
					}
				}
			}()
			if status := execute([]string{"plan", scene}, io.Discard, os.Stderr); status != statusDone {
				b.Fatalf("exit status %d", status)
			}
			close(stop)
			<-stopped
		}
		b.ReportMetric((processorSeconds()-cpu)/float64(b.N), "cpu-s/op")
		b.ReportMetric(b.Elapsed().Seconds()/float64(b.N), "s/op")
		b.ReportMetric(float64(peak)/(1<<20), "peak-MiB")
	})
}

// BenchmarkNoise renders lights.lua small, with as many samples for every pixel and with as many as its noise asks for, to the same root mean
// square error in L* against many samples, and reports the ratio of all rays, camera and shadow: "x/rays". "L*" is the error,
// "target" the noise that gives it, "samples" what a pixel takes in the mean.
func BenchmarkNoise(b *testing.B) {
	n := newNoiseTrial(b)
	for _, uniform := range []int{64, 256} {
		b.Run(fmt.Sprintf("lights/samples=%d", uniform), func(b *testing.B) {
			for b.Loop() {
				want, even := n.render(uniform, 0)
				// The error rises with the target; bisection on its logarithm, to a few hundredths.
				low, high := want, want*6
				var rays, samples float64
				for range 5 {
					target := math.Sqrt(low * high)
					found, took := n.render(4*uniform, target)
					if found > want {
						high = target
					} else {
						low, rays, samples = target, took.rays, took.samples
					}
				}
				b.ReportMetric(want, "L*")
				b.ReportMetric(low, "target")
				b.ReportMetric(samples, "samples")
				b.ReportMetric(rays/even.rays, "x/rays")
			}
		})
	}
}

// noiseTrial is lights.lua with its pictures as many samples show them.
type noiseTrial struct {
	b      testing.TB
	engine *render.Engine
	plan   *model.Plan
	truth  [][]float64 // L* by frame and pixel
}

// effort is what pictures took.
type effort struct{ rays, samples float64 }

func newNoiseTrial(b *testing.B) *noiseTrial {
	plan, library, err := host.Evaluate(b.Context(), "../../../scenes/lights.lua", host.Options{Forced: bind.Forced{Width: 54, Height: 48}})
	if err != nil {
		b.Fatal(err)
	}
	n := &noiseTrial{b: b, engine: render.NewEngine(library), plan: plan}
	for i := range plan.Frames {
		plan.Frames[i].Settings.Seed = 1 // samples of its own
		n.truth = append(n.truth, n.lightness(n.frame(i, 1024, 0)))
		plan.Frames[i].Settings.Seed = 0
	}
	return n
}

// frame renders one frame.
func (n *noiseTrial) frame(i, samples int, noise float64) render.Result {
	s := &n.plan.Frames[i].Settings
	s.Samples, s.Noise = samples, noise
	results, err := n.engine.Render(n.b.Context(), render.Cast{Plan: n.plan, Frames: []int{i}}, render.Options{})
	if err != nil || results[0].Err != nil {
		n.b.Fatal(err, results)
	}
	return results[0]
}

// lightness is CIE 1976 L* (ISO 11664-4) of a picture over its background, light beyond white as white.
func (n *noiseTrial) lightness(r render.Result) []float64 {
	under := n.plan.Frames[r.Frame].Settings.Background.Color.Luminance()
	plane := r.Linear.Plane
	out := make([]float64, len(plane("A")))
	for i := range out {
		c := tint.RGB{R: plane("R")[i], G: plane("G")[i], B: plane("B")[i]}
		out[i] = tint.ToLab(tint.Grey(min(c.Luminance()+(1-plane("A")[i])*under, 1))).L
	}
	return out
}

// render renders all frames and returns their error and what they took.
func (n *noiseTrial) render(samples int, noise float64) (rms float64, e effort) {
	sum, pixels := 0.0, 0.0
	for i := range n.plan.Frames {
		r := n.frame(i, samples, noise)
		for k, l := range n.lightness(r) {
			d := l - n.truth[i][k]
			sum, pixels = sum+d*d, pixels+1
		}
		e.rays += float64(r.Stats.CameraRays + r.Stats.ShadowRays)
		e.samples += r.Samples / float64(len(n.plan.Frames))
	}
	return math.Sqrt(sum / pixels), e
}
