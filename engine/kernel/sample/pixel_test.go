package sample

import (
	"testing"

	"pgregory.net/rapid"
)

// isNet reports whether points in [0, 1)² put exactly one into each elementary rectangle of area 1/len(uv), len(uv) = 2^m.
func isNet(uv [][2]float32) bool {
	for cols := 1; cols <= len(uv); cols *= 2 {
		rows := len(uv) / cols
		seen := make([]bool, len(uv))
		for _, p := range uv {
			cell := int(p[0]*float32(cols))*rows + int(p[1]*float32(rows))
			if seen[cell] {
				return false
			}
			seen[cell] = true
		}
	}
	return true
}

// TestPixelsOfASquareShareANet checks the property that spreads the error: the points of an aligned square of pixels are a net together,
// and so are those of each pixel.
func TestPixelsOfASquareShareANet(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		side := 1 << rapid.IntRange(0, 2).Draw(t, "log2 side")
		count := 1 << rapid.IntRange(0, 6).Draw(t, "log2 count")
		x0 := rapid.IntRange(0, 16383/side).Draw(t, "x") * side
		y0 := rapid.IntRange(0, 16383/side).Draw(t, "y") * side
		seed, purpose := rapid.Uint32().Draw(t, "seed"), rapid.Uint32().Draw(t, "purpose")
		var all [][2]float32
		for y := range side {
			for x := range side {
				uv := make([][2]float32, count)
				PixelAt(seed, x0+x, y0+y).For(purpose, count).Points(0, uv)
				if !isNet(uv) {
					t.Fatalf("pixel %d, %d: %v is no net", x, y, uv)
				}
				all = append(all, uv...)
			}
		}
		if !isNet(all) {
			t.Fatalf("the points of %d by %d pixels are no net", side, side)
		}
	})
}

// TestLargePictures checks that pixels far apart do not draw the same points where a picture needs more than a stream holds.
func TestLargePictures(t *testing.T) {
	seen := map[[2]float32][2]int{}
	for y := 0; y < 16384; y += 1024 {
		for x := 0; x < 16384; x += 1024 {
			var uv [1][2]float32
			PixelAt(3, x, y).For(Name("key"), 65536).Points(0, uv[:])
			if p, ok := seen[uv[0]]; ok {
				t.Errorf("pixels %v and %d, %d draw the same point %v", p, x, y, uv[0])
			}
			seen[uv[0]] = [2]int{x, y}
		}
	}
}
