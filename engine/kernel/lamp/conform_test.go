package lamp

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
)

// conform is what every lamp must do at every point: give finite weights that are not negative, unit directions, places
// on the lamp's surface, and a mean that is the closed form. It returns what is wrong, or "".
func conform(s Spec, p geom.Vec3, n v3, key sample.Key) string {
	const samples = 1024
	l := New(s)
	var q Prepared
	l.Prepare(p, &q)
	var uv [samples][2]float32
	key.Points(0, uv[:])
	// The corners of the square must do as well.
	uv[0], uv[1], uv[2], uv[3] = [2]float32{0, 0}, [2]float32{1 - 0x1p-24, 0}, [2]float32{0, 1 - 0x1p-24}, [2]float32{0.5, 0.5}
	sum, sum2, facing := 0.0, 0.0, 0.0
	for _, x := range uv {
		wi, dist, w := q.Sample(x[0], x[1])
		if !(w >= 0 && w <= math.MaxFloat32) {
			return fmt.Sprintf("weight %v at %v", w, x)
		}
		if w == 0 {
			continue
		}
		if q.Dark() {
			return fmt.Sprintf("dark, but a weight of %v", w)
		}
		if d := float64(wi.Dot(wi)); !(math.Abs(d-1) < 1e-6) {
			return fmt.Sprintf("direction %v of length %v at %v", wi, math.Sqrt(d), x)
		}
		if off := l.offSurface(p, wi, dist); off != "" {
			return fmt.Sprintf("at %v: %s", x, off)
		}
		e := float64(w) * max(0, wi.Wide().Dot(n))
		sum, sum2, facing = sum+e/samples, sum2+e*e/samples, facing+float64(w)/samples
	}
	want := l.Irradiance(p.Wide(), n)
	if q.Dark() && want > 1e-6 {
		return fmt.Sprintf("dark, the closed form is %v", want)
	}
	// 4 sigma of independent samples; nets are better. What few samples see, just above the horizon, is allowed for by
	// 1e-3 of what a surface that faces the lamp receives; float32 by 1e-5.
	tol := 4*math.Sqrt(max(0, sum2-sum*sum)/samples) + 1e-5*want + 1e-3*facing*boolean(!l.Delta()) + 2e-6*facing
	if !(math.Abs(sum-want) <= tol) {
		return fmt.Sprintf("mean %.7g, closed form %.7g, tolerance %.2g", sum, want, tol)
	}
	return ""
}

func boolean(b bool) float64 {
	if b {
		return 1
	}
	return 0
}

// offSurface tells how far p + dist·wi lies off the lamp, where that is more than rounding.
func (l *Lamp) offSurface(p, wi geom.Vec3, dist float32) string {
	if l.Kind == Directional {
		if dist != Far {
			return fmt.Sprintf("distance %v", dist)
		}
		return ""
	}
	d := p.Wide().Add(wi.Wide().Scale(float64(dist))).Sub(l.Position)
	slack := 1e-6 * (float64(dist) + l.Radius + l.HalfWidth + l.HalfHeight)
	off := 0.0
	switch x, y, z := d.Dot(l.U), d.Dot(l.V), d.Dot(l.Axis); l.Kind {
	case Point, Spot:
		off = d.Len()
	case Rectangle:
		off = max(math.Abs(x)-l.HalfWidth, math.Abs(y)-l.HalfHeight, math.Abs(z))
	case Disk:
		off = max(math.Hypot(x, y)-l.Radius, math.Abs(z))
	case Sphere:
		// A ray that grazes leaves the sphere by the square root of rounding.
		off = max(d.Len()-l.Radius, l.Radius-d.Len())
		slack += 1e-6 * float64(dist)
	}
	if off > slack {
		return fmt.Sprintf("direction %v, distance %v: %v off the lamp", wi, dist, off)
	}
	return ""
}

var kinds = []struct {
	name string
	kind Kind
}{
	{"directional", Directional}, {"point", Point}, {"spot", Spot}, {"rectangle", Rectangle}, {"disk", Disk}, {"sphere", Sphere},
}

