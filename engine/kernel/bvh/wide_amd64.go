//go:build !purego

package bvh

import (
	"os"
	"unsafe"

	"golang.org/x/sys/cpu"

	"lampbook/engine/kernel/geom"
)

// haveWide says whether this machine can walk wide trees. LAMPBOOK_WALK=portable says no, for tests.
var haveWide = cpu.X86.HasAVX2 && cpu.X86.HasBMI1 && os.Getenv("LAMPBOOK_WALK") != "portable"

// wideHead is what the assembly needs to know of a tree.
type wideHead struct {
	lo, hi [4]float32 // bounds; the fourth component is 0
	nodes  unsafe.Pointer
	blocks unsafe.Pointer
}

// wideScratch is what a walker needs for wide trees.
type wideScratch struct {
	lanes    lanes
	entrance wideNode
	shaft    shaft
}

// lanes is the scratch space of the walks in assembly, which know its layout by the L_ offsets.
type lanes struct {
	near, far, negInv, org, slope [4]float32
	kx, ky, kz                    uint64 // 4 times the axis
	tMin, best                    float32
	tie, found                    uint32
	u, v                          float32
	run                           uintptr
	_                             [24]byte
	enter, t, us, vs              [8]float32
	sheared                       [6][8]float32
	edges                         [3][8]float32
	stack                         [512]uint64 // 64 levels of seven siblings at most, and the end
}

func (t *wideTree) head(bounds geom.Box) wideHead {
	return wideHead{
		lo:     [4]float32{bounds.Min.X, bounds.Min.Y, bounds.Min.Z},
		hi:     [4]float32{bounds.Max.X, bounds.Max.Y, bounds.Max.Z},
		nodes:  unsafe.Pointer(unsafe.SliceData(t.nodes)),
		blocks: unsafe.Pointer(unsafe.SliceData(t.blocks)),
	}
}

// enter returns the node from which rays start, nil if none of them hits anything.
func (t *wideTree) enter(w *Walker, rays []geom.Ray) unsafe.Pointer {
	if len(rays) >= leastBundle && useBundles {
		switch w.wide.shaft.enclose(rays, t.bounds) {
		case outside:
			return nil
		case enclosed:
			if !t.entrance(&w.wide.entrance, &w.wide.shaft) {
				return nil
			}
			return unsafe.Pointer(&w.wide.entrance)
		}
	}
	return unsafe.Pointer(&t.nodes[0])
}

// useBundles says that rays which run together start together. Tests switch it off to compare.
var useBundles = true

// closest improves hits with what rays meet in t.
func (t *wideTree) closest(w *Walker, rays []geom.Ray, hits []Hit, placement uint32) {
	if entry := t.enter(w, rays); entry != nil {
		h := t.head(t.bounds)
		closestWide(&h, entry, &rays[0], len(rays), &hits[0], placement, &w.wide.lanes)
	}
}

// occluded sets blocked for rays that meet anything in t.
func (t *wideTree) occluded(w *Walker, rays []geom.Ray, blocked []bool) {
	if entry := t.enter(w, rays); entry != nil {
		h := t.head(t.bounds)
		occludedWide(&h, entry, &rays[0], len(rays), &blocked[0], &w.wide.lanes)
	}
}

// closestWide improves hits with what rays meet in t, starting at the node entry. Rays that can hit nothing are passed over.
//
//go:noescape
func closestWide(t *wideHead, entry unsafe.Pointer, rays *geom.Ray, n int, hits *Hit, placement uint32, l *lanes)

// occludedWide sets blocked for rays that meet anything in t; those that are set already are passed over.
//
//go:noescape
func occludedWide(t *wideHead, entry unsafe.Pointer, rays *geom.Ray, n int, blocked *bool, l *lanes)
