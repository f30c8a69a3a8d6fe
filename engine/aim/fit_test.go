package aim

import (
	"math"
	"slices"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/mesh"
	"lampbook/engine/model"

	"pgregory.net/rapid"
)

// cloud is a thing of loose points: triangles name them, so that they count.
func cloud(pts ...[3]float64) Thing {
	m := &mesh.Mesh{SlotNames: []string{""}}
	for i, p := range pts {
		m.Positions = append(m.Positions, geom.Vec3d{X: p[0], Y: p[1], Z: p[2]}.Narrow())
		k := uint32(i)
		m.Triangles = append(m.Triangles, [3]uint32{k, k, k})
	}
	return Thing{Mesh: m, Placement: model.Placement{Scale: [3]float64{1, 1, 1}}}
}

// project returns where a world point falls in the picture: x right, y up, the picture being [-1, 1] on both, by the pinhole
// equation, written here apart from the code under test.
func project(c model.Camera, aspect float64, p geom.Vec3d) (x, y, depth float64) {
	eye, target := vec(c.Position), vec(c.Target)
	f := target.Sub(eye).Unit()
	r := f.Cross(vec(c.Up)).Unit()
	u := r.Cross(f)
	d := p.Sub(eye)
	depth = d.Dot(f)
	halfX := c.SensorMM / c.FocalMM / 2 * depth
	if c.Projection == model.Orthographic {
		halfX = c.Height * aspect / 2
	}
	return d.Dot(r) / halfX, d.Dot(u) / (halfX / aspect), depth
}

// pointsOf collects a thing's points.
func pointsOf(t Thing) (pts []geom.Vec3d) {
	eachPoint(t, func(p geom.Vec3d) { pts = append(pts, p) })
	return pts
}

func TestFitTouchesTheMargin(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		coord := rapid.Float64Range(-2, 2)
		var pts [][3]float64
		for range rapid.IntRange(2, 12).Draw(t, "points") {
			pts = append(pts, [3]float64{coord.Draw(t, "x"), coord.Draw(t, "y"), coord.Draw(t, "z")})
		}
		spread := 0.0
		for _, p := range pts {
			spread = max(spread, vec(p).Sub(vec(pts[0])).Len())
		}
		if spread < 0.1 {
			t.Skip("all in one place")
		}
		f := FitSpec{
			Things:    []Thing{cloud(pts...)},
			Direction: [3]float64{coord.Draw(t, "dx"), rapid.Float64Range(-1, 1).Draw(t, "dy"), 3},
			Margin:    rapid.Float64Range(0, 0.3).Draw(t, "margin"),
			Aspect:    rapid.Float64Range(0.7, 2).Draw(t, "aspect"),
			FocalMM:   rapid.Float64Range(18, 200).Draw(t, "focal"), SensorMM: 36,
			Projection: rapid.SampledFrom([]model.Projection{model.Perspective, model.Orthographic}).Draw(t, "projection"),
		}
		cam, err := Fit(f)
		if err != nil {
			t.Fatal(err)
		}
		limitX, limitY := 1-2*f.Margin/f.Aspect, 1-2*f.Margin
		worst := 0.0
		lo, hi := [2]float64{9, 9}, [2]float64{-9, -9}
		for _, p := range pointsOf(f.Things[0]) {
			x, y, depth := project(cam, f.Aspect, p)
			if depth <= 0 {
				t.Fatalf("%v is behind the camera", p)
			}
			worst = max(worst, math.Abs(x)/limitX, math.Abs(y)/limitY)
			lo = [2]float64{min(lo[0], x), min(lo[1], y)}
			hi = [2]float64{max(hi[0], x), max(hi[1], y)}
		}
		if worst > 1+1e-6 {
			t.Fatalf("the things reach over the margin: %v of it", worst)
		}
		if worst < 1-1e-3 && f.Projection == model.Orthographic {
			t.Fatalf("the camera could be nearer: the things reach %v of the margin", worst)
		}
		if worst < 0.9 && spread > 0.5 && !nearTouching(cam, f) {
			t.Fatalf("the camera could be nearer: the things reach %v of the margin", worst)
		}
		if f.Projection == model.Orthographic && (math.Abs(lo[0]+hi[0]) > 1e-6 || math.Abs(lo[1]+hi[1]) > 1e-6) {
			t.Fatalf("the things are not in the middle: %v to %v", lo, hi)
		}
	})
}

