package tri

import (
	"math"
	"math/rand/v2"
	"testing"

	"lampbook/engine/kernel/geom"

	"pgregory.net/rapid"
)

// cast tests one triangle alone.
func cast(r geom.Ray, a, b, c geom.Vec3) (best Best, any bool) {
	var p Ray
	box := geom.EmptyBox().Extend(a).Extend(b).Extend(c)
	if !p.Prepare(r, box) {
		return Best{T: r.TMax}, false
	}
	best.T = r.TMax
	ts := []Triangle{Make(a, b, c, 7)}
	Closest(&p, ts, &best)
	return best, Any(&p, ts)
}

func TestTriangle(t *testing.T) {
	inf := float32(math.Inf(1))
	v := func(x, y, z float32) geom.Vec3 { return geom.Vec3{X: x, Y: y, Z: z} }
	tests := []struct {
		id        string
		o, d      geom.Vec3
		a, b, c   geom.Vec3
		hit       bool
		t, u, v   float64
		tolerance float64
		source    string
	}{
		{"RT-centre", v(0, 0, 5), v(0, 0, -1), v(-1, -1, 0), v(1, -1, 0), v(0, 1, 0), true, 5, 0.25, 0.5, 1e-6, "exact rational arithmetic"},
		{"RT-oblique", v(1, 2, 3), v(-1, -1, -2), v(0, 0, 0), v(4, 0, 1), v(0, 3, -1), false, 0, 0, 0, 0, "exact rational arithmetic"},
		{"RT-edge-hit", v(0.5, 0, 1), v(0, 0, -1), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), true, 1, 0.5, 0, 1e-6, "exact rational arithmetic"},
		{"RT-behind", v(0.25, 0.25, -1), v(0, 0, -1), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), false, 0, 0, 0, 0, "exact rational arithmetic"},
		{"RT-parallel", v(0, 0, 1), v(1, 0, 0), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), false, 0, 0, 0, 0, "exact rational arithmetic"},
		{"RT-backface", v(0.25, 0.25, -1), v(0, 0, 1), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), true, 1, 0.25, 0.25, 1e-6, "exact rational arithmetic"},
		{"RT-far-large", v(1e6, 1e6, 1e6), v(-1, -1, -1), v(1, 0, 0), v(0, 1, 0), v(0, 0, 1), true, 999999.6666666666, 1. / 3, 1. / 3, 1e-6,
			"exact rational arithmetic; t relative, since float32 steps are 1/16 there"},
		{"in the plane", v(-1, 0.25, 0), v(1, 0, 0), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), false, 0, 0, 0, 0, "an edge-on triangle has no area"},
		{"first corner", v(0, 0, 1), v(0, 0, -2), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), true, 0.5, 0, 0, 1e-6, "closed form; t in lengths of the direction"},
		{"last corner", v(0, 1, 1), v(0, 0, -1), v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), true, 1, 0, 1, 1e-6, "closed form"},
	}
	for _, tt := range tests {
		got, any := cast(geom.Ray{Org: tt.o, Dir: tt.d, TMax: inf}, tt.a, tt.b, tt.c)
		if got.Found != tt.hit || any != tt.hit {
			t.Errorf("%s: hit %v, any %v, want %v (%s)", tt.id, got.Found, any, tt.hit, tt.source)
			continue
		}
		if !tt.hit {
			continue
		}
		if math.Abs(float64(got.T)-tt.t) > tt.tolerance*math.Max(1, tt.t) || math.Abs(float64(got.U)-tt.u) > tt.tolerance || math.Abs(float64(got.V)-tt.v) > tt.tolerance {
			t.Errorf("%s: t %v u %v v %v, want %v %v %v (%s)", tt.id, got.T, got.U, got.V, tt.t, tt.u, tt.v, tt.source)
		}
		if got.Index != 7 {
			t.Errorf("%s: index %d, want 7", tt.id, got.Index)
		}
	}
}

