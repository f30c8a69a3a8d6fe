package geom

import (
	"math"
	"testing"

	"pgregory.net/rapid"
)

func near(a, b Vec3d, tol float64) bool { return a.Sub(b).Len() <= tol }

// TestTransforms checks maps against worked examples.
func TestTransforms(t *testing.T) {
	trs := Translate(Vec3d{1, 2, 3}).Mul(Turn(Vec3d{Z: 90})).Mul(ScaleBy(Vec3d{2, 3, 4}))
	tests := []struct {
		name      string
		got, want Vec3d
		source    string
	}{
		{"point x", trs.Point(Vec3d{X: 1}), Vec3d{1, 4, 3}, "reference XF-TRS: glTF 2.0, T·R·S on column vectors"},
		{"point y", trs.Point(Vec3d{Y: 1}), Vec3d{-2, 2, 3}, "reference XF-TRS"},
		{"normal x", trs.Normal(Vec3d{X: 1}).Unit(), Vec3d{0, 1, 0}, "reference XF-TRS"},
		{"normal under stretch", ScaleBy(Vec3d{2, 1, 1}).Normal(Vec3d{1, 1, 0}).Unit(), Vec3d{0.4472135954999579, 0.8944271909999159, 0},
			"reference XF-NORMAL: inverse transpose"},
		{"turn about y", Turn(Vec3d{Y: 90}).Dir(Vec3d{Z: 1}), Vec3d{X: 1}, "right-hand rule: counter-clockwise seen from above takes z to x"},
		{"x before z", Turn(Vec3d{X: 90, Z: 90}).Dir(Vec3d{Y: 1}), Vec3d{Z: 1}, "by hand: y goes to z about x, z stays about z"},
	}
	for _, tt := range tests {
		if !near(tt.got, tt.want, 1e-12) {
			t.Errorf("%s: got %v, want %v (%s)", tt.name, tt.got, tt.want, tt.source)
		}
	}
	if d := ScaleBy(Vec3d{-1, 1, 1}).Det(); d >= 0 {
		t.Errorf("determinant of a mirror is %v, want < 0 (reference XF-NEGDET)", d)
	}
	if _, ok := ScaleBy(Vec3d{1, 0, 1}).Inverse(); ok {
		t.Error("a flattening map has an inverse")
	}
}

func drawVec(t *rapid.T, name string, limit float64) Vec3d {
	g := rapid.Float64Range(-limit, limit)
	return Vec3d{g.Draw(t, name+".x"), g.Draw(t, name+".y"), g.Draw(t, name+".z")}
}

func drawAffine(t *rapid.T) Affine {
	s := rapid.SampledFrom([]float64{-2, -1, 0.001, 0.5, 1, 3, 1000})
	return Translate(drawVec(t, "move", 10)).Mul(Turn(drawVec(t, "turn", 720))).
		Mul(ScaleBy(Vec3d{s.Draw(t, "sx"), s.Draw(t, "sy"), s.Draw(t, "sz")}))
}

func TestAffineProperties(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		a, b := drawAffine(t), drawAffine(t)
		p, u, v := drawVec(t, "p", 10), drawVec(t, "u", 1), drawVec(t, "v", 1)
		inv, ok := a.Inverse()
		if !ok {
			t.Fatal("no inverse")
		}
		if q := inv.Point(a.Point(p)); !near(q, p, 1e-7) {
			t.Fatalf("inverse takes %v back to %v", p, q)
		}
		if got, want := a.Mul(b).Point(p), a.Point(b.Point(p)); !near(got, want, 1e-9*(1+want.Len())) {
			t.Fatalf("product maps to %v, one after the other to %v", got, want)
		}
		if got, want := a.Normal(u.Cross(v)), a.Dir(u).Cross(a.Dir(v)); !near(got, want, 1e-6*(1+want.Len())) {
			t.Fatalf("Normal(u×v) = %v, Dir(u)×Dir(v) = %v", got, want)
		}
		box := EmptyBox().Extend(u.Narrow()).Extend(v.Narrow())
		q := a.Point(u.Narrow().Wide())
		out := a.Box(box)
		slack := 1e-9 * (1 + q.Len())
		for _, d := range []float64{q.X - float64(out.Min.X), q.Y - float64(out.Min.Y), q.Z - float64(out.Min.Z),
			float64(out.Max.X) - q.X, float64(out.Max.Y) - q.Y, float64(out.Max.Z) - q.Z} {
			if d < -slack {
				t.Fatalf("mapped box %v does not hold the mapped point %v", out, q)
			}
		}
	})
}

func TestVec3(t *testing.T) {
	if (Vec3{}).Unit() != (Vec3{}) {
		t.Error("the unit of zero is not zero")
	}
	nan := float32(math.NaN())
	for _, v := range []Vec3{{X: nan}, {Y: float32(math.Inf(1))}, {Z: nan}} {
		if v.Finite() {
			t.Errorf("%v counts as finite", v)
		}
	}
	if !(Vec3{1, -2, 3e38}).Finite() {
		t.Error("large numbers count as infinite")
	}
	if b := EmptyBox(); !b.Empty() || b.Extend(Vec3{1, 2, 3}).Empty() {
		t.Error("the empty box does not grow from nothing")
	}
}
