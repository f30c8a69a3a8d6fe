package lamp

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
)

// Prepared is a lamp as seen from one point: what all samples there have in common. Preparing overwrites it and
// allocates nothing. The zero value is dark.
type Prepared struct {
	mode   mode
	weight float32   // of every sample: single, byAngle, cone; even: area times the distance of the plane
	wi     geom.Vec3 // single
	dist   float32   // single
	corner geom.Vec3 // even: vector from the point to a corner
	across geom.Vec3 // even: the rectangle's edges
	along  geom.Vec3
	rect   rectangle // byAngle, byArea
	cone   ellipticCone
}

// mode says how samples are made.
type mode uint8

const (
	dark    mode = iota
	single       // one direction
	even         // rectangle seen evenly, uniform in area
	byAngle      // rectangle, uniform in solid angle
	byArea       // rectangle seen edge on, uniform in area
	ellipse      // disk
	cone         // sphere
)

// ellipticCone is what a disk or a sphere looks like: all directions within a cone about a pole. In the equal-area
// plane (Lambert 1772: a direction at the angle θ from the pole lies sqrt(2(1 - cos θ)) from the origin) it is close to
// an ellipse, and the circular cone is a circle.
type ellipticCone struct {
	pole, s, t geom.Vec3d // orthonormal; s and t along the cone's axes
	a, b       float64    // half axes in the equal-area plane
	cos, sin   float64    // disk: of the angle by which s has turned from the lamp's U
	ia, ib     float64    // squared cotangents of the half angles along s and t
	versine    float64    // circular: 1 - cos of the half angle
	normal     geom.Vec3d // disk: unit normal that points away from the shading point
	height     float64    // disk: distance of the shading point from the plane
	far        float64    // sphere: distance of the shading point from the centre
	radius     float64    // sphere
}

// rectangle is the rectangle in coordinates of the shading point: x along U, y along V, the plane at z0 < 0 along nz.
type rectangle struct {
	x, y, z        geom.Vec3d // unit axes; z points away from the lamp
	x0, x1, y0, y1 float64
	z0             float64
	b0, b1, k, c0  float64 // b0, b1, k as in the paper; c0 = 1 - b0²
	solidAngle     float64
	area           float64
}

// Dark reports whether no light at all reaches the point, whatever its normal.
func (q *Prepared) Dark() bool { return q.mode == dark }

// Prepare sets q up for the point p, in world space.
func (l *Lamp) Prepare(pWorld geom.Vec3, q *Prepared) {
	q.mode = dark
	switch l.Kind {
	case Directional:
		q.mode, q.wi, q.dist, q.weight = single, l.Axis.Neg().Narrow(), Far, 1
	case Point, Spot:
		l.preparePunctual(pWorld.Wide(), q)
	case Rectangle:
		l.prepareRectangle(pWorld.Wide(), q)
	case Disk:
		l.prepareDisk(pWorld.Wide(), q)
	case Sphere:
		l.prepareSphere(pWorld.Wide(), q)
	}
}

func (l *Lamp) preparePunctual(p geom.Vec3d, q *Prepared) {
	d := l.Position.Sub(p)
	e := l.punctual(d)
	if !(e > 0) {
		return
	}
	dist := d.Len()
	q.mode, q.wi, q.dist, q.weight = single, d.Scale(1/dist).Narrow(), float32(dist), float32(e)
}

// punctual returns the illuminance on a surface that faces a point or spot lamp, d the vector to the lamp.
// Source: KHR_lights_punctual, "Range Property" and "Inner and Outer Cone Angles".
func (l *Lamp) punctual(d geom.Vec3d) float64 {
	d2 := d.Dot(d)
	if !(d2 > tooNear*tooNear && d2 <= math.MaxFloat64) {
		return 0
	}
	e := 1.0
	if !l.noFalloff {
		e = 1 / d2
	}
	if r := float64(d2*l.inverseRange) * l.inverseRange; r > 0 {
		e *= max(0, 1-float64(r*r))
	}
	if l.Kind == Spot {
		cos := -d.Dot(l.Axis) / math.Sqrt(d2)
		c := min(1, max(0, float64(cos*l.spotScale)+l.spotOffset))
		e *= c * c
	}
	return e
}

// emittingSide returns the component of d, the vector to a flat lamp, along the lamp's axis: negative in front. ok is
// false on the plane, on a side that does not emit, and for a d that is not finite.
func (l *Lamp) emittingSide(d geom.Vec3d) (h float64, ok bool) {
	h = d.Dot(l.Axis)
	return h, h < 0 && h >= -math.MaxFloat64 || h > 0 && h <= math.MaxFloat64 && l.twoSided
}