// TestConformance draws lamps, points and normals: near, far, beside, behind, inside.
func TestConformance(t *testing.T) {
	for _, k := range kinds {
		t.Run(k.name, func(t *testing.T) {
			const seed = 20261201
			r := rand.New(rand.NewPCG(seed, uint64(k.kind)))
			vec := func(size float64) v3 {
				return v3{X: r.NormFloat64() * size, Y: r.NormFloat64() * size, Z: r.NormFloat64() * size}
			}
			size := func() float64 { return math.Exp(r.NormFloat64()) }
			lit := 0
			for i := range 800 {
				outer := 90 * r.Float64()
				s := Spec{
					Kind: k.kind, Position: vec(1), Direction: vec(1), Up: vec(1), Width: size(), Height: size(), Radius: size(),
					Inner: outer * r.Float64(), Outer: max(outer, 0.5), TwoSided: r.IntN(2) == 0, NoFalloff: r.IntN(4) == 0,
				}
				if r.IntN(2) == 0 {
					s.Range = 3 * size()
				}
				far := []float64{0.01, 1, 1, 10, 1000}[r.IntN(5)]
				p := s.Position.Add(vec(far)).Narrow()
				if why := conform(s, p, vec(1).Unit(), sample.Key(seed).For(uint32(i)*8+uint32(k.kind))); why != "" {
					t.Fatalf("seed %d, draw %d: %+v at %v: %s", seed, i, s, p, why)
				}
				l := New(s)
				var q Prepared
				if l.Prepare(p, &q); !q.Dark() {
					lit++
				}
			}
			if lit < 100 {
				t.Errorf("only %d of 800 draws see light: the test shows little", lit)
			}
		})
	}
}

