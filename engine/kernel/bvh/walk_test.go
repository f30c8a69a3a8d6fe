package bvh

import (
	"testing"

	"lampbook/engine/kernel/geom"

	"pgregory.net/rapid"
)

// walks are the layouts that this machine can walk; every test of a walk runs on all.
func walks() map[string]bool {
	w := map[string]bool{"portable": false}
	if haveWide {
		w["avx2"] = true
	}
	return w
}

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

// drawMap draws a placement's map: none, turned, mirrored, stretched, or flattened.
func drawMap(t *rapid.T) geom.Affine {
	scale := rapid.SampledFrom([]float64{1, -1, 0.001, 1000, 0.5, 3, 1, 0})
	move := rapid.Float64Range(-2, 2)
	switch rapid.IntRange(0, 3).Draw(t, "map") {
	case 0:
		return geom.Identity()
	case 1:
		return geom.Translate(geom.Vec3d{X: move.Draw(t, "dx"), Y: move.Draw(t, "dy"), Z: move.Draw(t, "dz")})
	}
	angle := rapid.SampledFrom([]float64{0, 90, -180, 30, 77.7})
	a := geom.ScaleBy(geom.Vec3d{X: scale.Draw(t, "sx"), Y: scale.Draw(t, "sy"), Z: scale.Draw(t, "sz")})
	a = geom.Turn(geom.Vec3d{X: angle.Draw(t, "rx"), Y: angle.Draw(t, "ry"), Z: angle.Draw(t, "rz")}).Mul(a)
	return geom.Translate(geom.Vec3d{X: move.Draw(t, "dx"), Y: move.Draw(t, "dy"), Z: move.Draw(t, "dz")}).Mul(a)
}

// sceneOf makes a scene and its reference from the same placements, with one tree for each mesh.
func sceneOf(wide bool, ps []refPlacement) *Scene {
	trees := map[*refMesh]*Tree{}
	var out []Placement
	for _, p := range ps {
		if trees[p.mesh] == nil {
			trees[p.mesh] = buildFor(wide, p.mesh, BuildOptions{})
		}
		out = append(out, Placement{trees[p.mesh], p.worldFromObject, p.mask})
	}
	return NewScene(out)
}

// agree casts rays and compares every answer with the reference, to the last bit. It returns the number of hits.
func agree(t interface{ Fatalf(string, ...any) }, name string, s *Scene, ps []refPlacement, mask Mask, rays []geom.Ray, want []Hit) {
	hits := make([]Hit, len(rays))
	blocked := make([]bool, len(rays))
	var w Walker
	s.Closest(&w, mask, rays, hits)
	s.Occluded(&w, mask, rays, blocked)
	for i, r := range rays {
		if hits[i] != want[i] {
			t.Fatalf("%s: ray %d %+v:\n got %+v\nwant %+v", name, i, r, hits[i], want[i])
		}
		if blocked[i] != (want[i].Placement != NoHit) {
			t.Fatalf("%s: ray %d %+v: blocked %v, closest %+v", name, i, r, blocked[i], want[i])
		}
	}
}

func TestOneMeshAgainstEveryTriangle(t *testing.T) {
	hit, cast := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		m := drawMesh(t)
		ps := []refPlacement{{m, geom.Identity(), SeenByCamera}}
		seed := rapid.Uint64().Draw(t, "seed")
		var rays []geom.Ray
		var want []Hit
		for i := range 200 {
			rays = append(rays, aimAt(m, seed, uint64(i)))
			want = append(want, refClosest(ps, SeenByCamera, rays[i]))
			cast++
			if want[i].Placement != NoHit {
				hit++
			}
		}
		for name, wide := range walks() {
			agree(t, name, sceneOf(wide, ps), ps, SeenByCamera, rays, want)
		}
	})
	if hit < cast/10 || hit > cast*9/10 {
		t.Errorf("%d of %d rays hit: the rays do not test much", hit, cast)
	}
}

func TestPlacementsAgainstEveryTriangle(t *testing.T) {
	hit, cast := 0, 0
	rapid.Check(t, func(t *rapid.T) {
		meshes := []*refMesh{drawMesh(t), drawMesh(t)}
		var ps []refPlacement
		for range rapid.IntRange(1, 6).Draw(t, "placements") {
			ps = append(ps, refPlacement{meshes[rapid.IntRange(0, 1).Draw(t, "mesh")], drawMap(t), Mask(rapid.IntRange(0, 3).Draw(t, "mask"))})
		}
		mask := rapid.SampledFrom([]Mask{SeenByCamera, CastsShadow, SeenByCamera | CastsShadow}).Draw(t, "rays")
		seed := rapid.Uint64().Draw(t, "seed")
		var rays []geom.Ray
		var want []Hit
		for i := range 100 {
			p := ps[i%len(ps)]
			r := aimAt(p.mesh, seed, uint64(i))
			r.Org = p.worldFromObject.Point(r.Org.Wide()).Narrow()
			r.Dir = p.worldFromObject.Dir(r.Dir.Wide()).Narrow()
			rays = append(rays, r)
			want = append(want, refClosest(ps, mask, r))
			cast++
			if want[i].Placement != NoHit {
				hit++
			}
		}
		for name, wide := range walks() {
			agree(t, name, sceneOf(wide, ps), ps, mask, rays, want)
		}
	})
	if hit < cast/10 || hit > cast*9/10 {
		t.Errorf("%d of %d rays hit: the rays do not test much", hit, cast)
	}
}
