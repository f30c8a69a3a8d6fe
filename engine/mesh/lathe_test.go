package mesh

import (
	"math"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/model"
)

// bowl is the profile of the scene language's example: up the outside, back down the inside.
var bowl = [][2]float64{{0, 0}, {0.06, 0}, {0.13, 0.06}, {0.15, 0.11}, {0.145, 0.11}, {0, 0.02}}

// pappus gives volume and area of a profile turned in n segments, from the profile alone: each piece sweeps a frustum of
// a pyramid over the regular n-gon. Source: sums of frusta; for n to infinity, Pappus.
func pappus(profile [][2]float64, n int) (volume, area float64) {
	share := math.Pi / float64(n)
	polygon := float64(n) * math.Sin(2*share) / 2     // area over radius²
	apothem, side := math.Cos(share), math.Sin(share) // over radius
	for i := 1; i < len(profile); i++ {
		a, b, h := profile[i-1][0], profile[i][0], profile[i][1]-profile[i-1][1]
		volume += polygon * h * (a*a + a*b + b*b) / 3
		area += float64(n) * (a + b) * side * math.Hypot(h, (a-b)*apothem)
	}
	return volume, area
}

func TestLatheBowl(t *testing.T) {
	m := built(t, model.Mesh{Kind: model.MeshLathe, Profile: bowl, Crease: 30})
	checkClosed(t, m, 2)
	volume, area := pappus(bowl, DefaultSegments)
	if v, a := volumeOf(m), areaOf(m); !near(v, volume, 1e-5) || !near(a, area, 1e-5) {
		t.Errorf("volume %v, area %v, want %v, %v (sums of frusta)", v, a, volume, area)
	}
	// The floor inside faces up and the foot down.
	for i, p := range m.Positions {
		n := m.Normals[i]
		if p.Y == 0 && p.X == 0 && p.Z == 0 && n.Y != -1 {
			t.Errorf("the middle of the foot faces %v, want down", n)
		}
		if p.Y > 0.0199 && p.Y < 0.0201 && n.Y < 0.5 {
			t.Errorf("the middle of the floor faces %v, want up", n)
		}
	}
	back := slices.Clone(bowl)
	slices.Reverse(back)
	if v := volumeOf(built(t, model.Mesh{Kind: model.MeshLathe, Profile: back, Crease: 30})); !near(v, volume, 1e-5) {
		t.Errorf("volume %v of the reversed profile, want %v", v, volume)
	}
}

// TestLatheCrease counts the normals at a ring: one where the profile is smooth, two where it is sharp.
func TestLatheCrease(t *testing.T) {
	for _, c := range []struct {
		name   string
		turn   float64 // degrees
		crease float64
		want   int
	}{
		{"smooth", 29, 30, 1},
		{"just smooth", 30, 30, 1},
		{"sharp", 31, 30, 2},
		{"all sharp", 1, 0, 2},
		{"all smooth", 170, 180, 1},
		{"straight", 0, 0, 1},
	} {
		s, cos := math.Sincos(c.turn * math.Pi / 180)
		profile := [][2]float64{{2, 0}, {2, 1}, {2 - s, 1 + cos}}
		m := built(t, model.Mesh{Kind: model.MeshLathe, Profile: profile, Crease: c.crease, Segments: 3})
		seen := map[geom.Vec3]bool{}
		for i, p := range m.Positions {
			if p == (geom.Vec3{Y: 1, Z: -2}) {
				seen[m.Normals[i]] = true
			}
		}
		if len(seen) != c.want {
			t.Errorf("%s: %d normals where the profile turns by %v degrees with a crease of %v, want %d", c.name, len(seen), c.turn, c.crease, c.want)
		}
	}
}

// TestLatheCapsule checks a profile of points on circles: SHAPE-capsule-r0.5-h1, with normals of the true surface and
// a smooth pole.
func TestLatheCapsule(t *testing.T) {
	const n, radius = 100, 0.5
	var profile [][2]float64
	for i := 0; i <= n; i++ {
		s, c := math.Sincos(math.Pi * float64(i) / n)
		y := -0.5 - radius*c
		if i > n/2 {
			y += 1
		}
		profile = append(profile, [2]float64{radius * s, y}) // the last radius is 6e-17: on the axis
		if i == n/2 {
			profile = append(profile, [2]float64{radius, 0.5})
		}
	}
	m := built(t, model.Mesh{Kind: model.MeshLathe, Profile: profile, Crease: 30, Segments: 100})
	checkClosed(t, m, 2)
	// Source: SHAPE-capsule-r0.5-h1, closed form; an inscribed form falls short of it.
	if v, a := volumeOf(m)/1.3089969389957472, areaOf(m)/6.283185307179586; !(v < 1 && v > 0.999 && a < 1 && a > 0.999) {
		t.Errorf("volume and area are %v and %v of the capsule's", v, a)
	}
	for i, p := range m.Positions {
		middle := geom.Vec3d{Y: min(0.5, max(-0.5, float64(p.Y)))}
		want := p.Wide().Sub(middle).Unit()
		if d := m.Normals[i].Wide().Sub(want).Len(); d > 0.01 {
			t.Fatalf("normal %v at %v, want %v", m.Normals[i], p, want)
		}
	}
}

