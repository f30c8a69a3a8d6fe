package sample

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
)

// The warps take u, v in [0, 1]² to a domain, uniformly unless they say otherwise. Local directions have z as their pole.

// Disk maps to the unit disc without folds and with little distortion.
// Source: Shirley & Chiu 1997, "A low distortion map between disk and square"; density 1/π.
func Disk(u, v float32) (x, y float32) {
	x64, y64 := DiskWide(u, v)
	return float32(x64), float32(y64)
}

// DiskWide is Disk before rounding to float32. The larger coordinate of the square is the radius, the ratio of the
// smaller to it the angle in eighths of a turn; which is which is chosen by bits, as a branch here is a coin toss.
func DiskWide(u, v float32) (x, y float64) {
	a, b := float64(float32(2*u)-1), float64(float32(2*v)-1)
	ab, bb := math.Float64bits(a), math.Float64bits(b)
	swap := (ab ^ bb) & uint64(int64(ab&^(1<<63)-bb&^(1<<63))>>63)
	radius := math.Float64frombits(ab ^ swap)
	if radius == 0 {
		return 0, 0
	}
	s, c := num.SinCosOctant(math.Pi / 4 * (math.Float64frombits(bb^swap) / radius))
	xb, yb := math.Float64bits(radius*c), math.Float64bits(radius*s)
	swap = (xb ^ yb) & uint64(int64(ab&^(1<<63)-bb&^(1<<63))>>63)
	return math.Float64frombits(xb ^ swap), math.Float64frombits(yb ^ swap)
}

// DiskPDF is the density of Disk, per unit area.
const DiskPDF = 1 / math.Pi

// Sphere maps to the unit sphere; density SpherePDF per steradian.
func Sphere(u, v float32) geom.Vec3 {
	z := 1 - float32(2*u)
	s, c := num.SinCos(2 * math.Pi * v)
	r := sqrt(max(0, 1-float32(z*z)))
	return geom.Vec3{X: r * c, Y: r * s, Z: z}
}

// SpherePDF is the density of Sphere, per steradian.
const SpherePDF = 1 / (4 * math.Pi)

// CosineHemisphere maps to the hemisphere about +z with density cos θ / π per steradian, Z / π of the result.
// Source: Malley's method, by Disk.
func CosineHemisphere(u, v float32) geom.Vec3 {
	x, y := Disk(u, v)
	return geom.Vec3{X: x, Y: y, Z: sqrt(max(0, 1-float32(x*x)-float32(y*y)))}
}

// Cone maps to the directions within an angle of +z; versine is 1 - cos of that angle, in (0, 2], and 1 makes the
// hemisphere. Given the versine, narrow cones lose no precision. Density ConePDF(versine) per steradian.
func Cone(versine, u, v float32) geom.Vec3 {
	x, y := Disk(u, v)
	h := float32(versine * min(1, float32(x*x)+float32(y*y))) // 1 - cos θ
	k := sqrt(versine * (2 - h))                              // sin θ over the disc's radius
	return geom.Vec3{X: x * k, Y: y * k, Z: 1 - h}
}

// ConePDF is the density of Cone, per steradian.
func ConePDF(versine float32) float32 { return 1 / (2 * math.Pi * versine) }

// Triangle maps to barycentric weights b0, b1 of the first two corners, b0 + b1 <= 1; density 2 per unit of (b0, b1).
// Source: Heitz 2019, "A low-distortion map between triangle and square".
func Triangle(u, v float32) (b0, b1 float32) {
	b0, b1 = float32(u/2), float32(v/2)
	d := b1 - b0
	if d > 0 {
		return b0, b1 + d
	}
	return b0 - d, b1
}

func sqrt(x float32) float32 { return float32(math.Sqrt(float64(x))) }
