package run

import "testing"

// BenchmarkCasts divides a plan of a hundred thousand frames, a hundred to a cast.
func BenchmarkCasts(b *testing.B) {
	cameras := make([]int, 100_000)
	for i := range cameras {
		cameras[i] = i % 1000
	}
	p := planOf(cameras...)
	b.Run("frames=100k", func(b *testing.B) {
		for b.Loop() {
			if n := len(Casts(p, Options{})); n != 1000 {
				b.Fatalf("%d casts, want 1000", n)
			}
		}
		b.ReportMetric(float64(b.N)*float64(len(cameras))/b.Elapsed().Seconds(), "frames/s")
	})
}
