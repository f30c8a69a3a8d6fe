//go:build !purego

package bvh

import "lampbook/engine/kernel/geom"

//go:noescape
func bundleEndsWide(rays *geom.Ray, n int, e *bundleBounds)

//go:noescape
func bundleSpanWide(rays *geom.Ray, n int, axis int, z0, z1 float32, s *bundleSpans)

//go:noescape
func shaftMaskWide(n *wideNode, s *shaft) uint32

func bundleEnds(rays []geom.Ray, e *bundleBounds) {
	if useWide {
		bundleEndsWide(&rays[0], len(rays), e)
		return
	}
	bundleEndsPlain(rays, e)
}

func bundleSpan(rays []geom.Ray, axis int, z0, z1 float32, s *bundleSpans) {
	if useWide {
		bundleSpanWide(&rays[0], len(rays), axis, z0, z1, s)
		return
	}
	bundleSpanPlain(rays, axis, z0, z1, s)
}

func shaftMask(n *wideNode, s *shaft) uint32 {
	if useWide {
		return shaftMaskWide(n, s)
	}
	return shaftMaskPlain(n, s)
}