// TestAwkwardPlaces has the points at which set-ups divide by zero, and those at which float32 runs out.
func TestAwkwardPlaces(t *testing.T) {
	panel := Spec{Kind: Rectangle, Position: v3{Y: 2}, Width: 1, Height: 0.5}
	round := Spec{Kind: Disk, Position: v3{Y: 2}, Radius: 0.5}
	ball := Spec{Kind: Sphere, Position: v3{Y: 2}, Radius: 0.5}
	bulb := Spec{Kind: Point, Position: v3{Y: 2}}
	cone := Spec{Kind: Spot, Position: v3{Y: 2}, Inner: 20, Outer: 30}
	two := func(s Spec) Spec { s.TwoSided = true; return s }
	thin := Spec{Kind: Rectangle, Position: v3{Y: 2}, Width: 10, Height: 1e-4}
	for _, c := range []struct {
		name string
		spec Spec
		p    geom.Vec3
		dark bool
	}{
		{"rectangle: on its centre", two(panel), geom.Vec3{Y: 2}, true},
		{"rectangle: on its plane", two(panel), geom.Vec3{X: 3, Y: 2}, true},
		{"rectangle: on its edge", two(panel), geom.Vec3{X: 0.5, Y: 2}, true},
		{"rectangle: behind", panel, geom.Vec3{Y: 3}, true},
		{"rectangle: behind, two-sided", two(panel), geom.Vec3{Y: 3}, false},
		{"rectangle: a micrometre below", panel, geom.Vec3{X: 0.1, Y: 2 - 0x1p-20}, false},
		{"rectangle: below a corner", panel, geom.Vec3{X: 0.5, Y: 1, Z: 0.25}, false},
		{"rectangle: just below its plane, beside", panel, geom.Vec3{X: 3, Y: 2 - 0x1p-20}, false},
		{"rectangle: 1 km", panel, geom.Vec3{Y: -998}, false},
		{"rectangle: 1 km, oblique", panel, geom.Vec3{X: 900, Y: -400, Z: 100}, false},
		{"rectangle: 1000 km", panel, geom.Vec3{X: 1e5, Y: -1e6}, false},
		{"rectangle: thin, near", thin, geom.Vec3{X: 2, Y: 1.99}, false},
		{"rectangle: thin, far", thin, geom.Vec3{X: 2, Y: -100}, false},
		{"disk: on its centre", two(round), geom.Vec3{Y: 2}, true},
		{"disk: on its plane", two(round), geom.Vec3{X: 3, Y: 2}, true},
		{"disk: on its rim", two(round), geom.Vec3{X: 0.5, Y: 2}, true},
		{"disk: behind", round, geom.Vec3{Y: 3}, true},
		{"disk: behind, two-sided", two(round), geom.Vec3{X: 0.2, Y: 3}, false},
		{"disk: a micrometre below", round, geom.Vec3{X: 0.1, Y: 2 - 0x1p-20}, false},
		{"disk: under its rim", round, geom.Vec3{X: 0.5, Y: 2 - 0x1p-10}, false},
		{"disk: beside, just below", round, geom.Vec3{X: 0.51, Y: 2 - 0x1p-10}, false},
		{"disk: on its axis", round, geom.Vec3{}, false},
		{"disk: 1 km, oblique", round, geom.Vec3{X: 900, Y: -400, Z: 100}, false},
		{"disk: 1000 km", round, geom.Vec3{X: 1e5, Y: -1e6}, false},
		{"sphere: its centre", ball, geom.Vec3{Y: 2}, true},
		{"sphere: inside", ball, geom.Vec3{Y: 2.3}, true},
		{"sphere: on its surface", ball, geom.Vec3{Y: 1.5}, true},
		{"sphere: a hair outside", ball, geom.Vec3{Y: 1.5 - 0x1p-20}, false},
		{"sphere: 1 km", ball, geom.Vec3{X: 900, Y: -400, Z: 100}, false},
		{"sphere: 1000 km", ball, geom.Vec3{X: 1e5, Y: -1e6}, false},
		{"point: the lamp's own place", bulb, geom.Vec3{Y: 2}, true},
		{"point: a micrometre away", bulb, geom.Vec3{Y: 2 - 0x1p-20}, false},
		{"point: 1000 km", bulb, geom.Vec3{Y: -1e6}, false},
		{"spot: the lamp's own place", cone, geom.Vec3{Y: 2}, true},
		{"spot: behind", cone, geom.Vec3{Y: 3}, true},
		{"spot: outside the cone", cone, geom.Vec3{X: 2}, true},
		{"spot: on the axis", cone, geom.Vec3{}, false},
	} {
		t.Run(c.name, func(t *testing.T) {
			l := New(c.spec)
			var q Prepared
			l.Prepare(c.p, &q)
			if q.Dark() != c.dark {
				t.Fatalf("Dark is %v", q.Dark())
			}
			// A surface that faces the lamp, one tilted, one that sees it edge-on.
			d := l.Position.Sub(c.p.Wide()).Unit()
			u, v := frame(d, v3{})
			if d == (v3{}) {
				d, u, v = up, v3{X: 1}, v3{Z: 1}
			}
			for i, n := range []v3{d, d.Add(u).Unit(), u, v.Neg()} {
				if why := conform(c.spec, c.p, n, sample.Key(5).For(uint32(i))); why != "" {
					t.Errorf("normal %v: %s", n, why)
				}
			}
		})
	}
}

// TestNotFinite: a point that is not in space receives nothing, whatever the lamp, and no NaN.
func TestNotFinite(t *testing.T) {
	inf, nan := float32(math.Inf(1)), float32(math.NaN())
	for _, k := range kinds[1:] {
		l := New(Spec{Kind: k.kind, Position: v3{Y: 2}, Direction: v3{X: 1, Y: -2, Z: 3}, Width: 1, Height: 1, Radius: 1, Outer: 80, TwoSided: true})
		for _, p := range []geom.Vec3{{X: nan}, {Y: nan}, {Z: inf}, {Y: -inf}, {X: inf, Y: inf, Z: -inf}} {
			var q Prepared
			l.Prepare(p, &q)
			if _, _, w := q.Sample(0.3, 0.6); w != 0 {
				t.Errorf("%s at %v: weight %v", k.name, p, w)
			}
			if e := l.Irradiance(p.Wide(), up); e != 0 {
				t.Errorf("%s at %v: irradiance %v", k.name, p, e)
			}
		}
	}
}

