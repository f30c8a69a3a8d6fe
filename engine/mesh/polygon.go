package mesh

import (
	"cmp"
	"fmt"
	"slices"
)

// point2 is a point in the plane of a polygon.
type point2 struct{ x, y float64 }

// orient is twice the area of the triangle abc: positive where it turns counter-clockwise. It is exact where the
// coordinates are float32 values of like size.
func orient(a, b, c point2) float64 {
	return float64((b.x-a.x)*(c.y-a.y)) - float64((b.y-a.y)*(c.x-a.x))
}

// polygonArea is the signed area, positive counter-clockwise. Source: the shoelace formula.
func polygonArea(p []point2) float64 {
	sum := 0.0
	for i := 1; i+1 < len(p); i++ {
		sum += orient(p[0], p[i], p[i+1])
	}
	return sum / 2
}

// bounds2 returns the corners of the smallest rectangle around p.
func bounds2(p []point2) (lo, hi point2) {
	lo, hi = p[0], p[0]
	for _, q := range p {
		lo = point2{min(lo.x, q.x), min(lo.y, q.y)}
		hi = point2{max(hi.x, q.x), max(hi.y, q.y)}
	}
	return lo, hi
}

// clipper cuts polygons into triangles by clipping ears (Meisters 1975). It may be used again for the next polygon.
type clipper struct {
	next, prev []int32 // neighbours among the corners that are left; next is -1 for a clipped corner
	reflex     []bool  // whether a corner is left and not convex: such corners may lie inside an ear
	sorted     []int32 // the reflex corners along the polygon's longer side, with some that are reflex no more
	gone       int     // how many of sorted are reflex no more
	tall       bool    // the longer side is that of y
	ears       []int32 // corners that were ears when last looked at, first in, first out
	out        [][3]int32
	tests      int // corners looked at so far, over all polygons: the measure of the work done
	maxTests   int // clip gives up when it has looked at more, > 0
}

// clip returns n - 2 triangles of corner indices for a counter-clockwise polygon of n >= 3 corners. ok is false if the polygon
// was not simple, or maxTests was passed: the triangles then have the right corners and sum of signed areas but may overlap.
// The result is valid until the next call. Cost: corners times the reflex corners beside an ear.
func (c *clipper) clip(p []point2) (triangles [][3]int32, ok bool) {
	n := len(p)
	c.next, c.prev, c.reflex, c.sorted, c.ears, c.out = c.next[:0], c.prev[:0], c.reflex[:0], c.sorted[:0], c.ears[:0], c.out[:0]
	c.gone = 0
	for i := range n {
		c.next = append(c.next, int32((i+1)%n))
		c.prev = append(c.prev, int32((i+n-1)%n))
	}
	for i := range n {
		c.reflex = append(c.reflex, orient(p[c.prev[i]], p[i], p[c.next[i]]) <= 0)
		if c.reflex[i] {
			c.sorted = append(c.sorted, int32(i))
		}
	}
	lo, hi := bounds2(p)
	c.tall = hi.y-lo.y > hi.x-lo.x
	slices.SortFunc(c.sorted, func(i, j int32) int { return cmp.Compare(c.along(p[i]), c.along(p[j])) })
	c.findEars(p, 0)
	ok = true
	last, first := int32(0), 0
	for left := n; left > 3; left-- {
		if c.spent() {
			return c.fan(last), false
		}
		tip := int32(-1)
		for tip < 0 && first < len(c.ears) {
			if i := c.ears[first]; c.next[i] >= 0 && c.ear(p, i) {
				tip = i
			}
			first++
		}
		if tip < 0 { // a corner that was in the way may be gone by now: look again
			c.ears, first = c.ears[:0], 1
			c.findEars(p, last)
			if len(c.ears) > 0 {
				tip = c.ears[0]
			} else {
				tip, first, ok = last, 0, false // any corner will do
			}
		}
		a, b := c.prev[tip], c.next[tip]
		c.out = append(c.out, [3]int32{a, tip, b})
		c.next[a], c.prev[b], c.next[tip] = b, a, -1
		last = b
		c.drop(tip)
		for _, i := range [2]int32{a, b} {
			if orient(p[c.prev[i]], p[i], p[c.next[i]]) > 0 {
				c.drop(i) // a corner never becomes reflex again
			}
			if c.ear(p, i) {
				c.ears = append(c.ears, i)
			}
		}
	}
	c.out = append(c.out, [3]int32{c.prev[last], last, c.next[last]})
	return c.out, ok
}

