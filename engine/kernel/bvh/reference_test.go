package bvh

import (
	"math"

	"lampbook/engine/kernel/geom"
)

// The reference in this file answers what a cast must answer by testing every triangle of every placement, with its own
// arithmetic written out from the definition. It calls nothing of package tri or of this package's walks.

type refMesh struct {
	positions []geom.Vec3
	triangles [][3]uint32
}

func (m *refMesh) corners(i int) (a, b, c geom.Vec3, ok bool) {
	f := m.triangles[i]
	for _, k := range f {
		if int(k) >= len(m.positions) || !m.positions[k].Finite() {
			return a, b, c, false
		}
	}
	a, b, c = m.positions[f[0]], m.positions[f[1]], m.positions[f[2]]
	n := b.Wide().Sub(a.Wide()).Cross(c.Wide().Sub(a.Wide()))
	return a, b, c, n != geom.Vec3d{}
}

type refPlacement struct {
	mesh            *refMesh
	worldFromObject geom.Affine
	mask            Mask
}

func component(v geom.Vec3, k int) float32 { return [3]float32{v.X, v.Y, v.Z}[k] }

// refObjectRay maps r by the inverse, rounded to float32 entry by entry; false if there is none.
func refObjectRay(p *refPlacement, r geom.Ray) (geom.Ray, bool) {
	if p.worldFromObject == geom.Identity() {
		return r, true
	}
	inv, ok := p.worldFromObject.Inverse()
	if !ok {
		return r, false
	}
	row := func(v geom.Vec3d, w geom.Vec3) float32 {
		return float32(float32(v.X)*w.X) + float32(float32(v.Y)*w.Y) + float32(float32(v.Z)*w.Z)
	}
	o := geom.Ray{TMin: r.TMin, TMax: r.TMax}
	o.Org = geom.Vec3{X: row(inv.X, r.Org) + float32(inv.T.X), Y: row(inv.Y, r.Org) + float32(inv.T.Y), Z: row(inv.Z, r.Org) + float32(inv.T.Z)}
	o.Dir = geom.Vec3{X: row(inv.X, r.Dir), Y: row(inv.Y, r.Dir), Z: row(inv.Z, r.Dir)}
	return o, true
}

// refTriangle is the watertight test of Woop, Benthin & Wald 2013 (section 3, listing 1, without the culling) followed by the test against
// the triangle's own box that package tri describes at settle.
func refTriangle(r geom.Ray, bounds geom.Box, a, b, c geom.Vec3) (t, u, v float32, ok bool) {
	size := func(k int) float64 { return math.Abs(float64(component(r.Dir, k))) }
	kz := 2
	if size(0) >= size(1) && size(0) >= size(2) {
		kz = 0
	} else if size(1) >= size(2) {
		kz = 1
	}
	kx, ky := (kz+1)%3, (kz+2)%3
	dz := component(r.Dir, kz)
	sx, sy, sz := component(r.Dir, kx)/dz, component(r.Dir, ky)/dz, 1/dz
	var x, y, z [3]float32
	for i, p := range []geom.Vec3{a, b, c} {
		z[i] = component(p, kz) - component(r.Org, kz)
		x[i] = component(p, kx) - component(r.Org, kx) - float32(sx*z[i])
		y[i] = component(p, ky) - component(r.Org, ky) - float32(sy*z[i])
	}
	var e [3]float32
	zero := false
	for i := range 3 {
		j, k := (i+1)%3, (i+2)%3
		e[i] = float32(x[k]*y[j]) - float32(y[k]*x[j])
		zero = zero || e[i] == 0
	}
	if zero {
		for i := range 3 {
			j, k := (i+1)%3, (i+2)%3
			e[i] = float32(float64(float64(x[k])*float64(y[j])) - float64(float64(y[k])*float64(x[j])))
		}
	}
	neg, pos := false, false
	for _, s := range e {
		neg, pos = neg || s < 0, pos || s > 0
	}
	det := e[0] + e[1] + e[2]
	if neg && pos || det == 0 {
		return 0, 0, 0, false
	}
	inv := 1 / det
	t = float32((float32(e[0]*z[0])+float32(e[1]*z[1])+float32(e[2]*z[2]))*sz) * inv
	if !(t > r.TMin && t > 0) {
		return 0, 0, 0, false
	}
	enter, leave := math.Inf(-1), math.Inf(1)
	margin := refMargin(r, bounds)
	for k := range 3 {
		d := component(r.Dir, k)
		least := max(float32(size(kz))*0x1p-40, 0x1p-126)
		slope, shift := d, margin
		if float32(math.Abs(float64(d))) < least {
			slope = least
			if math.Signbit(float64(d)) {
				slope = -least
			}
		}
		if math.Signbit(float64(d)) {
			shift = -margin
		}
		lo := min(component(a, k), component(b, k), component(c, k))
		hi := max(component(a, k), component(b, k), component(c, k))
		if slope < 0 {
			lo, hi = hi, lo
		}
		enter = math.Max(enter, float64((lo-(component(r.Org, k)+shift))*(1/slope)))
		leave = math.Min(leave, float64((hi-(component(r.Org, k)-shift))*(1/slope)))
	}
	if math.Max(enter, float64(max(r.TMin, 0))) > leave {
		return 0, 0, 0, false
	}
	if enter > float64(t) {
		t = float32(enter)
	}
	return t, e[1] * inv, e[2] * inv, t < r.TMax
}

func refMargin(r geom.Ray, bounds geom.Box) float32 {
	var reach, far float32
	for k := range 3 {
		o := component(r.Org, k)
		for _, corner := range []geom.Vec3{bounds.Min, bounds.Max} {
			reach = max(reach, float32(math.Abs(float64(component(corner, k)-o))))
		}
		far = max(far, float32(math.Abs(float64(o))))
	}
	return float32(reach*0x1p-19) + float32(far*0x1p-22)
}

// refClosest tests everything; ties go to the lowest placement, then triangle.
func refClosest(ps []refPlacement, mask Mask, r geom.Ray) Hit {
	h := Hit{T: float32(math.Inf(1)), Placement: NoHit}
	if !(r.TMin < r.TMax) || !r.Org.Finite() || !r.Dir.Finite() || (r.Dir == geom.Vec3{}) {
		return h
	}
	for pi := range ps {
		p := &ps[pi]
		o, ok := refObjectRay(p, r)
		if !ok || p.mask&mask == 0 || (o.Dir == geom.Vec3{}) {
			continue
		}
		bounds := geom.EmptyBox()
		for i := range p.mesh.triangles {
			if a, b, c, ok := p.mesh.corners(i); ok {
				bounds = bounds.Extend(a).Extend(b).Extend(c)
			}
		}
		for i := range p.mesh.triangles {
			a, b, c, ok := p.mesh.corners(i)
			if !ok {
				continue
			}
			if t, u, v, ok := refTriangle(o, bounds, a, b, c); ok && t < h.T {
				h = Hit{t, u, v, uint32(i), uint32(pi)}
			}
		}
	}
	return h
}
