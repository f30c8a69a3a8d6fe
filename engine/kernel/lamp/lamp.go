package lamp

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
)

// Kind is a form of lamp.
type Kind uint8

// The kinds of lamp. The unit of intensity stands behind each.
const (
	Directional Kind = iota // lux, on a surface that faces the light
	Point                   // candela
	Spot                    // candela, on the axis
	Rectangle               // nit
	Disk                    // nit
	Sphere                  // nit
)

// Spec describes a lamp. Only the fields of its Kind count. All lengths are metres and all values finite.
type Spec struct {
	Kind Kind
	// Position is the lamp's place or centre; not for Directional.
	Position geom.Vec3d
	// Direction is the way light travels (Directional), the cone's axis (Spot) or the normal of the emitting side
	// (Rectangle, Disk). It need not be unit; the zero vector means straight down.
	Direction geom.Vec3d
	// Up is the way along which Height runs, as far as it is perpendicular to Direction (Rectangle). If it is parallel to
	// Direction or zero, the axis that Direction has least of takes its place.
	Up            geom.Vec3d
	Width, Height float64 // Rectangle: > 0
	Radius        float64 // Disk, Sphere: > 0
	Inner, Outer  float64 // Spot: half angles in degrees, 0 <= Inner <= Outer <= 90
	Range         float64 // Point, Spot: no light from here on; 0 means no end
	NoFalloff     bool    // Point, Spot: the intensity at 1 m holds at every distance
	TwoSided      bool    // Rectangle, Disk: the back emits too
}

// Lamp is a Spec made ready. Do not change it.
type Lamp struct {
	Kind Kind
	// Position is the lamp's centre; Axis its direction as in Spec, unit. U, V and Axis are orthonormal and
	// right-handed: U runs along Width and V along Height of a rectangle.
	Position, Axis, U, V geom.Vec3d
	HalfWidth            float64 // Rectangle: along U
	HalfHeight           float64 // Rectangle: along V
	Radius               float64 // Disk, Sphere

	spotScale, spotOffset float64 // the cone is (scale·cos + offset)², clamped
	inverseRange          float64 // 1/Range, 0 without end
	noFalloff, twoSided   bool
}

// Far is the distance given for directional lights: beyond every scene, and finite.
const Far float32 = 1e30

// tooNear is the distance in metres within which a point or spot lamp gives no light, so that none is infinite.
const tooNear = 1e-9

// New returns the lamp of a Spec.
func New(s Spec) Lamp {
	l := Lamp{
		Kind: s.Kind, Position: s.Position, Axis: s.Direction.Unit(),
		HalfWidth: s.Width / 2, HalfHeight: s.Height / 2, Radius: s.Radius,
		noFalloff: s.NoFalloff, twoSided: s.TwoSided,
	}
	if l.Axis == (geom.Vec3d{}) {
		l.Axis = geom.Vec3d{Y: -1}
	}
	l.U, l.V = frame(l.Axis, s.Up)
	if s.Range > 0 {
		l.inverseRange = 1 / s.Range
	}
	if s.Kind == Spot {
		l.spotScale, l.spotOffset = spotCone(s.Inner, s.Outer)
	}
	return l
}

// spotCone gives the constants of the cone. Source: KHR_lights_punctual, "Inner and Outer Cone Angles", reference code:
// cosines that differ by less than 0.001 count as differing by 0.001.
func spotCone(innerDeg, outerDeg float64) (scale, offset float64) {
	_, cosInner := num.SinCosWide(innerDeg * math.Pi / 180)
	_, cosOuter := num.SinCosWide(outerDeg * math.Pi / 180)
	scale = 1 / max(0.001, cosInner-cosOuter)
	return scale, -cosOuter * scale
}

// frame returns u and v such that u, v, axis are orthonormal and right-handed, v as near to up as can be.
func frame(axis, up geom.Vec3d) (u, v geom.Vec3d) {
	up = up.Unit()
	u = up.Cross(axis)
	if u.Len() < 1e-6 {
		switch x, y, z := math.Abs(axis.X), math.Abs(axis.Y), math.Abs(axis.Z); {
		case y <= x && y <= z:
			up = geom.Vec3d{Y: 1}
		case z <= x:
			up = geom.Vec3d{Z: 1}
		default:
			up = geom.Vec3d{X: 1}
		}
		u = up.Cross(axis)
	}
	u = u.Unit()
	return u, axis.Cross(u)
}

// Delta reports whether light comes from a single direction at each point, so that all samples are the same.
func (l *Lamp) Delta() bool { return l.Kind <= Spot }

// FluxOf returns the luminous flux, in lumens, that the lamp of a Spec emits in all at unit intensity: 4π for a point,
// the integral of the cone for a spot, π times the area (both sides if TwoSided) for an area lamp. Range does not count.
// It is +Inf for Directional.
func FluxOf(s Spec) float64 {
	sides := 1.0
	if s.TwoSided {
		sides = 2
	}
	switch s.Kind {
	case Point:
		return 4 * math.Pi
	case Spot:
		// With c the cosine and w the width of the soft edge in cosine, the cone is min((c - cosOuter)/w, 1)².
		scale, offset := spotCone(s.Inner, s.Outer)
		w, cosOuter := 1/scale, -offset/scale
		soft := min(1-cosOuter, w)
		return 2 * math.Pi * (soft*soft*soft/(3*w*w) + max(0, 1-cosOuter-w))
	case Rectangle:
		return sides * math.Pi * s.Width * s.Height
	case Disk:
		return sides * math.Pi * math.Pi * s.Radius * s.Radius
	case Sphere:
		return 4 * math.Pi * math.Pi * s.Radius * s.Radius
	}
	return math.Inf(1)
}

// IntensityFromPower returns the intensity (candela or nit) at which the lamp of a Spec emits so many lumens in all.
// It is 0 for Directional, whose flux has no bound.
func IntensityFromPower(s Spec, lumens float64) float64 { return lumens / FluxOf(s) }
