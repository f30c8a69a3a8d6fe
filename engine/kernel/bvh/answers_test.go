package bvh

import (
	"math"
	"math/rand/v2"
	"os"
	"os/exec"
	"strings"
	"testing"

	"lampbook/engine/kernel/geom"
)

// one places a mesh's tree in the world as it is.
func one(wide bool, m *refMesh) *Scene {
	return sceneOf(wide, []refPlacement{{m, geom.Identity(), SeenByCamera | CastsShadow}})
}

// castAll casts in batches, as a renderer does.
func castAll(s *Scene, batch int, rays []geom.Ray) []Hit {
	var w Walker
	hits := make([]Hit, len(rays))
	for i := 0; i < len(rays); i += batch {
		j := min(i+batch, len(rays))
		s.Closest(&w, SeenByCamera, rays[i:j], hits[i:j])
	}
	return hits
}

// Every walk must give the same answer to the last bit, whatever the batch: some 700,000 rays of the kinds that a renderer casts. The portable
// walk one ray at a time is the measure; TestOneMeshAgainstEveryTriangle holds that against the definition.
func TestWalksAgree(t *testing.T) {
	for name, m := range map[string]*refMesh{"bowl": bowl(20_000), "shelves": shelves(40_000)} {
		portable := one(false, m)
		box := portable.placed[0].tree.Bounds()
		camera := pixelRays(box, 24, 64)
		first := castAll(portable, 1, camera)
		hit := 0
		for i := range first {
			if first[i].Placement != NoHit {
				hit++
			}
		}
		if hit < len(camera)/4 {
			t.Fatalf("%s: only %d of %d camera rays hit", name, hit, len(camera))
		}
		for kind, rays := range map[string][]geom.Ray{"camera": camera, "shadow": shadowRays(box, camera, first), "stray": strayRays(camera, first)} {
			want := first
			if kind != "camera" {
				want = castAll(portable, 1, rays)
			}
			for walk, wide := range walks() {
				s := one(wide, m)
				for _, batch := range []int{1, 64, 1000} {
					got := castAll(s, batch, rays)
					var w Walker
					blocked := make([]bool, len(rays))
					for i := 0; i < len(rays); i += batch {
						j := min(i+batch, len(rays))
						s.Occluded(&w, CastsShadow, rays[i:j], blocked[i:j])
					}
					for i := range rays {
						if got[i] != want[i] || blocked[i] != (want[i].Placement != NoHit) {
							t.Fatalf("%s, %s, %s in batches of %d: ray %d %+v:\n got %+v, blocked %v\nwant %+v", name, kind, walk, batch, i, rays[i], got[i], blocked[i], want[i])
						}
					}
				}
			}
		}
	}
}

// From a point inside a closed surface every ray hits it, also through edges and corners.
func TestClosedMeshesLetNothingThrough(t *testing.T) {
	g := rand.New(rand.NewPCG(51, 52))
	for _, scale := range []float32{1, 0.001, 1000} {
		for _, far := range []float32{0, 10} { // the mesh stands that many times its size from the origin
			m := bowl(3000)
			at := geom.Vec3{X: far * 0.3 * scale, Y: -far * 0.3 * scale, Z: far * 0.3 * scale}
			for i, p := range m.positions {
				m.positions[i] = p.Scale(scale).Add(at)
			}
			var rays []geom.Ray
			for range 8000 {
				a := g.Float64() * 2 * math.Pi // a point in the clay
				org := geom.Vec3d{X: 0.09 * math.Cos(a), Z: 0.09 * math.Sin(a)}.Narrow().Scale(scale).Add(at)
				f := m.triangles[g.IntN(len(m.triangles))]
				p, q := m.positions[f[0]], m.positions[f[1]]
				r := geom.Ray{Org: org, Dir: p.Sub(org), TMax: float32(math.Inf(1))}
				switch g.IntN(3) {
				case 0:
					r.Dir = p.AddScaled(g.Float32(), q.Sub(p)).Sub(org)
				case 1:
					r.Dir = geom.Vec3{X: float32(g.IntN(3) - 1), Y: float32(g.IntN(3) - 1), Z: 0.5}
				}
				rays = append(rays, r)
			}
			for walk, wide := range walks() {
				for i, h := range castAll(one(wide, m), 64, rays) {
					if h.Placement == NoHit {
						t.Fatalf("%s, scale %v, %v away: ray %+v leaves a closed surface", walk, scale, far, rays[i])
					}
				}
			}
		}
	}
}

