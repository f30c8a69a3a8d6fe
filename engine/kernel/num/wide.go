package num

import "math"

const (
	ln2High = 0x1.62e42feep-1       // the first 32 bits of ln 2: times an integer below 2^21 it is exact
	ln2Low  = 0x1.a39ef35793c76p-33 // what they leave
	maxExp  = 0x1.62e42fefa39efp+9  // ln of the largest float64
	minExp  = -0x1.74910d52d3051p+9 // ln of half the smallest
	expMost = 14                    // terms of the series of e^r: |r| <= ln 2 / 2 leaves 1e-19
	manyOf  = float64(1 << 20)      // integer powers above go by logarithms
	logMost = 23                    // odd powers of t, |t| <= 0.172, in the series of the logarithm: the rest is 1e-19
	half    = math.Sqrt2 / 2        // mantissas lie about 1, from √½ to √2
	tenMost = 22                    // 10^22 is the last power of ten that a float64 holds exactly
	perLn10 = 1 / math.Ln10         // logarithms to base 10
)

// ExpWide returns e^x in float64, accurate to 3e-16 relative; 0 below, +Inf above what a float64 holds.
func ExpWide(x float64) float64 {
	switch {
	case x != x:
		return x
	case x > maxExp:
		return math.Inf(1)
	case x < minExp:
		return 0
	}
	k := math.Round(float64(x * (1 / math.Ln2)))
	high := x - float64(k*ln2High)
	low := float64(k * ln2Low)
	r := high - low
	sum := 0.0
	for n := float64(expMost); n >= 2; n-- {
		sum = float64((1+sum)*r) / n
	}
	// e^r = 1 + high - low + r·sum; what rounding takes from 1 + high goes to the small part.
	most := 1 + high
	return math.Ldexp(most+(high-(most-1)+(float64(r*sum)-low)), int(k))
}

// LogWide returns the natural logarithm of x in float64, accurate to 3e-16 relative. It is -Inf at 0 and NaN below. It sums a
// long series: not for inner loops.
func LogWide(x float64) float64 {
	switch {
	case x != x || x < 0:
		return math.NaN()
	case x == 0:
		return math.Inf(-1)
	case x > math.MaxFloat64:
		return x
	}
	high, low := logOf(x)
	return high + low
}

// logOf is the logarithm of x, 0 < x < Inf, as the sum of its nearest float64 and most of what that leaves.
func logOf(x float64) (high, low float64) {
	m, e := math.Frexp(x)
	if m < half {
		m, e = 2*m, e-1
	}
	// ln(1 + f) = 2 artanh t with t = f/(2 + f), and 2t = f - t·f, of which f is exact.
	f, k := m-1, float64(e)
	t := f / (m + 1)
	t2 := float64(t * t)
	sum := 0.0
	for n := float64(logMost); n >= 3; n -= 2 {
		sum = float64((sum + 2/n) * t2)
	}
	b, bLow := twoSum(f, float64(k*ln2Low)-float64(t*(f-sum)))
	high, low = twoSum(float64(k*ln2High), b)
	return high, low + bLow
}

// twoSum returns the rounded sum of a and b and what rounding left out, exactly.
// Source: Knuth 1969, "The Art of Computer Programming" 2, 4.2.2, theorem B.
func twoSum(a, b float64) (sum, rest float64) {
	sum = a + b
	bb := sum - a
	return sum, (a - (sum - bb)) + (b - bb)
}

// twoProduct returns the rounded product of a and b, both below 2^996, and what rounding left out, exactly where that is no subnormal.
// Source: Dekker 1971, "A floating-point technique for extending the available precision", 5.
func twoProduct(a, b float64) (product, rest float64) {
	split := func(v float64) (high, low float64) {
		c := float64(v * (1<<27 + 1))
		high = c - (c - v)
		return high, v - high
	}
	product = float64(a * b)
	aHigh, aLow := split(a)
	bHigh, bLow := split(b)
	rest = float64(aHigh*bHigh) - product
	rest += float64(aHigh * bLow)
	rest += float64(aLow * bHigh)
	return product, rest + float64(aLow*bLow)
}

// Log10Wide returns the logarithm of x to base 10, like LogWide; exact at the powers of ten from 1 to 10^22.
func Log10Wide(x float64) float64 {
	l := float64(LogWide(x) * perLn10)
	if n := math.Round(l); n >= 0 && n <= tenMost && tenTo(int(n)) == x {
		return n
	}
	return l
}

// tenTo is 10^n for n in [0, 22], exactly.
func tenTo(n int) float64 {
	p := 1.0
	for range n {
		p *= 10
	}
	return p
}

// PowWide returns x^y in float64, with the special cases of IEEE 754. Whole and half powers that a float64 holds are exact; others are
// accurate to (1 + |y|)·4e-16 relative, and to |y ln x|·4e-16 where |y| > 2^20. Not for inner loops.
func PowWide(x, y float64) float64 {
	whole := math.Trunc(y)
	switch {
	case x == 0 || y == 0 || x == 1 || x-x != 0 || y-y != 0:
		return math.Pow(x, y) // a limit, without arithmetic
	case y == 0.5:
		return math.Sqrt(x)
	case y == -0.5:
		return 1 / math.Sqrt(x)
	case y != whole && x < 0:
		return math.NaN()
	}
	if math.Abs(y) <= manyOf {
		rest := y - whole
		p := power(x, int(whole))
		if rest == 0 && p != 0 {
			return p
		}
		if p != 0 && !math.IsInf(p, 0) {
			high, low := logOf(x)
			z, zLow := twoProduct(rest, high)
			root := ExpWide(z)
			root += float64(root * (zLow + float64(rest*low)))
			if q := p * root; q != 0 && !math.IsInf(q, 0) {
				return q
			}
		}
	}
	p := ExpWide(float64(y * LogWide(math.Abs(x))))
	if x < 0 && math.Mod(whole, 2) != 0 {
		return -p
	}
	return p
}

// power is x^n by squaring.
func power(x float64, n int) float64 {
	p := 1.0
	for m := max(n, -n); m > 0; m >>= 1 {
		if m&1 == 1 {
			p *= x
		}
		x *= x
	}
	if n < 0 {
		return 1 / p
	}
	return p
}

// TanWide returns the tangent of x in radians, accurate to 5e-16 relative for |x| < 1.6e6, as long as x is exact.
func TanWide(x float64) float64 {
	s, c := SinCosWide(x)
	return s / c
}

// SinhWide returns the hyperbolic sine of x, accurate to 1e-15 relative.
func SinhWide(x float64) float64 {
	if math.Abs(x) < 1 {
		x2 := float64(x * x)
		sum := 1.0 // x²/(2·3)·(1 + x²/(4·5)·(…)): the first term left out is 4e-20 of the result
		for n := 18.0; n >= 2; n -= 2 {
			sum = 1 + float64(sum*x2)/(n*(n+1))
		}
		return x * sum
	}
	h := ExpWide(math.Abs(x) / 2) // in two halves, as e^x may be too large where sinh x is not
	return math.Copysign(float64(h/2*h)-0.5/h/h, x)
}

// CoshWide returns the hyperbolic cosine of x, accurate to 1e-15 relative.
func CoshWide(x float64) float64 {
	h := ExpWide(math.Abs(x) / 2)
	return float64(h/2*h) + 0.5/h/h
}

// TanhWide returns the hyperbolic tangent of x, accurate to 2e-15 relative.
func TanhWide(x float64) float64 {
	if math.Abs(x) > 20 { // 1 - 2e-18
		return math.Copysign(1, x)
	}
	return SinhWide(x) / CoshWide(x)
}
