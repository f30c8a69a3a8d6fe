package lamp

import (
	"testing"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/sample"
)

// benchLamps hang 2 m above the origin and shine down.
var benchLamps = []struct {
	name string
	spec Spec
}{
	{"directional", Spec{Kind: Directional, Direction: geom.Vec3d{X: 1, Y: -2, Z: 0.5}}},
	{"point", Spec{Kind: Point, Position: geom.Vec3d{Y: 2}}},
	{"spot", Spec{Kind: Spot, Position: geom.Vec3d{Y: 2}, Inner: 20, Outer: 40, Range: 10}},
	{"rectangle", Spec{Kind: Rectangle, Position: geom.Vec3d{Y: 2}, Width: 1, Height: 0.5}},
	{"rectangle/even", Spec{Kind: Rectangle, Position: geom.Vec3d{Y: 2}, Width: 0.4, Height: 0.4}},
	{"disk", Spec{Kind: Disk, Position: geom.Vec3d{Y: 2}, Radius: 0.5}},
	{"sphere", Spec{Kind: Sphere, Position: geom.Vec3d{Y: 2}, Radius: 0.5}},
}

var sinkWeight float32

func BenchmarkPrepare(b *testing.B) {
	for _, c := range benchLamps {
		l := New(c.spec)
		b.Run(c.name, func(b *testing.B) {
			var q Prepared
			for i := 0; b.Loop(); i++ {
				l.Prepare(geom.Vec3{X: float32(i&15) * 0.1, Z: float32(i>>4&15) * 0.1}, &q)
			}
		})
	}
}

func BenchmarkSample(b *testing.B) {
	uv := make([][2]float32, 256)
	sample.Key(123).Points(0, uv)
	for _, c := range benchLamps {
		l := New(c.spec)
		b.Run(c.name, func(b *testing.B) {
			var q Prepared
			l.Prepare(geom.Vec3{X: 0.3, Z: 0.2}, &q)
			for i := 0; b.Loop(); i++ {
				_, _, w := q.Sample(uv[i&255][0], uv[i&255][1])
				sinkWeight += w
			}
		})
	}
}