func TestStrangeMeshes(t *testing.T) {
	nan, inf := float32(math.NaN()), float32(math.Inf(1))
	a, b, c := geom.Vec3{}, geom.Vec3{X: 1}, geom.Vec3{Y: 1}
	same := &refMesh{positions: []geom.Vec3{a, b, c}}
	for range 300_000 {
		same.triangles = append(same.triangles, [3]uint32{0, 1, 2})
	}
	line := &refMesh{} // triangles that shrink by half each time: a tree as deep as it gets
	for i := range 200 {
		s := float32(math.Ldexp(1, -i/2))
		n := uint32(len(line.positions))
		line.positions = append(line.positions, geom.Vec3{X: s, Z: s}, geom.Vec3{X: 2 * s, Z: s}, geom.Vec3{X: s, Y: s, Z: s})
		line.triangles = append(line.triangles, [3]uint32{n, n + 1, n + 2})
	}
	down := geom.Ray{Org: geom.Vec3{X: 0.25, Y: 0.25, Z: 1}, Dir: geom.Vec3{Z: -1}, TMax: inf}
	for name, tt := range map[string]struct {
		m    *refMesh
		r    geom.Ray
		want Hit
	}{
		"empty":             {&refMesh{}, down, Hit{T: inf, Placement: NoHit}},
		"index too high":    {&refMesh{[]geom.Vec3{a, b, c}, [][3]uint32{{0, 1, 3}, {0, 1, 2}}}, down, Hit{1, 0.25, 0.25, 1, 0}},
		"no area":           {&refMesh{[]geom.Vec3{a, b, c}, [][3]uint32{{0, 1, 1}, {2, 2, 2}}}, down, Hit{T: inf, Placement: NoHit}},
		"not finite":        {&refMesh{[]geom.Vec3{a, {X: nan}, {Y: inf}, b, c}, [][3]uint32{{0, 1, 2}, {0, 3, 2}, {0, 3, 4}}}, down, Hit{1, 0.25, 0.25, 2, 0}},
		"all the same":      {same, down, Hit{1, 0.25, 0.25, 0, 0}},
		"ever smaller":      {line, geom.Ray{Org: geom.Vec3{X: 0.3, Y: 0.01, Z: 0.5}, Dir: geom.Vec3{Z: -1}, TMax: inf}, Hit{T: 0.25, Triangle: 4}},
		"largest floats":    {&refMesh{[]geom.Vec3{{X: -3e38, Y: -3e38}, {X: 3e38, Y: -3e38}, {Y: 3e38}}, [][3]uint32{{0, 1, 2}}}, down, Hit{T: inf, Placement: NoHit}},
		"ray of no length":  {&refMesh{[]geom.Vec3{a, b, c}, [][3]uint32{{0, 1, 2}}}, geom.Ray{Org: down.Org, TMax: inf}, Hit{T: inf, Placement: NoHit}},
		"ray with no range": {&refMesh{[]geom.Vec3{a, b, c}, [][3]uint32{{0, 1, 2}}}, geom.Ray{Org: down.Org, Dir: down.Dir, TMin: 2, TMax: 1}, Hit{T: inf, Placement: NoHit}},
	} {
		for walk, wide := range walks() {
			var w Walker
			rays := make([]geom.Ray, 9)
			for i := range rays {
				rays[i] = tt.r
			}
			hits, blocked := make([]Hit, 9), make([]bool, 9)
			s := one(wide, tt.m)
			s.Closest(&w, SeenByCamera, rays, hits)
			s.Occluded(&w, CastsShadow, rays, blocked)
			for i, got := range hits {
				if name == "ever smaller" { // its place in the triangle is not the point
					got.U, got.V = 0, 0
				}
				if name == "largest floats" { // beyond what float32 can multiply: it must only end
					continue
				}
				if got != tt.want || blocked[i] != (tt.want.Placement != NoHit) {
					t.Errorf("%s, %s: got %+v, blocked %v, want %+v", name, walk, got, blocked[i], tt.want)
				}
			}
		}
	}
}

func TestTiesAmongPlacements(t *testing.T) {
	m := &refMesh{[]geom.Vec3{{}, {X: 1}, {Y: 1}}, [][3]uint32{{0, 1, 2}}}
	r := geom.Ray{Org: geom.Vec3{X: 0.25, Y: 0.25, Z: 1}, Dir: geom.Vec3{Z: -1}, TMax: 5}
	for walk, wide := range walks() {
		// Placement 0 is behind, 1 does not see the ray, 2 and 3 are the same.
		s := sceneOf(wide, []refPlacement{
			{m, geom.Translate(geom.Vec3d{Z: -1}), SeenByCamera},
			{m, geom.Identity(), CastsShadow},
			{m, geom.Identity(), SeenByCamera},
			{m, geom.Translate(geom.Vec3d{}), SeenByCamera},
		})
		if h := castAll(s, 1, []geom.Ray{r})[0]; h.Placement != 2 || h.T != 1 {
			t.Errorf("%s: got %+v, want placement 2 at 1", walk, h)
		}
	}
}

