package tri

import "math"

// Closest tests ts against r and keeps the nearest hit with TMin < T, T below or tied with best.T, in best.
func Closest(r *Ray, ts []Triangle, best *Best) {
	kx, ky, kz := r.KX&3, r.KY&3, r.KZ&3
	ox, oy, oz := r.Org[kx], r.Org[ky], r.Org[kz]
	sx, sy := r.Shear[0], r.Shear[1]
	for i := range ts {
		q := &ts[i]
		az, bz, cz := q.A[kz]-oz, q.B[kz]-oz, q.C[kz]-oz
		ax, ay := q.A[kx]-ox-float32(sx*az), q.A[ky]-oy-float32(sy*az)
		bx, by := q.B[kx]-ox-float32(sx*bz), q.B[ky]-oy-float32(sy*bz)
		cx, cy := q.C[kx]-ox-float32(sx*cz), q.C[ky]-oy-float32(sy*cz)
		u := float32(cx*by) - float32(cy*bx)
		v := float32(ax*cy) - float32(ay*cx)
		w := float32(bx*ay) - float32(by*ax)
		if opposed(u, v, w) || mixed(u, v, w) {
			continue
		}
		if u == 0 || v == 0 || w == 0 {
			u, v, w = exactEdges(ax, ay, bx, by, cx, cy)
			if mixed(u, v, w) {
				continue
			}
		}
		det := u + v + w
		inv := 1 / det
		t := float32((float32(u*az)+float32(v*bz)+float32(w*cz))*r.Shear[2]) * inv
		if !(t > r.TMin && t <= best.T) { // also false where det is 0: t is NaN or infinite
			continue
		}
		if t = r.settle(q, t); t < best.T || t == best.T && q.Index() < best.Index {
			*best = Best{T: t, U: v * inv, V: w * inv, Index: q.Index(), Found: true}
		}
	}
}

// Any reports whether one of ts is hit with TMin < T < TMax.
func Any(r *Ray, ts []Triangle) bool {
	kx, ky, kz := r.KX&3, r.KY&3, r.KZ&3
	ox, oy, oz := r.Org[kx], r.Org[ky], r.Org[kz]
	sx, sy := r.Shear[0], r.Shear[1]
	for i := range ts {
		q := &ts[i]
		az, bz, cz := q.A[kz]-oz, q.B[kz]-oz, q.C[kz]-oz
		ax, ay := q.A[kx]-ox-float32(sx*az), q.A[ky]-oy-float32(sy*az)
		bx, by := q.B[kx]-ox-float32(sx*bz), q.B[ky]-oy-float32(sy*bz)
		cx, cy := q.C[kx]-ox-float32(sx*cz), q.C[ky]-oy-float32(sy*cz)
		u := float32(cx*by) - float32(cy*bx)
		v := float32(ax*cy) - float32(ay*cx)
		w := float32(bx*ay) - float32(by*ax)
		if opposed(u, v, w) || mixed(u, v, w) {
			continue
		}
		if u == 0 || v == 0 || w == 0 {
			u, v, w = exactEdges(ax, ay, bx, by, cx, cy)
			if mixed(u, v, w) {
				continue
			}
		}
		inv := 1 / (u + v + w)
		t := float32((float32(u*az)+float32(v*bz)+float32(w*cz))*r.Shear[2]) * inv
		if t > r.TMin && t < r.TMax && r.settle(q, t) < r.TMax {
			return true
		}
	}
	return false
}

// opposed reports whether two of the signs differ though none of the values is 0; it may miss that if their product underflows. Triangles
// that a ray passes by mostly end here.
func opposed(u, v, w float32) bool {
	bu, bv, bw := int32(math.Float32bits(u)), int32(math.Float32bits(v)), int32(math.Float32bits(w))
	return ((bu^bv)|(bu^bw)) < 0 && u*v*w != 0
}

// mixed reports whether the edge functions have both signs, which means a miss, or one is NaN.
func mixed(u, v, w float32) bool {
	return !(u >= 0 && v >= 0 && w >= 0 || u <= 0 && v <= 0 && w <= 0)
}

// exactEdges gives the edge functions where float32 found one of them zero: products of float32 are exact in float64, so
// the signs are those of the exact values.
func exactEdges(ax, ay, bx, by, cx, cy float32) (u, v, w float32) {
	axd, ayd, bxd, byd, cxd, cyd := float64(ax), float64(ay), float64(bx), float64(by), float64(cx), float64(cy)
	return float32(float64(cxd*byd) - float64(cyd*bxd)),
		float32(float64(axd*cyd) - float64(ayd*cxd)),
		float32(float64(bxd*ayd) - float64(byd*axd))
}

// settle moves a hit that rounding put before the triangle's own box to where the ray enters that box, and returns +Inf if
// the ray misses the box or leaves it before TMin. A triangle seen nearly edge on can be off by more than any margin; with this,
// the bound that a box gives on everything inside it holds for the rounded numbers too: plane distances are monotone in the
// plane's place, so no enclosing box is entered later, and the answer does not depend on the order of a walk.
func (r *Ray) settle(q *Triangle, t float32) float32 {
	enter, leave := float32(math.Inf(-1)), float32(math.Inf(1))
	for k := range 3 {
		n, f := min(q.A[k], q.B[k], q.C[k]), max(q.A[k], q.B[k], q.C[k])
		if r.Inv[k] < 0 {
			n, f = f, n
		}
		enter = max(enter, (n-r.Near[k])*r.Inv[k])
		leave = min(leave, (f-r.Far[k])*r.Inv[k])
	}
	if !(max(enter, r.TMin) <= leave) {
		return float32(math.Inf(1))
	}
	return max(t, enter)
}
