//go:build linux

package bvh

import (
	"encoding/binary"
	"fmt"
	"math"
	"os"
	"runtime"
	"slices"
	"strconv"
	"sync"
	"syscall"
	"testing"
	"time"
	"unsafe"

	"lampbook/engine/kernel/geom"
)

// BenchmarkRayFiles casts the rays of a file into the mesh of a file and prints one line per walk, for comparison with
// other programs that read the same files. Layouts, little endian:
//
//	mesh: u32 corners, u32 triangles, f32 xyz of each corner, u32 indices of each triangle
//	rays: u32 count, f32 org[3], dir[3], tmin, tmax of each
//
// Rates are millions of rays per second of wall time and of CPU time of all threads, the best of five passes.
func BenchmarkRayFiles(b *testing.B) {
	meshFile, rayFile := os.Getenv("LAMPBOOK_MESH"), os.Getenv("LAMPBOOK_RAYS")
	if meshFile == "" || rayFile == "" {
		b.Skip("LAMPBOOK_MESH and LAMPBOOK_RAYS do not name a mesh and a ray file")
	}
	mode, threads := "closest", 1
	if s := os.Getenv("LAMPBOOK_MODE"); s != "" {
		mode = s
	}
	if s := os.Getenv("LAMPBOOK_THREADS"); s != "" {
		n, err := strconv.Atoi(s)
		if err != nil || n < 1 || n > 1024 {
			b.Fatalf("LAMPBOOK_THREADS: must be a number from 1 to 1024, got %q", s)
		}
		threads = n
	}
	m, err := readMesh(meshFile)
	if err != nil {
		b.Fatal(err)
	}
	rays, err := readRays(rayFile)
	if err != nil {
		b.Fatal(err)
	}
	for range b.N {
		// The vector walk comes first: memory that another tree has used before keeps its small pages.
		for _, wide := range []bool{true, false} {
			if wide && !haveWide {
				continue
			}
			kernel := "portable"
			if wide {
				kernel = "avx2"
			}
			start, before := time.Now(), processSeconds()
			tree := buildFor(wide, m, BuildOptions{Parallel: onThreads(threads)})
			wall, cpu := time.Since(start), processSeconds()-before
			fmt.Printf("build=%s threads=%d seconds=%.4f cpu_seconds=%.4f bytes_per_triangle=%.1f\n", kernel, threads, wall.Seconds(), cpu, float64(tree.Bytes())/float64(len(m.triangles)))
			s := NewScene([]Placement{{Tree: tree, WorldFromObject: geom.Identity(), Mask: SeenByCamera | CastsShadow}})
			if wide {
				useBundles = false
			}
			castFile(s, kernel, mode, threads, rays)
			if wide {
				useBundles = true
				castFile(s, "bundle", mode, threads, rays)
			}
		}
	}
}

// fileBatch is how many rays one call gets, as many as a pixel has samples.
const fileBatch = 64

func castFile(s *Scene, kernel, mode string, threads int, rays []geom.Ray) {
	hits, blocked := make([]Hit, len(rays)), make([]bool, len(rays))
	var wall, cpu []float64
	for pass := range 6 {
		used := make([]float64, threads)
		start := time.Now()
		var wg sync.WaitGroup
		for k := range threads {
			wg.Go(func() {
				runtime.LockOSThread()
				defer runtime.UnlockOSThread()
				before := threadSeconds()
				w := new(Walker)
				blocks := (len(rays) + fileBatch - 1) / fileBatch
				lo, hi := blocks*k/threads*fileBatch, min(blocks*(k+1)/threads*fileBatch, len(rays))
				for i := lo; i < hi; i += fileBatch {
					j := min(i+fileBatch, hi)
					if mode == "any" {
						s.Occluded(w, CastsShadow, rays[i:j], blocked[i:j])
					} else {
						s.Closest(w, SeenByCamera, rays[i:j], hits[i:j])
					}
				}
				used[k] = threadSeconds() - before
			})
		}
		wg.Wait()
		if pass > 0 { // the first one warms up
			wall = append(wall, time.Since(start).Seconds())
			sum := 0.0
			for _, u := range used {
				sum += u
			}
			cpu = append(cpu, sum)
		}
	}
	count, sum := 0, 0.0
	for i := range rays {
		if mode == "any" && blocked[i] {
			count++
		} else if mode != "any" && hits[i].Placement != NoHit {
			count++
			sum += float64(hits[i].T)
		}
	}
	n := float64(len(rays)) * 1e-6
	fmt.Printf("kernel=%s mode=%s threads=%d hits=%d sumt=%.9g best=%.3f cpu_best=%.3f\n", kernel, mode, threads, count, sum, n/slices.Min(wall), n/slices.Min(cpu))
}

// processSeconds is the CPU time of the whole process.
func processSeconds() float64 {
	var u syscall.Rusage
	if syscall.Getrusage(syscall.RUSAGE_SELF, &u) != nil {
		return math.NaN()
	}
	return float64(u.Utime.Nano()+u.Stime.Nano()) * 1e-9
}

// threadSeconds is the CPU time of the calling thread.
func threadSeconds() float64 {
	const clockThreadCPU = 3
	var ts syscall.Timespec
	syscall.RawSyscall(syscall.SYS_CLOCK_GETTIME, clockThreadCPU, uintptr(unsafe.Pointer(&ts)), 0)
	return float64(ts.Sec) + 1e-9*float64(ts.Nsec)
}

func readMesh(path string) (*refMesh, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	if len(data) < 8 {
		return nil, fmt.Errorf("%s: shorter than its header", path)
	}
	corners, triangles := int(binary.LittleEndian.Uint32(data)), int(binary.LittleEndian.Uint32(data[4:]))
	if len(data) != 8+12*corners+12*triangles {
		return nil, fmt.Errorf("%s: %d corners and %d triangles do not make %d bytes", path, corners, triangles, len(data))
	}
	word := func(i int) uint32 { return binary.LittleEndian.Uint32(data[8+4*i:]) }
	real := func(i int) float32 { return math.Float32frombits(word(i)) }
	m := &refMesh{positions: make([]geom.Vec3, corners), triangles: make([][3]uint32, triangles)}
	for i := range corners {
		m.positions[i] = geom.Vec3{X: real(3 * i), Y: real(3*i + 1), Z: real(3*i + 2)}
	}
	for i := range triangles {
		m.triangles[i] = [3]uint32{word(3 * (corners + i)), word(3*(corners+i) + 1), word(3*(corners+i) + 2)}
	}
	return m, nil
}

func readRays(path string) ([]geom.Ray, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, err
	}
	if len(data) < 4 || len(data) != 4+32*int(binary.LittleEndian.Uint32(data)) {
		return nil, fmt.Errorf("%s: its length is not that of its count of rays", path)
	}
	rays := make([]geom.Ray, (len(data)-4)/32)
	for i := range rays {
		at := func(k int) float32 { return math.Float32frombits(binary.LittleEndian.Uint32(data[4+32*i+4*k:])) }
		rays[i] = geom.Ray{Org: geom.Vec3{X: at(0), Y: at(1), Z: at(2)}, Dir: geom.Vec3{X: at(3), Y: at(4), Z: at(5)}, TMin: at(6), TMax: at(7)}
	}
	return rays, nil
}