// nearTouching reports whether the camera stands as near as the rule allows: right before the nearest point.
func nearTouching(cam model.Camera, f FitSpec) bool {
	least := math.Inf(1)
	for _, p := range pointsOf(f.Things[0]) {
		_, _, depth := project(cam, f.Aspect, p)
		least = min(least, depth)
	}
	return least < 0.02
}

func TestFitSweepHoldsEveryTurn(t *testing.T) {
	thing := cloud([3]float64{0.3, 0, 0.1}, [3]float64{-0.1, 0.4, 0}, [3]float64{0.05, 0.2, -0.25})
	thing.Placement.At = [3]float64{1, 0, 2}
	f := FitSpec{Things: []Thing{thing}, Sweep: true, Direction: [3]float64{0.2, 0.4, 1}, Margin: 0.08, Aspect: 4.0 / 3, FocalMM: 85, SensorMM: 36}
	cam, err := Fit(f)
	if err != nil {
		t.Fatal(err)
	}
	worst := 0.0
	for deg := range 360 {
		turned := thing
		turned.Placement.Turn = [3]float64{0, float64(deg), 0}
		for _, p := range pointsOf(turned) {
			x, y, _ := project(cam, f.Aspect, p)
			worst = max(worst, math.Abs(x)/(1-2*f.Margin/f.Aspect), math.Abs(y)/(1-2*f.Margin))
		}
	}
	if worst > 1.002 || worst < 0.99 {
		t.Errorf("over a turn the thing reaches %v of the margin, want 1", worst)
	}
}

func TestFitErrors(t *testing.T) {
	good := FitSpec{Things: []Thing{cloud([3]float64{0, 0, 0}, [3]float64{1, 1, 1})}, Direction: [3]float64{0, 0, 1}, Aspect: 1, FocalMM: 50, SensorMM: 36}
	tests := []struct {
		name   string
		change func(*FitSpec)
	}{
		{"no direction", func(f *FitSpec) { f.Direction = [3]float64{} }},
		{"along up", func(f *FitSpec) { f.Direction = [3]float64{0, 2, 0} }},
		{"margin", func(f *FitSpec) { f.Margin = 0.6 }},
		{"nothing", func(f *FitSpec) { f.Things = nil }},
	}
	if _, err := Fit(good); err != nil {
		t.Fatal(err)
	}
	for _, tt := range tests {
		f := good
		tt.change(&f)
		if _, err := Fit(f); err == nil {
			t.Errorf("%s: no error", tt.name)
		}
	}
	single := good
	single.Things = []Thing{cloud([3]float64{1, 2, 3})}
	if cam, err := Fit(single); err != nil || cam.Position == cam.Target {
		t.Errorf("a single point: %v, %v", cam, err)
	}
}

// TestOuterChain compares the quick way to the outer chain with the plain one, on meshes of many points.
func TestOuterChain(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		coord := rapid.Float64Range(-1, 1)
		var pts [][3]float64
		for range rapid.IntRange(1, 4000).Draw(t, "points") {
			pts = append(pts, [3]float64{coord.Draw(t, "x"), coord.Draw(t, "y"), 0})
		}
		thing := cloud(pts...)
		var plain []ring
		for _, p := range pointsOf(thing) {
			plain = append(plain, ring{math.Abs(p.X), p.Y})
		}
		want := outerChain(plain)
		var got []ring
		n := 0
		eachSwept(thing, func(p geom.Vec3d) {
			if n%sweepSteps == 0 {
				got = append(got, ring{p.X, p.Y}) // at the angle 0 a circle stands at x = r
			}
			n++
		})
		if !slices.Equal(got, want) {
			t.Fatalf("got %d rings, want %d", len(got), len(want))
		}
	})
}
