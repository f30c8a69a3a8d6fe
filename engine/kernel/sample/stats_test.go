package sample

import (
	"math"
	"testing"
)

// chi2 is the statistic of counts that should all be equal.
func chi2(counts []int) float64 {
	total := 0
	for _, c := range counts {
		total += c
	}
	want := float64(total) / float64(len(counts))
	sum := 0.0
	for _, c := range counts {
		sum += (float64(c) - want) * (float64(c) - want) / want
	}
	return sum
}

// Quantiles of the chi-square distribution at p = 0.9999. Source: CHI2-63, CHI2-255, scipy.stats 1.10.1, agreeing with
// the NIST/SEMATECH e-Handbook, 1.3.6.7.4.
const (
	chi63  = 113.50499285105408
	chi255 = 347.6542127045896
)

// TestUniform looks at one index of many streams: over keys, each point alone must be uniform in the square.
func TestUniform(t *testing.T) {
	for _, i := range []uint32{0, 1, 2, 3, 7, 8, 100, 1023} {
		square, fine := make([]int, 64), make([]int, 256)
		for n := range 64 * 64 {
			u, v := pixelKey(1, n%64, n/64).Point(i)
			square[int(u*8)<<3|int(v*8)]++
			fine[int(u*256)]++
		}
		if c := chi2(square); c > chi63 {
			t.Errorf("point %d in 8 x 8 cells: chi-square %.1f, want below %.1f", i, c, chi63)
		}
		if c := chi2(fine); c > chi255 {
			t.Errorf("point %d, first coordinate in 256 cells: chi-square %.1f, want below %.1f", i, c, chi255)
		}
	}
}

// TestIndependent looks at pairs of numbers that should know nothing of each other: two purposes of one pixel, two
// neighbouring pixels, two seeds, two indices far apart.
func TestIndependent(t *testing.T) {
	key, fill := Name("key"), Name("fill")
	pairs := map[string]func(x, y int) (a, b float32){
		"purposes": func(x, y int) (float32, float32) {
			k := pixelKey(1, x, y)
			return k.For(key).Float(5), k.For(fill).Float(5)
		},
		"purposes, second coordinate": func(x, y int) (float32, float32) {
			k := pixelKey(1, x, y)
			_, a := k.For(key).Point(2)
			_, b := k.For(fill).Point(2)
			return a, b
		},
		"pixel and purpose": func(x, y int) (float32, float32) {
			k := pixelKey(1, x, y)
			return k.Float(3), k.For(key).Float(3)
		},
		"small purposes": func(x, y int) (float32, float32) {
			k := pixelKey(1, x, y)
			return k.For(0).Float(3), k.For(1).Float(3)
		},
		"pixels beside": func(x, y int) (float32, float32) {
			return pixelKey(1, x, y).Float(0), pixelKey(1, x+1, y).Float(0)
		},
		"pixels below": func(x, y int) (float32, float32) {
			return pixelKey(1, x, y).Float(0), pixelKey(1, x, y+1).Float(0)
		},
		"pixels mirrored": func(x, y int) (float32, float32) {
			return pixelKey(1, x, y+1000).Float(0), pixelKey(1, y+1000, x).Float(0)
		},
		"seeds": func(x, y int) (float32, float32) {
			return pixelKey(1, x, y).Float(0), pixelKey(2, x, y).Float(0)
		},
		"coordinates": func(x, y int) (float32, float32) { return pixelKey(1, x, y).Point(9) },
	}
	for name, pair := range pairs {
		counts := make([]int, 64)
		for n := range 64 * 64 {
			a, b := pair(n%64, n/64)
			counts[int(a*8)<<3|int(b*8)]++
		}
		if c := chi2(counts); c > chi63 {
			t.Errorf("%s: chi-square %.1f of 8 x 8 cells, want below %.1f", name, c, chi63)
		}
	}
}

// TestPadding looks at two streams of one pixel together: as one four-dimensional point set they must integrate a
// product no worse than random pairing does, that is, without the correlation of equal index orders.
func TestPadding(t *testing.T) {
	const n, trials = 64, 400
	sum2 := 0.0
	for s := range trials {
		k := pixelKey(uint32(s), 1, 2)
		a, b := k.For(Name("lens")), k.For(Name("key"))
		r := 0.0
		for i := range uint32(n) {
			r += (float64(a.Float(i)) - 0.5) * (float64(b.Float(i)) - 0.5)
		}
		r /= n / 12.0 // the correlation of uniform numbers
		sum2 += r * r
	}
	// For random pairing the variance of the correlation is 1/(n-1). The shuffles keep pairs of indices together, and the
	// two halves of a pair lie in opposite halves of both streams, so up to twice that is due to shuffled nets as such;
	// 400 trials know it to 7 %. Equal orders would give n/2 times.
	if got, limit := sum2/trials*(n-1), 2.0; got > limit {
		t.Errorf("two purposes correlate %.2f times as strongly as random pairs, want below %.2f", got, limit)
	}
}

// TestStratified measures the variance of a disc's coverage. Source: STRAT-disc, Mitchell 1996, "Consequences of
// stratified sampling in graphics": jittered samples have the variances below and fall with the power -1.5 of their
// number; random ones with -1. Nets must not be worse.
func TestStratified(t *testing.T) {
	const coverage = 0.50265725
	jitter := []struct {
		n        int
		variance float64
	}{
		{4, 0.06249800484375}, {16, 0.008311460390624999}, {64, 0.0006686050567626952}, {256, 0.00010656802043914796},
	}
	const trials = 400
	var logN, logV []float64
	uv := make([][2]float32, 256)
	for _, row := range jitter {
		sum2 := 0.0
		for s := range trials {
			pixelKey(uint32(s), row.n, 5).Points(0, uv[:row.n])
			hits := 0
			for _, p := range uv[:row.n] {
				x, y := p[0]-0.5, p[1]-0.5
				if x*x+y*y < 0.16 {
					hits++
				}
			}
			e := float64(hits)/float64(row.n) - coverage
			sum2 += e * e
		}
		v := sum2 / trials
		if v > 1.3*row.variance {
			t.Errorf("%d samples: variance %.3g, jittered samples have %.3g", row.n, v, row.variance)
		}
		logN, logV = append(logN, math.Log(float64(row.n))), append(logV, math.Log(v))
	}
	if slope := fit(logN, logV); slope > -1.4 {
		t.Errorf("variance falls with the power %.2f of the samples, want -1.5 or steeper", slope)
	}
}

// fit is the slope of the least-squares line.
func fit(x, y []float64) float64 {
	n, sx, sy, sxx, sxy := float64(len(x)), 0.0, 0.0, 0.0, 0.0
	for i := range x {
		sx, sy, sxx, sxy = sx+x[i], sy+y[i], sxx+x[i]*x[i], sxy+x[i]*y[i]
	}
	return (n*sxy - sx*sy) / (n*sxx - sx*sx)
}