// TestLatheProperties turns random profiles: closed ones bound a solid with the volume and area that the profile says.
func TestLatheProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		n := rapid.IntRange(3, 40).Draw(t, "segments")
		crease := rapid.Float64Range(0, 180).Draw(t, "crease")
		// A wall that only rises, so that the profile does not meet itself.
		profile := [][2]float64{{0, 0}}
		y := 0.0
		for range rapid.IntRange(1, 12).Draw(t, "points") {
			profile = append(profile, [2]float64{rapid.Float64Range(0.05, 2).Draw(t, "radius"), y})
			y += rapid.Float64Range(0.01, 1).Draw(t, "rise")
		}
		profile = append(profile, [2]float64{0, y})
		volume, area := pappus(profile, n)
		given := slices.Clone(profile)
		if rapid.Bool().Draw(t, "reversed") {
			slices.Reverse(given)
		}
		m, err := Build(model.Mesh{Kind: model.MeshLathe, Profile: given, Segments: n, Crease: crease}, nil)
		if err != nil {
			t.Fatal(err)
		}
		top := topologyOf(m)
		if top.fault != "" || top.euler() != 2 {
			t.Fatalf("Euler characteristic %d, %s", top.euler(), top.fault)
		}
		if v, a := volumeOf(m), areaOf(m); !near(v, volume, 1e-4) || !near(a, area, 1e-4) {
			t.Fatalf("volume %v, area %v, want %v, %v (sums of frusta)", v, a, volume, area)
		}
	})
}

// TestLatheLoop turns a closed profile off the axis: a ring, whichever way round the profile runs.
func TestLatheLoop(t *testing.T) {
	square := [][2]float64{{1, 0}, {2, 0}, {2, 1}, {1, 1}, {1, 0}}
	for range 2 {
		m := built(t, model.Mesh{Kind: model.MeshLathe, Profile: square, Segments: 48, Crease: 30})
		checkClosed(t, m, 0)
		checkNormalsFaceOut(t, m, 180.0/48+0.01)
		slices.Reverse(square)
	}
}

// TestLatheOpen keeps the direction of a profile that bounds nothing.
func TestLatheOpen(t *testing.T) {
	for _, c := range []struct {
		profile [][2]float64
		out     float32
	}{{[][2]float64{{1, 0}, {1, 1}}, 1}, {[][2]float64{{1, 1}, {1, 0}}, -1}} {
		m := built(t, model.Mesh{Kind: model.MeshLathe, Profile: c.profile})
		for i, p := range m.Positions {
			if d := m.Normals[i].Dot(geom.Vec3{X: p.X, Z: p.Z}); (d-c.out)*(d-c.out) > 1e-10 {
				t.Fatalf("profile %v: normal %v at %v", c.profile, m.Normals[i], p)
			}
		}
		checkNormalsFaceOut(t, m, 180.0/DefaultSegments+0.01)
	}
}

// TestTestForm checks what the form is for: it stands on the ground, is closed, and has every kind of surface.
func TestTestForm(t *testing.T) {
	m := built(t, model.Mesh{Kind: model.MeshTestForm})
	checkClosed(t, m, 2)
	checkNormalsFaceOut(t, m, 4) // its arcs are cut every 3 degrees, its turn every 3.75
	b := m.Bounds()
	if b.Min.Y != 0 || b.Max.Y != testFormHeight {
		t.Errorf("it reaches from y = %v to %v, want 0 to %v", b.Min.Y, b.Max.Y, testFormHeight)
	}
	if w := b.Size().X; w < 0.1 || w > 0.15 {
		t.Errorf("it is %v m wide", w)
	}
	normalsAt := map[geom.Vec3]map[geom.Vec3]bool{}
	flat := 0.0
	for i, p := range m.Positions {
		if normalsAt[p] == nil {
			normalsAt[p] = map[geom.Vec3]bool{}
		}
		normalsAt[p][m.Normals[i]] = true
	}
	for _, tri := range m.Triangles {
		a, b, c := corner3(m, tri)
		if n := b.Sub(a).Cross(c.Sub(a)); n.Y > 0 && n.X == 0 && n.Z == 0 {
			flat += n.Y / 2
		}
	}
	heights := map[float32]bool{}
	for p, normals := range normalsAt {
		if len(normals) > 1 && p.X != 0 {
			heights[p.Y] = true
		}
	}
	if len(heights) != 3 {
		t.Errorf("creases at the heights %v, want three: above the foot, at the shoulder, inside the rim", heights)
	}
	if flat < 5e-4 {
		t.Errorf("%v m² face straight up, want a flat rim and step", flat)
	}
}
