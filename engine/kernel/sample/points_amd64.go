//go:build !purego

package sample

import (
	"os"

	"golang.org/x/sys/cpu"
)

// haveWide says whether this machine makes eight points at once. LAMPBOOK_WALK=portable says no, for tests.
var haveWide = cpu.X86.HasAVX2 && os.Getenv("LAMPBOOK_WALK") != "portable"

//go:noescape
func pointsWide(first uint32, s *stream, uv *[2]float32, eights int)

// points fills as many of uv as it can make at once, from the first on, and returns their number.
func (s *stream) points(first uint32, uv [][2]float32) int {
	n := len(uv) &^ 7
	if n == 0 || !haveWide {
		return 0
	}
	pointsWide(first, s, &uv[0], n/8)
	return n
}
