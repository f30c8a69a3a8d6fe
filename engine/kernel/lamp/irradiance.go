package lamp

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
)

// Irradiance returns the illuminance in lux at the point p of a surface with unit normal n, nothing in between, at unit
// intensity. It is exact up to rounding: the inverse square and cosine laws, Lambert's polygon formula cut at the
// surface's horizon, contour integrals for the disk, and the sphere's closed form, cut at the horizon too.
// It is for meters and tests; it may allocate.
func (l *Lamp) Irradiance(pWorld, n geom.Vec3d) float64 {
	d := l.Position.Sub(pWorld)
	switch l.Kind {
	case Directional:
		return max(0, -n.Dot(l.Axis))
	case Point, Spot:
		e := l.punctual(d)
		if e == 0 {
			return 0
		}
		return e * max(0, n.Dot(d)/d.Len())
	case Sphere:
		return sphereIrradiance(d, n, l.Radius)
	}
	if _, ok := l.emittingSide(d); !ok {
		return 0
	}
	if l.Kind == Disk {
		return l.diskIrradiance(d, n)
	}
	u, v := l.U.Scale(l.HalfWidth), l.V.Scale(l.HalfHeight)
	return math.Abs(polygonIrradiance([]geom.Vec3d{
		d.Sub(u).Sub(v), d.Add(u).Sub(v), d.Add(u).Add(v), d.Sub(u).Add(v),
	}, n))
}

// polygonIrradiance is the irradiance at the origin of a surface with normal n from a polygon of unit radiance. Its sign
// follows the sense of the corners. Source: Lambert 1760, in the form of Stark 2000, "Vertex-based formulations of
// irradiance from polygonal sources": half the sum over edges of the angle under which the edge appears times the cosine
// between n and the normal of the edge's plane, after the part below the horizon is cut off.
func polygonIrradiance(corners []geom.Vec3d, n geom.Vec3d) float64 {
	kept := make([]geom.Vec3d, 0, len(corners)+1)
	for i, a := range corners {
		b := corners[(i+1)%len(corners)]
		ha, hb := n.Dot(a), n.Dot(b)
		if ha >= 0 {
			kept = append(kept, a)
		}
		if ha < 0 && hb > 0 || ha > 0 && hb < 0 {
			kept = append(kept, a.Add(b.Sub(a).Scale(ha/(ha-hb))))
		}
	}
	sum := 0.0
	for i, a := range kept {
		sum += edge(a, kept[(i+1)%len(kept)], n)
	}
	return sum / 2
}

// edge is the angle between a and b times the cosine between n and a×b.
func edge(a, b, n geom.Vec3d) float64 {
	c := a.Cross(b)
	l := c.Len()
	if l == 0 {
		return 0
	}
	return float64(num.Atan2Wide(l, a.Dot(b)) * n.Dot(c) / l)
}

// diskIrradiance is the irradiance from the disk whose centre is at d from the point: half the integral of
// (r × dr)·n / |r|² along the rim, Lambert's formula in the limit of many edges. With r the rim at the angle φ from the
// direction away from the point's foot, |r|² = A + B cos φ, and all three integrals over φ are elementary. Where the
// horizon cuts the disk, the chord joins the ends of the arc.
func (l *Lamp) diskIrradiance(d, n geom.Vec3d) float64 {
	normal, h := l.Axis, d.Dot(l.Axis)
	if h < 0 {
		normal, h = l.Axis.Neg(), -h
	}
	radial := d.Sub(normal.Scale(h))
	rho := radial.Len()
	e1 := l.U
	if rho > 1e-12*l.Radius {
		e1 = radial.Unit()
	}
	e2 := normal.Cross(e1)
	n1, n2, n3 := n.Dot(e1), n.Dot(e2), n.Dot(normal)
	rim := func(phi float64) geom.Vec3d {
		sin, cos := num.SinCosWide(phi)
		return d.Add(e1.Scale(float64(l.Radius * cos))).Add(e2.Scale(float64(l.Radius * sin)))
	}

	// 1. The lit arc: n·r >= 0 within open of the angle at which the rim stands highest above the horizon.
	from, to, chord := -math.Pi, math.Pi, 0.0
	height, swing := n.Dot(d), float64(l.Radius*math.Sqrt(float64(n1*n1)+float64(n2*n2)))
	if height <= -swing {
		return 0
	}
	if height < swing {
		top, open := num.Atan2Wide(n2, n1), num.AcosWide(-height/swing)
		from, to = top-open, top+open
		chord = edge(rim(to), rim(from), n)
	}

	// 2. The integrals of 1, cos φ and sin φ over A + B cos φ; w² = A² - B².
	minus, plus := rho-l.Radius, rho+l.Radius
	h2 := float64(h * h)
	lo, hi := float64(minus*minus)+h2, float64(plus*plus)+h2 // A - B, A + B
	a, b, w := float64((hi+lo)/2), 2*float64(rho*l.Radius), math.Sqrt(float64(lo*hi))
	s0, c0 := num.SinCosWide(from)
	s1, c1 := num.SinCosWide(to)
	den0, den1 := a+w+float64(b*c0), a+w+float64(b*c1)
	turn := to - from
	psi := (num.Atan2Wide(float64(b*s1), den1) - num.Atan2Wide(float64(b*s0), den0))
	psiOverB, sinOver := s1/den1-s0/den0, -(c1-c0)/a // the limits for b = 0
	if b > 0 {
		psiOverB = psi / b
		sinOver = -2 / b * num.AtanhWide(float64(b*(c1-c0))/(hi+lo+float64(b*(c0+c1))))
	}
	one := (turn - float64(2*psi)) / w
	cosOver := float64(2*a/w*psiOverB) - float64(b*turn)/float64(w*(w+a))

	rh := float64(l.Radius * h)
	arc := float64(n3*(float64(l.Radius*l.Radius*one)+float64(rho*l.Radius*cosOver))) -
		float64(n1*float64(rh*cosOver)) - float64(n2*float64(rh*sinOver))
	return max(0, (arc+chord)/2)
}

// sphereIrradiance is the irradiance from a sphere of radius r whose centre is at d.
// Source: Howell, "A catalog of radiation heat transfer configuration factors", element to sphere.
func sphereIrradiance(d, n geom.Vec3d, r float64) float64 {
	far := d.Len()
	if !(far > r && far <= math.MaxFloat64) {
		return 0
	}
	h, cos := far/r, n.Dot(d)/far
	if float64(cos*h) <= -1 {
		return 0
	}
	if float64(cos*h) >= 1 {
		return math.Pi * cos / (h * h)
	}
	// The horizon cuts the sphere. π/2 - asin of the catalogue's form is taken as one angle: the difference would lose
	// all digits of a distant sphere.
	sin := math.Sqrt((1 - cos) * (1 + cos))
	s := math.Sqrt((h - 1) * (h + 1))
	root := math.Sqrt(max(0, 1-float64(float64(h*h)*float64(cos*cos))))
	gap := num.Atan2Wide(root, s)
	arc := num.AcosWide(min(1, max(-1, -s*cos/sin)))
	return max(0, gap+(float64(cos*arc)-float64(s*root))/(h*h))
}