// Many placements, cast at in bundles and one by one, against every triangle of every placement.
func TestManyPlacements(t *testing.T) {
	g := rand.New(rand.NewPCG(61, 62))
	m := bowl(40)
	var ps []refPlacement
	box := geom.EmptyBox()
	for range 60 {
		a := geom.Turn(geom.Vec3d{X: 360 * g.Float64(), Y: 360 * g.Float64()}).Mul(geom.ScaleBy(geom.Vec3d{X: 1 + g.Float64(), Y: 3 * g.Float64(), Z: -1}))
		a = geom.Translate(geom.Vec3d{X: 2 * g.Float64(), Y: 2 * g.Float64(), Z: 2 * g.Float64()}).Mul(a)
		ps = append(ps, refPlacement{m, a, Mask(1 + g.IntN(3))})
		at := a.T.Narrow()
		box = box.Extend(at)
	}
	camera := pixelRays(box, 6, 16)
	var first, shade []Hit
	for _, r := range camera {
		first = append(first, refClosest(ps, SeenByCamera, r))
	}
	shadow := shadowRays(box, camera, first)
	for _, r := range shadow {
		shade = append(shade, refClosest(ps, CastsShadow, r))
	}
	for walk, wide := range walks() {
		s := sceneOf(wide, ps)
		for _, batch := range []int{1, 16} {
			for i := 0; i < len(camera); i += batch {
				j := i + batch
				agree(t, walk, s, ps, SeenByCamera, camera[i:j], first[i:j])
				agree(t, walk, s, ps, CastsShadow, shadow[i:j], shade[i:j])
			}
		}
	}
	if n := len(sceneOf(false, ps).overview.nodes); n < 2 {
		t.Errorf("%d nodes over 60 placements: the level above is not used", n)
	}
}

// The switch for tests and the build tag must do what they say, or the walks are compared with themselves.
func TestWhichWalkRuns(t *testing.T) {
	if os.Getenv("LAMPBOOK_WALK") == "portable" && haveWide {
		t.Error("LAMPBOOK_WALK=portable, but the vector walk is on")
	}
	for walk, wide := range walks() {
		s := one(wide, bowl(2000))
		tree := s.placed[0].tree
		if isWide := len(tree.wide.nodes) > 0; isWide != wide || isWide == (len(tree.pairs) > 0) {
			t.Errorf("%s: %d wide nodes and %d pairs", walk, len(tree.wide.nodes), len(tree.pairs))
		}
		var w Walker
		hits := make([]Hit, 64)
		s.Closest(&w, SeenByCamera, pixelRays(tree.Bounds(), 1, 64), hits)
		if wrote := w.wrote(); wrote != wide {
			t.Errorf("%s: assembly ran: %v", walk, wrote)
		}
	}
	if !haveWide || testing.Short() {
		return
	}
	cmd := exec.Command(os.Args[0], "-test.run=^TestWhichWalkRuns$", "-test.v")
	cmd.Env = append(os.Environ(), "LAMPBOOK_WALK=portable")
	if out, err := cmd.CombinedOutput(); err != nil || !strings.Contains(string(out), "PASS: TestWhichWalkRuns") {
		t.Errorf("with LAMPBOOK_WALK=portable: %v\n%s", err, out)
	}
}

// The tree must not depend on how its parts were scheduled.
func TestBuildIsTheSameOnManyThreads(t *testing.T) {
	m := shelves(200_000)
	backwards := func(n int, do func(i int)) {
		for i := n - 1; i >= 0; i-- {
			do(i)
		}
	}
	for walk, wide := range walks() {
		a, b := buildFor(wide, m, BuildOptions{}), buildFor(wide, m, BuildOptions{Parallel: backwards})
		same := len(a.pairs) == len(b.pairs) && len(a.tris) == len(b.tris) && len(a.wide.nodes) == len(b.wide.nodes) && len(a.wide.blocks) == len(b.wide.blocks)
		for i := range a.wide.nodes {
			same = same && a.wide.nodes[i] == b.wide.nodes[i]
		}
		for i := range a.wide.blocks {
			same = same && a.wide.blocks[i].index == b.wide.blocks[i].index
		}
		for i := range a.pairs {
			same = same && sameBits(&a.pairs[i], &b.pairs[i])
		}
		if !same {
			t.Errorf("%s: the tree depends on the order of its parts", walk)
		}
		if perTriangle := float64(a.Bytes()) / float64(len(m.triangles)); wide && perTriangle > 72 {
			t.Errorf("%s: %.1f bytes a triangle, more than 72", walk, perTriangle)
		}
	}
}

// sameBits compares pairs with their children, whose bits may be those of NaN.
func sameBits(a, b *pair) bool {
	for r := range a {
		for i := range a[r] {
			if math.Float32bits(a[r][i]) != math.Float32bits(b[r][i]) {
				return false
			}
		}
	}
	return true
}
