package sample

import (
	"math"

	"lampbook/engine/kernel/num"
)

// FilterRadius is half the width of the Blackman-Harris pixel filter, in pixels.
const FilterRadius = 1.5

// filterCells is the number of equal steps of probability in filterTable; within one, the window is taken as flat.
const filterCells = 2048

// filterTable holds the offsets at which the window's integral is i / filterCells.
var filterTable = makeFilterTable()

// BlackmanHarrisOffset returns the offset from the pixel's centre, in pixels within [-1.5, 1.5], at which a sample
// stands for u in [0, 1]: the inverse of the window's integral, so that all samples of a pixel weigh the same.
// Source: Harris 1978, minimum four-term window; Ernst, Stamminger & Greiner 2006, "Filter importance sampling".
func BlackmanHarrisOffset(u float32) float32 {
	x := float32(u * filterCells)
	i := min(max(int(x), 0), filterCells-1)
	return filterTable[i] + float32((x-float32(i))*(filterTable[i+1]-filterTable[i]))
}

// windowIntegral is the share of the Blackman-Harris window that lies left of t, t in [0, 1] across its width.
// The window is a0 - a1 cos 2πt + a2 cos 4πt - a3 cos 6πt.
func windowIntegral(t float64) float64 {
	const a0, a1, a2, a3 = 0.35875, 0.48829, 0.14128, 0.01168
	s1, c1 := num.SinCosWide(float64(2 * math.Pi * t))
	s2 := 2 * float64(s1*c1)
	s3 := float64(s1 * (3 - float64(4*float64(s1*s1))))
	sines := float64(s1*-a1) + float64(s2*(a2/2)) + float64(s3*(-a3/3))
	return t + float64(sines*(1/(2*math.Pi*a0)))
}

// makeFilterTable inverts windowIntegral by bisection, to 2^-30 of the width; the halves mirror each other exactly.
func makeFilterTable() (table [filterCells + 1]float32) {
	lo := 0.0
	for i := 0; i < filterCells/2; i++ {
		want := float64(i) / filterCells
		hi := 0.5
		for hi-lo > 0x1p-30 {
			mid := (lo + hi) / 2
			if windowIntegral(mid) < want {
				lo = mid
			} else {
				hi = mid
			}
		}
		x := float32(2 * FilterRadius * (0.5 - lo))
		table[i], table[filterCells-i] = -x, x
	}
	return table
}
