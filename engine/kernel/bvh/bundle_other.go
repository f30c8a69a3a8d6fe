//go:build !amd64 || purego

package bvh

import "lampbook/engine/kernel/geom"

func bundleEnds(rays []geom.Ray, e *bundleBounds) { bundleEndsPlain(rays, e) }

func bundleSpan(rays []geom.Ray, axis int, z0, z1 float32, s *bundleSpans) {
	bundleSpanPlain(rays, axis, z0, z1, s)
}

func shaftMask(n *wideNode, s *shaft) uint32 { return shaftMaskPlain(n, s) }
