package geom

import "math"

// Vec3 is a point, direction or normal in float32. Products are rounded before they are summed, so that no
// compiler may fuse them (Go specification, "Floating-point operators") and every machine gives the same bits.
type Vec3 struct{ X, Y, Z float32 }

// Add returns a + b.
func (a Vec3) Add(b Vec3) Vec3 { return Vec3{a.X + b.X, a.Y + b.Y, a.Z + b.Z} }

// Sub returns a - b.
func (a Vec3) Sub(b Vec3) Vec3 { return Vec3{a.X - b.X, a.Y - b.Y, a.Z - b.Z} }

// Scale returns s·a, each product rounded, also where the call is inlined and a sum follows.
func (a Vec3) Scale(s float32) Vec3 {
	return Vec3{float32(a.X * s), float32(a.Y * s), float32(a.Z * s)}
}

// Neg returns -a.
func (a Vec3) Neg() Vec3 { return Vec3{-a.X, -a.Y, -a.Z} }

// AddScaled returns a + s·b, each product rounded.
func (a Vec3) AddScaled(s float32, b Vec3) Vec3 {
	return Vec3{a.X + float32(s*b.X), a.Y + float32(s*b.Y), a.Z + float32(s*b.Z)}
}

// Dot returns a·b.
func (a Vec3) Dot(b Vec3) float32 {
	return float32(a.X*b.X) + float32(a.Y*b.Y) + float32(a.Z*b.Z)
}

// Cross returns a×b.
func (a Vec3) Cross(b Vec3) Vec3 {
	return Vec3{
		float32(a.Y*b.Z) - float32(a.Z*b.Y),
		float32(a.Z*b.X) - float32(a.X*b.Z),
		float32(a.X*b.Y) - float32(a.Y*b.X),
	}
}

// Len returns |a|.
func (a Vec3) Len() float32 { return float32(math.Sqrt(float64(a.Dot(a)))) }

// Unit returns a / |a|, and the zero vector for the zero vector. Lengths between 1e-18 and 1e18 are safe.
func (a Vec3) Unit() Vec3 {
	l := a.Len()
	if l == 0 {
		return Vec3{}
	}
	return a.Scale(1 / l)
}

// Wide returns a in float64, exactly.
func (a Vec3) Wide() Vec3d { return Vec3d{float64(a.X), float64(a.Y), float64(a.Z)} }

// Finite reports whether no component is NaN or infinite.
func (a Vec3) Finite() bool {
	return float32(a.X*0)+float32(a.Y*0)+float32(a.Z*0) == 0
}

// Ray is the set of points Org + t·Dir for t in (TMin, TMax). Dir need not be unit; t counts in lengths of Dir.
type Ray struct {
	Org, Dir   Vec3 // world space unless the name says otherwise
	TMin, TMax float32
}

// At returns Org + t·Dir.
func (r Ray) At(t float32) Vec3 { return r.Org.AddScaled(t, r.Dir) }

// Box is an axis-aligned box. The empty box has Min above Max; see EmptyBox.
type Box struct{ Min, Max Vec3 }

// EmptyBox contains nothing; Extend and Union grow it.
func EmptyBox() Box {
	inf := float32(math.Inf(1))
	return Box{Vec3{inf, inf, inf}, Vec3{-inf, -inf, -inf}}
}

// Empty reports whether the box contains no point.
func (b Box) Empty() bool { return !(b.Min.X <= b.Max.X && b.Min.Y <= b.Max.Y && b.Min.Z <= b.Max.Z) }

// Extend returns the smallest box that holds b and p.
func (b Box) Extend(p Vec3) Box {
	return Box{
		Vec3{min(b.Min.X, p.X), min(b.Min.Y, p.Y), min(b.Min.Z, p.Z)},
		Vec3{max(b.Max.X, p.X), max(b.Max.Y, p.Y), max(b.Max.Z, p.Z)},
	}
}

// Union returns the smallest box that holds b and c.
func (b Box) Union(c Box) Box { return b.Extend(c.Min).Extend(c.Max) }

// Centre returns the middle of the box.
func (b Box) Centre() Vec3 {
	half := b.Max.Sub(b.Min).Scale(0.5)
	return b.Min.Add(half)
}

// Size returns the lengths of the box's edges.
func (b Box) Size() Vec3 { return b.Max.Sub(b.Min) }
