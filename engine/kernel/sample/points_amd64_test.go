//go:build !purego

package sample

import "testing"

// TestWhichPointsRun shows that the vector code is what Points uses where the machine has it.
func TestWhichPointsRun(t *testing.T) {
	s := Key(1).stream()
	want := 0
	if haveWide {
		want = 16
	}
	if got := s.points(0, make([][2]float32, 21)); got != want {
		t.Errorf("%d of 21 points were made together, want %d", got, want)
	}
}
