//go:build !amd64 || purego

package bvh

import "lampbook/engine/kernel/geom"

// haveWide is false: there is no vector walk for this machine, and Build makes no wide trees.
const haveWide = false

// wideScratch is empty here.
type wideScratch struct{}

var useBundles = false

func (t *wideTree) closest(*Walker, []geom.Ray, []Hit, uint32) {}

func (t *wideTree) occluded(*Walker, []geom.Ray, []bool) {}
