package bvh

import (
	"fmt"
	"sync"
	"testing"

	"lampbook/engine/kernel/geom"
)

// benchMeshes are generated, so that the benchmarks run anywhere.
var benchMeshes = []struct {
	name      string
	triangles int
	make      func(triangles int) *refMesh
}{
	{"bowl/tris=4k", 4_000, bowl},
	{"bowl/tris=1M", 1_000_000, bowl},
	{"shelves/tris=200k", 200_000, shelves},
}

// benchRays casts camera rays at a mesh, 64 for each pixel, and the rays that follow from them.
func benchRays(m *refMesh) (camera, shadow, stray []geom.Ray) {
	s := one(false, m)
	box := s.placed[0].tree.Bounds()
	camera = pixelRays(box, 48, 64)
	hits := castAll(s, 64, camera)
	return camera, shadowRays(box, camera, hits), strayRays(camera, hits)
}

// BenchmarkClosestHit casts camera rays and stray rays in batches of 64, as a renderer does with 64 samples a pixel.
func BenchmarkClosestHit(b *testing.B) {
	for _, mesh := range benchMeshes {
		m := mesh.make(mesh.triangles)
		camera, _, stray := benchRays(m)
		for walk, wide := range walks() {
			s := one(wide, m)
			for kind, rays := range map[string][]geom.Ray{"camera": camera, "stray": stray} {
				b.Run(fmt.Sprintf("%s/%s/%s", mesh.name, kind, walk), func(b *testing.B) {
					hits := make([]Hit, 64)
					var w Walker
					for i := range b.N {
						at := i * 64 % len(rays)
						s.Closest(&w, SeenByCamera, rays[at:at+64], hits)
					}
					b.ReportMetric(64*float64(b.N)/b.Elapsed().Seconds()*1e-6, "Mrays/s")
				})
			}
		}
	}
}

// BenchmarkOccluded casts the shadow rays of one pixel to one light together.
func BenchmarkOccluded(b *testing.B) {
	for _, mesh := range benchMeshes {
		m := mesh.make(mesh.triangles)
		_, shadow, _ := benchRays(m)
		for walk, wide := range walks() {
			s := one(wide, m)
			b.Run(fmt.Sprintf("%s/shadow/%s", mesh.name, walk), func(b *testing.B) {
				blocked := make([]bool, 64)
				var w Walker
				for i := range b.N {
					at := i * 64 % len(shadow)
					s.Occluded(&w, CastsShadow, shadow[at:at+64], blocked)
				}
				b.ReportMetric(64*float64(b.N)/b.Elapsed().Seconds()*1e-6, "Mrays/s")
			})
		}
	}
}

// BenchmarkBuild builds on one thread and on two.
func BenchmarkBuild(b *testing.B) {
	for _, mesh := range benchMeshes {
		m := mesh.make(mesh.triangles)
		for walk, wide := range walks() {
			for _, threads := range []int{1, 2} {
				b.Run(fmt.Sprintf("%s/%s/threads=%d", mesh.name, walk, threads), func(b *testing.B) {
					var tree *Tree
					for range b.N {
						tree = buildFor(wide, m, BuildOptions{Parallel: onThreads(threads)})
					}
					b.ReportMetric(float64(len(m.triangles))*float64(b.N)/b.Elapsed().Seconds()*1e-6, "Mtris/s")
					b.ReportMetric(float64(tree.Bytes())/float64(len(m.triangles)), "B/tri")
				})
			}
		}
	}
}

// buildFor builds a tree for the vector walk or for the portable one.
func buildFor(wide bool, m *refMesh, o BuildOptions) *Tree {
	defer func(was bool) { useWide = was }(useWide)
	useWide = wide
	return Build(m.positions, m.triangles, o)
}

// onThreads is an executor for Build.
func onThreads(threads int) func(n int, do func(i int)) {
	return func(n int, do func(i int)) {
		next := make(chan int, n)
		for i := range n {
			next <- i
		}
		close(next)
		var wg sync.WaitGroup
		for range threads {
			wg.Go(func() {
				for i := range next {
					do(i)
				}
			})
		}
		wg.Wait()
	}
}
