package lamp

import (
	"math"

	"lampbook/engine/kernel/geom"
	"lampbook/engine/kernel/num"
	"lampbook/engine/kernel/sample"
)

// Sample returns the unit direction wi from the point to a place on the lamp, chosen by u, v in [0, 1), the distance to
// it, and a weight such that the irradiance of a surface with normal n is the mean over samples of
// weight · max(n·wi, 0), where nothing stands in between. A weight of 0 means no light; wi is then meaningless.
func (q *Prepared) Sample(u, v float32) (wi geom.Vec3, dist, weight float32) {
	switch q.mode {
	case single:
		return q.wi, q.dist, q.weight
	case byAngle:
		return q.rect.byAngle(float64(u), float64(v), q.weight)
	case even:
		toLamp := q.corner.AddScaled(u, q.across).AddScaled(v, q.along)
		dist = float32(math.Sqrt(float64(toLamp.Dot(toLamp))))
		i := 1 / dist
		return toLamp.Scale(i), dist, float32(float32(float32(q.weight*i)*i) * i)
	case byArea:
		return q.rect.byArea(float64(u), float64(v))
	case ellipse:
		return q.cone.disk(u, v)
	case cone:
		return q.cone.sphere(u, v, q.weight)
	}
	return geom.Vec3{}, 0, 0
}

// byAngle is section 4 of Ureña, Fajardo & King 2013: u picks the column that cuts off so much solid angle, v the place
// in it. The clamps hold rounding inside the rectangle.
func (r *rectangle) byAngle(u, v float64, weight float32) (wi geom.Vec3, dist, w float32) {
	au := float64(u*r.solidAngle) + r.k
	sin, cos := num.SinCosWide(au)
	fu := (float64(cos*r.b0) - r.b1) / sin
	xu := math.Copysign(r.z0, fu) / math.Sqrt(max(float64(fu*fu)-r.c0, 0))
	xu = min(max(xu, r.x0), r.x1)
	d2 := float64(xu*xu) + float64(r.z0*r.z0)
	h0 := r.y0 / math.Sqrt(d2+float64(r.y0*r.y0))
	h1 := r.y1 / math.Sqrt(d2+float64(r.y1*r.y1))
	hv := h0 + float64(v*(h1-h0))
	yv := float64(hv*math.Sqrt(d2)) / math.Sqrt(max(1-float64(hv*hv), 1e-20))
	yv = min(max(yv, r.y0), r.y1)
	wi, dist = r.direction(xu, yv)
	return wi, dist, weight
}

// byArea picks a place on the rectangle; the weight is the solid angle that an area of its size has there.
func (r *rectangle) byArea(u, v float64) (wi geom.Vec3, dist, w float32) {
	x := r.x0 + float64(u*(r.x1-r.x0))
	y := r.y0 + float64(v*(r.y1-r.y0))
	d2 := float64(x*x) + float64(y*y) + float64(r.z0*r.z0)
	wi, dist = r.direction(x, y)
	return wi, dist, float32(-r.z0 * r.area / float64(d2*math.Sqrt(d2)))
}

// direction returns the unit direction and the distance to the place (x, y) of the rectangle.
func (r *rectangle) direction(x, y float64) (wi geom.Vec3, dist float32) {
	d := math.Sqrt(float64(x*x) + float64(y*y) + float64(r.z0*r.z0))
	i := 1 / d
	w := r.x.Scale(x * i).Add(r.y.Scale(y * i)).Add(r.z.Scale(r.z0 * i))
	return w.Narrow(), float32(d)
}

// disk maps the square to the disc, the disc to an ellipse in the equal-area plane, and that along its radii to the
// cone, whose outline differs a little. The weight is the Jacobian: π·a·b times twice the cone's versine along the
// radius over the ellipse's squared radius. It is constant for a disk seen square on or small, and within a fifth of
// constant in the worst case, close by and at a grazing angle.
func (c *ellipticCone) disk(u, v float32) (wi geom.Vec3, dist, weight float32) {
	x, y := sample.DiskWide(u, v)
	if x == 0 && y == 0 {
		x = 1e-12 // a radius of no length has no direction
	}
	x, y = float64(x*c.cos)+float64(y*c.sin), float64(y*c.cos)-float64(x*c.sin)
	r2 := min(1, float64(x*x)+float64(y*y)) // rounding must not pass the rim
	ex, ey := c.a*x, c.b*y
	ex2, ey2 := float64(ex*ex), float64(ey*ey)
	rho2 := ex2 + ey2
	m := versine((float64(c.ia*ex2) + float64(c.ib*ey2)) / rho2)
	jac := float64(m*r2) / rho2
	h := float64(m * r2) // 1 - cos θ
	k := math.Sqrt(float64(jac * (2 - h)))
	w := c.pole.Scale(1 - h).Add(c.s.Scale(ex * k)).Add(c.t.Scale(ey * k))
	cos := w.Dot(c.normal)
	if !(cos > 0) {
		return geom.Vec3{}, 0, 0
	}
	return w.Narrow(), float32(c.height / cos), float32(2 * math.Pi * c.a * c.b * jac)
}

// sphere maps the square to the disc and that to the cone; the nearer of the two places where the direction meets the
// sphere gives the distance.
func (c *ellipticCone) sphere(u, v, weight float32) (wi geom.Vec3, dist, w float32) {
	x, y := sample.DiskWide(u, v)
	h := float64(c.versine * min(1, float64(x*x)+float64(y*y))) // 1 - cos θ
	k2 := float64(c.versine * (2 - h))                          // (sin θ over the disc's radius)²
	k := math.Sqrt(k2)
	dir := c.pole.Scale(1 - h).Add(c.s.Scale(x * k)).Add(c.t.Scale(y * k))
	across2 := float64(float64(c.far*c.far) * float64(h*(2-h))) // squared distance of the centre from the ray
	t := float64(c.far*(1-h)) - math.Sqrt(max(0, float64(c.radius*c.radius)-across2))
	return dir.Narrow(), float32(t), weight
}
