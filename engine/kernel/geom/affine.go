package geom

import (
	"math"

	"lampbook/engine/kernel/num"
)

// Vec3d is a point, direction or normal in float64, for what sets a scene up.
type Vec3d struct{ X, Y, Z float64 }

// Add returns a + b.
func (a Vec3d) Add(b Vec3d) Vec3d { return Vec3d{a.X + b.X, a.Y + b.Y, a.Z + b.Z} }

// Sub returns a - b.
func (a Vec3d) Sub(b Vec3d) Vec3d { return Vec3d{a.X - b.X, a.Y - b.Y, a.Z - b.Z} }

// Scale returns s·a, each product rounded, also where the call is inlined and a sum follows.
func (a Vec3d) Scale(s float64) Vec3d {
	return Vec3d{float64(a.X * s), float64(a.Y * s), float64(a.Z * s)}
}

// Neg returns -a.
func (a Vec3d) Neg() Vec3d { return Vec3d{-a.X, -a.Y, -a.Z} }

// Dot returns a·b.
func (a Vec3d) Dot(b Vec3d) float64 {
	return float64(a.X*b.X) + float64(a.Y*b.Y) + float64(a.Z*b.Z)
}

// Cross returns a×b.
func (a Vec3d) Cross(b Vec3d) Vec3d {
	return Vec3d{
		float64(a.Y*b.Z) - float64(a.Z*b.Y),
		float64(a.Z*b.X) - float64(a.X*b.Z),
		float64(a.X*b.Y) - float64(a.Y*b.X),
	}
}

// Len returns |a|.
func (a Vec3d) Len() float64 { return math.Sqrt(a.Dot(a)) }

// Unit returns a / |a|, and the zero vector for the zero vector.
func (a Vec3d) Unit() Vec3d {
	l := a.Len()
	if l == 0 {
		return Vec3d{}
	}
	return Vec3d{a.X / l, a.Y / l, a.Z / l}
}

// Narrow returns a rounded to float32.
func (a Vec3d) Narrow() Vec3 { return Vec3{float32(a.X), float32(a.Y), float32(a.Z)} }

// Affine is a linear map and a translation: the 3 by 4 matrix [M | T], row by row, acting on column vectors.
// Name values by what they map: pWorld := worldFromObject.Point(pObject).
type Affine struct {
	X, Y, Z Vec3d // rows of the linear part
	T       Vec3d // translation
}

// Identity maps everything to itself.
func Identity() Affine {
	return Affine{X: Vec3d{X: 1}, Y: Vec3d{Y: 1}, Z: Vec3d{Z: 1}}
}

// Translate moves by t.
func Translate(t Vec3d) Affine {
	a := Identity()
	a.T = t
	return a
}

// ScaleBy stretches each axis by s.
func ScaleBy(s Vec3d) Affine {
	return Affine{X: Vec3d{X: s.X}, Y: Vec3d{Y: s.Y}, Z: Vec3d{Z: s.Z}}
}

// Turn rotates about x, then about y, then about z, by degrees, counter-clockwise seen from the axis' tip.
// Multiples of 90 degrees are exact.
func Turn(deg Vec3d) Affine {
	sx, cx := sinCosDeg(deg.X)
	sy, cy := sinCosDeg(deg.Y)
	sz, cz := sinCosDeg(deg.Z)
	rx := Affine{X: Vec3d{X: 1}, Y: Vec3d{Y: cx, Z: -sx}, Z: Vec3d{Y: sx, Z: cx}}
	ry := Affine{X: Vec3d{X: cy, Z: sy}, Y: Vec3d{Y: 1}, Z: Vec3d{X: -sy, Z: cy}}
	rz := Affine{X: Vec3d{X: cz, Y: -sz}, Y: Vec3d{X: sz, Y: cz}, Z: Vec3d{Z: 1}}
	return rz.Mul(ry).Mul(rx)
}