// A hit must be near where float64 puts it (Möller & Trumbore 1997, eq. 6), and rays that clearly miss must miss.
func TestTriangleAgainstFloat64(t *testing.T) {
	hits := 0
	rapid.Check(t, func(t *rapid.T) {
		g := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 1))
		p := func() geom.Vec3 { return geom.Vec3{X: g.Float32()*2 - 1, Y: g.Float32()*2 - 1, Z: g.Float32()*2 - 1} }
		for range 200 {
			a, b, c := p(), p(), p()
			r := geom.Ray{Org: p(), Dir: p(), TMax: float32(math.Inf(1))}
			e1, e2, s := b.Wide().Sub(a.Wide()), c.Wide().Sub(a.Wide()), r.Org.Wide().Sub(a.Wide())
			d := r.Dir.Wide()
			q := d.Cross(e2)
			det := e1.Dot(q)
			if math.Abs(det) < 0.02 { // too nearly edge on for a tolerance
				continue
			}
			w := s.Cross(e1)
			u, v, at := s.Dot(q)/det, d.Dot(w)/det, e2.Dot(w)/det
			got, _ := cast(r, a, b, c)
			const clear = 1e-4
			inside := u > clear && v > clear && u+v < 1-clear && at > clear
			outside := u < -clear || v < -clear || u+v > 1+clear || at < -clear
			if inside && !got.Found || outside && got.Found {
				t.Fatalf("%v %v %v %+v: found %v, float64 says t %v u %v v %v", a, b, c, r, got.Found, at, u, v)
			}
			if got.Found && (math.Abs(float64(got.T)-at) > clear || math.Abs(float64(got.U)-u) > clear || math.Abs(float64(got.V)-v) > clear) {
				t.Fatalf("%v %v %v %+v: got %+v, float64 says t %v u %v v %v", a, b, c, r, got, at, u, v)
			}
			if got.Found {
				hits++
			}
		}
	})
	if hits < 500 {
		t.Errorf("only %d hits: the rays do not test much", hits)
	}
}

// Four triangles around a point in the plane cover it without a gap: a ray that crosses the fan well inside its rim hits at least one,
// however it meets the spokes and the middle.
func TestNoGapBetweenTriangles(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		g := rand.New(rand.NewPCG(rapid.Uint64().Draw(t, "seed"), 2))
		scale := rapid.SampledFrom([]float32{1, 0.001, 1000}).Draw(t, "scale")
		p := func(x, y float32) geom.Vec3 {
			return geom.Vec3{X: x + 0.1*g.Float32(), Y: y + 0.1*g.Float32(), Z: 0.1 * g.Float32()}.Scale(scale)
		}
		middle := p(0, 0)
		rim := []geom.Vec3{p(-1, -1), p(1, -1), p(1, 1), p(-1, 1)}
		for range 300 {
			spoke := rim[g.IntN(4)]
			target := middle.AddScaled(g.Float32()*0.9*float32(g.IntN(2)), spoke.Sub(middle))
			r := geom.Ray{TMax: float32(math.Inf(1))}
			r.Org = geom.Vec3{X: g.Float32() - 0.5, Y: g.Float32() - 0.5, Z: 2 + g.Float32()}.Scale(scale)
			r.Dir = target.Sub(r.Org)
			if g.IntN(3) == 0 {
				r.Org = geom.Vec3{X: target.X, Y: target.Y, Z: 2 * scale}
				r.Dir = geom.Vec3{Z: -1}
			}
			found := false
			for i := range rim {
				best, _ := cast(r, middle, rim[i], rim[(i+1)%4])
				found = found || best.Found
			}
			if !found {
				t.Fatalf("ray %+v slips through the fan of %v around %v", r, rim, middle)
			}
		}
	})
}

