package bvh

import (
	"testing"

	"lampbook/engine/kernel/geom"

	"pgregory.net/rapid"
)

// drawMesh draws a triangle soup of a kind that hurts: on a coarse grid (so that edges, vertices and planes coincide with rays and with
// each other), flat, repeated, tiny, or long and thin; scaled by 0.001 to 1000 and moved.
func drawMesh(t *rapid.T) *refMesh {
	n := rapid.IntRange(1, 60).Draw(t, "triangles")
	grid := rapid.SampledFrom([]int{2, 4, 16, 1 << 20}).Draw(t, "grid")
	flat := rapid.SampledFrom([]int{-1, -1, 0, 1, 2}).Draw(t, "flat")
	scale := rapid.SampledFrom([]float32{1, 0.001, 1000, 1}).Draw(t, "scale")
	shift := rapid.SampledFrom([]float32{0, 0, 1, 100}).Draw(t, "shift")
	stretch := rapid.SampledFrom([]float32{1, 1, 1, 1e-4}).Draw(t, "stretch")
	coordinate := rapid.Custom(func(t *rapid.T) float32 { return float32(rapid.IntRange(-grid, grid).Draw(t, "c")) / float32(grid) })
	m := &refMesh{}
	for range 3 * n {
		p := [3]float32{coordinate.Draw(t, "x"), coordinate.Draw(t, "y") * stretch, coordinate.Draw(t, "z")}
		if flat >= 0 {
			p[flat] = 0.5
		}
		for k := range p {
			p[k] = p[k]*scale + shift*scale
		}
		m.positions = append(m.positions, geom.Vec3{X: p[0], Y: p[1], Z: p[2]})
	}
	pick := rapid.Uint32Range(0, uint32(3*n-1))
	for i := range n {
		f := [3]uint32{uint32(3 * i), uint32(3*i + 1), uint32(3*i + 2)}
		if rapid.IntRange(0, 3).Draw(t, "shared") == 0 {
			f = [3]uint32{pick.Draw(t, "a"), pick.Draw(t, "b"), pick.Draw(t, "c")}
		}
		m.triangles = append(m.triangles, f)
	}
	return m
}

func TestClosestAgainstEveryTriangle(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		m := drawMesh(t)
		s := NewScene([]Placement{{Tree: Build(m.positions, m.triangles, BuildOptions{}), WorldFromObject: geom.Identity(), Mask: SeenByCamera}})
		ps := []refPlacement{{m, geom.Identity(), SeenByCamera}}
		var rays []geom.Ray
		seed := rapid.Uint64().Draw(t, "seed")
		for i := range 200 {
			rays = append(rays, aimAt(m, seed, uint64(i)))
		}
		hits := make([]Hit, len(rays))
		blocked := make([]bool, len(rays))
		var w Walker
		s.Closest(&w, SeenByCamera, rays, hits)
		s.Occluded(&w, SeenByCamera, rays, blocked)
		for i, r := range rays {
			want := refClosest(ps, SeenByCamera, r)
			if hits[i] != want {
				t.Fatalf("ray %d %+v:\n got %+v\nwant %+v", i, r, hits[i], want)
			}
			if blocked[i] != (want.Placement != NoHit) {
				t.Fatalf("ray %d %+v: blocked %v, closest %+v", i, r, blocked[i], want)
			}
		}
	})
}
