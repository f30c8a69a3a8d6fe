package sample

import "testing"

var (
	sink32 float32
	sinkUV [][2]float32
)

func BenchmarkPoints(b *testing.B) {
	uv := make([][2]float32, 16)
	for i := 0; b.Loop(); i++ {
		pixelKey(1, i, 7).Points(0, uv)
	}
	b.ReportMetric(float64(b.Elapsed().Nanoseconds())/float64(b.N*len(uv)), "ns/point")
	sinkUV = uv
}

func BenchmarkWarp(b *testing.B) {
	uv := make([][2]float32, 1024)
	pixelKey(1, 2, 3).Points(0, uv)
	b.Run("disk", func(b *testing.B) {
		for i := 0; b.Loop(); i++ {
			x, y := Disk(uv[i&1023][0], uv[i&1023][1])
			sink32 = x + y
		}
	})
	b.Run("filter", func(b *testing.B) {
		for i := 0; b.Loop(); i++ {
			sink32 = BlackmanHarrisOffset(uv[i&1023][0])
		}
	})
	b.Run("cone", func(b *testing.B) {
		for i := 0; b.Loop(); i++ {
			sink32 = Cone(0.1, uv[i&1023][0], uv[i&1023][1]).Z
		}
	})
}
