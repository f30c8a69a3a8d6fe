package sample

import (
	"math"
	"math/bits"
	"testing"

	"pgregory.net/rapid"
)

// plain is the i-th Sobol' point without scrambling.
func plain(i uint32) [2]float64 {
	return [2]float64{float64(unit(bits.Reverse32(i))), float64(unit(bits.Reverse32(pascal(i))))}
}

// TestSobolPoints checks the directions: the unscrambled points in Gray code order.
func TestSobolPoints(t *testing.T) {
	// SOBOL-16, dimensions 1 and 2. Source: Joe & Kuo 2008, directions new-joe-kuo-6.21201, by scipy.stats.qmc.Sobol 1.10.1.
	want := [16][2]float64{
		{0, 0}, {0.5, 0.5}, {0.75, 0.25}, {0.25, 0.75}, {0.375, 0.375}, {0.875, 0.875}, {0.625, 0.125}, {0.125, 0.625},
		{0.1875, 0.3125}, {0.6875, 0.8125}, {0.9375, 0.0625}, {0.4375, 0.5625}, {0.3125, 0.1875}, {0.8125, 0.6875},
		{0.5625, 0.4375}, {0.0625, 0.9375},
	}
	for i, w := range want {
		if got := plain(uint32(i ^ i>>1)); got != w {
			t.Errorf("point %d: got %v, want %v", i, got, w)
		}
	}
	// VDC-8. Source: van der Corput 1935.
	for i, w := range []float64{0, 0.5, 0.25, 0.75, 0.125, 0.625, 0.375, 0.875} {
		if got := plain(uint32(i))[0]; got != w {
			t.Errorf("radical inverse of %d: got %v, want %v", i, got, w)
		}
	}
}

// TestDiscrepancy compares two measures of the plain points with published programs.
func TestDiscrepancy(t *testing.T) {
	// Source: DISC-16, -64, -256: Hickernell 1998 and Warnock 1972, by scipy.stats.qmc.discrepancy 1.10.1.
	for _, row := range []struct {
		n                  int
		cd, l2, randomMean float64
	}{
		{16, 0.0036243862575953134, 0.047766230959700805, 0.02375806682124889},
		{64, 0.00024001962608743987, 0.012869849626468793, 0.00618236507841778},
		{256, 1.663160380993567e-05, 0.0033074703678268075, 0.0015913655763243506},
	} {
		p := make([][2]float64, row.n)
		for i := range p {
			p[i] = plain(uint32(i))
		}
		if got := centred(p); math.Abs(got/row.cd-1) > 1e-6 {
			t.Errorf("n = %d: centred discrepancy %g, want %g", row.n, got, row.cd)
		}
		if got := l2Star(p); math.Abs(got/row.l2-1) > 1e-6 {
			t.Errorf("n = %d: L2-star discrepancy %g, want %g", row.n, got, row.l2)
		}
		// Scrambled points must stay far better than random ones.
		mean, trials := 0.0, 32
		for s := range trials {
			k := pixelKey(uint32(s), 3, 4)
			for i := range p {
				u, v := k.Point(uint32(i))
				p[i] = [2]float64{float64(u), float64(v)}
			}
			mean += centred(p) / float64(trials)
		}
		if limit := row.randomMean / math.Sqrt(float64(row.n)); mean > limit {
			t.Errorf("n = %d: scrambled points have a mean discrepancy of %g, random ones %g; want below %g", row.n, mean, row.randomMean, limit)
		}
	}
}

// centred is the squared centred discrepancy, Hickernell 1998, eq. 3.5, in two dimensions.
func centred(p [][2]float64) float64 {
	n := float64(len(p))
	one, two := 0.0, 0.0
	for _, a := range p {
		f := 1.0
		for _, x := range a {
			d := math.Abs(x - 0.5)
			f *= 1 + d/2 - d*d/2
		}
		one += f
		for _, b := range p {
			g := 1.0
			for j := range a {
				g *= 1 + math.Abs(a[j]-0.5)/2 + math.Abs(b[j]-0.5)/2 - math.Abs(a[j]-b[j])/2
			}
			two += g
		}
	}
	return 169.0/144 - 2*one/n + two/n/n
}

