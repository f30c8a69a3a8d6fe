package main

import (
	"io"
	"os"
	"path/filepath"
	"runtime"
	"runtime/metrics"
	"testing"
	"time"
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