// TestFarPrecision: a lamp of half a metre at a kilometre must have its inverse square to the digits of float32.
func TestFarPrecision(t *testing.T) {
	for _, s := range []Spec{
		{Kind: Rectangle, Width: 0.5, Height: 0.5}, {Kind: Disk, Radius: 0.25}, {Kind: Sphere, Radius: 0.25},
	} {
		s.Position = v3{X: 3, Y: 1000, Z: 4}
		l := New(s)
		var q Prepared
		l.Prepare(geom.Vec3{}, &q)
		want := l.Irradiance(origin, l.Position.Unit())
		wi, dist, w := q.Sample(0.3, 0.6)
		if got := float64(w) * wi.Wide().Dot(l.Position.Unit()); math.Abs(got/want-1) > 1e-5 {
			t.Errorf("kind %d: one sample gives %.8g, the closed form %.8g", s.Kind, got, want)
		}
		if math.Abs(float64(dist)/l.Position.Len()-1) > 1e-3 {
			t.Errorf("kind %d: distance %v", s.Kind, dist)
		}
	}
}

// TestUniformOverLamp checks that samples cover the lamp as they should: seen from its axis, equal solid angles of a
// rectangle's quarters, a disk's sectors and a sphere's halves hold equal numbers.
func TestUniformOverLamp(t *testing.T) {
	for _, s := range []Spec{
		{Kind: Rectangle, Position: v3{Y: 0.3}, Width: 1, Height: 2}, {Kind: Disk, Position: v3{Y: 0.3}, Radius: 1},
		{Kind: Sphere, Position: v3{Y: 1.2}, Radius: 1},
	} {
		l := New(s)
		var q Prepared
		l.Prepare(geom.Vec3{}, &q)
		var quarters [4]int
		uv := make([][2]float32, 4096)
		sample.Key(123).Points(0, uv)
		for _, x := range uv {
			wi, _, _ := q.Sample(x[0], x[1])
			i := 0
			if wi.Wide().Dot(l.U) > 0 {
				i |= 1
			}
			if wi.Wide().Dot(l.V) > 0 {
				i |= 2
			}
			quarters[i]++
		}
		for i, c := range quarters {
			if math.Abs(float64(c)-1024) > 40 { // a net errs by its boundary cells, at most about 4·sqrt(1024)/3
				t.Errorf("kind %d: quarter %d holds %d of 4096 samples", s.Kind, i, c)
			}
		}
	}
}

// TestDiskWeights bounds the spread of a disk's weights, which is the noise that it adds: the promise of
// ellipticCone.disk.
func TestDiskWeights(t *testing.T) {
	l := New(Spec{Kind: Disk, Position: v3{Y: 1}, Radius: 1})
	worst := 1.0
	for _, h := range []float64{1e-4, 1e-3, 0.01, 0.1, 0.3, 1, 10, 1000} {
		for _, x := range []float64{0, 0.5, 0.9, 0.99, 0.999, 1, 1.001, 1.01, 1.1, 1.5, 2, 5, 100} {
			var q Prepared
			l.Prepare(geom.Vec3{X: float32(x), Y: float32(1 - h)}, &q)
			lo, hi := float32(math.MaxFloat32), float32(0)
			for i := range uint32(256) {
				u, v := sample.Key(1).Point(i)
				_, _, w := q.Sample(u, v)
				lo, hi = min(lo, w), max(hi, w)
			}
			worst = max(worst, float64(hi/lo))
		}
	}
	t.Logf("largest over smallest weight: %.3f", worst)
	if worst > 1.25 {
		t.Errorf("a disk's weights differ by a factor of %.3f, want at most 1.25", worst)
	}
}

// TestNoAllocation: preparing and sampling must not touch the heap.
func TestNoAllocation(t *testing.T) {
	for _, k := range kinds {
		l := New(Spec{Kind: k.kind, Position: v3{Y: 2}, Width: 1, Height: 1, Radius: 1, Outer: 40})
		var q Prepared
		if n := testing.AllocsPerRun(100, func() {
			l.Prepare(geom.Vec3{X: 0.1}, &q)
			q.Sample(0.3, 0.7)
		}); n != 0 {
			t.Errorf("%s: %v allocations", k.name, n)
		}
	}
}