// l2Star is the L2-star discrepancy by Warnock's formula, in two dimensions.
func l2Star(p [][2]float64) float64 {
	n := float64(len(p))
	one, two := 0.0, 0.0
	for _, a := range p {
		one += (1 - a[0]*a[0]) * (1 - a[1]*a[1])
		for _, b := range p {
			two += (1 - max(a[0], b[0])) * (1 - max(a[1], b[1]))
		}
	}
	return math.Sqrt(1.0/9 - one/n/2 + two/n/n)
}

// TestNet checks SOBOL-NET (Sobol' 1967; Niederreiter 1992) for scrambled streams: an aligned run of 2^m points has one
// point in each elementary rectangle of area 2^-m.
func TestNet(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := Key(rapid.Uint32().Draw(t, "key"))
		m := rapid.SampledFrom([]int{0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 12}).Draw(t, "m")
		run := rapid.Uint32Range(0, 1<<(32-m)-1).Draw(t, "run")
		uv := make([][2]float32, 1<<m)
		k.Points(run<<m, uv)
		for across := 0; across <= m; across++ {
			seen := make([]bool, 1<<m)
			for i, p := range uv {
				if !(p[0] >= 0 && p[0] < 1 && p[1] >= 0 && p[1] < 1) {
					t.Fatalf("point %d is outside the square: %v", i, p)
				}
				x, y := int(p[0]*float32(int(1)<<across)), int(p[1]*float32(int(1)<<(m-across)))
				cell := x<<(m-across) | y
				if seen[cell] {
					t.Fatalf("two points in rectangle %d of 2^%d by 2^%d", cell, across, m-across)
				}
				seen[cell] = true
			}
		}
		seen := make([]bool, 1<<m)
		for i := range uv {
			f := k.Float(run<<m + uint32(i))
			if u, v := k.Point(run<<m + uint32(i)); u != uv[i][0] || v != uv[i][1] || f != u {
				t.Fatalf("point %d: Points gives %v, Point %v, %v and Float %v", i, uv[i], u, v, f)
			}
			cell := int(f * float32(len(seen)))
			if seen[cell] {
				t.Fatalf("two numbers in interval %d of %d", cell, len(seen))
			}
			seen[cell] = true
		}
	})
}

// TestPinned holds some values, so that no change of every picture goes unseen. They are our own, measured 2026-12-01.
func TestPinned(t *testing.T) {
	k := pixelKey(7, 11, 13).For(Name("key"))
	u, v := k.Point(5)
	if k != 0xdb16c0ba || u != 0.8530007 || v != 0.30015188 {
		t.Errorf("got %#x, %v, %v", uint32(k), u, v)
	}
	// Source of the hash: FNV-1a test vector "foobar", RFC 9923, appendix C.
	if got := Name("foobar"); got != 0xbf9cf968 {
		t.Errorf("Name(foobar) = %#x", got)
	}
}

// TestOwen checks the scramble against its definition: bit k of the result depends on bits 0 to k alone, it always turns
// with bit k, and over seeds it turns half the time, whatever the bits below.
func TestOwen(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		x, seed := rapid.Uint32().Draw(t, "x"), rapid.Uint32().Draw(t, "seed")
		k := rapid.IntRange(0, 31).Draw(t, "k")
		if d := owen(x, seed) ^ owen(x^1<<k, seed); bits.TrailingZeros32(d) != k {
			t.Fatalf("turning bit %d turns bits %#x", k, d)
		}
	})
	for k := range 32 {
		for _, low := range []uint32{0, 1, 0x55555555, 0xffffffff} {
			turned := 0
			const seeds = 4096
			for s := range uint32(seeds) {
				x := low & (1<<k - 1)
				turned += int(owen(x, mix(s+golden)) >> k & 1)
			}
			// 5 sigma of a fair coin: 128 cases
			if d := math.Abs(float64(turned)/seeds - 0.5); d > 5*0.5/math.Sqrt(seeds) {
				t.Errorf("bit %d above %#x turns in %d of %d seeds", k, low, turned, seeds)
			}
		}
	}
}
