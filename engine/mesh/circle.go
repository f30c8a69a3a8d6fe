package mesh

import "math"

// circle returns the cosine and sine of 2π·i/n for i in [0, n): exact at quarter turns, mirror-symmetric about both axes
// and both diagonals, and the same bits on every machine.
func circle(n int) (cos, sin []float64) {
	cos, sin = make([]float64, n), make([]float64, n)
	for i := range n {
		k, part := 8*i/n, 8*i%n
		if k&1 != 0 {
			part = n - part
		}
		cos[i], sin[i] = octant(k, float64(part)/float64(n))
	}
	return cos, sin
}

// cosSinDeg returns the cosine and sine of an angle of [0, 360) degrees, exact at quarter turns and the same bits on
// every machine.
func cosSinDeg(deg float64) (cos, sin float64) {
	eighths := deg / 45
	whole := math.Floor(eighths)
	k, f := int(whole)&7, eighths-whole
	if k&1 != 0 {
		f = 1 - f
	}
	return octant(k, f)
}

// octant returns the cosine and sine of an angle in octant k of [0, 8) that is f·45° from the nearest axis, f in [0, 1].
func octant(k int, f float64) (cos, sin float64) {
	c, s := math.Sqrt2/2, math.Sqrt2/2 // on the diagonal, where the two series differ in the last bit
	if f < 1 {
		c, s = cosSinSmall(float64(f * (math.Pi / 4)))
	}
	switch k {
	case 0:
		return c, s
	case 1:
		return s, c
	case 2:
		return -s, c
	case 3:
		return -c, s
	case 4:
		return -c, -s
	case 5:
		return -s, -c
	case 6:
		return s, -c
	}
	return c, -s
}

// cosSinSmall sums the Taylor series for x in [0, π/4]; the first term left out is below 1e-19. Every product is rounded
// before it is summed, so that no compiler may fuse them.
func cosSinSmall(x float64) (cos, sin float64) {
	x2 := float64(x * x)
	cos, sin = 1, 1
	for k := 18; k > 0; k -= 2 {
		cos = 1 - float64(float64(x2*cos)/float64(k*(k-1)))
		sin = 1 - float64(float64(x2*sin)/float64(k*(k+1)))
	}
	return cos, float64(x * sin)
}