func TestPrepareRefuses(t *testing.T) {
	nan, inf := float32(math.NaN()), float32(math.Inf(1))
	box := geom.Box{Max: geom.Vec3{X: 1, Y: 1, Z: 1}}
	good := geom.Ray{Dir: geom.Vec3{X: 1}, TMax: inf}
	var p Ray
	if !p.Prepare(good, box) {
		t.Fatal("a plain ray is refused")
	}
	for name, spoil := range map[string]func(r *geom.Ray){
		"TMax at TMin":   func(r *geom.Ray) { r.TMin, r.TMax = 1, 1 },
		"TMax below":     func(r *geom.Ray) { r.TMin, r.TMax = 2, 1 },
		"TMax negative":  func(r *geom.Ray) { r.TMin, r.TMax = -2, -1 },
		"TMin NaN":       func(r *geom.Ray) { r.TMin = nan },
		"TMax NaN":       func(r *geom.Ray) { r.TMax = nan },
		"origin NaN":     func(r *geom.Ray) { r.Org.Y = nan },
		"origin Inf":     func(r *geom.Ray) { r.Org.Z = -inf },
		"direction NaN":  func(r *geom.Ray) { r.Dir.Y = nan },
		"direction Inf":  func(r *geom.Ray) { r.Dir.X = inf },
		"direction zero": func(r *geom.Ray) { r.Dir = geom.Vec3{} },
	} {
		r := good
		spoil(&r)
		if p.Prepare(r, box) {
			t.Errorf("%s: the ray %+v is accepted", name, r)
		}
	}
}

func TestSolid(t *testing.T) {
	nan := float32(math.NaN())
	v := func(x, y, z float32) geom.Vec3 { return geom.Vec3{X: x, Y: y, Z: z} }
	tests := []struct {
		a, b, c geom.Vec3
		want    bool
		source  string
	}{
		{v(0, 0, 0), v(1, 0, 0), v(0, 1, 0), true, "area 1/2"},
		{v(0, 0, 0), v(1e-20, 0, 0), v(0, 1e-20, 0), true, "area 5e-41, which float64 can tell from 0"},
		{v(0, 0, 0), v(0, 0, 0), v(0, 1, 0), false, "two corners coincide"},
		{v(0, 0, 0), v(1, 1, 1), v(3, 3, 3), false, "three corners in a line"},
		{v(nan, 0, 0), v(1, 0, 0), v(0, 1, 0), false, "not a number"},
		{v(float32(math.Inf(1)), 0, 0), v(1, 0, 0), v(0, 1, 0), false, "infinite"},
	}
	for _, tt := range tests {
		if got := Solid(tt.a, tt.b, tt.c); got != tt.want {
			t.Errorf("Solid(%v, %v, %v) = %v, want %v: %s", tt.a, tt.b, tt.c, got, tt.want, tt.source)
		}
	}
}

func TestTiesGoToTheLowestIndex(t *testing.T) {
	a, b, c := geom.Vec3{}, geom.Vec3{X: 1}, geom.Vec3{Y: 1}
	r := geom.Ray{Org: geom.Vec3{X: 0.25, Y: 0.25, Z: 1}, Dir: geom.Vec3{Z: -1}, TMax: 2}
	var p Ray
	if !p.Prepare(r, geom.Box{Max: geom.Vec3{X: 1, Y: 1}}) {
		t.Fatal("refused")
	}
	for _, order := range [][]uint32{{3, 9, 5}, {9, 5, 3}, {5, 3, 9}} {
		var ts []Triangle
		for _, i := range order {
			ts = append(ts, Make(a, b, c, i))
		}
		best := Best{T: r.TMax}
		Closest(&p, ts, &best)
		if best.Index != 3 || best.T != 1 {
			t.Errorf("order %v: got %+v, want index 3 at 1", order, best)
		}
	}
	best := Best{T: 1}
	if Closest(&p, []Triangle{Make(a, b, c, 0)}, &best); best.Found {
		t.Error("a hit at TMax itself counts")
	}
}