// evenEnough is the ratio of the squared distances to a rectangle's farthest and nearest places up to which it is sampled by
// area: the weights, which go with the inverse cube of the distance, are then within 1.5^1.5 = 1.84 of each other. A scrambled
// net sums so gentle a change to next to nothing (measured on an open floor: 0.008 L* at 64 samples, against 0.002 by solid angle), far
// below what visibility leaves; and a sample costs a tenth.
const evenEnough = 1.5

// prepareRectangle samples by area what is seen evenly, and else follows Ureña, Fajardo & King 2013, "An area-preserving
// parametrization for spherical rectangles", in float64: the angles of a distant rectangle differ in their tenth
// decimal. Where even that is too little, the rectangle is so thin that sampling it by area is as good.
func (l *Lamp) prepareRectangle(p geom.Vec3d, q *Prepared) {
	d := l.Position.Sub(p)
	h, ok := l.emittingSide(d)
	if !ok {
		return
	}
	r := &q.rect
	r.x, r.y, r.z, r.z0 = l.U, l.V, l.Axis, h
	if h > 0 {
		r.z, r.z0 = l.Axis.Neg(), -h
	}
	cx, cy := d.Dot(l.U), d.Dot(l.V)
	ax, ay := math.Abs(cx), math.Abs(cy)
	farX, farY := ax+l.HalfWidth, ay+l.HalfHeight
	nearX, nearY := max(0, ax-l.HalfWidth), max(0, ay-l.HalfHeight)
	h2 := float64(h * h)
	if float64(farX*farX)+float64(farY*farY)+h2 <= evenEnough*(float64(nearX*nearX)+float64(nearY*nearY)+h2) {
		q.flat(d, l, math.Abs(h))
		return
	}
	r.x0, r.x1 = cx-l.HalfWidth, cx+l.HalfWidth
	r.y0, r.y1 = cy-l.HalfHeight, cy+l.HalfHeight
	z2 := float64(r.z0 * r.z0)
	// z components of the unit normals of the planes through the point and each side
	n0 := -r.y0 / math.Sqrt(float64(r.y0*r.y0)+z2)
	n1 := r.x1 / math.Sqrt(float64(r.x1*r.x1)+z2)
	n2 := r.y1 / math.Sqrt(float64(r.y1*r.y1)+z2)
	n3 := -r.x0 / math.Sqrt(float64(r.x0*r.x0)+z2)
	// An inner angle is acos(-n·n') = π/2 + asin(n·n'); the four sum to 2π + solid angle.
	s23 := asinSum(float64(n2*n3), float64(n3*n0))
	r.solidAngle = asinSum(float64(n0*n1), float64(n1*n2)) + s23
	r.area = 4 * l.HalfWidth * l.HalfHeight
	if !(r.solidAngle > smallAngle) {
		q.mode = byArea
		return
	}
	r.b0, r.b1, r.c0 = n0, n2, z2/(float64(r.y0*r.y0)+z2)
	r.k = math.Pi - s23
	q.mode, q.weight = byAngle, float32(r.solidAngle)
}

// flat readies q for sampling by area; d is the vector to the rectangle's centre and h the distance of its plane.
func (q *Prepared) flat(d geom.Vec3d, l *Lamp, h float64) {
	across, along := l.U.Scale(2*l.HalfWidth), l.V.Scale(2*l.HalfHeight)
	q.mode = even
	q.corner = d.Sub(l.U.Scale(l.HalfWidth)).Sub(l.V.Scale(l.HalfHeight)).Narrow()
	q.across, q.along = across.Narrow(), along.Narrow()
	q.weight = float32(4 * l.HalfWidth * l.HalfHeight * h)
}

// asinSum returns asin a + asin b as one angle, by the addition theorem.
func asinSum(a, b float64) float64 {
	ca, cb := math.Sqrt((1-a)*(1+a)), math.Sqrt((1-b)*(1+b))
	return num.Atan2Wide(float64(a*cb)+float64(b*ca), float64(ca*cb)-float64(a*b))
}

// smallAngle in steradians: a rectangle that looks smaller is sampled by area. At this size rounding moves samples by
// 1e-9 of the rectangle.
const smallAngle = 1e-6