// along is the coordinate on the longer side.
func (c *clipper) along(q point2) float64 {
	if c.tall {
		return q.y
	}
	return q.x
}

// spent reports whether the bound on the work is passed.
func (c *clipper) spent() bool { return c.tests > c.maxTests }

// fan cuts what is left from one corner, ear or not.
func (c *clipper) fan(from int32) [][3]int32 {
	for b := c.next[from]; c.next[b] != from; b = c.next[b] {
		c.out = append(c.out, [3]int32{from, b, c.next[b]})
	}
	return c.out
}

// findEars looks at every corner that is left, from corner from on.
func (c *clipper) findEars(p []point2, from int32) {
	for i := from; ; {
		if c.ear(p, i) {
			c.ears = append(c.ears, i)
		}
		if i = c.next[i]; i == from || c.spent() {
			return
		}
	}
}

// drop takes a corner out of the reflex ones; the list is cleared of such corners when half of it are.
func (c *clipper) drop(i int32) {
	if !c.reflex[i] {
		return
	}
	c.reflex[i] = false
	if c.gone++; 2*c.gone > len(c.sorted) {
		c.sorted = slices.DeleteFunc(c.sorted, func(i int32) bool { return !c.reflex[i] })
		c.gone = 0
	}
}

// ear reports whether the triangle of corner tip and its neighbours has an area and holds no other corner, its edges included.
func (c *clipper) ear(p []point2, tip int32) bool {
	c.tests++
	pa, pt, pb := p[c.prev[tip]], p[tip], p[c.next[tip]]
	if !(orient(pa, pt, pb) > 0) {
		return false
	}
	lo := min(c.along(pa), c.along(pt), c.along(pb))
	hi := max(c.along(pa), c.along(pt), c.along(pb))
	first, _ := slices.BinarySearchFunc(c.sorted, lo, func(i int32, at float64) int { return cmp.Compare(c.along(p[i]), at) })
	for _, i := range c.sorted[first:] {
		q := p[i]
		if c.along(q) > hi {
			break
		}
		c.tests++
		if c.reflex[i] && q != pa && q != pb && q != pt && orient(pa, pt, q) >= 0 && orient(pt, pb, q) >= 0 && orient(pb, pa, q) >= 0 {
			return false
		}
	}
	return true
}

// checkSimple refuses an outline whose edges meet anywhere but at their common corners. Edge i runs from point i to the
// next; both are numbered from 1. Cost: the square of the number of points.
func checkSimple(p []point2) error {
	n := len(p)
	for i := range n {
		a, b := p[i], p[(i+1)%n]
		minX, maxX, minY, maxY := min(a.x, b.x), max(a.x, b.x), min(a.y, b.y), max(a.y, b.y)
		for j := i + 1; j < n; j++ {
			c, d := p[j], p[(j+1)%n]
			if max(c.x, d.x) < minX || min(c.x, d.x) > maxX || max(c.y, d.y) < minY || min(c.y, d.y) > maxY {
				continue
			}
			var meet bool
			switch {
			case j == i+1:
				meet = foldsBack(a, b, d)
			case i == 0 && j == n-1:
				meet = foldsBack(c, d, b)
			default:
				meet = segmentsMeet(a, b, c, d)
			}
			if meet {
				return fmt.Errorf("outline edges %d and %d meet: an outline must not touch or cross itself", i+1, j+1)
			}
		}
	}
	return nil
}

// foldsBack reports whether the edge from b to c runs back over the edge from a to b.
func foldsBack(a, b, c point2) bool {
	return orient(a, b, c) == 0 && float64((a.x-b.x)*(c.x-b.x))+float64((a.y-b.y)*(c.y-b.y)) > 0
}

// segmentsMeet reports whether the closed segments ab and cd have a point in common; their boxes are known to overlap.
func segmentsMeet(a, b, c, d point2) bool {
	abc, abd := orient(a, b, c), orient(a, b, d)
	cda, cdb := orient(c, d, a), orient(c, d, b)
	return sign(abc)*sign(abd) <= 0 && sign(cda)*sign(cdb) <= 0
}

func sign(v float64) int {
	switch {
	case v > 0:
		return 1
	case v < 0:
		return -1
	}
	return 0
}
