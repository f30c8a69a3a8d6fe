package bvh

import (
	"math"
	"unsafe"

	"lampbook/engine/kernel/tri"
)

// order orders floats >= +0 as integers. Of a negative one it gives a negative integer, which only ever loses as an entering distance
// and only ever fails as a leaving one. Integer comparisons become conditional moves, float comparisons would be branches.
func order(f float32) int32 { return int32(math.Float32bits(f)) }

// rows gives the offsets in a pair of the planes of an axis that a ray meets first and last.
func rows(inv float32, row uintptr) (first, last uintptr) {
	if inv < 0 {
		return row + 8, row
	}
	return row, row + 8
}

func at32(p unsafe.Pointer, offset uintptr) float32 { return *(*float32)(unsafe.Add(p, offset)) }

const stackSize = 64 // a binary tree is at most 64 levels deep, see maxDepth

// pairStack holds what a walk has still to visit: bits of the entering distance << 32 | child.
type pairStack [stackSize]uint64

// walkClosest finds the nearest hit of r that beats best.
func walkClosest(pairs []pair, tris []tri.Triangle, stack *pairStack, r *tri.Ray, best *tri.Best) {
	nx, ny, nz := r.Near[0], r.Near[1], r.Near[2]
	fx, fy, fz := r.Far[0], r.Far[1], r.Far[2]
	ix, iy, iz := r.Inv[0], r.Inv[1], r.Inv[2]
	lx, hx := rows(ix, 0)
	ly, hy := rows(iy, 16)
	lz, hz := rows(iz, 32)
	base := unsafe.Pointer(&pairs[0])
	tMin, tMax := order(r.TMin), order(best.T)
	top := uint(0)
	at := uint32(0)
	for {
		for at < leafBit {
			p := unsafe.Add(base, uintptr(at)*64)
			enter0 := max(tMin, order((at32(p, lx)-nx)*ix), order((at32(p, ly)-ny)*iy), order((at32(p, lz)-nz)*iz))
			leave0 := min(tMax, order((at32(p, hx)-fx)*ix), order((at32(p, hy)-fy)*iy), order((at32(p, hz)-fz)*iz))
			q := unsafe.Add(p, 4)
			enter1 := max(tMin, order((at32(q, lx)-nx)*ix), order((at32(q, ly)-ny)*iy), order((at32(q, lz)-nz)*iz))
			leave1 := min(tMax, order((at32(q, hx)-fx)*ix), order((at32(q, hy)-fy)*iy), order((at32(q, hz)-fz)*iz))
			c0, c1 := *(*uint32)(unsafe.Add(p, 48)), *(*uint32)(unsafe.Add(p, 52))
			if enter0 <= leave0 {
				at = c0
				if enter1 <= leave1 {
					far := enter1
					if enter1 < enter0 {
						at, c1, far = c1, c0, enter0
					}
					stack[top&(stackSize-1)] = uint64(far)<<32 | uint64(c1)
					top++
				}
			} else if enter1 <= leave1 {
				at = c1
			} else {
				goto pop
			}
		}
		tri.Closest(r, tris[at&^leafBit>>3:][:at&7+1], best)
		tMax = order(best.T)
	pop:
		for {
			if top == 0 {
				return
			}
			top--
			e := stack[top&(stackSize-1)]
			if int32(e>>32) <= tMax {
				at = uint32(e)
				break
			}
		}
	}
}

// walkOccluded reports whether anything is hit between r.TMin and r.TMax.
func walkOccluded(pairs []pair, tris []tri.Triangle, stack *pairStack, r *tri.Ray) bool {
	nx, ny, nz := r.Near[0], r.Near[1], r.Near[2]
	fx, fy, fz := r.Far[0], r.Far[1], r.Far[2]
	ix, iy, iz := r.Inv[0], r.Inv[1], r.Inv[2]
	lx, hx := rows(ix, 0)
	ly, hy := rows(iy, 16)
	lz, hz := rows(iz, 32)
	base := unsafe.Pointer(&pairs[0])
	tMin, tMax := order(r.TMin), order(r.TMax)
	top := uint(0)
	at := uint32(0)
	for {
		for at < leafBit {
			p := unsafe.Add(base, uintptr(at)*64)
			enter0 := max(tMin, order((at32(p, lx)-nx)*ix), order((at32(p, ly)-ny)*iy), order((at32(p, lz)-nz)*iz))
			leave0 := min(tMax, order((at32(p, hx)-fx)*ix), order((at32(p, hy)-fy)*iy), order((at32(p, hz)-fz)*iz))
			q := unsafe.Add(p, 4)
			enter1 := max(tMin, order((at32(q, lx)-nx)*ix), order((at32(q, ly)-ny)*iy), order((at32(q, lz)-nz)*iz))
			leave1 := min(tMax, order((at32(q, hx)-fx)*ix), order((at32(q, hy)-fy)*iy), order((at32(q, hz)-fz)*iz))
			c0, c1 := *(*uint32)(unsafe.Add(p, 48)), *(*uint32)(unsafe.Add(p, 52))
			if enter0 <= leave0 {
				at = c0
				if enter1 <= leave1 {
					if enter1 < enter0 {
						at, c1 = c1, c0
					}
					stack[top&(stackSize-1)] = uint64(c1)
					top++
				}
			} else if enter1 <= leave1 {
				at = c1
			} else {
				goto pop
			}
		}
		if tri.Any(r, tris[at&^leafBit>>3:][:at&7+1]) {
			return true
		}
	pop:
		if top == 0 {
			return false
		}
		top--
		at = uint32(stack[top&(stackSize-1)])
	}
}