// prepareDisk finds the cone of directions to the disk. Its rim is a circle, so the cone is quadratic; the plane through
// the point, the centre and the normal holds its pole, which halves the angle between the two rim points there.
func (l *Lamp) prepareDisk(p geom.Vec3d, q *Prepared) {
	d := l.Position.Sub(p)
	h, ok := l.emittingSide(d)
	if !ok {
		return
	}
	c := &q.cone
	c.normal, c.height = l.Axis, h
	if h < 0 {
		c.normal, c.height = l.Axis.Neg(), -h
	}
	h = c.height
	// In the plane of symmetry: first coordinate from the foot of the point towards the centre, second the height.
	radial := d.Sub(c.normal.Scale(h))
	rho := radial.Len()
	e := l.U
	if rho > 1e-9*l.Radius {
		e = radial.Scale(1 / rho)
	}
	near, far := rho-l.Radius, rho+l.Radius
	h2 := float64(h * h)
	l1, l2 := math.Sqrt(float64(near*near)+h2), math.Sqrt(float64(far*far)+h2)
	// The slope of the bisector, zx/zy. Under the disk the numerator near·l2 + far·l1 is a difference of nearly equal
	// terms, and the third binomial formula gives it without loss.
	slope := (float64(near*l2) + float64(far*l1)) / float64(h*(l1+l2))
	if near < 0 {
		slope = 4 * rho * l.Radius * h / ((l1 + l2) * (float64(far*l1) - float64(near*l2)))
	}
	zy := 1 / math.Sqrt(1+float64(slope*slope))
	zx := slope * zy
	if !(zy > 0) {
		return
	}
	// The cotangent of half the angle between the rim points, from its sine 2Rh/l1l2 and cosine dot/l1l2.
	sine, dot := 2*float64(l.Radius*h), float64(near*far)+h2
	cot := (float64(l1*l2) + dot) / sine
	if dot < 0 {
		cot = sine / (float64(l1*l2) - dot)
	}
	c.ia = float64(cot * cot)
	// The pole meets the disk at the distance t; half the chord across, there, spans the other half angle.
	t := h / zy
	off := float64(t*zx) - rho
	chord2 := float64((l.Radius - off) * (l.Radius + off))
	if !(chord2 > 0) {
		return
	}
	c.ib = float64(t*t) / chord2
	c.a, c.b = math.Sqrt(2*versine(c.ia)), math.Sqrt(2*versine(c.ib))
	c.pole = e.Scale(zx).Add(c.normal.Scale(zy))
	c.s = e.Scale(zy).Sub(c.normal.Scale(zx))
	c.t = e.Cross(c.normal)
	// Straight under the disk e turns about with the point. Samples of neighbouring points must not turn with it, or they would no
	// longer complete each other: places on the disc are counted from U.
	c.cos, c.sin = e.Dot(l.U), e.Dot(l.U.Cross(c.normal))
	q.mode = ellipse
}

// versine returns 1 - cos of the angle whose squared cotangent is i, without cancellation.
func versine(i float64) float64 {
	return 1 / ((1 + i) * (1 + math.Sqrt(i/(1+i))))
}

// prepareSphere finds the cone of directions to the sphere. Source: Shirley, Wang & Zimmerman 1996, "Monte Carlo
// techniques for direct lighting calculations"; 1 - cos in the place of cos keeps narrow cones exact.
func (l *Lamp) prepareSphere(p geom.Vec3d, q *Prepared) {
	d := l.Position.Sub(p)
	far := d.Len()
	if !(far > l.Radius && far <= math.MaxFloat64) {
		return
	}
	sin := l.Radius / far
	cos2 := float64((far-l.Radius)/far) * ((far + l.Radius) / far)
	c := &q.cone
	c.versine = float64(sin*sin) / (1 + math.Sqrt(cos2))
	c.far, c.radius = far, l.Radius
	c.pole = d.Scale(1 / far)
	c.s, c.t = around(c.pole)
	q.mode, q.weight = cone, float32(2*math.Pi*c.versine)
}

// around returns two unit vectors that with the unit vector n make an orthonormal basis: the x and z axes, carried along by the shortest turn
// from the y axis to n. They change smoothly with n but straight below, so that samples of neighbouring points complete each other.
// Source: Frisvad 2012, "Building an orthonormal basis from a 3D unit vector without normalization", with y as the pole.
func around(n geom.Vec3d) (s, t geom.Vec3d) {
	if n.Y < -1+1e-9 {
		return geom.Vec3d{X: 1}, geom.Vec3d{Z: -1}
	}
	a := 1 / (1 + n.Y)
	b := float64(-n.X*n.Z) * a
	return geom.Vec3d{X: 1 - float64(float64(n.X*n.X)*a), Y: -n.X, Z: b}, geom.Vec3d{X: b, Y: -n.Z, Z: 1 - float64(float64(n.Z*n.Z)*a)}
}
