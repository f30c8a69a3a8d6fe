package lamp

import (
	"math"
	"math/rand/v2"
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
)

func TestSmoke(t *testing.T) {
	r := rand.New(rand.NewPCG(3, 4))
	rv := func(s float64) geom.Vec3d {
		return geom.Vec3d{X: r.NormFloat64() * s, Y: r.NormFloat64() * s, Z: r.NormFloat64() * s}
	}
	for _, k := range []Kind{Directional, Point, Spot, Rectangle, Disk, Sphere} {
		worst := 0.0
		wr := 0.0
		for i := range 3000 {
			s := Spec{Kind: k, Position: rv(1), Direction: rv(1), Up: rv(1), Width: math.Exp(r.NormFloat64()), Height: math.Exp(r.NormFloat64()), Radius: math.Exp(r.NormFloat64()),
				Inner: 10, Outer: 40, Range: 3, TwoSided: i&1 == 0}
			l := New(s)
			p, n := rv(1).Narrow(), rv(1).Unit()
			var q Prepared
			l.Prepare(p, &q)
			const N = 1024
			var pts [N][2]float32
			sample.PixelKey(1, i, 2).Points(0, pts[:])
			sum, sum2 := 0.0, 0.0
			wmin, wmax := math.Inf(1), 0.0
			for _, uv := range pts {
				wi, _, w := q.Sample(uv[0], uv[1])
				f := float64(w) * max(0, wi.Wide().Dot(n))
				sum += f
				sum2 += f * f
				wmin, wmax = min(wmin, float64(w)), max(wmax, float64(w))
			}
			mean := sum / N
			sig := math.Sqrt(max(0, sum2/N-mean*mean)/N) + 1e-6*mean + 1e-7
			want := l.Irradiance(p.Wide(), n)
			z := math.Abs(mean-want) / sig
			if z > worst {
				worst = z
				if z > 3 {
					t.Logf("kind %d i %d mean %v want %v z %v", k, i, mean, want, z)
				}
			}
			if wmin > 0 {
				wr = max(wr, wmax/wmin)
			}
		}
		t.Logf("kind %d worst z %.3f weight ratio %.3f", k, worst, wr)
	}
}