// sinCosDeg is exact at multiples of 90 degrees.
func sinCosDeg(deg float64) (sin, cos float64) {
	r := math.Mod(deg, 360)
	if r < 0 {
		r += 360
	}
	switch r {
	case 0:
		return 0, 1
	case 90:
		return 1, 0
	case 180:
		return 0, -1
	case 270:
		return -1, 0
	}
	return num.SinCosWide(float64(r * (math.Pi / 180)))
}

// Mul returns the map that applies b first, then a.
func (a Affine) Mul(b Affine) Affine {
	col := func(x, y, z float64) Vec3d { return a.Dir(Vec3d{x, y, z}) }
	c0 := col(b.X.X, b.Y.X, b.Z.X)
	c1 := col(b.X.Y, b.Y.Y, b.Z.Y)
	c2 := col(b.X.Z, b.Y.Z, b.Z.Z)
	return Affine{
		X: Vec3d{c0.X, c1.X, c2.X},
		Y: Vec3d{c0.Y, c1.Y, c2.Y},
		Z: Vec3d{c0.Z, c1.Z, c2.Z},
		T: a.Point(b.T),
	}
}

// Point maps a point.
func (a Affine) Point(p Vec3d) Vec3d { return a.Dir(p).Add(a.T) }

// Dir maps a direction: no translation.
func (a Affine) Dir(v Vec3d) Vec3d { return Vec3d{a.X.Dot(v), a.Y.Dot(v), a.Z.Dot(v)} }

// Normal maps a normal by the cofactor matrix, which is the inverse transpose times the determinant and needs no
// inverse: Normal(u×v) = Dir(u)×Dir(v). Where Det is negative (a mirroring map) the result points inward if n pointed
// outward. The result is not unit.
func (a Affine) Normal(n Vec3d) Vec3d {
	return Vec3d{a.Y.Cross(a.Z).Dot(n), a.Z.Cross(a.X).Dot(n), a.X.Cross(a.Y).Dot(n)}
}

// Det is the determinant of the linear part: the factor by which volumes grow, negative for a mirroring map.
func (a Affine) Det() float64 { return a.X.Dot(a.Y.Cross(a.Z)) }

// Inverse returns the map that undoes a. ok is false if a flattens space (determinant 0 or not finite).
func (a Affine) Inverse() (inv Affine, ok bool) {
	det := a.Det()
	if det == 0 || math.IsNaN(det) || math.IsInf(det, 0) {
		return Affine{}, false
	}
	c0, c1, c2 := a.Y.Cross(a.Z), a.Z.Cross(a.X), a.X.Cross(a.Y)
	inv = Affine{
		X: Vec3d{c0.X / det, c1.X / det, c2.X / det},
		Y: Vec3d{c0.Y / det, c1.Y / det, c2.Y / det},
		Z: Vec3d{c0.Z / det, c1.Z / det, c2.Z / det},
	}
	inv.T = inv.Dir(a.T).Neg()
	return inv, true
}

// Box returns the smallest axis-aligned box around the mapped box, rounded outward to float32.
func (a Affine) Box(b Box) Box {
	if b.Empty() {
		return b
	}
	out := EmptyBox()
	lo, hi := b.Min.Wide(), b.Max.Wide()
	for i := range 8 {
		p := lo
		if i&1 != 0 {
			p.X = hi.X
		}
		if i&2 != 0 {
			p.Y = hi.Y
		}
		if i&4 != 0 {
			p.Z = hi.Z
		}
		q := a.Point(p)
		out.Min = Vec3{min(out.Min.X, down32(q.X)), min(out.Min.Y, down32(q.Y)), min(out.Min.Z, down32(q.Z))}
		out.Max = Vec3{max(out.Max.X, up32(q.X)), max(out.Max.Y, up32(q.Y)), max(out.Max.Z, up32(q.Z))}
	}
	return out
}

// down32 is the largest float32 not above x; up32 the smallest not below.
func down32(x float64) float32 {
	f := float32(x)
	if float64(f) > x {
		f = math.Nextafter32(f, float32(math.Inf(-1)))
	}
	return f
}

func up32(x float64) float32 {
	f := float32(x)
	if float64(f) < x {
		f = math.Nextafter32(f, float32(math.Inf(1)))
	}
	return f
}
