package sample

import (
	"testing"

	"pgregory.net/rapid"
)

// TestPointsMatchPoint compares the points made together, by whatever this machine has for it, with those made one by one.
func TestPointsMatchPoint(t *testing.T) {
	rapid.Check(t, func(t *rapid.T) {
		k := Key(rapid.Uint32().Draw(t, "key"))
		first := rapid.Uint32().Draw(t, "first")
		uv := make([][2]float32, rapid.IntRange(0, 70).Draw(t, "points"))
		k.Points(first, uv)
		for j, got := range uv {
			if u, v := k.Point(first + uint32(j)); got != [2]float32{u, v} {
				t.Fatalf("point %d of %d: %v, want %v %v", j, len(uv), got, u, v)
			}
		}
	})
}
