package bvh

import (
	"math"

	"lampbook/engine/kernel/tri"
)

// order orders floats >= +0 as integers. Of a negative one it gives a negative integer, which only ever loses as an entering distance
// and only ever fails as a leaving one. Integer comparisons become conditional moves, float comparisons would be branches.
func order(f float32) int32 { return int32(math.Float32bits(f)) }

const stackSize = 64 // a binary tree is at most 64 levels deep, see maxDepth

// pairStack holds what a walk has still to visit: bits of the entering distance << 32 | child.
type pairStack [stackSize]uint64

// walkClosest finds the nearest hit of r that beats best.
func walkClosest(pairs []pair, tris []tri.Triangle, stack *pairStack, r *tri.Ray, best *tri.Best) {
	nx, ny, nz := r.Near[0], r.Near[1], r.Near[2]
	fx, fy, fz := r.Far[0], r.Far[1], r.Far[2]
	ix, iy, iz := r.Inv[0], r.Inv[1], r.Inv[2]
	var sx, sy, sz uint = 0, 2, 4
	if ix < 0 {
		sx = 1
	}
	if iy < 0 {
		sy = 3
	}
	if iz < 0 {
		sz = 5
	}
	tMin, tMax := order(r.TMin), order(best.T)
	top := uint(0)
	at := uint32(0)
	for {
		for at < leafBit {
			p := &pairs[at]
			lx, ly, lz := &p[sx&7], &p[sy&7], &p[sz&7]
			hx, hy, hz := &p[(sx^1)&7], &p[(sy^1)&7], &p[(sz^1)&7]
			enter0 := max(tMin, order((lx[0]-nx)*ix), order((ly[0]-ny)*iy), order((lz[0]-nz)*iz))
			leave0 := min(tMax, order((hx[0]-fx)*ix), order((hy[0]-fy)*iy), order((hz[0]-fz)*iz))
			enter1 := max(tMin, order((lx[1]-nx)*ix), order((ly[1]-ny)*iy), order((lz[1]-nz)*iz))
			leave1 := min(tMax, order((hx[1]-fx)*ix), order((hy[1]-fy)*iy), order((hz[1]-fz)*iz))
			c0, c1 := math.Float32bits(p[6][0]), math.Float32bits(p[6][1])
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
	var sx, sy, sz uint = 0, 2, 4
	if ix < 0 {
		sx = 1
	}
	if iy < 0 {
		sy = 3
	}
	if iz < 0 {
		sz = 5
	}
	tMin, tMax := order(r.TMin), order(r.TMax)
	top := uint(0)
	at := uint32(0)
	for {
		for at < leafBit {
			p := &pairs[at]
			lx, ly, lz := &p[sx&7], &p[sy&7], &p[sz&7]
			hx, hy, hz := &p[(sx^1)&7], &p[(sy^1)&7], &p[(sz^1)&7]
			enter0 := max(tMin, order((lx[0]-nx)*ix), order((ly[0]-ny)*iy), order((lz[0]-nz)*iz))
			leave0 := min(tMax, order((hx[0]-fx)*ix), order((hy[0]-fy)*iy), order((hz[0]-fz)*iz))
			enter1 := max(tMin, order((lx[1]-nx)*ix), order((ly[1]-ny)*iy), order((lz[1]-nz)*iz))
			leave1 := min(tMax, order((hx[1]-fx)*ix), order((hy[1]-fy)*iy), order((hz[1]-fz)*iz))
			c0, c1 := math.Float32bits(p[6][0]), math.Float32bits(p[6][1])
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
