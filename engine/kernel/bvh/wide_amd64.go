//go:build !purego

package bvh

//lint:file-ignore U1000 the assembly uses fields of lanes that no Go code does

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
	rays     [readied]wideRay
	lanes    lanes
	entrance wideNode
	shaft    shaft
	hand     handful
}

// readied is how many rays are made ready together; they should stay in the first-level cache.
const readied = 64

// wideRay is tri.Ray as the assembly wants it, which knows its layout by the R_ offsets.
type wideRay struct {
	near, far, negInv, org, slope [4]float32 // slope is Dir/Dir[KZ], the fourth -1/Dir[KZ]
	kx, ky, kz                    uint32     // 4 times the axis
	signs                         int32      // of the direction, a bit for each axis; -1 if the ray can hit nothing
	tMin, tMax                    float32
	_                             [6]uint32
}

// lanes is the scratch space of the walks in assembly, which know its layout by the L_ offsets.
type lanes struct {
	enter, t, us, vs [8]float32
	sheared          [6][8]float32
	edges            [3][8]float32
	nodes, blocks    unsafe.Pointer
	run              uintptr
	best             float32
	tie              uint32
	u, v             float32
	found            uint32
	_                [52]byte
	stack            [512]uint64 // 64 levels of seven siblings at most, and the end
}

func (t *wideTree) head() wideHead {
	return wideHead{
		lo:     [4]float32{t.bounds.Min.X, t.bounds.Min.Y, t.bounds.Min.Z},
		hi:     [4]float32{t.bounds.Max.X, t.bounds.Max.Y, t.bounds.Max.Z},
		nodes:  unsafe.Pointer(unsafe.SliceData(t.nodes)),
		blocks: unsafe.Pointer(unsafe.SliceData(t.blocks)),
	}
}

// useBundles says that rays which run together start together. Tests switch it off to compare.
var useBundles = true

// closest improves hits with what rays meet in t.
func (t *wideTree) closest(w *Walker, rays []geom.Ray, hits []Hit, placement uint32) {
	entry, inHand := t.start(w, rays)
	if entry == nil && inHand == 0 {
		return
	}
	x := &w.wide
	h := t.head()
	x.lanes.nodes, x.lanes.blocks = h.nodes, h.blocks
	for i := 0; i < len(rays); i += readied {
		n := min(readied, len(rays)-i)
		prepareWide(&h, &rays[i], n, &x.rays[0])
		if inHand > 0 {
			if x.hand.closest(inHand, x.rays[:n], hits[i:i+n], placement, &x.lanes) {
				continue
			}
			entry = h.nodes
		}
		closestWide(entry, &x.rays[0], n, &hits[i], placement, &x.lanes)
	}
	x.lanes.nodes, x.lanes.blocks = nil, nil
}

// occluded sets blocked for rays that meet anything in t.
func (t *wideTree) occluded(w *Walker, rays []geom.Ray, blocked []bool) {
	entry, inHand := t.start(w, rays)
	if entry == nil && inHand == 0 {
		return
	}
	x := &w.wide
	h := t.head()
	x.lanes.nodes, x.lanes.blocks = h.nodes, h.blocks
	for i := 0; i < len(rays); i += readied {
		n := min(readied, len(rays)-i)
		prepareWide(&h, &rays[i], n, &x.rays[0])
		if inHand > 0 {
			if x.hand.occluded(inHand, x.rays[:n], blocked[i:i+n], &x.lanes) {
				continue
			}
			entry = h.nodes
		}
		occludedWide(entry, &x.rays[0], n, &blocked[i], &x.lanes)
	}
	x.lanes.nodes, x.lanes.blocks = nil, nil
}

// prepareWide makes rays ready as tri.Ray.Prepare does.
//
//go:noescape
func prepareWide(t *wideHead, rays *geom.Ray, n int, out *wideRay)

// closestWide improves hits with what rays meet from the node entry on. Rays that can hit nothing are passed over.
//
//go:noescape
func closestWide(entry unsafe.Pointer, rays *wideRay, n int, hits *Hit, placement uint32, l *lanes)

// occludedWide sets blocked for rays that meet anything from the node entry on; those that are set already are passed over.
//
//go:noescape
func occludedWide(entry unsafe.Pointer, rays *wideRay, n int, blocked *bool, l *lanes)
