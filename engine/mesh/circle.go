package mesh

import "math"

// circle returns the cosine and sine of 2π·i/n for i in [0, n): exact at quarter turns, mirror-symmetric about both axes
// and both diagonals, and the same bits on every machine.
func circle(n int) (cos, sin []float64) {
	cos, sin = make([]float64, n), make([]float64, n)
	for i := range n {
		cos[i], sin[i] = octant(8*i/n, float64(8*i%n)/float64(n))
	}
	return cos, sin
}

// cosSinDeg returns the cosine and sine of an angle of [0, 360) degrees, exact at quarter turns and the same bits on
// every machine.
func cosSinDeg(deg float64) (cos, sin float64) {
	eighths := deg / 45
	whole := math.Floor(eighths)
	return octant(int(whole)&7, eighths-whole)
}

// octant returns the cosine and sine of (k + f)·45°, k in [0, 8), f in [0, 1).
func octant(k int, f float64) (cos, sin float64) {
	if k&1 != 0 {
		f = 1 - f // odd octants run back from the next axis
	}
	c, s := cosSinSmall(float64(f * (math.Pi / 4)))
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
