package num

import (
	"math"
	"math/rand/v2"
	"testing"
)

func TestQuick(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 2))
	worst := map[string]float64{}
	ulp := func(name string, got float32, want float64) {
		w := float32(want)
		if math.IsInf(float64(w), 0) || w == 0 {
			if got != w {
				t.Errorf("%s got %v want %v", name, got, w)
			}
			return
		}
		_, e := math.Frexp(want)
		if e < -125 {
			e = -125
		}
		u := math.Abs(float64(got)-want) / math.Ldexp(1, e-24)
		if u > worst[name] {
			worst[name] = u
		}
		if u > 10 {
			t.Fatalf("%s got %v want %v", name, got, want)
		}
	}
	for range 300000 {
		x := r.Float32()
		y := float32(math.Exp(r.Float64()*23 - 11))
		ulp("pow", Pow(x, y), math.Pow(float64(x), float64(y)))
		xx := float32(1 - math.Exp(-r.Float64()*16))
		ulp("pow1", Pow(xx, y), math.Pow(float64(xx), float64(y)))
		a := float32(r.NormFloat64() * 100)
		s, c := SinCos(a)
		ulp("sin", s, math.Sin(float64(a)))
		ulp("cos", c, math.Cos(float64(a)))
		ulp("log2", Log2(x), math.Log2(float64(x)))
		ulp("exp2", Exp2(a), math.Exp2(float64(a)))
		b := float32(r.NormFloat64())
		ulp("atan2", Atan2(b, a), math.Atan2(float64(b), float64(a)))
		ulp("acos", Acos(2*x-1), math.Acos(float64(2*x-1)))
		ulp("asin", Asin(2*x-1), math.Asin(float64(2*x-1)))
	}
	t.Log(worst)
}

var sinkF float32

func BenchmarkPow(b *testing.B) {
	var xs [1024]float32
	r := rand.New(rand.NewPCG(1, 2))
	for i := range xs {
		xs[i] = r.Float32()
	}
	for i := 0; i < b.N; i++ {
		sinkF += Pow(xs[i&1023], 64)
	}
}

func BenchmarkSinCos(b *testing.B) {
	var xs [1024]float32
	r := rand.New(rand.NewPCG(1, 2))
	for i := range xs {
		xs[i] = r.Float32() * 6
	}
	for i := 0; i < b.N; i++ {
		s, c := SinCos(xs[i&1023])
		sinkF += s + c
	}
}
